/** The day an image was taken, from its name or its tags. */
import { isIsoDate } from '../base/civil-date.ts';

/** Year, month and day in a name: 20240615, 2024-06-15, 2024_06_15. */
const IN_NAME = /(?<!\d)((?:19|20)\d{2})([-_.]?)(0[1-9]|1[0-2])\2(0[1-9]|[12]\d|3[01])(?!\d)/g;

/**
 * The last date in a file's name, else the date of its tag.
 *
 * @param tag text of the TIFF tag DateTime, "YYYY:MM:DD hh:mm:ss"
 * @returns YYYY-MM-DD, null when neither says
 * @example imageDate('cover_20240615.tif', undefined) // '2024-06-15'
 */
export function imageDate(name: string, tag: unknown): string | null {
  const dates = [...name.matchAll(IN_NAME)].map(([, year, , month, day]) => `${year}-${month}-${day}`).filter(isIsoDate);
  if (dates.length > 0) return dates[dates.length - 1];
  const tagged = typeof tag === 'string' ? /^(\d{4})[:-](\d{2})[:-](\d{2})/.exec(tag) : null;
  const date = tagged ? `${tagged[1]}-${tagged[2]}-${tagged[3]}` : null;
  return date !== null && isIsoDate(date) ? date : null;
}
