/** The record of one site as it is computed with: gaps filled, days completed, hours beside them. */
import type { Tx } from '../../../db/connect.ts';
import { type DistrictRow, findWholeDistrict } from '../../../db/queries/district-read.ts';
import { findSite, listSiteHours, type SiteOfCode } from '../../../db/queries/weather-sources.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays, civilFromDayNumber, dayNumber, isoDate } from '../../base/civil-date.ts';
import { NotFound } from '../../base/errors.ts';
import { isTimeZone, standardOffset } from '../../base/time-zone.ts';
import { completeWeather, STANDARD_WIND_HEIGHT } from '../../energy/complete-weather.ts';
import { type HourPlace, type SiteHours, siteHours } from '../../energy/hourly-day.ts';
import { floatsOf, loadObservations } from '../../jobs/observations.ts';
import { type FilledObservations, fillGaps } from '../../weather/gaps-fill.ts';
import { HOURS_PER_DAY } from '../../weather/hours.ts';
import type { CompletedWeather, HourVariable, SiteObservations } from '../../weather/variable.ts';

const LEAD = 1;
/** Most site-days in which neighbours are looked for when the gaps of one site are filled; beyond it the site stands alone. */
const MOST_SITE_DAYS = 10_000;

/** Everything known of a site; arrays of days run from `start`. */
export interface SiteRecord {
  readonly site: SiteOfCode;
  readonly district: DistrictRow;
  /** first and last day with an observed value */
  readonly first: string;
  readonly last: string;
  readonly start: string;
  /** as stored, with the decisions of the quality desk */
  readonly observed: SiteObservations;
  /** with gaps filled, before the day is completed */
  readonly filled: FilledObservations;
  readonly completed: CompletedWeather;
}

/**
 * The whole record of a site, completed: gaps are filled from all of it and from the other stations of its source. Null when there is nothing.
 *
 * @param shared what the stations of a source were filled with, kept by a caller that opens several of them one after the other
 * @throws {NotFound} for a site that is not the district's
 */
export function openRecord(caller: Caller, code: string, source?: string, shared?: SharedFills): Promise<SiteRecord | null> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const site = await findSite(tx, districtId, code, source);
    const district = await findWholeDistrict(tx, districtId);
    if (!site || !district) throw new NotFound(`no weather site "${code}" in this district`);
    const observed = await loadObservations(tx, districtId, { sites: [site] });
    const extent = extentOf(observed);
    if (!extent) return null;
    const filled = await fillRecord(tx, districtId, { site, observed }, shared ?? new Map());
    const { defaultElevation, radiationCoefficient } = district;
    const completed = completeWeather(filled, { defaultElevation, radiationCoefficient });
    return { site, district, ...extent, start: observed.startDate, observed, filled, completed };
  });
}

/** First and last day with a value of any variable. */
function extentOf({ values, startDate, dayCount }: SiteObservations): { first: string; last: string } | null {
  let [first, last] = [dayCount, -1];
  for (const series of Object.values(values)) {
    for (let day = 0; day < dayCount; day++) {
      if (Number.isNaN(series[day])) continue;
      if (day < first) first = day;
      if (day > last) last = day;
    }
  }
  return last < 0 ? null : { first: addDays(startDate, first), last: addDays(startDate, last) };
}

/** Filled stations by source. */
export type SharedFills = Map<string, FilledObservations | null>;

async function fillRecord(
  tx: Tx,
  districtId: string,
  { site, observed }: { site: SiteOfCode; observed: SiteObservations },
  shared: SharedFills,
): Promise<FilledObservations> {
  if (site.kind === 'grid') return fillGaps(observed);
  let filled = shared.get(site.source);
  if (filled === undefined) {
    const all = await loadObservations(tx, districtId, { source: site.source });
    filled = all.sites.length * all.dayCount > MOST_SITE_DAYS ? null : fillGaps(all);
    shared.set(site.source, filled);
  }
  const at = filled ? filled.sites.findIndex((each) => each.code === site.code) : -1;
  const alike = filled?.startDate === observed.startDate && filled.dayCount === observed.dayCount;
  return filled && at >= 0 && alike ? onlySite(filled, at) : fillGaps(observed);
}

function onlySite(filled: FilledObservations, site: number): FilledObservations {
  const { dayCount } = filled;
  const [from, to] = [site * dayCount, (site + 1) * dayCount];
  return {
    ...filled,
    sites: [filled.sites[site]],
    values: Object.fromEntries(Object.entries(filled.values).map(([name, series]) => [name, series.slice(from, to)])),
    quality: Object.fromEntries(Object.entries(filled.quality).map(([name, codes]) => [name, codes.slice(from, to)])),
    flags: filled.flags.slice(from, to),
    gaps: filled.gaps.filter((gap) => gap.site === site).map((gap) => ({ ...gap, site: 0 })),
  };
}

/** The stored hours of a site over some days, and as the equations take them. */
export interface RecordHours {
  readonly place: HourPlace;
  readonly zone: string;
  /** days before the first one asked for, whose evening the first night goes by */
  readonly lead: number;
  /** stored, [day × 24], the leading days first; so are the hours */
  readonly stored: Partial<Record<HourVariable, Float64Array>>;
  readonly hours: SiteHours;
}

/** Hours of a record from one day to another, both included; null where the site has none in those months. */
export async function loadHours(caller: Caller, record: SiteRecord, from: string, to: string): Promise<RecordHours | null> {
  const { site, district, completed, start } = record;
  const { districtId } = caller;
  const rows = await database().inDistrict(districtId, (tx) => listSiteHours(tx, districtId, { ...site, from: addDays(from, -LEAD), to }));
  if (rows.length === 0) return null;
  const days = { firstDay: dayNumber(from) - LEAD, dayCount: dayNumber(to) - dayNumber(from) + 1 + LEAD };
  const stored: Partial<Record<HourVariable, Float64Array>> = {};
  for (const { variable, month, values } of rows) {
    stored[variable as HourVariable] ??= new Float64Array(days.dayCount * HOURS_PER_DAY).fill(Number.NaN);
    const into = stored[variable as HourVariable] as Float64Array;
    const shift = (dayNumber(month) - days.firstDay) * HOURS_PER_DAY;
    floatsOf(values).forEach((value, hour) => {
      const at = hour + shift;
      if (at >= 0 && at < into.length) into[at] = value;
    });
  }
  const zone = site.zone && isTimeZone(site.zone) ? site.zone : district.timeZone;
  const place = {
    latitude: site.latitude,
    longitude: site.longitude,
    elevation: site.elevation ?? district.defaultElevation,
    windHeight: site.windHeight ?? STANDARD_WIND_HEIGHT,
    zoneHours: standardOffset(zone, civilFromDayNumber(days.firstDay).year) / 60,
  };
  const offset = days.firstDay - dayNumber(start);
  const part = (series: Float64Array) => Float64Array.from({ length: days.dayCount }, (_, day) => series[offset + day] ?? Number.NaN);
  const standIns = { solarRadiation: part(completed.solarRadiation), windSpeed2m: part(completed.windSpeed2m) };
  return { place, zone, lead: LEAD, stored, hours: siteHours(place, days, stored, standIns) };
}

/** Date of a day of a record. */
export function dateOf(record: SiteRecord, day: number): string {
  return isoDate(dayNumber(record.start) + day);
}
