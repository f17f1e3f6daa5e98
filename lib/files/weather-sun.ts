/**
 * What the sun tells of stamps: the middle of a day's solar energy lies at solar noon, so its distance from noon, counted by the stamps as they
 * are, shows whether they name the start, the middle or the end of what they cover.
 */
import { dayOfYear } from '../base/civil-date.ts';
import { standardOffset, yearOfMinute } from '../base/time-zone.ts';
import { solarNoon } from '../energy/sun-clock.ts';
import type { ImportContext } from './reading.ts';
import { type StampClock, standardStamps, zoneOfSite } from './weather-clock.ts';
import type { Stamp } from './weather-days.ts';
import type { ReadingStore } from './weather-readings.ts';
import { V } from './weather-row.ts';

const MINUTES_PER_DAY = 1440;
/** Fewest days with radiation that can tell. */
const FEWEST_DAYS = 10;
/** Shortest step [min] whose half is longer than what clouds shift on average. */
const SHORTEST_STEP = 30;
/** Most days looked at. */
const MOST_DAYS = 400;

export interface SunOfStamps {
  /** mean distance of the middle of the energy from solar noon [min], positive after it */
  readonly lag: number;
  readonly days: number;
  /** null when no reading of the stamps explains the distance */
  readonly stamp: Stamp | null;
}

/** Looks at the first site with radiation and a known place; null when there is none, or too few days. */
export function sunOfStamps(readings: ReadingStore, clock: StampClock, context: ImportContext): SunOfStamps | null {
  const radiation = readings.values[V.radiation];
  if (!radiation || readings.step < SHORTEST_STEP || readings.step > 60) return null;
  for (const [site, rows] of readings.bySite()) {
    const { longitude, zone: own } = context.knownSites[site] ?? {};
    const zone = zoneOfSite(own, context.timeZone);
    if (longitude === undefined || zone === null) continue;
    const stamps = standardStamps(
      Float64Array.from(rows, (row) => readings.stamps[row]),
      clock,
      zone,
      false,
    ).stamps;
    const lags = dailyLags(
      stamps,
      Float64Array.from(rows, (row) => radiation[row]),
      { step: readings.step, longitude, zone },
    );
    if (lags.length < FEWEST_DAYS) continue;
    return verdict(median(lags), lags.length, readings.step);
  }
  return null;
}

function verdict(lag: number, days: number, step: number): SunOfStamps {
  const choices: [Stamp, number][] = [
    ['start', -step / 2],
    ['centre', 0],
    ['end', step / 2],
  ];
  const [nearest] = choices.sort((a, b) => Math.abs(a[1] - lag) - Math.abs(b[1] - lag));
  return { lag, days, stamp: Math.abs(nearest[1] - lag) <= step / 4 ? nearest[0] : null };
}

/** Middle of the energy of each whole day less solar noon [min]. */
function dailyLags(
  stamps: Float64Array,
  radiation: Float64Array,
  { step, longitude, zone }: { step: number; longitude: number; zone: string },
): number[] {
  const days = new Map<number, { weight: number; moment: number; count: number }>();
  for (let i = 0; i < stamps.length; i++) {
    const day = Math.floor(stamps[i] / MINUTES_PER_DAY);
    if (Number.isNaN(day) || Number.isNaN(radiation[i])) continue;
    if (days.size >= MOST_DAYS && !days.has(day)) continue;
    const entry = days.get(day) ?? { weight: 0, moment: 0, count: 0 };
    entry.weight += radiation[i];
    entry.moment += radiation[i] * (stamps[i] - day * MINUTES_PER_DAY);
    entry.count++;
    days.set(day, entry);
  }
  return [...days]
    .filter(([, { weight, count }]) => weight > 0 && count === MINUTES_PER_DAY / step)
    .map(([day, { weight, moment }]) => {
      const zoneHours = standardOffset(zone, yearOfMinute(day * MINUTES_PER_DAY)) / 60;
      return moment / weight - 60 * solarNoon(dayOfYear(day), longitude, zoneHours);
    });
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[sorted.length >> 1];
}
