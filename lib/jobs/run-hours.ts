/** Reference ET of a season's days as the sum of their hours, from the stored hours of a run's sites. */
import type { Tx } from '../../db/connect.ts';
import { listHourBlocks, listSiteZones, type RunSource } from '../../db/queries/run-sources.ts';
import { addDays, dayNumber } from '../base/civil-date.ts';
import { isTimeZone, standardOffset } from '../base/time-zone.ts';
import { STANDARD_WIND_HEIGHT } from '../energy/complete-weather.ts';
import { type HourPlace, hourlySumReferenceEt, siteHours } from '../energy/hourly-day.ts';
import type { CompletedWeather, HourVariable, Site } from '../weather/variable.ts';
import { floatsOf } from './observations.ts';

const HOURS = 24;

interface HourlyWanted {
  readonly sources: readonly RunSource[];
  readonly sites: readonly Site[];
  readonly startDate: string;
  readonly dayCount: number;
  readonly method: 'fao56' | 'asce2005';
  readonly timeZone: string;
  readonly defaultElevation: number;
  /** stands in where a station reports no radiation or wind by the hour */
  readonly weather: CompletedWeather;
}

/** Whether any of the sources has hours in the season. */
export async function hasHours(tx: Tx, districtId: string, sources: readonly RunSource[], span: { startDate: string; dayCount: number }) {
  for (const { sourceId } of sources) {
    const to = addDays(span.startDate, span.dayCount - 1);
    if ((await listHourBlocks(tx, districtId, { sourceId, from: span.startDate, to })).length > 0) return true;
  }
  return false;
}

/**
 * Reference ET of the short surface, [site × day], mm; NaN on days whose hours are missing or cannot be solved.
 *
 * Hours are in the site's own standard time: its zone, or the district's.
 */
export async function hourlyReferenceEt(tx: Tx, districtId: string, wanted: HourlyWanted): Promise<Float64Array> {
  const { dayCount, sites } = wanted;
  const result = new Float64Array(sites.length * dayCount).fill(Number.NaN);
  const zones = await listSiteZones(tx, districtId);
  const span = { from: wanted.startDate, to: addDays(wanted.startDate, dayCount - 1) };
  for (const { sourceId } of wanted.sources) {
    const blocks = await listHourBlocks(tx, districtId, { ...span, sourceId });
    for (let site = 0; site < sites.length; site++) {
      const known = zones.get(`${sourceId}/${sites[site].code}`);
      if (!known || blocks.length === 0) continue;
      const values = hoursOf(blocks, known.ordinal, wanted);
      if (Object.keys(values).length === 0) continue;
      const days = siteDays(wanted, values, site, known.zone && isTimeZone(known.zone) ? known.zone : wanted.timeZone);
      days.forEach((value, day) => {
        if (!Number.isNaN(value)) result[site * dayCount + day] = value;
      });
    }
  }
  return result;
}

function siteDays(wanted: HourlyWanted, values: Partial<Record<HourVariable, Float64Array>>, site: number, zone: string): Float64Array {
  const { sites, startDate, dayCount, weather, method, defaultElevation } = wanted;
  const { latitude, longitude, elevation, windHeight } = sites[site];
  const place: HourPlace = {
    latitude,
    longitude,
    elevation: Number.isNaN(elevation) ? defaultElevation : elevation,
    windHeight: Number.isNaN(windHeight) ? STANDARD_WIND_HEIGHT : windHeight,
    zoneHours: standardOffset(zone, Number(startDate.slice(0, 4))) / 60,
  };
  const row = (series: Float64Array) => series.subarray(site * dayCount, (site + 1) * dayCount);
  const standIns = { solarRadiation: row(weather.solarRadiation), windSpeed2m: row(weather.windSpeed2m) };
  const hours = siteHours(place, { firstDay: dayNumber(startDate), dayCount }, values, standIns);
  return hourlySumReferenceEt(place, hours, { method, surface: 'short' });
}

type HourBlock = Awaited<ReturnType<typeof listHourBlocks>>[number];

/** One site's stored hours over the season, [day × 24] by variable. */
function hoursOf(
  blocks: readonly HourBlock[],
  ordinal: number,
  { startDate, dayCount }: { startDate: string; dayCount: number },
): Partial<Record<HourVariable, Float64Array>> {
  const values: Partial<Record<HourVariable, Float64Array>> = {};
  for (const block of blocks) {
    if (ordinal >= block.siteCount) continue;
    const variable = block.variable as HourVariable;
    values[variable] ??= new Float64Array(dayCount * HOURS).fill(Number.NaN);
    const length = block.dayCount * HOURS;
    const stored = floatsOf(block.values).subarray(ordinal * length, (ordinal + 1) * length);
    const shift = (dayNumber(block.month) - dayNumber(startDate)) * HOURS;
    for (let hour = Math.max(0, -shift); hour < length && hour + shift < dayCount * HOURS; hour++) {
      values[variable][hour + shift] = stored[hour];
    }
  }
  return values;
}
