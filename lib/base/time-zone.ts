/**
 * Clocks of places: IANA zones and fixed offsets, and the standard time that a day of weather runs by.
 *
 * Clock readings and instants are whole or broken minutes since 1970-01-01 00:00, of the clock or of UTC. Zone rules are those of the
 * runtime's copy of the IANA time zone database.
 */
import { civilFromDayNumber, dayNumberOf } from './civil-date.ts';

const MINUTES_PER_DAY = 1440;
const FIXED = /^(?:utc|gmt)?\s*([-+−])(\d{1,2})(?::?(\d{2}))?$/i;

/** A change of a zone's clock: the instant [min UTC] and the offsets before and after it [min]. */
export interface ClockChange {
  readonly instant: number;
  readonly before: number;
  readonly after: number;
}

const formats = new Map<string, Intl.DateTimeFormat | null>();
const changesOf = new Map<string, readonly ClockChange[]>();
const standards = new Map<string, number>();

/**
 * Offset that a text such as `UTC`, `UTC-07:00`, `GMT+1` or `+05:30` names, east positive.
 *
 * @returns minutes, or null when the text names no fixed offset within ±14 h
 * @example fixedOffset('UTC-07:00') // -420
 */
export function fixedOffset(text: string): number | null {
  const name = text.trim();
  if (/^(utc|gmt|z|ut)$/i.test(name)) return 0;
  const match = FIXED.exec(name);
  if (!match) return null;
  const minutes = Number(match[2]) * 60 + Number(match[3] ?? 0);
  if (minutes > 14 * 60 || Number(match[3] ?? 0) > 59) return null;
  return match[1] === '+' ? minutes : -minutes;
}

/** True when the text is a fixed offset or a zone of the IANA database. @example isTimeZone('Europe/Madrid') // true */
export function isTimeZone(text: string): boolean {
  return fixedOffset(text) !== null || formatOf(text.trim()) !== null;
}

function formatOf(zone: string): Intl.DateTimeFormat | null {
  let format = formats.get(zone);
  if (format === undefined) {
    try {
      format = new Intl.DateTimeFormat('en-u-ca-iso8601-nu-latn', { timeZone: zone, timeZoneName: 'longOffset' });
    } catch {
      format = null;
    }
    formats.set(zone, format);
  }
  return format;
}

/**
 * Offset of a zone at an instant.
 *
 * @param zone IANA name or fixed offset
 * @param instant [min UTC]
 * @returns minutes east of UTC; NaN for a text that is no zone
 * @example zoneOffset('Europe/Madrid', 0) // 60
 */
export function zoneOffset(zone: string, instant: number): number {
  const fixed = fixedOffset(zone);
  if (fixed !== null) return fixed;
  const part = formatOf(zone)
    ?.formatToParts(new Date(instant * 60_000))
    .find(({ type }) => type === 'timeZoneName');
  if (!part) return Number.NaN;
  return part.value === 'GMT'
    ? 0
    : (fixedOffset(part.value.replace(/:\d{2}$/, (tail) => (part.value.split(':').length > 2 ? '' : tail))) ?? 0);
}

/**
 * Offset of the standard time of a zone in a year: the smaller of the offsets in January and July, on both hemispheres.
 *
 * @returns minutes east of UTC; NaN for a text that is no zone
 * @example standardOffset('Europe/Madrid', 2024) // 60
 */
export function standardOffset(zone: string, year: number): number {
  const key = `${zone} ${year}`;
  let offset = standards.get(key);
  if (offset === undefined) {
    const at = (month: number) => zoneOffset(zone, dayNumberOf(year, month, 1) * MINUTES_PER_DAY);
    offset = Math.min(at(1), at(7));
    standards.set(key, offset);
  }
  return offset;
}

/** Changes of a zone's clock within a year of UTC, in order, to the minute. @example clockChanges('Europe/Madrid', 2024).length // 2 */
export function clockChanges(zone: string, year: number): readonly ClockChange[] {
  const key = `${zone} ${year}`;
  let changes = changesOf.get(key);
  if (!changes) {
    changes = findChanges(zone, year);
    changesOf.set(key, changes);
  }
  return changes;
}

function findChanges(zone: string, year: number): ClockChange[] {
  if (fixedOffset(zone) !== null || !formatOf(zone)) return [];
  const changes: ClockChange[] = [];
  const [first, end] = [dayNumberOf(year, 1, 1), dayNumberOf(year + 1, 1, 1)];
  const stride = 7;
  for (let day = first; day < end; day += stride) {
    let [low, high] = [day * MINUTES_PER_DAY, Math.min(day + stride, end) * MINUTES_PER_DAY];
    const [before, after] = [zoneOffset(zone, low), zoneOffset(zone, high)];
    if (before === after) continue;
    while (high - low > 1) {
      const middle = Math.floor((low + high) / 2);
      if (zoneOffset(zone, middle) === before) low = middle;
      else high = middle;
    }
    changes.push({ instant: high, before, after });
  }
  return changes;
}

/** Year of a clock reading or instant. */
export function yearOfMinute(minute: number): number {
  return civilFromDayNumber(Math.floor(minute / MINUTES_PER_DAY)).year;
}

/** What a wall clock that follows daylight saving says of one of its readings. */
export interface WallReading {
  /** `skipped`: no such reading, the clock was put forward over it; `twice`: it occurs once before and once after the clock is put back */
  readonly kind: 'plain' | 'skipped' | 'twice';
  /** minutes east of UTC; of a reading that occurs twice, the first time */
  readonly offset: number;
  /** of a reading that occurs twice, the second time; else the same */
  readonly offsetAgain: number;
}

/**
 * What a reading of a zone's wall clock means.
 *
 * @param reading minutes of the wall clock
 * @example wallReading('Europe/Madrid', 28530870).kind // 'skipped'
 */
export function wallReading(zone: string, reading: number): WallReading {
  const year = yearOfMinute(reading);
  let offset: number | null = null;
  for (const change of clockChanges(zone, year)) {
    const [early, late] = [change.instant + Math.min(change.before, change.after), change.instant + Math.max(change.before, change.after)];
    offset ??= change.before;
    if (reading >= early && reading < late) {
      const forward = change.after > change.before;
      return { kind: forward ? 'skipped' : 'twice', offset: change.before, offsetAgain: change.after };
    }
    if (reading >= late) offset = change.after;
  }
  offset ??= zoneOffset(zone, reading - standardOffset(zone, year));
  return { kind: 'plain', offset, offsetAgain: offset };
}
