/** The numbers of the map: for each variable one Float32 array [period × parcel], made slice by slice and put together at the end of a run. */
import { type Period, periodsOf } from '../base/civil-date.ts';
import { variableIndex } from '../season/daily-store.ts';
import { mostPackedBytes, packDays, unpackDays } from '../season/day-pack.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, type DailyVariable } from '../season/types.ts';
import { ESTIMATED_BITS } from '../weather/variable.ts';

/** How a day's value becomes a period's: a sum of depths, the state at the period's end, or the mean. */
type Aggregate = 'sum' | 'end' | 'mean';

/** The variables a map can show. `depletion_share` is depletion over total available water; `estimated_share` the share of days with filled or estimated weather. */
export const MAP_VARIABLES: readonly {
  readonly id: string;
  readonly term: string;
  readonly unit: string;
  readonly aggregate: Aggregate;
}[] = [
  { id: 'gross_requirement', term: 'Gross irrigation requirement', unit: 'mm', aggregate: 'sum' },
  { id: 'net_requirement', term: 'Net irrigation requirement', unit: 'mm', aggregate: 'sum' },
  { id: 'crop_et', term: 'Crop ET, unstressed', unit: 'mm', aggregate: 'sum' },
  { id: 'adjusted_crop_et', term: 'Crop ET, adjusted for stress', unit: 'mm', aggregate: 'sum' },
  { id: 'reference_et', term: 'Reference ET', unit: 'mm', aggregate: 'sum' },
  { id: 'precipitation', term: 'Rain', unit: 'mm', aggregate: 'sum' },
  { id: 'effective_precipitation', term: 'Effective rain', unit: 'mm', aggregate: 'sum' },
  { id: 'root_zone_depletion', term: 'Root-zone depletion', unit: 'mm', aggregate: 'end' },
  { id: 'depletion_share', term: 'Depletion, share of total available water', unit: '1', aggregate: 'end' },
  { id: 'stress_coefficient', term: 'Stress coefficient Ks', unit: '1', aggregate: 'mean' },
  { id: 'estimated_share', term: 'Days with estimated weather, share', unit: '1', aggregate: 'mean' },
];

export interface PeriodSet {
  readonly kind: 'week' | 'month' | 'season';
  readonly periods: readonly Period[];
}

/** Weeks, months and the season of a run, in the order in which a slice's values hold them. */
export function periodSets(run: { readonly startDate: string; readonly endDate: string }, weekStart: number): PeriodSet[] {
  return (['week', 'month', 'season'] as const).map((kind) => ({ kind, periods: periodsOf(kind, run.startDate, run.endDate, weekStart) }));
}

/** The two halves of a whole number, each in a row of its own. */
const HALVES = 2;

/**
 * Period values of the parcels of a slice, for each of MAP_VARIABLES packed: whole numbers [parcel × half × period], the low half before the high one, the
 * periods of every set one after another. A sum is of the values as stored, so that it equals the days a reader sees.
 *
 * Whole numbers pack to a third of what Float32 takes, and lose nothing on the way.
 *
 * @param daily [parcel × variable × day] as stored, without a missing value: the kernel leaves none
 * @param flags bits of FALLBACK [parcel × day]
 */
export function packPeriods(daily: Uint16Array, flags: Uint32Array, dayCount: number, sets: readonly PeriodSet[]): Uint8Array[] {
  const parcelCount = flags.length / dayCount;
  const from = Int32Array.from(sets.flatMap(({ periods }) => periods.map((period) => period.from)));
  const to = Int32Array.from(sets.flatMap(({ periods }) => periods.map((period) => period.to)));
  const spans: Spans = { from, to, running: new Int32Array(dayCount + 1) };
  const plain = new Uint16Array(parcelCount * HALVES * from.length);
  const like = new Array<number>(parcelCount * HALVES).fill(-1);
  const scratch = new Uint8Array(mostPackedBytes(like.length, from.length));
  return KEPT.map(({ id, aggregate }) => {
    for (let parcel = 0; parcel < parcelCount; parcel++) {
      const at = parcel * HALVES * from.length;
      if (id === 'estimated') countEstimated(flags, parcel * dayCount, spans, plain, at);
      else {
        const row = (parcel * DAILY_VARIABLE_COUNT + variableIndex(id)) * dayCount;
        if (aggregate === 'end') ends(daily, row, spans, plain, at);
        else sums(daily, row, spans, plain, at);
      }
    }
    return scratch.slice(0, packDays(plain, 0, from.length, like, scratch, 0));
  });
}

/** What a slice keeps of a run's days by period: the numbers that the map's variables are made of. */
const KEPT: readonly { readonly id: DailyVariable | 'estimated'; readonly aggregate: Aggregate }[] = [
  ...MAP_VARIABLES.flatMap(({ id, aggregate }) =>
    id === 'depletion_share' || id === 'estimated_share' ? [] : [{ id: id as DailyVariable, aggregate }],
  ),
  { id: 'total_available_water', aggregate: 'end' },
  { id: 'estimated', aggregate: 'sum' },
];

/** Names of the packed arrays of `packPeriods`, in their order. */
export const KEPT_NAMES: readonly string[] = KEPT.map(({ id }) => id);

interface Spans {
  readonly from: Int32Array;
  readonly to: Int32Array;
  /** scratch: sum of the days before each day */
  readonly running: Int32Array;
}

function sums(daily: Uint16Array, row: number, spans: Spans, into: Uint16Array, at: number): void {
  const { running } = spans;
  let sum = 0;
  for (let d = 0; d < running.length - 1; d++) {
    sum += daily[row + d];
    running[d + 1] = sum;
  }
  laySums(spans, into, at);
}

function countEstimated(flags: Uint32Array, row: number, spans: Spans, into: Uint16Array, at: number): void {
  const { running } = spans;
  for (let d = 0; d < running.length - 1; d++) running[d + 1] = running[d] + ((flags[row + d] & ESTIMATED_BITS) === 0 ? 0 : 1);
  laySums(spans, into, at);
}

function laySums({ from, to, running }: Spans, into: Uint16Array, at: number): void {
  for (let p = 0; p < from.length; p++) {
    const sum = running[to[p] + 1] - running[from[p]];
    into[at + p] = sum;
    into[at + from.length + p] = sum >>> 16;
  }
}

function ends(daily: Uint16Array, row: number, { to }: Spans, into: Uint16Array, at: number): void {
  for (let p = 0; p < to.length; p++) {
    into[at + p] = daily[row + to[p]];
    into[at + to.length + p] = 0;
  }
}

/** Names of the kept arrays that a variable of the map is made of. */
export function keptOf(variable: string): readonly string[] {
  if (variable === 'depletion_share') return ['root_zone_depletion', 'total_available_water'];
  return [variable === 'estimated_share' ? 'estimated' : variable];
}

/**
 * Lays the values of some parcels into the arrays of a run, [period × parcel] for each set of periods.
 *
 * @param kept packed arrays of the parcels, those of `keptOf(variable)`
 * @param position place of the first of the parcels in the run
 */
export function layPeriods(
  variable: string,
  kept: readonly Uint8Array[],
  position: number,
  sets: readonly PeriodSet[],
  arrays: readonly Float32Array[],
): void {
  const [numbers, others] = kept.map(unpackDays);
  const periodCount = sets.reduce((count, { periods }) => count + periods.length, 0);
  const parcels = numbers.length / HALVES / periodCount;
  const { aggregate } = MAP_VARIABLES.find(({ id }) => id === variable) as (typeof MAP_VARIABLES)[number];
  const scale = variable.endsWith('_share') ? 1 : DAILY_VARIABLES[variableIndex(variable as DailyVariable)].scale;
  let before = 0;
  sets.forEach(({ periods }, k) => {
    const into = arrays[k];
    const all = into.length / periods.length;
    periods.forEach(({ from, to }, p) => {
      const divisor = aggregate === 'mean' ? scale * (to - from + 1) : scale;
      for (let parcel = 0, i = p * all + position; parcel < parcels; parcel++, i++) {
        const at = parcel * HALVES * periodCount + before + p;
        const number = numbers[at] + 65536 * numbers[at + periodCount];
        into[i] = others ? shareOf(number, others[at]) : number / divisor;
      }
    });
    before += periods.length;
  });
}

/** Missing where the soil holds no water. */
function shareOf(depletion: number, available: number): number {
  return available === 0 ? Number.NaN : depletion / available;
}
