/** The observations a run rests on: of its own sources, and of the others that may stand in for a gap. */
import type { Tx } from '../../db/connect.ts';
import { listRunSources, type RunSource } from '../../db/queries/run-sources.ts';
import { listSites, type SiteRow } from '../../db/queries/weather-observations.ts';
import { listForecastSources } from '../../db/queries/weather-sources.ts';
import { addDays } from '../base/civil-date.ts';
import { Refused } from '../base/errors.ts';
import { nanFromNull } from '../base/missing.ts';
import { nearestFinder } from '../weather/gaps-neighbours.ts';
import { REGRESSION_LIMITS } from '../weather/gaps-regression.ts';
import type { GridShape, Site, SiteObservations } from '../weather/variable.ts';
import { forecastIsNoSource } from './ahead-settings.ts';
import { loadObservations } from './observations.ts';

/** What a run takes its weather from. */
export interface RunWeatherSource {
  readonly kind: 'stations' | 'grid';
  /** as a reader is told */
  readonly name: string;
  /** name to ask for; null for every set of stations */
  readonly asked: string | null;
  readonly sources: readonly RunSource[];
  readonly others: readonly RunSource[];
  readonly grid: GridShape | null;
}

/**
 * The source of a run: the one named; else every set of stations that has weather; else the first grid.
 *
 * @throws {Refused} when the district has no weather, or the one named has none
 */
export async function findRunSource(tx: Tx, districtId: string, name: string | null): Promise<RunWeatherSource> {
  const all = await listRunSources(tx, districtId);
  const having = all.filter(({ hasWeather }) => hasWeather);
  if (having.length === 0) throw new Refused('The district has no weather yet: import stations, then their weather.');
  const named = name === null ? null : all.find((source) => source.name === name);
  if (name !== null && !named && (await listForecastSources(tx, districtId)).some((source) => source.name === name)) {
    throw forecastIsNoSource(name);
  }
  if (name !== null && !named?.hasWeather) {
    const known = having.map((source) => source.name).join(', ');
    throw new Refused(`The weather source "${name}" has no weather: import some for it, or take another source (${known}).`);
  }
  const stations = having.filter(({ kind }) => kind === 'stations');
  const sources = named ? [named] : stations.length > 0 ? stations : [having[0]];
  const others = having.filter((source) => !sources.includes(source));
  const [{ kind, name: first, grid }] = sources;
  const asked = name ?? (kind === 'grid' ? first : null);
  return { kind, name: asked ?? 'stations', asked, sources, others, grid: kind === 'grid' ? (grid as GridShape | null) : null };
}

/** The sites of a source without their weather. */
export async function listSourceSites(tx: Tx, districtId: string, name: string): Promise<{ rows: SiteRow[]; sites: Site[] }> {
  const rows = await listSites(tx, districtId, name);
  return { rows, sites: rows.map(siteOf) };
}

function siteOf({ code, name, longitude, latitude, elevation, windHeight }: SiteRow): Site {
  return { code, name, longitude, latitude, elevation: nanFromNull(elevation), windHeight: nanFromNull(windHeight) };
}

/** Days of a season with those that a regression may look at on either side. */
export function seasonWithMargin({ startDate, dayCount }: { startDate: string; dayCount: number }): { from: string; to: string } {
  return { from: addDays(startDate, -REGRESSION_LIMITS.reach), to: addDays(startDate, dayCount - 1 + REGRESSION_LIMITS.reach) };
}

/** Another source, of which only the sites that lie nearest were read. */
export interface OtherSource {
  readonly name: string;
  readonly observations: SiteObservations;
}

/**
 * Observations of the other sources around a season, in their order: of each only the sites or cells that lie nearest to one of `sites`.
 */
export async function loadOtherSources(
  tx: Tx,
  districtId: string,
  others: readonly RunSource[],
  sites: readonly Site[],
  span: { startDate: string; dayCount: number },
): Promise<OtherSource[]> {
  const loaded: OtherSource[] = [];
  for (const { name } of others) {
    const { rows, sites: theirs } = await listSourceSites(tx, districtId, name);
    const find = nearestFinder(theirs);
    const nearest = new Set(sites.flatMap((site) => find(site, -1).slice(0, 1)).map(({ site }) => site));
    const wanted = { source: name, ...seasonWithMargin(span), sites: rows.filter((_, index) => nearest.has(index)) };
    const observations = await loadObservations(tx, districtId, wanted);
    if (observations.dayCount > 0) loaded.push({ name, observations });
  }
  return loaded;
}
