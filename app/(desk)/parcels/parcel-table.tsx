import type { UnitSystem } from '../../../lib/base/units.ts';
import type { RunAnswer } from '../../../lib/http/contract/run.ts';
import { AheadPeriod } from '../../_components/ahead-period.tsx';
import { type Column, DataTable, type SortState } from '../../_components/data-table.tsx';
import { periodName } from '../../_components/date-words.ts';
import { figure, percent, plain, unitOf } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { type ListedParcel, type ListedVariable, type ParcelListResult, SORT_KEYS, unmetShare } from '../../_components/parcel-list.ts';
import type { PeriodChoice } from '../../_components/period-choice.ts';
import { PeriodPicker } from '../../_components/period-picker.tsx';
import { hrefWith, one, oneOf, type Query } from '../../_components/query.ts';

interface ParcelTableProps {
  readonly run: RunAnswer;
  readonly choice: PeriodChoice;
  readonly list: ParcelListResult;
  readonly query: Query;
  readonly units: UnitSystem;
}

/** Period, search, the table itself, and its downloads. */
export function ParcelTable({ run, choice, list, query, units }: ParcelTableProps) {
  const name = periodName(choice.kind, choice.period);
  const detail = { run: one(query, 'run') ?? null, date: choice.period.start };
  return (
    <>
      <div className="spread">
        <PeriodPicker path="/parcels" query={query} choice={choice} />
        <SearchForm query={query} />
      </div>
      <p className="small">
        {plain(list.count, 0)} {list.count === 1 ? 'parcel' : 'parcels'}, {name}, season {run.season}. <Narrowed query={query} />
      </p>
      <AheadPeriod ahead={run.days_ahead} period={choice.period} />
      <DataTable
        caption={`Parcels, ${name}`}
        columns={columnsOf(list, units, detail)}
        rows={list.rows}
        rowKey={(row) => row.code}
        sort={sortOf(query)}
        foot
      />
      <div className="spread">
        <Pager list={list} query={query} />
        <Downloads run={run} period={choice.kind} units={units} />
      </div>
    </>
  );
}

function sortOf(query: Query): SortState {
  return {
    by: oneOf(query, 'sort', SORT_KEYS, 'parcel'),
    descending: one(query, 'order') === 'down',
    keys: SORT_KEYS,
    href: (key, descending) => hrefWith('/parcels', query, { sort: key, order: descending ? 'down' : null, page: null }),
  };
}

function columnsOf(list: ParcelListResult, units: UnitSystem, detail: Readonly<Record<string, string | null>>): Column<ListedParcel>[] {
  const depth = (key: ListedVariable, head: string): Column<ListedParcel> => ({
    key,
    head,
    unit: unitOf('depth', units),
    numeric: true,
    cell: (row) => figure(row.values[key], 'depth', units),
    total: figure(list.total.depths[key], 'depth', units),
  });
  return [
    {
      key: 'parcel',
      head: 'Parcel',
      rowHead: true,
      oneLine: true,
      cell: (row) => <Go href={hrefWith(`/parcels/${encodeURIComponent(row.code)}`, {}, detail)}>{row.code}</Go>,
      total: 'All found',
    },
    { key: 'crops', head: 'Crop', wide: true, cell: (row) => row.crops || '–' },
    {
      key: 'area',
      head: 'Area',
      unit: unitOf('area', units),
      numeric: true,
      cell: (row) => figure(row.area_ha, 'area', units),
      total: figure(list.total.area_ha, 'area', units),
    },
    { key: 'reach', head: 'Canal', cell: (row) => row.reach ?? '–' },
    depth('crop_et', 'Crop ET'),
    depth('precipitation', 'Rain'),
    depth('effective_precipitation', 'Effective rain'),
    depth('net_requirement', 'Net'),
    depth('gross_requirement', 'Gross'),
    {
      key: 'volume',
      head: 'Volume',
      unit: unitOf('volume', units),
      numeric: true,
      cell: (row) => figure(row.volume_m3, 'volume', units),
      total: figure(list.total.volume_m3, 'volume', units),
    },
    {
      key: 'stress',
      head: 'Stress',
      unit: 'ET not met',
      numeric: true,
      cell: (row) => percent(row.stress, 1),
      total: percent(unmetShare(list.total.depths.crop_et, list.total.depths.adjusted_crop_et), 1),
    },
    {
      key: 'estimated_share',
      head: 'Estimated',
      unit: 'days of weather',
      numeric: true,
      cell: (row) => percent(row.values.estimated_share),
      total: percent(list.total.depths.estimated_share),
    },
  ];
}

function SearchForm({ query }: { query: Query }) {
  const kept = ['period', 'date', 'sort', 'order', 'run', 'reach'].filter((key) => one(query, key));
  return (
    <search>
      <form action="/parcels" className="row">
        {kept.map((key) => (
          <input key={key} type="hidden" name={key} value={one(query, key)} />
        ))}
        <label className="field">
          <span className="label">Parcel, crop or canal</span>
          <input type="search" name="search" defaultValue={one(query, 'search') ?? ''} />
        </label>
        <button type="submit" className="button">
          Find
        </button>
      </form>
    </search>
  );
}

function Narrowed({ query }: { query: Query }) {
  const [search, reach] = [one(query, 'search'), one(query, 'reach')];
  if (!search && !reach) return null;
  const said = [search ? `“${search}”` : null, reach ? `reach ${reach}` : null].filter(Boolean).join(' and ');
  return (
    <>
      Only those with {said}. <Go href={hrefWith('/parcels', query, { search: null, reach: null, page: null })}>Show all</Go>
    </>
  );
}

function Pager({ list, query }: { list: ParcelListResult; query: Query }) {
  if (list.pageCount < 2) return null;
  const to = (page: number) => hrefWith('/parcels', query, { page: String(page) });
  return (
    <nav className="pager" aria-label="Pages of the list">
      {list.page > 1 ? <Go href={to(list.page - 1)}>Previous</Go> : null}
      <span>
        Page {list.page} of {list.pageCount}
      </span>
      {list.page < list.pageCount ? <Go href={to(list.page + 1)}>Next</Go> : null}
    </nav>
  );
}

function Downloads({ run, period, units }: { run: RunAnswer; period: string; units: UnitSystem }) {
  const reports = `/api/v1/runs/${run.id}/reports`;
  return (
    <p className="small no-print">
      Every parcel of the run: <a href={`${reports}/parcels.csv?period=${period}&units=${units}`}>CSV, one row per {period}</a> ·{' '}
      <a href={`${reports}/parcels.geojson?units=${units}`}>GeoJSON, season totals</a>
    </p>
  );
}
