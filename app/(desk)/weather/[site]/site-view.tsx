import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { SiteBudget } from '../../../../lib/http/answers/weather-hours.ts';
import type { SiteAnswer, SiteDay } from '../../../../lib/http/contract/rest.ts';
import { FactList } from '../../../_components/data-table.tsx';
import { dateRange, longDate } from '../../../_components/date-words.ts';
import { EmptyState } from '../../../_components/empty-state.tsx';
import { FallbackShares, fallbackSharesOf } from '../../../_components/fallback-words.tsx';
import { figureWithUnit, plain } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { PageHead, Section } from '../../../_components/page-head.tsx';
import { ReferenceEt } from '../../../_components/reference-et.tsx';
import { SiteCharts } from '../../../_components/site-chart.tsx';
import type { DayRange } from '../load-site-series.ts';
import { DayBudget } from './day-budget.tsx';
import { SiteDayTable } from './site-day-table.tsx';

interface SiteViewProps {
  readonly site: SiteAnswer;
  readonly days: readonly SiteDay[];
  readonly range: DayRange | null;
  /** of the day chosen */
  readonly budget: SiteBudget | null;
  readonly units: UnitSystem;
}

/** One site: its record, reference ET by every method, and the energy budget of a day. */
export function SiteView({ site, days, range, budget, units }: SiteViewProps) {
  const path = `/weather/${encodeURIComponent(site.code)}`;
  const day = days.find((each) => each.date === budget?.date);
  return (
    <div className="page">
      <PageHead title={site.name || site.code} lead={`Site ${site.code} of source ${site.source}.`} crumbs={[['/weather', 'Weather']]}>
        {range ? (
          <a
            className="button"
            href={`/api/v1/weather/sites/${encodeURIComponent(site.code)}/daily.csv?source=${encodeURIComponent(site.source)}&from=${range.from}&to=${range.to}&units=${units}`}
            download
          >
            CSV of these days
          </a>
        ) : null}
      </PageHead>
      <FactList facts={factsOf(site, units)} />
      {range ? <RangeForm path={path} range={range} site={site} /> : null}
      {!budget || !day || !range ? (
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
          <DayBudget budget={budget} day={day} path={path} range={range} source={site.source} units={units} />
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

function RangeForm({ path, range, site }: { path: string; range: DayRange; site: SiteAnswer }) {
  const limits = { min: site.first_day ?? undefined, max: site.last_day ?? undefined };
  return (
    <form action={path} className="toolbar">
      <input type="hidden" name="source" value={site.source} />
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
