/**
 * Crop calendars of the library: lengths of the growth stages by region, and a customary planting day.
 */
import type { CropCalendar } from '../../lib/season/types.ts';
import { type CropRow, kebab } from './crop-rows.ts';
import { weatherCalendars } from './weather-calendars.ts';

export interface LibraryCalendar {
  readonly cropCode: string;
  readonly calendar: CropCalendar;
  /** MM-DD, or null when the tables give no month */
  readonly plantingDay: string | null;
  readonly source: string;
}

const MONTHS = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];

/** Calendars of all rows, then those that follow the weather. Later cutting cycles join the first cycle of the same crop and region. */
export function libraryCalendars(rows: readonly CropRow[]): LibraryCalendar[] {
  const starts = rows.filter((row) => row.stages !== null && row.cycle !== 'later').map((row) => calendarOf(row, laterCycle(rows, row)));
  const listed = new Set(starts.map((each) => each.cropCode));
  const standing = rows.filter((row) => !listed.has(row.code) && row.type !== 'annual').map(allYear);
  const fixed = [...starts, ...standing];
  return [...fixed, ...weatherCalendars(fixed)];
}

function laterCycle(rows: readonly CropRow[], first: CropRow): CropRow['stages'] {
  if (first.cycle !== 'first') return null;
  return rows.find((row) => row.cycle === 'later' && row.code === first.code && row.region === first.region)?.stages ?? null;
}

function calendarOf(row: CropRow, later: CropRow['stages']): LibraryCalendar {
  const stages = row.stages as NonNullable<CropRow['stages']>;
  const region = row.region === '' ? 'general' : row.region;
  const planted = row.plantingText === '' ? 'no planting date printed' : `printed planting date ${row.plantingText}`;
  return {
    cropCode: row.code,
    calendar: { code: `${row.code}-${kebab(region)}`, name: `${row.name}, ${region}`, ...stages, laterCycle: later },
    plantingDay: plantingDay(row.plantingText),
    source: `FAO-56 Table 11, ${region}; ${planted}`,
  };
}

/** For standing crops whose stages the tables do not list: mid-season values the year round. */
function allYear(row: CropRow): LibraryCalendar {
  return {
    cropCode: row.code,
    calendar: {
      code: `${row.code}-all-year`,
      name: `${row.name}, all year`,
      initial: 0,
      development: 0,
      mid: 365,
      late: 0,
      laterCycle: null,
    },
    plantingDay: '01-01',
    source: 'common practice, no source: stage lengths are not listed, mid-season values are held the year round',
  };
}

/**
 * Planting day from the printed month: its 15th, or the 1st of the second of two months. Null when no month is printed.
 *
 * @example plantingDay('Mar-Apr') // '04-01'
 */
export function plantingDay(printed: string): string | null {
  const [first, second] = [...printed.toLowerCase().matchAll(/\b(jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)\b/g)].map(
    (match) => match[1],
  );
  if (!first) return null;
  const range = second !== undefined && printed.includes('-') && !printed.includes(';');
  const month = MONTHS.indexOf(range ? second : first) + 1;
  return `${String(month).padStart(2, '0')}-${range ? '01' : '15'}`;
}
