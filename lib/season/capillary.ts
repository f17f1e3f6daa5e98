/**
 * The most that rises from the water table under a parcel, day by day.
 */
import { mostCapillaryRise } from '../crop/capillary-rise.ts';
import type { DatedValues, ParcelInput } from './types.ts';

/**
 * A dated value on any day: linear between its dates, the end values beyond them.
 *
 * Missing: NaN where there are no dates.
 *
 * @param day offset from the first day stepped
 * @example datedValue({ days: [0, 10], values: [2, 3] }, 4) // 2.4
 * Source: common practice, no source.
 */
export function datedValue({ days, values }: DatedValues, day: number): number {
  const last = days.length - 1;
  if (last < 0) return Number.NaN;
  if (day <= days[0]) return values[0];
  if (day >= days[last]) return values[last];
  let k = 1;
  while (days[k] < day) k++;
  return values[k - 1] + ((values[k] - values[k - 1]) * (day - days[k - 1])) / (days[k] - days[k - 1]);
}

/**
 * Fills the most that rises into the root zone each day, `StripCurve.capillaryMost`.
 *
 *   z = depth of the water table that day − Zr; rise by `mostCapillaryRise`
 *
 * 0 where the parcel has no water table or its soil no properties for it. What of it is taken the depletion of the root zone decides.
 *
 * @param rootDepth Zr [day] [m]
 * @param into [day] [mm d⁻¹]
 * Source: as `mostCapillaryRise`.
 */
export function fillCapillaryRise(parcel: Pick<ParcelInput, 'soil' | 'waterTable'>, rootDepth: Float64Array, into: Float64Array): void {
  const { capillary } = parcel.soil;
  const table = parcel.waterTable;
  if (capillary === undefined || table === undefined || table.days.length === 0) {
    into.fill(0);
    return;
  }
  let height = Number.NaN;
  let rise = 0;
  for (let d = 0; d < into.length; d++) {
    const today = datedValue(table, d) - rootDepth[d];
    // the power is taken anew only when table or roots have moved
    if (today !== height) rise = mostCapillaryRise(capillary, today);
    height = today;
    into[d] = rise;
  }
}
