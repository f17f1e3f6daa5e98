/** Totals of a season by district, canal, crop and method, from the map arrays of the run. */

import type { Tx } from '../../../db/connect.ts';
import { listServiceAreas } from '../../../db/queries/land-maps.ts';
import { cropNames, listMethods } from '../../../db/queries/land-read.ts';
import { findRunValues, listRunParcelHeads, type RunHead } from '../../../db/queries/run-read.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import type { Period } from '../../base/civil-date.ts';
import { nullFromNaN, roundOrNull } from '../../base/missing.ts';
import { depthToVolume, volumeToDepth } from '../../base/units.ts';
import { floatsOf } from '../../jobs/observations.ts';
import type { SummaryAnswer, SummaryTotal } from '../contract/run.ts';
import { areasOfParcels } from './areas.ts';
import { periodsWanted, readFinishedRun } from './run.ts';
import { type CanalSeason, readCanalSeason } from './run-reaches.ts';

const SUMMED = [
  'reference_et',
  'crop_et',
  'adjusted_crop_et',
  'precipitation',
  'effective_precipitation',
  'net_requirement',
  'gross_requirement',
  'estimated_share',
] as const;
type Summed = (typeof SUMMED)[number];
type Parcel = Awaited<ReturnType<typeof listRunParcelHeads>>[number];

/** Depths of every parcel, by variable: [period × position]. */
type Depths = Record<Summed, Float32Array>;

export function answerSummary(caller: Caller, runId: string): Promise<SummaryAnswer> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const run = await readFinishedRun(tx, districtId, runId);
    const all = await listRunParcelHeads(tx, { districtId, runId });
    const parcels = caller.parcels ? all.filter((parcel) => caller.parcels?.includes(parcel.code)) : all;
    const season = await readDepths(tx, { districtId, runId }, 'season');
    const canal = await readCanalSeason(tx, caller, run);
    const crops = await cropNames(tx, districtId);
    const methods = new Map((await listMethods(tx, districtId)).map((method) => [method.code, method.name]));
    const reaches = new Map(canal?.rows.map((row) => [row.reachCode, row.name]));
    const by = (keyOf: (parcel: Parcel) => string, nameOf: (key: string, parcel: Parcel) => string) =>
      totalsBy(parcels, season, keyOf, nameOf);
    return {
      run: runId,
      season: run.seasonCode,
      start_date: run.startDate,
      end_date: run.endDate,
      district: districtTotal(caller, run, parcels, season, canal),
      by_canal: by(
        (p) => p.reachCode ?? '',
        (code) => (code ? (reaches.get(code) ?? code) : 'On no canal'),
      ),
      by_crop: by(
        (p) => p.cropCodes.join('+'),
        (_, p) => p.cropCodes.map((code) => crops.get(code) ?? code).join(' + ') || 'Nothing planted',
      ),
      by_method: by(
        (p) => p.methodCode,
        (code) => methods.get(code) ?? code,
      ),
      areas: await areaTotals(tx, caller, parcels, season),
      weeks: await weekTotals(tx, { caller, run, parcels, canal, parcelCount: all.length }),
    };
  });
}

/** Totals by service area; a parcel counts to the area that its inner point lies in now. */
async function areaTotals(tx: Tx, caller: Caller, parcels: readonly Parcel[], season: Depths): Promise<SummaryTotal[]> {
  const areas = await listServiceAreas(tx, caller.districtId);
  if (areas.length === 0) return [];
  const homes = await areasOfParcels(tx, caller, areas);
  const names = new Map(areas.map(({ code, name }) => [code, name]));
  return totalsBy(
    parcels.filter(({ code }) => homes.has(code)),
    season,
    ({ code }) => homes.get(code) ?? '',
    (code) => names.get(code) ?? code,
  );
}

async function readDepths(tx: Tx, key: { districtId: string; runId: string }, period: 'week' | 'season'): Promise<Depths> {
  const read = async (variable: Summed) => {
    const found = await findRunValues(tx, key, { variable, period, index: null });
    return [variable, found ? floatsOf(found.values) : new Float32Array()] as const;
  };
  const arrays = [];
  for (const variable of SUMMED) arrays.push(await read(variable));
  return Object.fromEntries(arrays) as Depths;
}

/** Volume over the parcels of a depth array, one period of it [m³]; a missing depth makes the total missing. */
function volumeOf(parcels: readonly Parcel[], depths: Float32Array, offset = 0): number {
  let volume = 0;
  for (const parcel of parcels) volume += depthToVolume(depths[offset + parcel.position] ?? Number.NaN, parcel.area);
  return volume;
}

/** Mean over the parcels, by area. */
function shareOf(parcels: readonly Parcel[], shares: Float32Array, offset = 0): number {
  let sum = 0;
  for (const parcel of parcels) sum += (shares[offset + parcel.position] ?? Number.NaN) * parcel.area;
  return sum / areaOf(parcels);
}

function areaOf(parcels: readonly Parcel[]): number {
  return parcels.reduce((sum, parcel) => sum + parcel.area, 0);
}

function totalOf(code: string, name: string, parcels: readonly Parcel[], depths: Depths): SummaryTotal {
  const area = areaOf(parcels);
  const depth = (variable: Summed) => roundOrNull(volumeToDepth(volumeOf(parcels, depths[variable]), area), 3);
  return {
    code,
    name,
    parcel_count: parcels.length,
    area_ha: roundOrNull(area / 1e4, 4) ?? 0,
    crop_et_mm: depth('crop_et'),
    adjusted_crop_et_mm: depth('adjusted_crop_et'),
    precipitation_mm: depth('precipitation'),
    effective_precipitation_mm: depth('effective_precipitation'),
    net_requirement_mm: depth('net_requirement'),
    gross_requirement_mm: depth('gross_requirement'),
    net_volume_m3: roundOrNull(volumeOf(parcels, depths.net_requirement), 1),
    gross_volume_m3: roundOrNull(volumeOf(parcels, depths.gross_requirement), 1),
    estimated_share: roundOrNull(shareOf(parcels, depths.estimated_share), 4),
  };
}

function totalsBy(
  parcels: readonly Parcel[],
  depths: Depths,
  keyOf: (parcel: Parcel) => string,
  nameOf: (key: string, parcel: Parcel) => string,
): SummaryTotal[] {
  const groups = new Map<string, Parcel[]>();
  for (const parcel of parcels) {
    const key = keyOf(parcel);
    const group = groups.get(key);
    if (group) group.push(parcel);
    else groups.set(key, [parcel]);
  }
  const totals = [...groups].map(([key, group]) => totalOf(key, nameOf(key, group[0]), group, depths));
  return totals.sort((a, b) => (b.gross_volume_m3 ?? 0) - (a.gross_volume_m3 ?? 0));
}

function districtTotal(caller: Caller, run: RunHead, parcels: readonly Parcel[], depths: Depths, canal: CanalSeason | null) {
  const [season] = periodsWanted(run, caller, { period: 'season' });
  const flows = canal?.periods([season]) ?? [];
  const loss = flows.reduce((sum, flow) => sum + flow.loss, 0);
  const head = canal ? flows[canal.tree.head].headInflow : Number.NaN;
  return {
    ...totalOf(caller.district.code, caller.district.name, parcels, depths),
    reference_et_mm: roundOrNull(volumeToDepth(volumeOf(parcels, depths.reference_et), areaOf(parcels)), 3),
    headworks_inflow_m3: roundOrNull(head, 1),
    conveyance_loss_m3: canal ? roundOrNull(loss, 1) : null,
  };
}

interface WeeksInput {
  readonly caller: Caller;
  readonly run: RunHead;
  readonly parcels: readonly Parcel[];
  readonly canal: CanalSeason | null;
  readonly parcelCount: number;
}

async function weekTotals(tx: Tx, { caller, run, parcels, canal, parcelCount }: WeeksInput): Promise<SummaryAnswer['weeks']> {
  const periods = periodsWanted(run, caller, { period: 'week' });
  const depths = await readDepths(tx, { districtId: caller.districtId, runId: run.runId }, 'week');
  const area = areaOf(parcels);
  const flows = canal?.periods(periods) ?? [];
  return periods.map((period: Period, index) => {
    const volume = (variable: Summed) => volumeOf(parcels, depths[variable], index * parcelCount);
    const depth = (variable: Summed) => roundOrNull(volumeToDepth(volume(variable), area), 3);
    const head = canal ? flows[canal.tree.head * periods.length + index] : null;
    return {
      start: period.start,
      end: period.end,
      reference_et_mm: depth('reference_et'),
      precipitation_mm: depth('precipitation'),
      crop_et_mm: depth('crop_et'),
      gross_volume_m3: roundOrNull(volume('gross_requirement'), 1),
      headworks_inflow_m3: head ? roundOrNull(head.headInflow, 1) : null,
      headworks_mean_m3_s: head ? nullFromNaN(head.meanFlow) : null,
      estimated_share: roundOrNull(shareOf(parcels, depths.estimated_share, index * parcelCount), 4),
    };
  });
}
