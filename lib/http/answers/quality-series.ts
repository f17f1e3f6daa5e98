/** A stretch of one variable of one station with what it is held against, for the charts of the quality desk. */
import type { Tx } from '../../../db/connect.ts';
import { findWholeDistrict } from '../../../db/queries/district-read.ts';
import { listChecks } from '../../../db/queries/quality.ts';
import { listSites, type SiteRow } from '../../../db/queries/weather-observations.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays, dayNumber } from '../../base/civil-date.ts';
import { NotFound, TooLarge } from '../../base/errors.ts';
import { siteSky } from '../../energy/quality-sky.ts';
import { loadObservations } from '../../jobs/observations.ts';
import { seriesOf } from '../../weather/quality/flag.ts';
import type { CheckSummary, PyranometerSummary } from '../../weather/quality/summary.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../weather/variable.ts';

/** Most days of a chart. */
const MOST_DAYS = 800;

export interface SeriesWanted {
  readonly source: string;
  readonly site: string;
  readonly variable: WeatherVariable;
  readonly from: string;
  readonly to: string;
}

/** Every array is [day], NaN where missing. */
export interface QualitySeries {
  readonly site: { readonly code: string; readonly name: string; readonly source: string };
  readonly variable: WeatherVariable;
  readonly term: string;
  readonly unit: string;
  readonly dates: readonly string[];
  readonly raw: readonly number[];
  /** under the decisions that stand */
  readonly standing: readonly number[];
  /** what it is held against, where there is something: clear sky, or what a neighbour makes expect */
  readonly against: { readonly label: string; readonly values: readonly number[] } | null;
}

/**
 * @throws {NotFound} for a site that is not the district's; {TooLarge} for more than 800 days
 */
export function answerQualitySeries(caller: Caller, wanted: SeriesWanted): Promise<QualitySeries> {
  const { districtId } = caller;
  const days = dayNumber(wanted.to) - dayNumber(wanted.from) + 1;
  if (days > MOST_DAYS) throw new TooLarge(`${wanted.from} to ${wanted.to} are ${days} days; a chart has at most ${MOST_DAYS}`);
  return database().inDistrict(districtId, async (tx) => {
    const sites = await listSites(tx, districtId);
    const place = sites.find((each) => each.source === wanted.source && each.code === wanted.site);
    if (!place) throw new NotFound(`there is no weather site "${wanted.site}" in source "${wanted.source}"`);
    const { variable, from, to } = wanted;
    const load = (raw: boolean) => loadObservations(tx, districtId, { sites: [place], from, to, variables: [variable], raw });
    const [raw, standing] = [await load(true), await load(false)];
    const values = (record: typeof raw) => Array.from({ length: days }, (_, day) => seriesOf(record, variable, 0)?.[day] ?? Number.NaN);
    return {
      site: { code: place.code, name: place.name, source: place.source },
      variable,
      ...{ term: WEATHER_VARIABLES[variable].term, unit: WEATHER_VARIABLES[variable].unit },
      dates: Array.from({ length: days }, (_, day) => addDays(from, day)),
      raw: values(raw),
      standing: values(standing),
      against:
        variable === 'solar_radiation_mj_m2_d'
          ? await clearSky(tx, districtId, place, wanted)
          : await neighbour(tx, districtId, sites, place, wanted),
    };
  });
}

async function clearSky(tx: Tx, districtId: string, place: SiteRow, { from, to }: SeriesWanted): Promise<QualitySeries['against']> {
  const district = await findWholeDistrict(tx, districtId);
  const record = await loadObservations(tx, districtId, { sites: [place], from, to, raw: true });
  if (record.dayCount === 0) return null;
  return { label: 'Clear sky', values: [...siteSky(record, 0, district?.defaultElevation ?? 0).clearSky] };
}

/** What the best acceptable neighbour of the last check makes expect. */
async function neighbour(
  tx: Tx,
  districtId: string,
  sites: readonly SiteRow[],
  place: SiteRow,
  { variable, from, to }: SeriesWanted,
): Promise<QualitySeries['against']> {
  const check = (await listChecks(tx, districtId)).find(({ sourceId }) => sourceId === place.sourceId);
  const lines = ((check?.summary as CheckSummary | undefined)?.neighbours ?? []).filter(
    (line) => line.site === place.code && line.variable === variable && line.acceptable,
  );
  if (lines.length === 0) return null;
  const best = lines.reduce((a, b) => (b.rSquared > a.rSquared ? b : a));
  const other = sites.find((site) => site.sourceId === place.sourceId && site.code === best.neighbour);
  if (!other) return null;
  const record = await loadObservations(tx, districtId, { sites: [other], from, to, variables: [variable] });
  const series = seriesOf(record, variable, 0);
  const values = Array.from({ length: record.dayCount }, (_, day) => best.intercept + best.slope * (series?.[day] ?? Number.NaN));
  return { label: `Expected from ${best.neighbour} (r² ${best.rSquared.toFixed(2)})`, values };
}

/** What the last check says of one pyranometer; null when there is nothing. */
export async function answerPyranometer(caller: Caller, source: string, site: string): Promise<PyranometerSummary | null> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const place = (await listSites(tx, districtId)).find((each) => each.source === source && each.code === site);
    const check = (await listChecks(tx, districtId)).find(({ sourceId }) => sourceId === place?.sourceId);
    const summary = check?.summary as CheckSummary | undefined;
    return summary?.pyranometers.find((each) => each.site === site) ?? null;
  });
}

/** Stations of the district, for the choice of what to correct. */
export function answerStations(caller: Caller): Promise<{ source: string; code: string; name: string }[]> {
  return database().inDistrict(caller.districtId, async (tx) =>
    (await listSites(tx, caller.districtId))
      .filter(({ kind, role }) => kind === 'stations' && role === 'observed')
      .map(({ source, code, name }) => ({ source, code, name })),
  );
}
