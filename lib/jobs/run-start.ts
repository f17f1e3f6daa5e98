/** First piece of a run: freeze every input, cut the parcels into slices, and queue the slices. Parcels are read, frozen and laid down a slice at a time. */
import { createHash } from 'node:crypto';
import type { Tx } from '../../db/connect.ts';
import { findDistrict, listLibraries, listReaches, listTurnouts } from '../../db/queries/run-inputs.ts';
import { hasPlantings, listPlantingsOf, listRunParcelPage, listRunPlaces } from '../../db/queries/run-land.ts';
import { saveRunParts } from '../../db/queries/run-results.ts';
import { findRun, type RunRow, replaceSlices, updateGoingRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { Refused } from '../base/errors.ts';
import { soilsOfParcels } from '../season/mixed-soil.ts';
import { packFrozenSeason, SLICE_INPUT } from './frozen-season.ts';
import { enqueue } from './queue.ts';
import { failRun, type RunJob } from './run-failure.ts';
import { frozenParcels, type Libraries, librariesOf, seasonInput } from './run-plan.ts';
import { planRecords, type RunRecords, readRecords } from './run-records.ts';
import { type RecordsTold, recordWarnings } from './run-records-told.ts';
import { DEFAULT_RUN_SETTINGS, type RunSettings } from './run-settings.ts';
import { SLICE_PARCELS } from './run-slice.ts';
import { type PlannedWeather, planWeather } from './run-weather.ts';
import { sliceLine } from './slice-text.ts';

type District = NonNullable<Awaited<ReturnType<typeof findDistrict>>>;

/** Version of the computation; part of every manifest. Count up when a change can move a result. */
const KERNEL_VERSION = '3';

/** The job: idempotent. A run whose slices are cut is left alone: they were queued in the same transaction. */
export async function startRun(job: RunJob): Promise<void> {
  await failRun(job, async () => {
    const { districtId, runId } = job;
    const begun = await database().inDistrict(districtId, async (tx) => {
      const run = await findRun(tx, districtId, runId);
      if (run?.state !== 'queued') return false;
      return updateGoingRun(tx, districtId, runId, { stage: 'reading the inputs', startedAt: run.startedAt ?? new Date() });
    });
    if (!begun) return;
    await database().inDistrict(districtId, async (tx) => {
      const slices = await planRun(tx, job);
      for (let slice = 0; slice < slices; slice++) await enqueue('run-slice', { ...job, slice }, { singletonKey: `${runId}/${slice}`, tx });
    });
  });
}

/** @returns how many slices were cut */
async function planRun(tx: Tx, { districtId, runId }: RunJob): Promise<number> {
  const run = await findRun(tx, districtId, runId);
  const district = await findDistrict(tx, districtId);
  if (run?.state !== 'queued' || !district) return 0;
  const asked = { ...DEFAULT_RUN_SETTINGS, ...(run.settings as Partial<RunSettings>) };
  if (!(await hasPlantings(tx, districtId, run.seasonCode))) {
    throw new Refused(
      `No parcel has a planting in season "${run.seasonCode}": import plantings, or parcels with a crop column and this season.`,
    );
  }
  const library = librariesOf(await listLibraries(tx, districtId));
  const places = await listRunPlaces(tx, districtId);
  const records = await planRecords(tx, { districtId, run, settings: asked });
  const { startDate } = records.days;
  const planned = await planWeather(tx, {
    ...{ districtId, district, settings: asked, parcels: places },
    run: { ...run, ...records.days },
    seasonStart: run.startDate,
  });
  const settings: RunSettings = { ...asked, reference_et: planned.referenceEt };
  const sliceCount = Math.ceil(places.length / SLICE_PARCELS);
  await replaceSlices(tx, districtId, runId, sliceCount);
  const intolerant = new Set<string>();
  const laid = await layParcels(tx, { run, district, settings, library, places, planned, records, intolerant });
  const { sites, weather } = planned;
  const packed = await packFrozenSeason({ startDate, span: records.span, settings, sites, weather, libraries: laid.libraries });
  const canal = { reaches: await listReaches(tx, districtId), turnouts: await listTurnouts(tx, districtId) };
  const going = await updateGoingRun(tx, districtId, runId, {
    state: 'running',
    stage: 'crop and soil water',
    progress: 0.05,
    parcelCount: places.length,
    sliceCount,
    geometryVersion: district.geometryVersion,
    frozen: packed,
    manifest: manifestOf({
      packed,
      parcels: laid.sha256,
      canal,
      settings: asked,
      weekStart: district.weekStart,
      weather: planned,
      records: records.told(),
      intolerant,
    }),
  });
  if (going) return sliceCount;
  await replaceSlices(tx, districtId, runId, 0);
  return 0;
}

interface Laying {
  readonly run: Omit<RunRow, 'frozen'>;
  readonly district: District;
  readonly settings: RunSettings;
  readonly library: Libraries;
  readonly places: readonly { readonly longitude: number; readonly latitude: number }[];
  readonly planned: PlannedWeather;
  readonly records: RunRecords;
  /** takes the names of crops grown whose salt tolerance is not known */
  readonly intolerant: Set<string>;
}

/**
 * Freezes the parcels slice by slice: the text of each is laid down for the job that computes it.
 *
 * @returns libraries with the soils that were mixed on the way, and the hash of the inputs
 * @throws {Refused} when a parcel names what the libraries do not have
 */
async function layParcels(tx: Tx, laying: Laying): Promise<{ libraries: Libraries; sha256: string }> {
  const { run, places } = laying;
  const { districtId, runId } = run;
  const hash = createHash('sha256').update('[');
  let { library: libraries } = laying;
  let after: { ordinal: number; code: string } | null = null;
  for (let from = 0, slice = 0; from < places.length; from += SLICE_PARCELS, slice++) {
    const parcels: ParcelPage = await listRunParcelPage(tx, districtId, after, SLICE_PARCELS);
    requireSamePlaces(parcels, places.slice(from, from + SLICE_PARCELS));
    const mixed = soilsOfParcels(parcels, laying.library.soils, laying.settings.default_soil);
    libraries = { ...libraries, soils: { ...mixed.soils, ...libraries.soils } };
    const lines = await freezePage(tx, { ...laying, libraries }, { from, parcels, soils: mixed.codes });
    lines.forEach(({ json }, i) => {
      hash.update(from + i === 0 ? json : `,${json}`);
    });
    const values = Buffer.from(lines.map(({ line }) => line).join(''));
    await saveRunParts(tx, { districtId, runId }, slice, [{ variable: SLICE_INPUT, values, periodCount: 1, parcelCount: parcels.length }]);
    after = parcels[parcels.length - 1];
  }
  return { libraries, sha256: hash.update(']').digest('hex') };
}

type ParcelPage = Awaited<ReturnType<typeof listRunParcelPage>>;

async function freezePage(
  tx: Tx,
  { run, district, settings, planned, records, libraries, intolerant }: Laying & { readonly libraries: Libraries },
  page: { readonly from: number; readonly parcels: ParcelPage; readonly soils: readonly string[] },
): Promise<{ json: string; line: string }[]> {
  const { parcels, soils, from } = page;
  const { sites, weather } = planned;
  const codes = parcels.map(({ code }) => code);
  const plantings = await listPlantingsOf(tx, run.districtId, run.seasonCode, codes);
  for (const { cropCode } of plantings) {
    const crop = libraries.crops[cropCode];
    if (crop && !crop.salinity) intolerant.add(crop.name);
  }
  const frozen = frozenParcels({
    ...{ parcels, plantings, sites, soils, settings },
    weights: planned.weights.slice(from, from + parcels.length),
    defaultElevation: district.defaultElevation,
    records: await readRecords(tx, records, { parcels, plantings, soils, libraries }),
  });
  const named = parcels.map(({ code }, i) => ({ code, input: frozen[i] }));
  seasonInput({ ...{ settings, sites, weather, libraries }, startDate: records.days.startDate, span: records.span, parcels: named });
  return parcels.map(({ code, turnoutCode, reachCode }, i) => {
    const json = JSON.stringify(frozen[i]);
    return { json, line: sliceLine({ code, turnout: turnoutCode, reach: reachCode }, json) };
  });
}

/** Weights were made for the places read first. @throws Error, so that the queue tries again, when an import has changed the parcels in between */
function requireSamePlaces(parcels: ParcelPage, places: Laying['places']): void {
  const same =
    parcels.length === places.length &&
    parcels.every(({ longitude, latitude }, i) => longitude === places[i].longitude && latitude === places[i].latitude);
  if (!same) throw new Error('the parcels changed while the run was being planned');
}

function manifestOf(parts: {
  packed: Uint8Array;
  /** SHA-256 of the frozen parcels */
  parcels: string;
  canal: unknown;
  settings: RunSettings;
  weekStart: number;
  weather: PlannedWeather;
  records: RecordsTold;
  intolerant: ReadonlySet<string>;
}) {
  return {
    kernel_version: KERNEL_VERSION,
    week_start: parts.weekStart,
    weather_source: parts.weather.source,
    weather_from: parts.weather.from,
    weather_to: parts.weather.to,
    days_ahead: parts.weather.ahead,
    warnings: [...parts.weather.warnings, ...recordWarnings(parts.records), ...saltWarnings(parts.settings, parts.intolerant)],
    weather_sites: parts.weather.sites.length,
    reference_et: parts.weather.referenceEt,
    interpolation: parts.weather.record,
    records: parts.records,
    weather_and_library_sha256: sha256(parts.packed),
    parcels_sha256: parts.parcels,
    canals_sha256: sha256(JSON.stringify(parts.canal)),
    settings_sha256: sha256(JSON.stringify(parts.settings)),
  };
}

/** Most crops named in a warning. */
const NAMED = 6;

function saltWarnings({ salinity }: RunSettings, intolerant: ReadonlySet<string>): string[] {
  if (salinity === 'off' || intolerant.size === 0) return [];
  const names = [...intolerant].sort();
  const more = names.length > NAMED ? ` and ${names.length - NAMED} more` : '';
  return [
    `Salt is left out for crops whose tolerance FAO-56 Table 23 does not list: ${names.slice(0, NAMED).join('; ')}${more}. They have neither salt stress nor a leaching requirement.`,
  ];
}

function sha256(content: string | Uint8Array): string {
  return createHash('sha256').update(content).digest('hex');
}
