import type { IsoDate } from '../../../../lib/base/civil-date.ts';
import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { BandAnswer } from '../../../../lib/http/contract/band.ts';
import type { ImageRow } from '../../../../lib/http/contract/images.ts';
import type { ParcelHistoryAnswer } from '../../../../lib/http/contract/land-places.ts';
import type { DeliveryAnswer, MeasurementAnswer } from '../../../../lib/http/contract/records.ts';
import type { ParcelDay, ParcelSeason, RunAnswer } from '../../../../lib/http/contract/run.ts';
import type { PlantingYieldRow } from '../../../../lib/http/contract/yields.ts';
import { CalendarStrip } from '../../../_components/calendar-strip.tsx';
import { DailyChart } from '../../../_components/daily-chart.tsx';
import { dateRange, longDate } from '../../../_components/date-words.ts';
import { Cautions, EmptyState } from '../../../_components/empty-state.tsx';
import { EstimatedShare, FallbackShares, FallbackWords, fallbackSharesOf } from '../../../_components/fallback-words.tsx';
import { Section } from '../../../_components/page-head.tsx';
import { ParcelBand } from '../../../_components/parcel-band.tsx';
import { choosePeriod } from '../../../_components/period-choice.ts';
import { PeriodPicker } from '../../../_components/period-picker.tsx';
import { hrefWith, one, type Query } from '../../../_components/query.ts';
import { SiteWeights } from '../../../_components/site-weights.tsx';
import { SoilGauge } from '../../../_components/soil-gauge.tsx';
import { WaterChain } from '../../../_components/water-chain.tsx';
import { DayTable } from './day-table.tsx';
import { FieldRecords } from './field-records.tsx';
import { GroundHistory } from './ground-history.tsx';
import { ImageTable } from './image-table.tsx';
import { ParcelHead } from './parcel-head.tsx';
import { PlantingTable } from './planting-table.tsx';
import { YieldTable } from './yield-table.tsx';

interface ParcelViewProps {
  readonly run: RunAnswer;
  readonly season: ParcelSeason;
  readonly history: ParcelHistoryAnswer;
  readonly yields: readonly PlantingYieldRow[];
  readonly images: readonly ImageRow[];
  readonly records: {
    readonly deliveries: readonly DeliveryAnswer[];
    readonly measurements: readonly MeasurementAnswer[];
    readonly mayWrite: boolean;
  };
  readonly band: { readonly season: BandAnswer; readonly weeks: BandAnswer };
  readonly query: Query;
  readonly weekStart: number;
  readonly units: UnitSystem;
}

/** Everything about one parcel in one season. */
export function ParcelView({ run, season, history, yields, images, records, band, query, weekStart, units }: ParcelViewProps) {
  if (season.days.length === 0)
    return <EmptyState title={`Parcel ${season.parcel} has no days in this run`}>Run the season again.</EmptyState>;
  const path = `/parcels/${encodeURIComponent(season.parcel)}`;
  const choice = choosePeriod({ period: 'week', ...query }, run, weekStart, { kind: 'week', preferred: thirstiest(season.days) });
  const picked = season.days.filter((day) => choice.period.start <= day.date && day.date <= choice.period.end);
  const day = picked.find((each) => each.date === one(query, 'date')) ?? picked[picked.length - 1] ?? season.days[0];
  const workingHref = hrefWith(`${path}/working/${day.date}`, {}, { run: one(query, 'run') ?? null });
  return (
    <div className="page">
      <ParcelHead run={run} season={season} date={day.date} units={units} />
      <div className="no-print">
        <PeriodPicker path={path} query={{ ...query, period: choice.kind }} choice={choice} />
      </div>
      <div className="split">
        <Section id="chain" title="From weather to turnout" actions={<a href={workingHref}>Working of {longDate(day.date)}</a>}>
          <WaterChain
            season={season}
            date={day.date}
            units={units}
            workingHref={workingHref}
            spans={[
              { name: longDate(day.date), days: [day] },
              ...(choice.kind === 'season' ? [] : [{ name: dateRange(choice.period.start, choice.period.end), days: picked }]),
              { name: 'Season', days: season.days },
            ]}
          />
          <FallbackWords names={[...new Set(picked.flatMap((each) => each.fallbacks))]} />
        </Section>
        <Section id="soil-water" title="Soil water">
          <SoilGauge day={day} units={units} />
        </Section>
      </div>
      <Section id="season" title="Season">
        <DailyChart days={season.days} units={units} marked={day.date} />
        <DayTable season={season} units={units} run={one(query, 'run') ?? null} />
      </Section>
      <ParcelBand season={band.season} weeks={band.weeks} days={season.days} date={day.date} units={units} />
      <Plantings season={season} units={units} />
      <YieldTable rows={yields} units={units} />
      <ImageTable images={images} used={run.settings.observed_cover} />
      <FieldRecords run={run} season={season} {...records} units={units} />
      <Section
        id="weather"
        title="Where the weather comes from"
        note="Each site counts by its weight, series by series where they have weights of their own; temperatures are corrected for the difference in elevation."
      >
        <SiteWeights weights={season.weights} elevation={season.elevation_m} units={units} />
        <EstimatedShare share={season.estimated_share} of="the days" />
        <FallbackShares shares={fallbackSharesOf(season.days)} of="days" />
      </Section>
      <GroundHistory history={history} units={units} />
      <Cautions which={['decisions', 'estimates']} />
    </div>
  );
}

function Plantings({ season, units }: { season: ParcelSeason; units: UnitSystem }) {
  if (season.plantings.length === 0) {
    return (
      <Section id="plantings" title="Plantings">
        <p>Nothing is planted here this season: the figures are those of bare ground. Bring in plantings with the file of plantings.</p>
      </Section>
    );
  }
  return (
    <Section id="plantings" title="Plantings">
      <CalendarStrip season={season} />
      <PlantingTable plantings={season.plantings} units={units} />
    </Section>
  );
}

/** The day that asks most water, to begin with a week that shows something. */
function thirstiest(days: readonly ParcelDay[]): IsoDate {
  return days.reduce((a, b) => ((b.gross_requirement_mm ?? 0) > (a.gross_requirement_mm ?? 0) ? b : a)).date;
}
