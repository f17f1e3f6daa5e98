/**
 * Local days of a zone as spans of real instants, so that a day on which the clocks change has 23 or 25 hours.
 */
import type { DayNumber } from '../base/civil-date.ts';
import { isTimeZone, zoneOffset } from '../base/time-zone.ts';
import { SECONDS_PER_DAY } from '../base/units.ts';

/** Seconds that a zone is ahead of UTC at an instant [s since 1970-01-01 UTC]. */
export type ZoneOffset = (instant: number) => number;

/**
 * Offset of an IANA zone or of a fixed offset such as "UTC-07:00"; null when the name is neither.
 *
 * @example zoneOffsetOf('UTC-07:00')?.(0) // -25200
 */
export function zoneOffsetOf(name: string): ZoneOffset | null {
  const zone = name.trim();
  if (!isTimeZone(zone)) return null;
  const known = new Map<number, number>();
  return (instant) => {
    const minute = Math.floor(instant / 60);
    const remembered = known.get(minute);
    if (remembered !== undefined) return remembered;
    const offset = zoneOffset(zone, minute) * 60;
    known.set(minute, offset);
    return offset;
  };
}

/** First instant [s] of a local day. A midnight that the clocks skip gives the first instant after it. */
export function startOfLocalDay(day: DayNumber, offset: ZoneOffset): number {
  const midnight = day * SECONDS_PER_DAY;
  const candidates = [midnight - offset(midnight - SECONDS_PER_DAY), midnight - offset(midnight + SECONDS_PER_DAY)].sort((a, b) => a - b);
  for (const instant of candidates) if (localDayOf(instant, offset) >= day) return instant;
  return candidates[1];
}

/** Local day of an instant [s]. */
export function localDayOf(instant: number, offset: ZoneOffset): DayNumber {
  return Math.floor((instant + offset(instant)) / SECONDS_PER_DAY);
}

/** Instant of a wall clock reading [s, as if it were UTC]; of an hour that occurs twice, the first. */
export function instantOfWallClock(wall: number, offset: ZoneOffset): number {
  const early = wall - offset(wall - SECONDS_PER_DAY);
  return early + offset(early) === wall ? early : wall - offset(wall + SECONDS_PER_DAY);
}
