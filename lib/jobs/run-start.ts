/** First piece of a run: freeze every input, cut the parcels into slices, and queue the slices. */
import { createHash } from 'node:crypto';
import type { Tx } from '../../db/connect.ts';
import {
  findDistrict,
  listLibraries,
  listReaches,
  listRunParcels,
  listSeasonPlantings,
  listTurnouts,
} from '../../db/queries/run-inputs.ts';
import { findRun, insertRunParcels, replaceSlices, updateGoingRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { Refused } from '../base/errors.ts';
import { soilsOfParcels } from '../season/mixed-soil.ts';
import { packFrozenSeason } from './frozen-season.ts';
import { enqueue } from './queue.ts';
import { failRun, type RunJob } from './run-failure.ts';
import { type FrozenParcel, frozenParcels, librariesOf, seasonInput } from './run-plan.ts';
import { DEFAULT_RUN_SETTINGS, type RunSettings } from './run-settings.ts';
import { type PlannedWeather, planWeather } from './run-weather.ts';

/** Parcels in a slice: about a second of work, far below the half minute a piece may take. */
const SLICE_PARCELS = 2000;

/** Version of the computation; part of every manifest. Count up when a change can move a result. */
const KERNEL_VERSION = '2';

/** The job: idempotent; a second go replaces the slices of the first. */
export async function startRun(job: RunJob): Promise<void> {
  await failRun(job, () =>
    database().inDistrict(job.districtId, async (tx) => {
      const slices = await planRun(tx, job);
      for (let slice = 0; slice < slices; slice++)
        await enqueue('run-slice', { ...job, slice }, { singletonKey: `${job.runId}/${slice}`, tx });
    }),
  );
}

async function planRun(tx: Tx, { districtId, runId }: RunJob): Promise<number> {
  const run = await findRun(tx, districtId, runId);
  if (!run || (run.state !== 'queued' && run.state !== 'running')) return 0;
  const district = await findDistrict(tx, districtId);
  if (!district) return 0;
  const asked = { ...DEFAULT_RUN_SETTINGS, ...(run.settings as Partial<RunSettings>) };
  const parcels = await listRunParcels(tx, districtId);
  const plantings = await listSeasonPlantings(tx, districtId, run.seasonCode);
  if (plantings.length === 0) {
    throw new Refused(
      `No parcel has a planting in season "${run.seasonCode}": import plantings, or parcels with a crop column and this season.`,
    );
  }
  const library = librariesOf(await listLibraries(tx, districtId));
  const { codes: soils, soils: mixedSoils } = soilsOfParcels(parcels, library.soils, asked.default_soil);
  const libraries = { ...library, soils: mixedSoils };
  const planned = await planWeather(tx, { districtId, run, parcels, district, settings: asked });
  const { sites, weather, weights } = planned;
  const settings: RunSettings = { ...asked, reference_et: planned.referenceEt };
  const frozen = frozenParcels({ parcels, plantings, sites, soils, weights, settings, defaultElevation: district.defaultElevation });
  seasonInput({
    startDate: run.startDate,
    settings,
    sites,
    weather,
    libraries,
    parcels: parcels.map((p, i) => ({ code: p.code, input: frozen[i] })),
  });
  const packed = await packFrozenSeason({ startDate: run.startDate, settings, sites, weather, libraries });
  const sliceCount = Math.ceil(parcels.length / SLICE_PARCELS);
  await replaceSlices(tx, districtId, runId, sliceCount);
  await insertRunParcels(tx, runParcelRows({ districtId, runId }, parcels, frozen));
  const canal = { reaches: await listReaches(tx, districtId), turnouts: await listTurnouts(tx, districtId) };
  await updateGoingRun(tx, districtId, runId, {
    state: 'running',
    stage: 'crop and soil water',
    progress: 0.05,
    startedAt: run.startedAt ?? new Date(),
    parcelCount: parcels.length,
    sliceCount,
    geometryVersion: district.geometryVersion,
    frozen: packed,
    manifest: manifestOf({
      packed,
      frozen,
      canal,
      settings: asked,
      weekStart: district.weekStart,
      weather: planned,
    }),
  });
  return sliceCount;
}

function runParcelRows(
  key: { districtId: string; runId: string },
  parcels: Awaited<ReturnType<typeof listRunParcels>>,
  frozen: readonly FrozenParcel[],
) {
  return parcels.map((parcel, position) => ({
    ...key,
    position,
    slice: Math.floor(position / SLICE_PARCELS),
    parcelCode: parcel.code,
    turnoutCode: parcel.turnoutCode,
    reachCode: parcel.reachCode,
    cropCodes: [...new Set(frozen[position].plantings.map((planting) => planting.crop))],
    methodCode: frozen[position].method,
    soilCode: frozen[position].soil,
    area: parcel.area,
    input: frozen[position],
  }));
}

function manifestOf(parts: {
  packed: Uint8Array;
  frozen: readonly FrozenParcel[];
  canal: unknown;
  settings: RunSettings;
  weekStart: number;
  weather: PlannedWeather;
}) {
  return {
    kernel_version: KERNEL_VERSION,
    week_start: parts.weekStart,
    weather_source: parts.weather.source,
    weather_from: parts.weather.from,
    weather_to: parts.weather.to,
    weather_sites: parts.weather.sites.length,
    reference_et: parts.weather.referenceEt,
    interpolation: parts.weather.record,
    weather_and_library_sha256: sha256(parts.packed),
    parcels_sha256: sha256(JSON.stringify(parts.frozen)),
    canals_sha256: sha256(JSON.stringify(parts.canal)),
    settings_sha256: sha256(JSON.stringify(parts.settings)),
  };
}

function sha256(content: string | Uint8Array): string {
  return createHash('sha256').update(content).digest('hex');
}
