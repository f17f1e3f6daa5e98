import type { UnitSystem } from '../../lib/base/units.ts';
import type { SiteDay } from '../../lib/http/contract/rest.ts';
import type { MarkName } from './chart-frame.tsx';
import { DataTable } from './data-table.tsx';
import { periodName } from './date-words.ts';
import { figure, inUnits, sumOf, unitOf } from './figures.ts';
import { SeriesChart } from './site-chart.tsx';

const METHODS: readonly { readonly key: MethodKey; readonly name: string; readonly mark: MarkName; readonly source: string }[] = [
  { key: 'reference_et_fao56_short_mm', name: 'FAO-56 Penman–Monteith, short surface', mark: 'first', source: 'FAO-56 Eq. 6' },
  { key: 'reference_et_asce2005_short_mm', name: 'ASCE 2005, short surface', mark: 'second', source: 'ASCE-EWRI (2005) Eq. 1' },
  { key: 'reference_et_asce2005_tall_mm', name: 'ASCE 2005, tall surface', mark: 'third', source: 'ASCE-EWRI (2005) Eq. 1' },
  { key: 'reference_et_hargreaves_mm', name: 'Hargreaves–Samani, from temperature alone', mark: 'fourth', source: 'FAO-56 Eq. 52' },
];

/** What stands beside the daily equations where a site has hours, or a source gives its own. */
const BESIDE: typeof METHODS = [
  { key: 'reference_et_hourly_fao56_short_mm', name: 'Sum of hours, FAO-56, short surface', mark: 'taw', source: 'FAO-56 Eq. 53' },
  {
    key: 'reference_et_hourly_asce2005_short_mm',
    name: 'Sum of hours, ASCE 2005, short surface',
    mark: 'limit',
    source: 'ASCE-EWRI (2005) Eq. 1, hourly',
  },
  {
    key: 'reference_et_hourly_asce2005_tall_mm',
    name: 'Sum of hours, ASCE 2005, tall surface',
    mark: 'raw',
    source: 'ASCE-EWRI (2005) Eq. 1, hourly',
  },
  { key: 'reference_et_given_mm', name: 'As given by the source', mark: 'quiet', source: 'the source of the weather' },
];

type MethodKey =
  | 'reference_et_fao56_short_mm'
  | 'reference_et_asce2005_short_mm'
  | 'reference_et_asce2005_tall_mm'
  | 'reference_et_hargreaves_mm'
  | 'reference_et_hourly_fao56_short_mm'
  | 'reference_et_hourly_asce2005_short_mm'
  | 'reference_et_hourly_asce2005_tall_mm'
  | 'reference_et_given_mm';

/** The methods that have a value on any of the days; the daily equations always. */
export function methodsOf(days: readonly SiteDay[]): typeof METHODS {
  return [...METHODS, ...BESIDE.filter(({ key }) => days.some((day) => day[key] !== null))];
}

/** Reference ET of a site by every method, day by day and month by month. */
export function ReferenceEt({ days, units }: { days: readonly SiteDay[]; units: UnitSystem }) {
  const methods = methodsOf(days);
  const lines = methods.map((method) => ({
    label: method.name,
    mark: method.mark,
    values: days.map((day) => inUnits(day[method.key], 'depth', units)),
  }));
  return (
    <>
      <SeriesChart id="reference-et" title="Reference ET by method" unit={`${unitOf('depth', units)} per day`} days={days} lines={lines} />
      <MonthTotals days={days} units={units} />
      <p className="small muted">
        Crop coefficients of the library belong to the short (grass) surface and are never used with the tall one. Sources:{' '}
        {methods.map((method) => `${method.name}: ${method.source}`).join('; ')}.
      </p>
    </>
  );
}

interface Month {
  readonly start: string;
  readonly end: string;
  readonly days: readonly SiteDay[];
}

/** Days cut at the first of each month. */
export function monthsOf(days: readonly SiteDay[]): Month[] {
  const months: { start: string; end: string; days: SiteDay[] }[] = [];
  for (const day of days) {
    const last = months[months.length - 1];
    if (last?.start.slice(0, 7) === day.date.slice(0, 7)) {
      last.days.push(day);
      last.end = day.date;
    } else months.push({ start: day.date, end: day.date, days: [day] });
  }
  return months;
}

function MonthTotals({ days, units }: { days: readonly SiteDay[]; units: UnitSystem }) {
  const months = monthsOf(days);
  const depth = (of: readonly SiteDay[], pick: (day: SiteDay) => number | null) => figure(sumOf(of, pick), 'depth', units);
  return (
    <DataTable
      caption="Reference ET and rain by month"
      rows={months}
      rowKey={(month) => month.start}
      foot
      columns={[
        { key: 'month', head: 'Month', rowHead: true, oneLine: true, cell: (month) => periodName('month', month), total: 'Together' },
        { key: 'days', head: 'Days', numeric: true, cell: (month) => month.days.length, total: days.length },
        ...methodsOf(days).map((method) => ({
          key: method.key,
          head: method.name,
          unit: unitOf('depth', units),
          numeric: true,
          cell: (month: Month) => depth(month.days, (day) => day[method.key]),
          total: depth(days, (day) => day[method.key]),
        })),
        {
          key: 'rain',
          head: 'Rain',
          unit: unitOf('depth', units),
          numeric: true,
          cell: (month) => depth(month.days, (day) => day.completed.precipitation_mm),
          total: depth(days, (day) => day.completed.precipitation_mm),
        },
      ]}
    />
  );
}
