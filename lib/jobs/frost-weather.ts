/** The stations that speak for a frost night, with their record completed: what evenings, thermal time and fitted lines are made of. */
import type { Tx } from '../../db/connect.ts';
import type { DistrictRow } from '../../db/queries/district-read.ts';
import { listSiteZones } from '../../db/queries/run-sources.ts';
import { findMonths, listSitesOf, listWeatherSources, type SiteRow } from '../../db/queries/weather-observations.ts';
import { listSiteHours } from '../../db/queries/weather-sources.ts';
import { addDays, civilFromDayNumber, dayNumber } from '../base/civil-date.ts';
import { NotFound, Refused, TooLarge } from '../base/errors.ts';
import { nanFromNull } from '../base/missing.ts';
import { isTimeZone, standardOffset } from '../base/time-zone.ts';
import { completeWeather, STANDARD_WIND_HEIGHT } from '../energy/complete-weather.ts';
import { type HourPlace, type SiteHours, siteHours } from '../energy/hourly-day.ts';
import { nearSites, placeSites } from '../weather/interpolation.ts';
import type { CompletedWeather, HourVariable, Site, SiteObservations } from '../weather/variable.ts';
import { floatsOf, loadObservations } from './observations.ts';

/** Most stations one parcel listens to. */
export const FROST_SITES = 4;
/** Years before and after the night whose evenings a line is fitted to. */
const RECORD_YEARS = 6;
/** Most site-days held at once: the years are shortened to it. */
const MOST_SITE_DAYS = 1_000_000;
/** More stations than this are narrowed to the nearest of the parcels, and their hours are not read. */
const MANY_SITES = 60;
const HOURS = 24;

export interface FrostPlace {
  readonly longitude: number;
  readonly latitude: number;
}

/** One station of the night. */
export interface FrostStation {
  readonly site: Site;
  /** standard clock [h east of UTC] */
  readonly zoneHours: number;
  readonly elevation: number;
  /** over the days of the record, where the station reports by the hour */
  readonly hours: SiteHours | null;
}

export interface FrostRecord {
  readonly source: string;
  readonly role: 'observed' | 'forecast';
  readonly stations: readonly FrostStation[];
  readonly observed: SiteObservations;
  /** [site × day] from `observed.startDate` */
  readonly completed: CompletedWeather;
}

interface RecordWanted {
  readonly district: DistrictRow;
  /** name of a source, which may be a forecast; null: every set of stations, else the first grid */
  readonly source: string | null;
  /** evening of the night */
  readonly date: string;
  /** of the parcels; a grid is read at the cells nearest to them */
  readonly places: readonly FrostPlace[];
}

/**
 * @throws {NotFound} for a source that is not the district's; {Refused} when there are no sites; {TooLarge} for more grid cells than can be held
 */
export async function loadFrostRecord(tx: Tx, districtId: string, wanted: RecordWanted): Promise<FrostRecord> {
  const chosen = await chooseSources(tx, districtId, wanted.source);
  const sourceIds = chosen.map(({ sourceId }) => sourceId);
  const rows = narrowed(await listSitesOf(tx, districtId, sourceIds), wanted.places, chosen[0].kind === 'grid');
  if (rows.length === 0) throw new Refused('The district has no weather stations yet: import stations, then their weather.');
  const span = await recordSpan(tx, districtId, { sourceIds, date: wanted.date, siteCount: rows.length });
  const observed = await loadObservations(tx, districtId, { sites: rows, ...span });
  const { defaultElevation, radiationCoefficient, timeZone } = wanted.district;
  const completed = completeWeather(observed, { defaultElevation, radiationCoefficient });
  const zones = await listSiteZones(tx, districtId);
  const stations: FrostStation[] = [];
  for (const [index, row] of rows.entries()) {
    const own = zones.get(`${row.sourceId}/${row.code}`)?.zone;
    const zone = own && isTimeZone(own) ? own : timeZone;
    const place = {
      longitude: row.longitude,
      latitude: row.latitude,
      elevation: row.elevation ?? defaultElevation,
      windHeight: row.windHeight ?? STANDARD_WIND_HEIGHT,
      zoneHours: standardOffset(zone, civilFromDayNumber(dayNumber(wanted.date)).year) / 60,
    };
    const hours = rows.length > MANY_SITES ? null : await hoursOf(tx, districtId, { row, place, observed, completed, index });
    stations.push({ site: siteOf(row), zoneHours: place.zoneHours, elevation: place.elevation, hours });
  }
  const name = chosen.map((source) => source.name).join(', ');
  return { source: name, role: chosen[0].role, stations, observed, completed };
}

async function chooseSources(tx: Tx, districtId: string, name: string | null) {
  const all = await listWeatherSources(tx, districtId);
  if (name !== null) {
    const named = all.filter((source) => source.name === name);
    if (named.length === 0) throw new NotFound(`there is no weather source "${name}" in this district`);
    return named;
  }
  const observed = all.filter(({ role }) => role === 'observed');
  const stations = observed.filter(({ kind }) => kind === 'stations');
  const grid = observed.find(({ kind, hasWeather }) => kind === 'grid' && hasWeather);
  const chosen = stations.some(({ hasWeather }) => hasWeather) || !grid ? stations : [grid];
  if (chosen.length === 0) throw new Refused('The district has no weather yet: import stations, then their weather.');
  return chosen;
}

/** A grid, or a great many stations: those nearest to the parcels alone; without parcels some, spread over all. */
function narrowed(rows: readonly SiteRow[], places: readonly FrostPlace[], grid: boolean): readonly SiteRow[] {
  if (!grid && rows.length <= MANY_SITES) return rows;
  if (places.length === 0) return rows.filter((_, index) => index % Math.ceil(rows.length / MANY_SITES) === 0);
  const ready = placeSites(rows.map(siteOf));
  const near = new Set(places.flatMap((p) => nearSites([p.longitude, p.latitude], ready, FROST_SITES).map(({ site }) => site)));
  return rows.filter((_, index) => near.has(index));
}

/** Years around the night that are stored, fewer where there are many sites; always the day after it. */
async function recordSpan(
  tx: Tx,
  districtId: string,
  { sourceIds, date, siteCount }: { sourceIds: readonly number[]; date: string; siteCount: number },
): Promise<{ from: string; to: string }> {
  const years = Math.min(RECORD_YEARS, Math.floor(MOST_SITE_DAYS / (2 * 366 * siteCount)));
  if (years < 1) return yearBefore(date, siteCount);
  const months = await findMonths(tx, districtId, sourceIds);
  const [from, to] = [addDays(date, -366 * years), addDays(date, 366 * years)];
  if (!months) return { from: addDays(date, -1), to: addDays(date, 1) };
  const first = [from, months.first].sort()[1];
  const last = [to, addDays(months.last, 31)].sort()[0];
  return { from: [first, addDays(date, -1)].sort()[0], to: [last, addDays(date, 1)].sort()[1] };
}

/** Of a great many cells: the year before alone, which thermal time needs; there is then no record to learn from. */
function yearBefore(date: string, siteCount: number): { from: string; to: string } {
  if (siteCount * 368 > MOST_SITE_DAYS * 3) {
    throw new TooLarge(`the parcels listen to ${siteCount} cells of the grid, more than a frost night takes: choose a source of stations`);
  }
  return { from: addDays(date, -366), to: addDays(date, 1) };
}

interface HoursWanted {
  readonly row: SiteRow;
  readonly place: HourPlace;
  readonly observed: SiteObservations;
  readonly completed: CompletedWeather;
  readonly index: number;
}

async function hoursOf(tx: Tx, districtId: string, { row, place, observed, completed, index }: HoursWanted): Promise<SiteHours | null> {
  const { startDate, dayCount } = observed;
  const wanted = { sourceId: row.sourceId, ordinal: row.ordinal, from: startDate, to: addDays(startDate, dayCount - 1) };
  const rows = await listSiteHours(tx, districtId, wanted);
  if (rows.length === 0) return null;
  const days = { firstDay: dayNumber(startDate), dayCount };
  const stored: Partial<Record<HourVariable, Float64Array>> = {};
  for (const { variable, month, values } of rows) {
    stored[variable as HourVariable] ??= new Float64Array(dayCount * HOURS).fill(Number.NaN);
    const into = stored[variable as HourVariable] as Float64Array;
    const shift = (dayNumber(month) - days.firstDay) * HOURS;
    floatsOf(values).forEach((value, hour) => {
      if (hour + shift >= 0 && hour + shift < into.length) into[hour + shift] = value;
    });
  }
  const part = (series: Float64Array) => series.subarray(index * dayCount, (index + 1) * dayCount);
  return siteHours(place, days, stored, { solarRadiation: part(completed.solarRadiation), windSpeed2m: part(completed.windSpeed2m) });
}

function siteOf(row: SiteRow): Site {
  const { code, name, longitude, latitude } = row;
  return { code, name: name || code, longitude, latitude, elevation: nanFromNull(row.elevation), windHeight: nanFromNull(row.windHeight) };
}
