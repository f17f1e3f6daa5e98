/**
 * What a planting takes from the district when the file does not say: calendar and planting date.
 */
import { isIsoDate } from '../base/civil-date.ts';
import type { ImportContext } from './reading.ts';

export type Season = ImportContext['seasons'][number];
type Calendar = ImportContext['calendars'][number];

/** Calendar of this crop: the one named, or the crop's first. Null when there is none. */
export function calendarOf(context: ImportContext, cropCode: string, calendarCode: string | null): Calendar | null {
  const ofCrop = context.calendars.filter((calendar) => calendar.cropCode === cropCode);
  if (calendarCode === null) return ofCrop[0] ?? null;
  return ofCrop.find((calendar) => calendar.code.toLowerCase() === calendarCode.toLowerCase()) ?? null;
}

/**
 * Planting date from a calendar's customary day: that day within the season, or the season's first day when the calendar has none or
 * its day lies outside.
 *
 * @example plantingDateIn({ code: 's', startDate: '2023-10-01', endDate: '2024-09-30' }, '04-15') // { date: '2024-04-15', customary: true }
 */
export function plantingDateIn(season: Season, plantingDay: string | null): { date: string; customary: boolean } {
  const years = [Number(season.startDate.slice(0, 4)), Number(season.endDate.slice(0, 4))];
  for (const year of plantingDay ? years : []) {
    const date = `${year}-${plantingDay}`;
    const day = isIsoDate(date) ? date : plantingDay === '02-29' ? `${year}-02-28` : null;
    if (day && day >= season.startDate && day <= season.endDate) return { date: day, customary: true };
  }
  return { date: season.startDate, customary: false };
}
