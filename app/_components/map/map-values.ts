/** The map's numbers: fetched once per variable as weeks × parcels, then cut by week on the reader's machine. */
import { dayNumber, type IsoDate } from '../../../lib/base/civil-date.ts';
import type { MapVariable } from './map-variables.ts';

export interface WeekSpan {
  readonly start: IsoDate;
  readonly end: IsoDate;
}

/** Weeks chosen in the strip, both ends included. */
export interface WeekRange {
  readonly from: number;
  readonly to: number;
}

/** Values of one stored variable, [week × parcel]; NaN is missing. */
export interface WeekValues {
  readonly parcelCount: number;
  readonly values: Float32Array;
}

/** Fetches every week of a variable. Throws with what the server said, or when the length does not fit the map. */
export async function fetchWeekValues(run: string, variable: string, shape: { weeks: number; parcels: number }): Promise<WeekValues> {
  const response = await fetch(`/api/v1/runs/${run}/values/${variable}/weeks`);
  if (!response.ok) throw new Error(await refusalText(response));
  const bytes = await response.arrayBuffer();
  if (bytes.byteLength !== shape.weeks * shape.parcels * 4) {
    throw new Error(
      `The map expected ${shape.weeks} weeks of ${shape.parcels} parcels and received ${bytes.byteLength} bytes. Reload the page.`,
    );
  }
  return { parcelCount: shape.parcels, values: new Float32Array(bytes) };
}

/** What a refusal says, from its problem details when it has them. */
export async function refusalText(response: Response): Promise<string> {
  try {
    const problem: unknown = await response.json();
    if (problem && typeof problem === 'object' && 'detail' in problem && typeof problem.detail === 'string') return problem.detail;
  } catch {
    // not JSON: the status has to do
  }
  return `The server answered ${response.status}. Reload the page; if it stays, tell the district's manager.`;
}

/** Days of each week. */
export function dayCounts(weeks: readonly WeekSpan[]): number[] {
  return weeks.map((week) => dayNumber(week.end) - dayNumber(week.start) + 1);
}

/**
 * One value per parcel over a range of weeks: sum, end state, or mean weighted by days; volume [m³] is depth [mm] × area [m²] ÷ 1000.
 * A week that is missing makes the sum or mean missing.
 */
export function valuesOver(
  stored: WeekValues,
  variable: MapVariable,
  range: WeekRange,
  shape: { days: readonly number[]; area: readonly number[] },
): Float32Array {
  const { parcelCount, values } = stored;
  if (variable.over === 'end') return values.slice(range.to * parcelCount, (range.to + 1) * parcelCount);
  const total = new Float64Array(parcelCount);
  let days = 0;
  for (let week = range.from; week <= range.to; week++) {
    const weight = variable.over === 'mean' ? shape.days[week] : 1;
    days += shape.days[week];
    const offset = week * parcelCount;
    for (let parcel = 0; parcel < parcelCount; parcel++) total[parcel] += values[offset + parcel] * weight;
  }
  if (variable.over === 'mean') for (let parcel = 0; parcel < parcelCount; parcel++) total[parcel] /= days;
  if (variable.id === 'gross_volume') for (let parcel = 0; parcel < parcelCount; parcel++) total[parcel] *= shape.area[parcel] / 1000;
  return Float32Array.from(total);
}

/** District volume of each week [m³]: depth [mm] × area [m²] ÷ 1000 over the parcels that have a value. */
export function weekVolumes(gross: WeekValues, area: readonly number[]): number[] {
  const weeks = gross.values.length / gross.parcelCount;
  return Array.from({ length: weeks }, (_, week) => {
    let total = 0;
    for (let parcel = 0; parcel < gross.parcelCount; parcel++) {
      const depth = gross.values[week * gross.parcelCount + parcel];
      if (depth > 0) total += (depth * area[parcel]) / 1000;
    }
    return total;
  });
}
