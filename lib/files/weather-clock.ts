/**
 * What the clock of a file's stamps is, and how its readings come to the standard clock of a site.
 *
 * A day of weather runs by the site's local standard time, so that it has 24 hours all year. A station's wall clock that follows daylight
 * saving skips an hour in spring and shows one twice in autumn.
 */
import { clockChanges, fixedOffset, isTimeZone, standardOffset, wallReading, yearOfMinute } from '../base/time-zone.ts';

/** The clock that stamps were written by. */
export type StampClock =
  /** a fixed offset from UTC [min]; `by` says who told */
  | { readonly kind: 'fixed'; readonly offset: number; readonly name: string; readonly by: string }
  /** the wall clock of an IANA zone, daylight saving included, as the options say */
  | { readonly kind: 'wall'; readonly zone: string }
  /** local standard time, as the file says */
  | { readonly kind: 'standard'; readonly by: string }
  /** nothing said: the site's own clock */
  | { readonly kind: 'own' };

/** How the stamps of one site were read. */
export interface ClockReading {
  /** min since 1970-01-01 00:00 of the site's standard clock; NaN for a reading that the clock skipped */
  readonly stamps: Float64Array;
  readonly how: 'moved' | 'wall' | 'standard' | 'standard-assumed' | 'no-zone';
  /** readings at clock times that the wall clock skipped; the first of them */
  readonly skipped: number;
  readonly firstSkipped: number;
  /** readings at clock times that occurred twice */
  readonly twice: number;
}

/** The zone of a site's clock: its own where it names one, else the district's; null when neither does. */
export function zoneOfSite(own: string | null | undefined, district: string | undefined): string | null {
  if (own && isTimeZone(own)) return own.trim();
  return district && isTimeZone(district) ? district : null;
}

/** Clock that an option names. */
export function clockOfOption(text: string): StampClock {
  const offset = fixedOffset(text);
  return offset === null ? { kind: 'wall', zone: text } : { kind: 'fixed', offset, name: text, by: 'as chosen' };
}

/**
 * Brings stamps of one site to its standard clock.
 *
 * @param stamps in file order [min of the file's clock]
 * @param zone of the site, or null
 * @param endStamped a stamp names the end of what it covers: the instant at which the clock is put forward is then still a reading
 */
export function standardStamps(stamps: Float64Array, clock: StampClock, zone: string | null, endStamped: boolean): ClockReading {
  const plain = { stamps, skipped: 0, firstSkipped: Number.NaN, twice: 0 };
  switch (clock.kind) {
    case 'fixed':
      return zone === null ? { ...plain, how: 'no-zone' } : { ...plain, how: 'moved', stamps: moved(stamps, clock.offset, zone) };
    case 'standard':
      return { ...plain, how: 'standard' };
    case 'wall':
      return ofWallClock(stamps, clock.zone, zone ?? clock.zone, endStamped);
    case 'own': {
      if (zone === null) return { ...plain, how: 'no-zone' };
      const evidence = evidenceOf(stamps, zone, endStamped);
      return evidence === 'wall' ? ofWallClock(stamps, zone, zone, endStamped) : { ...plain, how: evidence };
    }
  }
}

function moved(stamps: Float64Array, offset: number, zone: string): Float64Array {
  return stamps.map((stamp) => stamp - offset + standardOffset(zone, yearOfMinute(stamp)));
}

function ofWallClock(stamps: Float64Array, wallZone: string, siteZone: string, endStamped: boolean): ClockReading {
  const seen = new Map<number, number>();
  let [skipped, twice, firstSkipped] = [0, 0, Number.NaN];
  const read = stamps.map((stamp) => {
    const reading = wallReading(wallZone, stamp);
    const standard = standardOffset(siteZone, yearOfMinute(stamp));
    if (reading.kind === 'plain') return stamp - reading.offset + standard;
    if (reading.kind === 'skipped') {
      if (endStamped && isStartOfSkip(wallZone, stamp)) return stamp - reading.offset + standard;
      if (skipped++ === 0) firstSkipped = stamp;
      return Number.NaN;
    }
    const times = seen.get(stamp) ?? 0;
    seen.set(stamp, times + 1);
    twice++;
    return stamp - (times === 0 ? reading.offset : reading.offsetAgain) + standard;
  });
  return { stamps: read, how: 'wall', skipped, firstSkipped, twice };
}

function isStartOfSkip(zone: string, stamp: number): boolean {
  return clockChanges(zone, yearOfMinute(stamp)).some(({ instant, before, after }) => after > before && instant + before === stamp);
}

/**
 * Whether stamps of nobody-says-which clock follow daylight saving: readings in the hour that the wall clock skips, or the hour that it shows
 * twice but once, tell that they do not; the skipped hour left out, or the double hour twice, that they do.
 */
function evidenceOf(stamps: Float64Array, zone: string, endStamped: boolean): 'wall' | 'standard' | 'standard-assumed' {
  const [low, high] = stamps.reduce(([least, most], stamp) => [Math.min(least, stamp), Math.max(most, stamp)], [Infinity, -Infinity]);
  if (!Number.isFinite(low)) return 'standard';
  let anyChange = false;
  let once = false;
  let doubled = false;
  let leftOut = false;
  const present = new Map<number, number>();
  for (const stamp of stamps) present.set(stamp, (present.get(stamp) ?? 0) + 1);
  for (let year = yearOfMinute(low); year <= yearOfMinute(high); year++) {
    for (const { instant, before, after } of clockChanges(zone, year)) {
      anyChange = true;
      const [early, late] = [instant + Math.min(before, after), instant + Math.max(before, after)];
      const within = countWithin(present, early, late, endStamped && after > before);
      const around = countWithin(present, early - 180, early, false) > 0 && countWithin(present, late, late + 180, false) > 0;
      if (after > before && within > 0) return 'standard';
      if (after > before && around) leftOut = true;
      if (after < before && within > 0) {
        if (hasTwice(present, early, late)) doubled = true;
        else once = true;
      }
    }
  }
  if (doubled || leftOut) return 'wall';
  return once || !anyChange ? 'standard' : 'standard-assumed';
}

function countWithin(present: ReadonlyMap<number, number>, from: number, to: number, afterFrom: boolean): number {
  let count = 0;
  for (let minute = afterFrom ? from + 1 : from; minute < to; minute++) count += present.get(minute) ?? 0;
  return count;
}

function hasTwice(present: ReadonlyMap<number, number>, from: number, to: number): boolean {
  for (let minute = from; minute < to; minute++) if ((present.get(minute) ?? 0) > 1) return true;
  return false;
}
