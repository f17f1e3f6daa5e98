/**
 * The columns that say the day of a weather table's rows, and how its dates are written.
 */
import type { TableHead } from './csv.ts';
import { parseDate, sniffDateOrder } from './date-cell.ts';
import type { FindingList } from './finding-list.ts';
import type { DateOrder, ImportOptions } from './reading.ts';
import type { WeatherRole } from './weather-column.ts';
import { type SampledTime, type StampColumns, sampleTime } from './weather-stamp.ts';

export type DateColumns =
  | { readonly kind: 'date'; readonly index: number }
  | { readonly kind: 'parts'; readonly year: number; readonly month: number; readonly day: number }
  | { readonly kind: 'doy'; readonly year: number; readonly dayOfYear: number };

interface DateRequest {
  readonly head: TableHead;
  readonly options: ImportOptions;
  readonly file: string;
}

export function dateColumns(find: (role: WeatherRole) => number, { file, head }: DateRequest, findings: FindingList): DateColumns | null {
  if (find('date') >= 0) return { kind: 'date', index: find('date') };
  const [year, month, day, dayOfYear] = [find('year'), find('month'), find('day'), find('day_of_year')];
  if (year >= 0 && month >= 0 && day >= 0) return { kind: 'parts', year, month, day };
  if (year >= 0 && dayOfYear >= 0) return { kind: 'doy', year, dayOfYear };
  if (year >= 0 && day >= 0 && head.sample.some((cells) => Number(cells[day]) > 31)) return { kind: 'doy', year, dayOfYear: day };
  findings.refuse({
    code: 'missing-column',
    message: 'No column for the date was found.',
    file,
    column: 'date',
    advice:
      'Name a column "date" (YYYY-MM-DD), or bring year, month and day, or year and day of year; or choose the columns in the column plan.',
  });
  return null;
}

/** The time of a table with several readings a day; null for a daily one. */
export function timeOf(stamps: StampColumns, site: number, { file, head }: DateRequest, findings: FindingList): SampledTime | null {
  const time = sampleTime(stamps, site, head);
  if (time.severalADay) return time;
  const withTime =
    stamps.hour >= 0 ||
    (stamps.date.kind === 'date' &&
      head.sample.some((cells) => (parseDate(cells[(stamps.date as { index: number }).index] ?? '', 'dmy')?.minute ?? -1) > 0));
  if (withTime) {
    findings.note({
      code: 'time-of-day-dropped',
      message: 'The dates carry a time of day, one reading a day; only the date is used, as the day of the station.',
      file,
    });
  }
  return null;
}

export function dateOrderOf(date: DateColumns, { head, options, file }: DateRequest, findings: FindingList): DateOrder {
  const chosen = options.plan?.dateOrder ?? options.dateOrder;
  if (chosen || date.kind !== 'date') return chosen ?? 'ymd';
  const order = sniffDateOrder(head.sample.map((cells) => cells[date.index] ?? ''));
  if (order === 'ambiguous' || order === 'mixed') {
    findings.warn({
      code: 'date-order-ambiguous',
      message:
        order === 'mixed'
          ? 'Some dates can only be day/month/year and some only month/day/year; they are read as day/month/year.'
          : 'The dates may be day/month/year or month/day/year: no number is above 12. They are read as day/month/year.',
      file,
      column: head.header[date.index],
      value: head.sample[0]?.[date.index],
      advice: 'Choose the date order in the column plan.',
    });
    return 'dmy';
  }
  return order;
}
