/** Relative yield of the plantings of a run. */
import { z } from 'zod';
import type { RunHead } from '../../../db/queries/run-read.ts';
import { listRunStages, type RunStages, type RunStagesFilter } from '../../../db/queries/run-stages.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays } from '../../base/civil-date.ts';
import { nullFromNaN, roundOrNull } from '../../base/missing.ts';
import { loadFrozenSeason } from '../../jobs/frozen-season.ts';
import { plantingYield, type StageEt } from '../../season/planting-yield.ts';
import type { ParcelInput } from '../../season/types.ts';
import type { PlantingYieldRow } from '../contract/yields.ts';
import { readCursor, writeCursor } from '../paging.ts';
import type { PageWanted } from './land.ts';
import { readFinishedRun } from './run.ts';

const STAGES = 4;
/** Parcels whose frozen inputs are held at a time. */
const AT_ONCE = 500;

/** Plantings of a page of parcels in map order; `limit` counts parcels. */
export async function answerYields(
  caller: Caller,
  runId: string,
  wanted: { parcel?: string } & PageWanted,
): Promise<{ items: PlantingYieldRow[]; next_cursor: string | null }> {
  const from = readCursor(wanted.cursor, z.tuple([z.number().int()]))?.[0] ?? 0;
  const { rows, next } = await readRows(caller, runId, wanted.parcel, from, wanted.limit);
  return { items: rows, next_cursor: next === null ? null : writeCursor(next) };
}

/** Every planting, some parcels at a time. */
export async function* eachYield(caller: Caller, runId: string, parcel?: string): AsyncGenerator<PlantingYieldRow[]> {
  for (let from: number | null = 0; from !== null; ) {
    const page: Awaited<ReturnType<typeof readRows>> = await readRows(caller, runId, parcel, from, AT_ONCE);
    yield page.rows;
    from = page.next;
  }
}

async function readRows(caller: Caller, runId: string, parcel: string | undefined, from: number, limit: number) {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const run = await readFinishedRun(tx, districtId, runId);
    const filter: RunStagesFilter = { districtId, runId, codes: caller.parcels, parcel };
    const found = await listRunStages(tx, filter, from, Math.min(limit, AT_ONCE));
    const positions = found.map(({ position }) => position);
    const season = found.length > 0 ? await loadFrozenSeason(tx, districtId, runId, positions) : null;
    const inputs = new Map(season?.parcels.map((input) => [input.code, input]));
    const rows = found.flatMap((stages) => rowsOf(run, stages, inputs.get(stages.parcelCode)));
    const more = found.length === Math.min(limit, AT_ONCE);
    return { rows, next: more ? found[found.length - 1].position + 1 : null };
  });
}

/** Runs of earlier kernels kept no stages: they answer without rows. */
function rowsOf(run: RunHead, stages: RunStages, input: ParcelInput | undefined): PlantingYieldRow[] {
  if (!stages.stageEt || !stages.stageDays || !input) return [];
  const et = new Float64Array(Uint8Array.from(stages.stageEt).buffer);
  const days = new Int32Array(Uint8Array.from(stages.stageDays).buffer);
  const rows: PlantingYieldRow[] = [];
  for (const [index, { crop, areaShare }] of input.plantings.entries()) {
    const edges = days.subarray(index * (STAGES + 1), (index + 1) * (STAGES + 1));
    const found = plantingYield(crop, et.subarray(index * STAGES * 2, (index + 1) * STAGES * 2));
    if (edges.length <= STAGES || edges[STAGES] <= 0 || edges[0] >= run.dayCount) continue;
    const date = (edge: number) => addDays(run.startDate, edges[edge]);
    const [initial, development, mid, late] = found.stages.map(deficitOf);
    rows.push({
      parcel: stages.parcelCode,
      planting: index + 1,
      crop: crop.code,
      crop_name: crop.name,
      area_ha: roundOrNull((stages.area * areaShare) / 1e4, 6) ?? 0,
      initial_from: date(0),
      development_from: date(1),
      mid_from: date(2),
      late_from: date(3),
      ends: addDays(run.startDate, edges[STAGES] - 1),
      whole: edges[0] >= 0 && edges[STAGES] <= run.dayCount,
      crop_et_mm: roundOrNull(found.cropEt, 2),
      adjusted_crop_et_mm: roundOrNull(found.adjustedCropEt, 2),
      initial_deficit: initial,
      development_deficit: development,
      mid_deficit: mid,
      late_deficit: late,
      yield_response: nullFromNaN(crop.yieldResponse),
      relative_yield: roundOrNull(found.bySeason, 4),
      relative_yield_by_stage: roundOrNull(found.byStage, 4),
    });
  }
  return rows;
}

function deficitOf({ cropEt, adjustedCropEt }: StageEt): number | null {
  return cropEt > 0 ? roundOrNull(1 - adjustedCropEt / cropEt, 4) : null;
}
