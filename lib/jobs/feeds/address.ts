/** Addresses and file patterns with date fields, and when a feed is next due. */
import { CronExpressionParser } from 'cron-parser';
import { addDays, dayNumber, dayOfYear } from '../../base/civil-date.ts';
import { Refused } from '../../base/errors.ts';

/** Fields that a template may hold: each stands for a part of the day that is asked for. */
export const DATE_FIELDS = ['{YYYY}', '{YY}', '{MM}', '{DD}', '{DDD}'] as const;

/** Most addresses that one turn of a feed asks for. */
export const MOST_ADDRESSES = 62;

const FIELD = /\{[^{}]*\}/g;

/** @throws Refused naming the field that is not known */
export function checkTemplate(template: string): void {
  for (const field of template.match(FIELD) ?? []) {
    if ((DATE_FIELDS as readonly string[]).includes(field)) continue;
    throw new Refused(
      `The template has the field ${field}, which is not known. Known fields: ${DATE_FIELDS.join(', ')} (year, month, day, day of the year).`,
    );
  }
}

/** A template with the parts of a day put in. @example filled('a_{YYYY}{MM}{DD}.csv', '2023-04-09') // 'a_20230409.csv' */
export function filled(template: string, date: string): string {
  const [year, month, day] = date.split('-');
  const values: Record<string, string> = {
    '{YYYY}': year,
    '{YY}': year.slice(2),
    '{MM}': month,
    '{DD}': day,
    '{DDD}': String(dayOfYear(dayNumber(date))).padStart(3, '0'),
  };
  return template.replaceAll(FIELD, (field) => values[field] ?? field);
}

/** What a feed asks for on a day: its template for that day and the days before it, oldest first; once where it has no date fields. */
export function addressesOf(template: string, today: string, lookBack: number): string[] {
  const days = Array.from({ length: lookBack + 1 }, (_, back) => addDays(today, back - lookBack));
  return [...new Set(days.map((date) => filled(template, date)))].slice(-MOST_ADDRESSES);
}

/** Shortest time between two turns of a feed [min]. */
const SHORTEST_MINUTES = 5;

/**
 * The next time a schedule falls due.
 *
 * @param schedule five fields of cron: minute, hour, day of month, month, weekday
 * @param zone IANA zone in which they are meant
 * @throws Refused when it is none, or falls due more often than every five minutes
 */
export function nextTime(schedule: string, zone: string, after: Date): Date {
  if (schedule.trim().split(/\s+/).length !== 5) throw badSchedule(schedule);
  try {
    const turns = CronExpressionParser.parse(schedule, { currentDate: after, tz: zone });
    const first = turns.next().toDate();
    const second = turns.next().toDate();
    if (second.getTime() - first.getTime() >= SHORTEST_MINUTES * 60_000) return first;
  } catch {
    throw badSchedule(schedule);
  }
  throw new Refused(
    `The schedule "${schedule}" falls due more often than every ${SHORTEST_MINUTES} minutes, the least this service takes.`,
  );
}

function badSchedule(schedule: string): Refused {
  return new Refused(
    `"${schedule}" is not a schedule. Give five fields: minute, hour, day of the month, month, weekday; for example "30 6 * * *" for half past six every day.`,
  );
}

const FIRST_BACK_OFF_MS = 5 * 60_000;
const LONGEST_BACK_OFF_MS = 6 * 3_600_000;

/** How long a feed waits after so many failures in a row, if its schedule is not later [ms]: 5 min, doubled each time, at most 6 h. */
export function backOff(failures: number): number {
  return Math.min(LONGEST_BACK_OFF_MS, FIRST_BACK_OFF_MS * 2 ** Math.max(0, failures - 1));
}
