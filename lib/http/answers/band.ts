/** The band of a run as readers see it. */
import { z } from 'zod';
import type { Tx } from '../../../db/connect.ts';
import { type BandWanted as BandKept, findBandPlaces, findBandValues } from '../../../db/queries/run-band.ts';
import { listRunReaches, type RunHead } from '../../../db/queries/run-read.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import type { Period } from '../../base/civil-date.ts';
import { Malformed, NotFound } from '../../base/errors.ts';
import { roundOrNull } from '../../base/missing.ts';
import { depthToVolume } from '../../base/units.ts';
import { floatsOf } from '../../jobs/observations.ts';
import type { BandAnswer, BandRow } from '../contract/band.ts';
import { readCursor, writeCursor } from '../paging.ts';
import { isStorable } from '../storable-text.ts';
import { bandStateOf } from './band-state.ts';
import type { PageWanted } from './land.ts';
import { periodsWanted, readFinishedRun } from './run.ts';

const VARIABLES = {
  parcel: ['gross_requirement', 'net_requirement', 'adjusted_crop_et'],
  reach: ['head_inflow'],
  district: ['head_inflow', 'gross_volume', 'net_volume', 'adjusted_crop_et_volume'],
} as const;

interface BandAsked {
  readonly level: BandAnswer['level'];
  readonly variable?: BandAnswer['variable'];
  readonly period: BandAnswer['period'];
  readonly place?: string;
}

/**
 * A page of rows: by place, then by period.
 *
 * @throws {Malformed} for a variable that the level does not have; {NotFound} for a place that is not there, or not the caller's
 */
export function answerBand(caller: Caller, runId: string, asked: BandAsked & PageWanted): Promise<BandAnswer> {
  const { level, period, place } = asked;
  const variable = asked.variable ?? VARIABLES[level][0];
  if (!(VARIABLES[level] as readonly string[]).includes(variable))
    throw new Malformed(`variable "${variable}" is not of level "${level}", which has: ${VARIABLES[level].join(', ')}`);
  const from = readCursor(asked.cursor, z.tuple([z.number().int()]))?.[0] ?? 0;
  return database().inDistrict(caller.districtId, async (tx) => {
    const run = await readFinishedRun(tx, caller.districtId, runId);
    const band = bandStateOf(run);
    const head = { run: runId, level, variable, period, band };
    if (band?.state !== 'done') return { ...head, items: [], next_cursor: null };
    const periods = periodsWanted(run, caller, { period });
    const most = Math.max(1, Math.floor(Math.min(asked.limit, MOST_ROWS) / periods.length));
    const { places, more } = await placesOf(tx, caller, run, { level, place, from, most });
    const items = await rowsOf(tx, caller, run, { level, variable, period }, places, periods);
    return { ...head, items, next_cursor: more ? writeCursor(places[places.length - 1].position + 1) : null };
  });
}

const SEASON_VOLUMES = [
  ['adjusted_crop_et_volume', 'Crop ET, adjusted for stress'],
  ['net_volume', 'Net requirement'],
  ['gross_volume', 'Gross requirement'],
  ['head_inflow', 'Diversion at the headworks'],
] as const;

/** The season's volumes of the district with their band; without rows until it is done, and for growers. */
export async function districtBand(
  caller: Caller,
  runId: string,
): Promise<{ band: BandAnswer['band']; rows: { name: string; row: BandRow }[] }> {
  let band: BandAnswer['band'] = null;
  const rows: { name: string; row: BandRow }[] = [];
  for (const [variable, name] of SEASON_VOLUMES) {
    const found = await answerBand(caller, runId, { level: 'district', variable, period: 'season', limit: 1 });
    band = found.band;
    for (const row of found.items) rows.push({ name, row });
  }
  return { band, rows };
}

/** Most rows held at once. */
const MOST_ROWS = 60_000;

/** Every row, some places at a time. */
export async function* eachBandRow(caller: Caller, runId: string, asked: BandAsked): AsyncGenerator<BandRow[]> {
  for (let cursor: string | undefined, first = true; first || cursor; first = false) {
    const page: BandAnswer = await answerBand(caller, runId, { ...asked, limit: MOST_ROWS, cursor });
    yield page.items;
    cursor = page.next_cursor ?? undefined;
  }
}

/** A place of the band's arrays. @param area of a parcel [m²], NaN for others */
interface Place {
  readonly position: number;
  readonly code: string;
  readonly area: number;
}

async function placesOf(
  tx: Tx,
  caller: Caller,
  run: RunHead,
  { level, place, from, most }: { level: BandAsked['level']; place?: string; from: number; most: number },
): Promise<{ places: Place[]; more: boolean }> {
  const { districtId } = caller;
  if (level === 'parcel') {
    const codes = place ? (caller.parcels?.includes(place) === false || !isStorable(place) ? [] : [place]) : caller.parcels;
    const found = await findBandPlaces(tx, { districtId, runId: run.runId }, codes, from, most + 1);
    if (place && found.length === 0 && from === 0) throw new NotFound(`no parcel "${place}" in run ${run.runId}`);
    return { places: found.slice(0, most), more: found.length > most };
  }
  if (caller.parcels) return { places: [], more: false };
  const area = Number.NaN;
  if (level === 'district') return { places: [{ position: 0, code: caller.district.code, area }], more: false };
  const rows = await listRunReaches(tx, { districtId, runId: run.runId });
  const all = rows.map(({ reachCode: code }, position) => ({ position, code, area }));
  const wanted = all.filter(({ code, position }) => (place ? code === place : position >= from));
  if (place && wanted.length === 0) throw new NotFound(`no reach "${place}" in run ${run.runId}`);
  return { places: wanted.slice(0, most), more: wanted.length > most };
}

async function rowsOf(
  tx: Tx,
  caller: Caller,
  run: RunHead,
  kept: BandKept,
  places: readonly Place[],
  periods: readonly Period[],
): Promise<BandRow[]> {
  if (places.length === 0) return [];
  const from = places[0].position;
  const count = places[places.length - 1].position - from + 1;
  const found = await findBandValues(tx, { districtId: caller.districtId, runId: run.runId }, kept, { from, count });
  if (!found) return [];
  const values = floatsOf(found.values);
  return places.flatMap(({ position, code, area }) =>
    periods.map((period, index) => {
      const [p10, p50, p90] = [0, 1, 2].map((q) => values[(q * periods.length + index) * count + position - from]);
      return { place: code, start: period.start, end: period.end, ...membersOf([p10, p50, p90], kept.level === 'parcel', area) };
    }),
  );
}

function membersOf([p10, p50, p90]: readonly number[], isDepth: boolean, area: number) {
  const depth = (value: number) => (isDepth ? roundOrNull(value, 3) : null);
  const volume = (value: number) => roundOrNull(isDepth ? depthToVolume(value, area) : value, 1);
  return {
    p10_mm: depth(p10),
    p50_mm: depth(p50),
    p90_mm: depth(p90),
    p10_m3: volume(p10),
    p50_m3: volume(p50),
    p90_m3: volume(p90),
  };
}
