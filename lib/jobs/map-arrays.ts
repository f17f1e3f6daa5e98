/** The numbers of the map: for each variable and period kind one Float32 array [period × parcel], filled parcel by parcel. */
import type { Period } from '../base/civil-date.ts';
import { dailyValues } from '../season/daily-store.ts';
import type { DailyVariable } from '../season/types.ts';
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

interface PeriodSet {
  readonly kind: 'week' | 'month' | 'season';
  readonly periods: readonly Period[];
}

export class MapArrays {
  private readonly arrays: { variable: string; aggregate: Aggregate; set: PeriodSet; values: Float32Array }[];

  constructor(
    private readonly parcelCount: number,
    private readonly dayCount: number,
    sets: readonly PeriodSet[],
  ) {
    this.arrays = MAP_VARIABLES.flatMap(({ id, aggregate }) =>
      sets.map((set) => ({ variable: id, aggregate, set, values: new Float32Array(set.periods.length * parcelCount).fill(Number.NaN) })),
    );
  }

  /** Puts one parcel's season into every array. @param stored [variable × day] @param flags bits of FALLBACK [day] */
  add(position: number, stored: Uint16Array, flags: Uint32Array): void {
    const days = new Map(MAP_VARIABLES.map((variable) => [variable.id, this.daily(stored, flags, variable.id)]));
    for (const { variable, aggregate, set, values } of this.arrays) {
      const series = days.get(variable) as Float64Array;
      set.periods.forEach((period, index) => {
        values[index * this.parcelCount + position] = aggregated(series, period, aggregate);
      });
    }
  }

  private daily(stored: Uint16Array, flags: Uint32Array, id: string): Float64Array {
    if (id === 'estimated_share') return Float64Array.from(flags, (bits) => ((bits & ESTIMATED_BITS) === 0 ? 0 : 1));
    if (id !== 'depletion_share') return dailyValues(stored, this.dayCount, id as DailyVariable);
    const depletion = dailyValues(stored, this.dayCount, 'root_zone_depletion');
    const available = dailyValues(stored, this.dayCount, 'total_available_water');
    return depletion.map((value, day) => (available[day] > 0 ? value / available[day] : Number.NaN));
  }

  rows(key: { districtId: string; runId: string }) {
    return this.arrays.map(({ variable, set, values }) => ({
      ...key,
      variable,
      period: set.kind,
      periodCount: set.periods.length,
      parcelCount: this.parcelCount,
      values: new Uint8Array(values.buffer),
    }));
  }
}

/** One period's value from days. Any missing day makes a sum missing; a mean is over the days that have a value. */
function aggregated(series: Float64Array, period: Period, aggregate: Aggregate): number {
  if (aggregate === 'end') return series[period.to];
  let sum = 0;
  let count = 0;
  for (let day = period.from; day <= period.to; day++) {
    if (aggregate === 'mean' && Number.isNaN(series[day])) continue;
    sum += series[day];
    count++;
  }
  return aggregate === 'mean' ? sum / count : sum;
}
