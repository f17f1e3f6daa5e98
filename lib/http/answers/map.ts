/** What the map draws for a run: its description, and its arrays. */

import type { Tx } from '../../../db/connect.ts';
import { findBounds, findWholeDistrict } from '../../../db/queries/district-read.ts';
import { listAreaCodes } from '../../../db/queries/land-maps.ts';
import { cropNames } from '../../../db/queries/land-read.ts';
import { hasHistorySince, mapOrdinalsAt } from '../../../db/queries/parcel-history.ts';
import { findRunValues, listRunParcelHeads, listRunReaches, listRunVariables } from '../../../db/queries/run-read.ts';
import { listReachShapes } from '../../../db/queries/tiles.ts';
import { listSites } from '../../../db/queries/weather-observations.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { NotFound } from '../../base/errors.ts';
import { MAP_VARIABLES } from '../../jobs/map-arrays.ts';
import { floatsOf } from '../../jobs/observations.ts';
import type { DaysAhead, MapDescription } from '../contract/run.ts';
import { periodsWanted, readFinishedRun } from './run.ts';

export function answerMapDescription(caller: Caller, runId: string): Promise<MapDescription> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const run = await readFinishedRun(tx, districtId, runId);
    const district = await findWholeDistrict(tx, districtId);
    if (!district) throw new NotFound('this district is gone');
    const spans = (period: 'week' | 'month') => periodsWanted(run, caller, { period }).map(({ start, end }) => ({ start, end }));
    const kept = new Set(await listRunVariables(tx, { districtId, runId }));
    const version = await versionDrawn(tx, districtId, run.geometryVersion, district.geometryVersion);
    const tiles = (layer: string, drawn = district.geometryVersion) => `/api/v1/tiles/${layer}/${drawn}/{z}/{x}/{y}.mvt`;
    const hasAreas = (await listAreaCodes(tx, districtId, 'service_area')).length > 0;
    return {
      run: runId,
      season: run.seasonCode,
      geometry_version: district.geometryVersion,
      tiles: { parcels: tiles('parcels', version), canals: tiles('canals'), areas: hasAreas ? tiles('areas') : null },
      bounds: (await findBounds(tx, districtId, caller.parcels)) ?? boundsOf(district.boundary),
      variables: MAP_VARIABLES.filter(({ id }) => kept.has(id)).map((variable) => ({ ...variable })),
      periods: { week: spans('week'), month: spans('month') },
      ahead: aheadOf(run.manifest),
      parcels: await mapParcels(tx, caller, runId, version),
      reaches: await mapReaches(tx, districtId, runId),
      sites: (await listSites(tx, districtId))
        .filter(({ kind, role }) => kind === 'stations' && role === 'observed')
        .map(({ code, name, longitude, latitude, elevation }) => ({
          code,
          name,
          longitude,
          latitude,
          elevation_m: elevation,
        })),
      boundary: district.boundary ?? null,
    };
  });
}

/** Days past the last observation, from the run's manifest. */
function aheadOf(manifest: unknown): MapDescription['ahead'] {
  const told = (manifest as { days_ahead?: DaysAhead }).days_ahead;
  if (!told?.first_ahead) return null;
  const beyond = told.analogue_days > 0 ? 'analogue' : 'normal';
  return { from: told.first_ahead, forecast_to: told.forecast?.last_day ?? null, beyond };
}

/** The version of the map at which parcels are drawn: the run's own while the history tells of parcels that have changed since, else the one in use. */
async function versionDrawn(tx: Tx, districtId: string, ofRun: number, inUse: number): Promise<number> {
  return ofRun < inUse && (await hasHistorySince(tx, districtId, ofRun)) ? ofRun : inUse;
}

/** Parallel lists in position order. What a grower may not see is blank: ordinal −1, no code, no area. */
async function mapParcels(tx: Tx, caller: Caller, runId: string, version: number): Promise<MapDescription['parcels']> {
  const rows = await listRunParcelHeads(tx, { districtId: caller.districtId, runId });
  const names = await cropNames(tx, caller.districtId);
  const before = await mapOrdinalsAt(tx, caller.districtId, version);
  const own = caller.parcels && new Set(caller.parcels);
  const shown = rows.map((row) => (!own || own.has(row.code) ? row : null));
  return {
    ordinal: shown.map((row) => (row ? (before.get(row.code) ?? row.ordinal ?? -1) : -1)),
    code: shown.map((row) => row?.code ?? ''),
    area_m2: shown.map((row) => row?.area ?? 0),
    crops: shown.map((row) => row?.cropCodes.map((code) => names.get(code) ?? code).join(' + ') ?? ''),
    reach: shown.map((row) => row?.reachCode ?? null),
  };
}

async function mapReaches(tx: Tx, districtId: string, runId: string): Promise<MapDescription['reaches']> {
  const ordinals = new Map((await listReachShapes(tx, districtId)).map((row, ordinal) => [row.code, ordinal]));
  const rows = await listRunReaches(tx, { districtId, runId });
  return rows.map((row) => ({
    ordinal: ordinals.get(row.reachCode) ?? -1,
    code: row.reachCode,
    name: row.name,
    capacity_m3_s: row.capacity,
  }));
}

const WHOLE_EARTH: MapDescription['bounds'] = [-180, -85, 180, 85];

function boundsOf(boundary: unknown): MapDescription['bounds'] {
  const numbers = ((boundary as { coordinates?: unknown } | null)?.coordinates as number[] | undefined)?.flat(4) ?? [];
  if (numbers.length < 4) return WHOLE_EARTH;
  const [longitudes, latitudes] = [numbers.filter((_, i) => i % 2 === 0), numbers.filter((_, i) => i % 2 === 1)];
  return [Math.min(...longitudes), Math.min(...latitudes), Math.max(...longitudes), Math.max(...latitudes)];
}

interface ValuesWanted {
  readonly variable: string;
  readonly period: 'week' | 'month' | 'season';
  /** counted from 0; null for every period */
  readonly index: number | null;
}

/** @example parsePeriod('week-3') // { period: 'week', index: 3 } */
export function parsePeriod(text: string): Omit<ValuesWanted, 'variable'> {
  if (text === 'season') return { period: 'season', index: 0 };
  const [kind, index] = text.replace(/s$/, '').split('-');
  return { period: kind as 'week' | 'month', index: index === undefined ? null : Number(index) };
}

/**
 * Map numbers: Float32, little-endian, one for each parcel in map order, or for each period and parcel. Missing is NaN, and so is what
 * a grower may not see.
 *
 * @throws {NotFound} for a variable the run does not have, or a period it does not reach.
 */
export function mapValues(caller: Caller, runId: string, wanted: ValuesWanted): Promise<Uint8Array> {
  const key = { districtId: caller.districtId, runId };
  return database().inDistrict(caller.districtId, async (tx) => {
    await readFinishedRun(tx, caller.districtId, runId);
    const found = await findRunValues(tx, key, wanted);
    if (!found)
      throw new NotFound(
        `no map numbers "${wanted.variable}" by ${wanted.period}; there are: ${MAP_VARIABLES.map(({ id }) => id).join(', ')}`,
      );
    if (wanted.index !== null && wanted.index >= found.periodCount) {
      throw new NotFound(`${wanted.period} ${wanted.index} is not in this run, which has ${found.periodCount}, counted from 0`);
    }
    return caller.parcels ? ownOnly(found.values, found.parcelCount, await ownPositions(tx, caller, runId)) : found.values;
  });
}

async function ownPositions(tx: Tx, caller: Caller, runId: string): Promise<Set<number>> {
  const rows = await listRunParcelHeads(tx, { districtId: caller.districtId, runId });
  return new Set(rows.filter((row) => caller.parcels?.includes(row.code)).map((row) => row.position));
}

function ownOnly(bytes: Uint8Array, parcelCount: number, own: ReadonlySet<number>): Uint8Array {
  const values = floatsOf(bytes).slice();
  for (let i = 0; i < values.length; i++) if (!own.has(i % parcelCount)) values[i] = Number.NaN;
  return new Uint8Array(values.buffer);
}
