/**
 * The units of a time axis, "days since 1950-01-01 00:00:00" and its many spellings.
 *
 * Source: CF Metadata Conventions 1.11, section 4.4 "Time Coordinate"; ISO 8601 for the T and Z of the epoch.
 */
import { SECONDS_PER_DAY } from '../base/units.ts';
import type { EpochDate } from './grid-calendar.ts';

const STEP_SECONDS: Record<string, number> = {
  ...{ day: SECONDS_PER_DAY, days: SECONDS_PER_DAY, d: SECONDS_PER_DAY },
  ...{ hour: 3600, hours: 3600, hr: 3600, hrs: 3600, h: 3600 },
  ...{ minute: 60, minutes: 60, min: 60, mins: 60 },
  ...{ second: 1, seconds: 1, sec: 1, secs: 1, s: 1 },
  ...{ millisecond: 0.001, milliseconds: 0.001, msec: 0.001, ms: 0.001 },
  ...{ microsecond: 1e-6, microseconds: 1e-6, us: 1e-6, nanosecond: 1e-9, nanoseconds: 1e-9, ns: 1e-9 },
};

const EPOCH =
  /^(\d{1,4})-(\d{1,2})-(\d{1,2})(?:[T\s]+(\d{1,2})(?::(\d{1,2})(?::(\d{1,2}(?:\.\d*)?))?)?)?\s*(Z|UTC|GMT|[+-]\d{1,2}(?::?\d{2})?)?$/i;

/** What the units of a time axis say. */
export interface TimeUnits {
  /** seconds in one step of the count */
  readonly stepSeconds: number;
  readonly epoch: EpochDate;
  /** seconds that the epoch's own zone is ahead of UTC, null when it names none */
  readonly offset: number | null;
}

/** Why units cannot be used. */
export interface TimeUnitsFault {
  readonly fault: string;
}

/** True when a text reads as units of time. @example isTimeUnits('hours since 1900-01-01') // true */
export function isTimeUnits(text: string): boolean {
  return /^\s*[a-z]+\s+since\s+/i.test(text) || /^day as %Y%m%d/i.test(text.trim());
}

/** Reads units of time. @example parseTimeUnits('days since 1950-01-01') */
export function parseTimeUnits(text: string): TimeUnits | TimeUnitsFault {
  const match = /^\s*([a-z]+)\s+since\s+(.*?)\s*$/i.exec(text);
  if (!match) return { fault: 'it does not read as "days since YYYY-MM-DD"' };
  const stepSeconds = STEP_SECONDS[match[1].toLowerCase()];
  if (stepSeconds === undefined) return { fault: `"${match[1]}" is not a unit of fixed length such as days, hours, minutes or seconds` };
  const epoch = EPOCH.exec(match[2]);
  if (!epoch) return { fault: `"${match[2]}" is not a date` };
  const [hour, minute, second] = [epoch[4], epoch[5], epoch[6]].map((part) => Number(part ?? 0));
  if (hour > 24 || minute > 59 || second >= 61) return { fault: `"${match[2]}" has a time that no day has` };
  return {
    stepSeconds,
    epoch: { year: Number(epoch[1]), month: Number(epoch[2]), day: Number(epoch[3]), second: hour * 3600 + minute * 60 + second },
    offset: epoch[7] === undefined ? null : zoneOffset(epoch[7]),
  };
}

function zoneOffset(text: string): number {
  const match = /^([+-])(\d{1,2}):?(\d{2})?$/.exec(text);
  if (!match) return 0;
  return (match[1] === '-' ? -1 : 1) * (Number(match[2]) * 3600 + Number(match[3] ?? 0) * 60);
}
