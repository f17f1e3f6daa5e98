/**
 * Calendars of the library that follow the weather: starts and ends of FAO-56's growing seasons, and stages by thermal time. They stand beside the
 * calendars of fixed days, which stay what a planting takes when it names none. Dates are for the northern hemisphere; a planting's own date goes before.
 */
import type { CropCalendar } from '../../lib/season/types.ts';
import type { LibraryCalendar } from './calendars.ts';

const SEASONS = 'FAO-56 chapter 6, rule of the growing season';
const INDICATIVE = 'sums indicative for a variety of medium length, common practice, no source: replace them by those of the variety';

/** The days of a listed calendar that a calendar by weather is built on. */
interface Row {
  readonly crop: string;
  /** code of the calendar whose lengths in days stand in where no weather tells */
  readonly on: string;
  readonly suffix: string;
  readonly name: string;
  /** first day the start may fall on, MM-DD */
  readonly from: string;
  readonly rules: Pick<CropCalendar, 'start' | 'killingFrost' | 'thermal' | 'laterThermal'>;
  readonly source: string;
}

/** From the last minimum below −4 °C of spring to the first of autumn, as FAO-56 sets the seasons of alfalfa and pasture. */
const LAST_FROST = { kind: 'frost-free', threshold: -4 } as const;

const ROWS: readonly Row[] = [
  {
    crop: 'winter-wheat-frozen-soils',
    on: 'winter-wheat-frozen-soils-idaho',
    suffix: 'autumn-start',
    name: 'sown in autumn at 17 °C',
    from: '09-01',
    rules: { start: { kind: 'air-temperature', threshold: 17, days: 10, falling: true, latest: 91 } },
    source: `${SEASONS} of winter wheat: sown when the mean of ten days falls to 17 °C, or on 1 December`,
  },
  {
    crop: 'winter-wheat-non-frozen-soils',
    on: 'winter-wheat-non-frozen-soils-mediterranean',
    suffix: 'autumn-start',
    name: 'sown in autumn at 17 °C',
    from: '09-01',
    rules: { start: { kind: 'air-temperature', threshold: 17, days: 10, falling: true, latest: 91 } },
    source: `${SEASONS} of winter wheat: sown when the mean of ten days falls to 17 °C, or on 1 December`,
  },
  {
    crop: 'spring-wheat',
    on: 'spring-wheat-35-45-deg-latitude',
    suffix: 'spring-start',
    name: 'sown in spring at 5 °C',
    from: '02-01',
    rules: { start: { kind: 'air-temperature', threshold: 5, days: 10, latest: 100 } },
    source: `${SEASONS} of spring wheat: sown when the mean temperature reaches 5 °C (mean of ten days)`,
  },
  {
    crop: 'maize-grain',
    on: 'maize-grain-spain-california',
    suffix: 'spring-start',
    name: 'sown in spring at 13 °C',
    from: '03-01',
    rules: { start: { kind: 'air-temperature', threshold: 13, days: 10, latest: 100 } },
    source: `${SEASONS} of maize: sown when the mean temperature reaches 13 °C (mean of ten days)`,
  },
  {
    crop: 'maize-grain',
    on: 'maize-grain-spain-california',
    suffix: 'thermal',
    name: 'by thermal time',
    from: '04-15',
    rules: { thermal: { base: 10, ceiling: 30, initial: 200, development: 480, mid: 560, late: 260 } },
    source: `base 10 °C and ceiling 30 °C of maize (McMaster & Wilhelm 1997, recalled); ${INDICATIVE}`,
  },
  {
    crop: 'spring-wheat',
    on: 'spring-wheat-35-45-deg-latitude',
    suffix: 'thermal',
    name: 'by thermal time',
    from: '04-01',
    rules: { thermal: { base: 0, ceiling: 30, initial: 200, development: 400, mid: 750, late: 450 } },
    source: `base 0 °C of wheat (McMaster & Wilhelm 1997, recalled); ${INDICATIVE}`,
  },
  {
    crop: 'alfalfa-hay',
    on: 'alfalfa-hay-idaho',
    suffix: 'frost-to-frost',
    name: 'from last to first −4 °C',
    from: '01-01',
    rules: { start: { ...LAST_FROST, latest: 150 }, killingFrost: { threshold: -4, notBefore: 120 } },
    source: `${SEASONS} of alfalfa: from the last −4 °C of spring to the first of autumn; cycles of Fig. 35`,
  },
  {
    crop: 'alfalfa-hay',
    on: 'alfalfa-hay-idaho',
    suffix: 'thermal',
    name: 'from last to first −4 °C, cut by thermal time',
    from: '01-01',
    rules: {
      start: { ...LAST_FROST, latest: 150 },
      killingFrost: { threshold: -4, notBefore: 120 },
      thermal: { base: 5, ceiling: 30, initial: 40, development: 200, mid: 240, late: 120 },
      laterThermal: { base: 5, ceiling: 30, initial: 70, development: 270, mid: 150, late: 130 },
    },
    source: `${SEASONS} of alfalfa; base 5 °C; ${INDICATIVE}`,
  },
  {
    crop: 'pasture-rotated-grazing',
    on: 'pasture-rotated-grazing-all-year',
    suffix: 'frost-to-frost',
    name: 'around last and first −4 °C',
    from: '01-01',
    rules: { start: { ...LAST_FROST, latest: 150, offset: -7 }, killingFrost: { threshold: -4, notBefore: 120, after: 7 } },
    source: `${SEASONS} of pasture: from seven days before the last −4 °C of spring to seven days after the first of autumn`,
  },
];

/**
 * The calendars by weather, on the days of calendars already listed. A row whose calendar is not listed is left out.
 *
 * @param listed calendars of fixed days
 */
export function weatherCalendars(listed: readonly LibraryCalendar[]): LibraryCalendar[] {
  return ROWS.flatMap((row) => {
    const base = listed.find(({ calendar }) => calendar.code === row.on);
    if (!base) return [];
    const [crop] = base.calendar.name.split(',');
    const calendar = { ...base.calendar, ...row.rules, code: `${row.crop}-${row.suffix}`, name: `${crop}, ${row.name}` };
    return [{ cropCode: row.crop, calendar, plantingDay: row.from, source: `${row.source}; days in reserve: ${base.source}` }];
  });
}
