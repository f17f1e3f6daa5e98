import { dayNumber } from '../../../lib/base/civil-date.ts';
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { SiteAnswer, SiteDay } from '../../../lib/http/contract/rest.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../lib/weather/variable.ts';
import { type Column, DataTable } from '../../_components/data-table.tsx';
import { EmptyState } from '../../_components/empty-state.tsx';
import { estimatedShare } from '../../_components/fallback-words.tsx';
import { figure, inUnits, percent, plain, unitOf } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';
import { Sparkline } from '../../_components/sparkline.tsx';

interface SiteTableProps {
  readonly sites: readonly SiteAnswer[];
  readonly series: ReadonlyMap<string, readonly SiteDay[]>;
  readonly season: string | null;
  readonly units: UnitSystem;
}

/** The sites with their records, and how complete each variable is. */
export function SiteTable({ sites, series, season, units }: SiteTableProps) {
  if (sites.length === 0) {
    return (
      <EmptyState title="No weather yet">
        <Go href="/imports">Bring in</Go> the sites and their daily weather. A site needs a place and, for wind, the height of its
        instrument.
      </EmptyState>
    );
  }
  return (
    <>
      <Section
        id="sites"
        title={`${sites.length} ${sites.length === 1 ? 'site' : 'sites'}`}
        note={season ? `Reference ET and the estimated share are those of season ${season}.` : undefined}
      >
        <DataTable caption="Weather sites" columns={siteColumns(series, units)} rows={sites} rowKey={(site) => site.code} />
      </Section>
      <Section
        id="coverage"
        title="How complete the records are"
        note="Days with a value as a share of the site’s days from first to last."
      >
        <DataTable caption="Coverage of each variable by site" columns={coverageColumns(sites)} rows={sites} rowKey={(site) => site.code} />
      </Section>
    </>
  );
}

function siteColumns(series: SiteTableProps['series'], units: UnitSystem): Column<SiteAnswer>[] {
  const days = (site: SiteAnswer) => series.get(site.code) ?? [];
  const columns: Column<SiteAnswer>[] = [
    {
      key: 'code',
      head: 'Site',
      rowHead: true,
      oneLine: true,
      cell: (site) => <Go href={`/weather/${encodeURIComponent(site.code)}`}>{site.code}</Go>,
    },
    { key: 'name', head: 'Name', cell: (site) => site.name },
    { key: 'source', head: 'Source', cell: (site) => site.source },
    {
      key: 'elevation',
      head: 'Elevation',
      unit: unitOf('elevation', units),
      numeric: true,
      cell: (site) => figure(site.elevation_m, 'elevation', units),
    },
    {
      key: 'wind',
      head: 'Wind measured at',
      unit: unitOf('length', units),
      numeric: true,
      cell: (site) => figure(site.wind_height_m, 'length', units),
    },
    { key: 'first', oneLine: true, head: 'First day', cell: (site) => site.first_day ?? '–' },
    { key: 'last', oneLine: true, head: 'Last day', cell: (site) => site.last_day ?? '–' },
    { key: 'days', head: 'Days', numeric: true, cell: (site) => plain(site.day_count, 0) },
  ];
  if (series.size === 0) return columns;
  return [
    ...columns,
    { key: 'estimated', head: 'Days with an estimate', numeric: true, cell: (site) => percent(estimatedShare(days(site)), 1) },
    {
      key: 'series',
      head: 'Reference ET',
      cell: (site) => (
        <Sparkline
          name={`Reference ET at ${site.name}`}
          unit={`${unitOf('depth', units)} per day`}
          values={days(site).map((day) => inUnits(day.reference_et_fao56_short_mm, 'depth', units))}
        />
      ),
    },
  ];
}

/** Days from the first with anything to the last. */
function spanDays({ first_day, last_day }: SiteAnswer): number {
  return first_day && last_day ? dayNumber(last_day) - dayNumber(first_day) + 1 : 1;
}

function coverageColumns(sites: readonly SiteAnswer[]): Column<SiteAnswer>[] {
  const present = (Object.keys(WEATHER_VARIABLES) as WeatherVariable[]).filter((name) =>
    sites.some((site) => (site.coverage_days[name] ?? 0) > 0),
  );
  return [
    { key: 'code', head: 'Site', rowHead: true, oneLine: true, cell: (site) => site.code },
    ...present.map((name) => ({
      key: name,
      head: WEATHER_VARIABLES[name].term,
      numeric: true,
      cell: (site: SiteAnswer) => (site.coverage_days[name] ? percent(site.coverage_days[name] / spanDays(site), 1) : 'none'),
    })),
  ];
}
