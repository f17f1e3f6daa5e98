/**
 * The frozen inputs of a run: what its slices, its working and any later check read, whatever has changed in the district since.
 * Layout: gzip of [uint32 header length][JSON header, padded so that the arrays begin on 8 bytes][Float64 arrays of the weather in the order of
 * the header's `series`][Uint32 flags]. Runs of the first kernel version have no `series`: the six of COMPLETED_SERIES, and Uint16 flags.
 */
import { once } from 'node:events';
import { createGzip, gunzipSync } from 'node:zlib';
import type { Tx } from '../../db/connect.ts';
import { findRunPart } from '../../db/queries/run-results.ts';
import { findFrozen, listParcelInputs } from '../../db/queries/run-state.ts';
import { NotFound } from '../base/errors.ts';
import { nanFromNull, nullFromNaN } from '../base/missing.ts';
import type { SeasonInput, Soil } from '../season/types.ts';
import { type CarriedSeries, COMPLETED_SERIES, type CompletedWeather, type Site } from '../weather/variable.ts';
import type { WaterSpan } from './run-deliveries.ts';
import { cropFromJson, type FrozenParcel, type Libraries, seasonInput } from './run-plan.ts';
import type { RunSettings } from './run-settings.ts';
import { sharedWeather } from './shared-weather.ts';

/** Everything of a run but its parcels. */
export interface FrozenSeason {
  /** first day stepped: the season's first, less `span.leadDays` */
  readonly startDate: string;
  /** left out in runs of the first versions: no days before the season, water by the settings */
  readonly span?: WaterSpan;
  readonly settings: RunSettings;
  readonly sites: readonly Site[];
  readonly weather: CompletedWeather;
  readonly libraries: Libraries;
}

/** Packs piece by piece, so that the arrays of a large grid are never held twice. */
export async function packFrozenSeason(frozen: FrozenSeason): Promise<Uint8Array> {
  const { weather } = frozen;
  const series: CarriedSeries[] = weather.referenceEt ? [...COMPLETED_SERIES, 'referenceEt'] : [...COMPLETED_SERIES];
  const json = JSON.stringify({
    startDate: frozen.startDate,
    span: frozen.span,
    settings: frozen.settings,
    sites: frozen.sites.map((site) => ({ ...site, elevation: nullFromNaN(site.elevation), windHeight: nullFromNaN(site.windHeight) })),
    siteCount: weather.siteCount,
    dayCount: weather.dayCount,
    series,
    libraries: frozen.libraries,
  });
  const header = Buffer.from(json.padEnd(json.length + padding(Buffer.byteLength(json)), ' '));
  const length = Buffer.alloc(4);
  length.writeUInt32LE(header.length);
  return gzipped([length, header, ...series.map((name) => bytesOf(weather[name] as Float64Array)), bytesOf(weather.flags)]);
}

/** Spaces after a header of so many bytes that bring what follows it and its length to a multiple of 8. */
function padding(length: number): number {
  return (8 - ((4 + length) % 8)) % 8;
}

async function gzipped(parts: readonly Uint8Array[]): Promise<Uint8Array> {
  const gzip = createGzip({ level: 3 });
  const packed: Buffer[] = [];
  gzip.on('data', (piece: Buffer) => packed.push(piece));
  const ended = once(gzip, 'end');
  for (const part of parts) if (!gzip.write(part)) await once(gzip, 'drain');
  gzip.end();
  await ended;
  return Buffer.concat(packed);
}

function bytesOf(array: Float64Array | Uint32Array): Buffer {
  return Buffer.from(array.buffer, array.byteOffset, array.byteLength);
}

export function unpackFrozenSeason(packed: Uint8Array): FrozenSeason {
  const bytes = gunzipSync(packed);
  const headerLength = bytes.readUInt32LE(0);
  const header = JSON.parse(bytes.subarray(4, 4 + headerLength).toString('utf8'));
  const count: number = header.siteCount * header.dayCount;
  const start = 4 + headerLength;
  const body = (bytes.byteOffset + start) % 8 === 0 ? bytes.subarray(start) : Uint8Array.from(bytes.subarray(start));
  const series: CarriedSeries[] = header.series ?? COMPLETED_SERIES;
  const array = (index: number) => new Float64Array(body.buffer, body.byteOffset + index * count * 8, count);
  const weather = Object.fromEntries(series.map((name, index) => [name, array(index)]));
  const flagsAt = body.byteOffset + series.length * count * 8;
  const flags = header.series
    ? new Uint32Array(body.buffer, flagsAt, count)
    : Uint32Array.from(new Uint16Array(body.buffer, flagsAt, count));
  return {
    startDate: header.startDate,
    span: header.span,
    settings: header.settings,
    sites: header.sites.map((site: Record<'elevation' | 'windHeight', number | null>) => ({
      ...site,
      elevation: nanFromNull(site.elevation),
      windHeight: nanFromNull(site.windHeight),
    })),
    weather: { siteCount: header.siteCount, dayCount: header.dayCount, ...weather, flags } as CompletedWeather,
    libraries: librariesFromJson(header.libraries),
  };
}

function librariesFromJson(libraries: Libraries): Libraries {
  const soils = Object.entries(libraries.soils).map(([code, soil]): [string, Soil] => [
    code,
    { ...soil, curveNumber: nanFromNull(soil.curveNumber), rootLimit: nanFromNull(soil.rootLimit) },
  ]);
  const crops = Object.entries(libraries.crops).map(([code, crop]) => [code, cropFromJson(crop)]);
  return { ...libraries, soils: Object.fromEntries(soils), crops: Object.fromEntries(crops) };
}

const HELD = new Map<string, FrozenSeason>();
const HELD_LIMIT = 3;

/** The frozen season of a run; the last few are kept in memory, since a run's inputs never change. @throws NotFound */
async function findFrozenSeason(tx: Tx, districtId: string, runId: string): Promise<FrozenSeason> {
  const key = `${districtId}/${runId}`;
  const held = HELD.get(key);
  if (held) return held;
  const packed = await findFrozen(tx, districtId, runId);
  if (!packed) throw new NotFound(`Run ${runId} has no frozen inputs: it has not begun, or is not of this district.`);
  const unpacked = unpackFrozenSeason(packed);
  const frozen = { ...unpacked, weather: sharedWeather(unpacked.weather) };
  HELD.set(key, frozen);
  for (const oldest of HELD.keys()) {
    if (HELD.size <= HELD_LIMIT) break;
    HELD.delete(oldest);
  }
  return frozen;
}

/** The season input of some parcels of a run, in the order of the positions given. */
export async function loadFrozenSeason(tx: Tx, districtId: string, runId: string, positions: readonly number[]): Promise<SeasonInput> {
  const frozen = await findFrozenSeason(tx, districtId, runId);
  const rows = await listParcelInputs(tx, districtId, runId, positions);
  return seasonInput({ ...frozen, parcels: rows.map((row) => ({ code: row.parcelCode, input: row.input as FrozenParcel })) });
}

/** Name of the part that holds the parcels of a slice until they are computed, see `slice-text`. */
export const SLICE_INPUT = 'input';

/** The season of a run and the text of one slice of its parcels. @throws NotFound */
export async function loadFrozenSlice(tx: Tx, job: { readonly districtId: string; readonly runId: string; readonly slice: number }) {
  const season = await findFrozenSeason(tx, job.districtId, job.runId);
  const text = await findRunPart(tx, job, job.slice, SLICE_INPUT);
  if (!text) throw new NotFound(`Slice ${job.slice} of run ${job.runId} has no parcels left to compute: start the run again.`);
  return { season, text };
}
