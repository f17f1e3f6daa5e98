/** What the stamps of a table with several readings a day name, start, middle or end, and by which clock. */
import { isLeapYear } from '../base/civil-date.ts';
import { yearOfMinute } from '../base/time-zone.ts';
import { columnName, wordsOf } from './column-name.ts';
import type { TableHead } from './csv.ts';
import { parseDate } from './date-cell.ts';
import type { ImportOptions } from './reading.ts';
import { clockOfOption, type StampClock } from './weather-clock.ts';
import type { WeatherColumns } from './weather-columns.ts';
import type { WeatherReading } from './weather-csv.ts';
import type { Stamp } from './weather-days.ts';
import type { ReadingStore } from './weather-readings.ts';
import { countsToTwentyFour } from './weather-stamp.ts';
import { sunOfStamps } from './weather-sun.ts';
import { contextOf } from './weather-table-site.ts';

const MINUTES_PER_DAY = 1440;

interface StampRequest {
  readonly head: TableHead;
  readonly columns: WeatherColumns;
  readonly readings: ReadingStore;
  readonly file: string;
  readonly clock: StampClock;
}

/**
 * What a stamp names. In order: the options; the header; an hour column that counts to 24; a record that begins one step after midnight and
 * ends at midnight; stamps in the middle of every step; the sun, where there is radiation; else the end where the file has sums (as most stations write them; common practice,
 * no source) and the start where it has none, with a warning.
 */
export function stampOfTable({ head, columns, readings, file, clock }: StampRequest, reading: WeatherReading): Stamp {
  const { options, findings } = reading;
  if (options.stamp) return options.stamp;
  const step = columns.time?.step ?? 60;
  const tell = (stamp: Stamp, why: string): Stamp => {
    findings.note({ code: 'stamp', message: `Each stamp names the ${WORD[stamp]} of its ${stepText(step)}: ${why}.`, file });
    return stamp;
  };
  const header = columns.date.kind === 'date' ? wordsOf(head.header[columns.date.index]) : [];
  if (header.includes('start')) return tell('start', `column "${head.header[(columns.date as { index: number }).index]}"`);
  if (header.includes('end')) return tell('end', `column "${head.header[(columns.date as { index: number }).index]}"`);
  if (countsToTwentyFour(head, columns.hour)) return tell('end', 'the hours count from 1 to 24');
  const { first, last } = extent(readings);
  if (first % MINUTES_PER_DAY === step && last % MINUTES_PER_DAY === 0 && step < MINUTES_PER_DAY) {
    return tell('end', `the record begins ${step} min after midnight and ends at midnight${lastDayText(last)}`);
  }
  if (step >= 10 && everyStampCentred(readings, step))
    return tell('centre', `every stamp lies half a step, ${step / 2} min, after a full one`);
  const sun = sunOfStamps(readings, clock, contextOf(reading));
  if (sun && sun.stamp !== null) {
    return tell(
      sun.stamp,
      `over ${sun.days} days the sun's energy lies ${minutesText(sun.lag)} solar noon, counted by the stamps themselves`,
    );
  }
  if (sun) tellSunOff(sun.lag, file, findings);
  return assumed({ head, columns, readings, file, clock }, step, findings);
}

function minutesText(lag: number): string {
  return `${Math.abs(Math.round(lag))} min ${lag < 0 ? 'before' : 'after'}`;
}

function tellSunOff(lag: number, file: string, findings: WeatherReading['findings']): void {
  findings.warn({
    code: 'sun-off-noon',
    message: `By the stamps the sun's energy lies ${minutesText(lag)} solar noon, which no reading of the stamps explains: the zone of the stamps or the longitude of the site is probably wrong.`,
    file,
    value: `${Math.round(lag)} min`,
    advice: 'Choose the zone of the stamps in the options, or correct the site.',
  });
}

const WORD: Record<Stamp, string> = { start: 'start', centre: 'middle', end: 'end' };

function stepText(step: number): string {
  return step === 60 ? 'hour' : step % 60 === 0 ? `${step / 60} hours` : step === 1 ? 'minute' : `${step} minutes`;
}

/** Day 366 of a common year, hour 0, and 1 January are the same stamp. */
function lastDayText(last: number): string {
  const year = yearOfMinute(last - 1);
  return yearOfMinute(last) === year ? '' : ` after day ${isLeapYear(year) ? 366 : 365}`;
}

function assumed({ columns, file }: StampRequest, step: number, findings: WeatherReading['findings']): Stamp {
  const sums = columns.values.some(({ role }) => role === 'precipitation_mm' || role === 'solar_radiation_mj_m2_d');
  const stamp: Stamp = sums && step > 1 ? 'end' : 'start';
  findings.warn({
    code: 'stamp-assumed',
    message: `The file does not say whether a stamp names the start or the end of its ${stepText(step)}; it is read as the ${WORD[stamp]}.`,
    file,
    limit: 'start, centre or end',
    advice: 'Choose it in the options. Wrong by one step, the sun of each hour stands wrong and a midnight reading falls on the other day.',
  });
  return stamp;
}

function extent({ stamps, count }: ReadingStore): { first: number; last: number } {
  let [first, last] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (let row = 0; row < count; row++) {
    if (stamps[row] < first) first = stamps[row];
    if (stamps[row] > last) last = stamps[row];
  }
  return { first, last };
}

function everyStampCentred({ stamps, count }: ReadingStore, step: number): boolean {
  for (let row = 0; row < count; row++) if (stamps[row] % step !== step / 2) return false;
  return count > 0;
}

interface ClockRequest {
  readonly head: TableHead;
  readonly columns: WeatherColumns;
  /** minutes east of UTC, where the layout of the file fixes the clock */
  readonly offset: number | null;
}

/** The clock of a table's stamps: offsets in the cells, the options, the layout, the header, else the site's own. */
export function clockOfTable({ head, columns, offset }: ClockRequest, options: ImportOptions): StampClock {
  if (cellsNameOffsets(head, columns)) return { kind: 'fixed', offset: 0, name: 'UTC', by: 'offsets in the stamps' };
  if (options.stampZone) return clockOfOption(options.stampZone);
  if (offset !== null) return { kind: 'fixed', offset, name: 'UTC', by: 'fixed by the layout' };
  const headers = [columns.date.kind === 'date' ? columns.date.index : -1, columns.hour]
    .filter((index) => index >= 0)
    .map((index) => head.header[index]);
  const words = headers.flatMap((header) => [...wordsOf(header), ...wordsOf(columnName(header).unitText ?? '')]);
  const said = headers.map((header) => `"${header}"`).join(', ');
  if (words.some((word) => word === 'utc' || word === 'gmt')) return { kind: 'fixed', offset: 0, name: 'UTC', by: `header ${said}` };
  if (words.includes('lst')) return { kind: 'standard', by: `header ${said}` };
  if (isTowerTable(head.header))
    return { kind: 'standard', by: 'TIMESTAMP_START and TIMESTAMP_END of the flux-tower convention are standard time' };
  return { kind: 'own' };
}

/** Tables of the flux-tower networks: both ends of the interval, in local standard time. Source: FLUXNET2015 data format. */
function isTowerTable(header: readonly string[]): boolean {
  return header.includes('TIMESTAMP_START') && header.includes('TIMESTAMP_END');
}

function cellsNameOffsets(head: TableHead, { date, dateOrder }: WeatherColumns): boolean {
  if (date.kind !== 'date') return false;
  return head.sample.some((cells) => parseDate(cells[date.index] ?? '', dateOrder)?.offset !== undefined);
}
