import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { SiteAnswer, SiteDay } from '../../../../lib/http/contract/rest.ts';
import { FactList } from '../../../_components/data-table.tsx';
import { dateRange, longDate } from '../../../_components/date-words.ts';
import { EmptyState } from '../../../_components/empty-state.tsx';
import { EnergyBars } from '../../../_components/energy-bars.tsx';
import { FallbackShares, FallbackWords, fallbackSharesOf } from '../../../_components/fallback-words.tsx';
import { figureWithUnit, plain } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { PageHead, Section } from '../../../_components/page-head.tsx';
import { one, type Query } from '../../../_components/query.ts';
import { ReferenceEt } from '../../../_components/reference-et.tsx';
import { SiteCharts } from '../../../_components/site-chart.tsx';
import type { DayRange } from '../load-site-series.ts';
import { SiteDayTable } from './site-day-table.tsx';

interface SiteViewProps {
  readonly site: SiteAnswer;
  readonly days: readonly SiteDay[];
  readonly range: DayRange | null;
  readonly query: Query;
  readonly units: UnitSystem;
}

/** One site: its record, reference ET by every method, and the energy budget of a day. */
export function SiteView({ site, days, range, query, units }: SiteViewProps) {
  const path = `/weather/${encodeURIComponent(site.code)}`;
  const day = days.find((each) => each.date === one(query, 'day')) ?? brightest(days);
  return (
    <div className="page">
      <PageHead title={site.name || site.code} lead={`Site ${site.code} of source ${site.source}.`} crumbs={[['/weather', 'Weather']]}>
        {range ? (
          <a
            className="button"
            href={`/api/v1/weather/sites/${encodeURIComponent(site.code)}/daily.csv?from=${range.from}&to=${range.to}&units=${units}`}
            download
          >
            CSV of these days
          </a>
        ) : null}
      </PageHead>
      <FactList facts={factsOf(site, units)} />
      {range ? <RangeForm path={path} range={range} site={site} /> : null}
      {days.length === 0 || !day || !range ? (
        <EmptyState title="No days here">
          {site.first_day && site.last_day ? (
            `The record runs from ${longDate(site.first_day)} to ${longDate(site.last_day)}: choose days within it.`
          ) : (
            <Go href="/imports">Bring in weather for this site.</Go>
          )}
        </EmptyState>
      ) : (
        <>
          <Section
            id="estimated"
            title="What was estimated"
            note={`Share of the ${days.length} days from ${dateRange(range.from, range.to)}.`}
          >
            <FallbackShares shares={fallbackSharesOf(days)} of="days" />
          </Section>
          <Section id="record" title="Weather, completed">
            <SiteCharts days={days} units={units} />
          </Section>
          <Section id="reference" title="Reference ET">
            <ReferenceEt days={days} units={units} />
          </Section>
          <Section id="budget" title="Energy budget of a day" actions={<DayForm path={path} range={range} day={day.date} />}>
            <EnergyBars day={day} />
            <FallbackWords names={day.fallbacks} />
          </Section>
          <SiteDayTable site={site} days={days} range={range} units={units} />
        </>
      )}
    </div>
  );
}

function factsOf(site: SiteAnswer, units: UnitSystem): [string, string][] {
  return [
    ['Place', `${plain(site.latitude, 4)}°, ${plain(site.longitude, 4)}°`],
    [
      'Elevation',
      site.elevation_m === null ? 'not known: the district’s own elevation is taken' : figureWithUnit(site.elevation_m, 'elevation', units),
    ],
    ['Wind measured at', site.wind_height_m === null ? 'not known' : figureWithUnit(site.wind_height_m, 'length', units)],
    [
      'Record',
      site.first_day && site.last_day
        ? `${longDate(site.first_day)} to ${longDate(site.last_day)}, ${plain(site.day_count, 0)} days`
        : 'no days yet',
    ],
  ];
}

/** A day with much to show: the greatest net radiation. */
function brightest(days: readonly SiteDay[]): SiteDay | undefined {
  return days.reduce<SiteDay | undefined>(
    (a, b) => (a && (a.net_radiation_mj_m2_d ?? -99) >= (b.net_radiation_mj_m2_d ?? -99) ? a : b),
    undefined,
  );
}

function RangeForm({ path, range, site }: { path: string; range: DayRange; site: SiteAnswer }) {
  const limits = { min: site.first_day ?? undefined, max: site.last_day ?? undefined };
  return (
    <form action={path} className="toolbar">
      <label className="field">
        <span className="label">From</span>
        <input type="date" name="from" defaultValue={range.from} {...limits} />
      </label>
      <label className="field">
        <span className="label">To</span>
        <input type="date" name="to" defaultValue={range.to} {...limits} />
      </label>
      <button type="submit" className="button">
        Show
      </button>
    </form>
  );
}

function DayForm({ path, range, day }: { path: string; range: DayRange; day: string }) {
  return (
    <form action={`${path}#budget`} className="row">
      <input type="hidden" name="from" value={range.from} />
      <input type="hidden" name="to" value={range.to} />
      <label className="row">
        <span className="label">Day</span>
        <input type="date" name="day" defaultValue={day} min={range.from} max={range.to} />
      </label>
      <button type="submit" className="button">
        Show
      </button>
    </form>
  );
}
