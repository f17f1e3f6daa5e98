/**
 * Last piece of a run: map arrays put together from the slices, canal roll-up, checks, and the swap that makes it the standing run. The arrays of a variable
 * are a transaction each, so that memory holds one variable and a second go passes over those that are there; the rest is one.
 */

import type { Tx } from '../../db/connect.ts';
import { listReaches } from '../../db/queries/run-inputs.ts';
import { deleteRunParts, hasRunValue, listRunParts, saveRunReaches, saveRunValue } from '../../db/queries/run-results.ts';
import { countSlices, findRun, makeStanding, type RunRow, updateGoingRun } from '../../db/queries/run-state.ts';
import { listSeasonsCarriedFrom, markRunsStale } from '../../db/queries/stale-runs.ts';
import { database } from '../access/database.ts';
import { counted } from '../base/counted.ts';
import type { LossRule } from '../canal/loss-rule.ts';
import { type RollUp, rollUp, rollUpImbalance } from '../canal/roll-up.ts';
import { buildTree } from '../canal/tree.ts';
import { FALLBACK_TEXT, type Fallback } from '../weather/variable.ts';
import { keptOf, layPeriods, MAP_VARIABLES, periodSets } from './map-arrays.ts';
import { RunSums, unpackSums } from './reach-demand.ts';
import { afterRun } from './run-band.ts';
import { failRun, type RunJob } from './run-failure.ts';
import { SLICE_SUMS } from './run-slice.ts';

type FinishedRun = Omit<RunRow, 'frozen'>;
type RunPart = Awaited<ReturnType<typeof listRunParts>>[number];
type Reaches = Awaited<ReturnType<typeof listReaches>>;

/** Slices whose parts are read at once: some 10 MB. */
const SLICES_TOGETHER = 40;
/** Share of a run's progress bar that the map arrays fill. */
const ARRAYS_FROM = 0.85;
const ARRAYS_TO = 0.97;

/** The job: idempotent; a run already finished is left alone. */
export async function finishRun(job: RunJob): Promise<void> {
  const { districtId, runId } = job;
  await failRun(job, async () => {
    const run = await database().inDistrict(districtId, (tx) => findComputed(tx, job));
    if (!run) return;
    for (const [k, { id }] of MAP_VARIABLES.entries()) {
      const progress = ARRAYS_FROM + ((ARRAYS_TO - ARRAYS_FROM) * (k + 1)) / MAP_VARIABLES.length;
      const going = await database().inDistrict(districtId, async (tx) => {
        if (!(await hasRunValue(tx, job, id, 'season'))) await joinArrays(tx, job, run, id);
        return updateGoingRun(tx, districtId, runId, { progress });
      });
      if (!going) return;
    }
    await database().inDistrict(districtId, (tx) => closeRun(tx, job));
  });
}

/** The run when every slice of it is stored and it has not ended; else null. */
async function findComputed(tx: Tx, { districtId, runId }: RunJob): Promise<FinishedRun | null> {
  const run = await findRun(tx, districtId, runId);
  if (run?.state !== 'running') return null;
  const slices = await countSlices(tx, districtId, runId);
  return slices.done < slices.all ? null : run;
}

/** Puts the arrays of one variable together, the season's last: it tells that all are there. */
async function joinArrays(tx: Tx, job: RunJob, run: FinishedRun, variable: string): Promise<void> {
  const { districtId, runId } = job;
  const { parcelCount } = run;
  const sets = periodSets(run, weekStartOf(run));
  const arrays = sets.map(({ periods }) => new Float32Array(periods.length * parcelCount));
  let position = 0;
  for (let from = 0; from < run.sliceCount; from += SLICES_TOGETHER) {
    const count = Math.min(SLICES_TOGETHER, run.sliceCount - from);
    const kept: RunPart[][] = [];
    for (const name of keptOf(variable)) kept.push(await listRunParts(tx, job, name, from, count));
    for (const [k, part] of kept[0].entries()) {
      const packed = kept.map((parts) => parts[k].values);
      layPeriods(variable, packed, position, sets, arrays);
      position += part.parcelCount;
    }
  }
  if (position !== parcelCount) throw new Error(`run ${runId} has ${variable} of ${position} parcels although its ${parcelCount} are done`);
  for (const [k, { kind, periods }] of sets.entries()) {
    const values = new Uint8Array(arrays[k].buffer);
    await saveRunValue(tx, { districtId, runId, variable, period: kind, periodCount: periods.length, parcelCount, values });
  }
}

function weekStartOf(run: FinishedRun): number {
  return (run.manifest as { week_start: number }).week_start;
}

async function closeRun(tx: Tx, job: RunJob): Promise<void> {
  const run = await findComputed(tx, job);
  if (!run) return;
  const { maxResidual } = await countSlices(tx, job.districtId, job.runId);
  const reaches = await listReaches(tx, job.districtId);
  const sums = new RunSums(
    reaches.map(({ code }) => code),
    run.dayCount,
  );
  for (let from = 0; from < run.sliceCount; from += SLICES_TOGETHER)
    for (const { values } of await listRunParts(tx, job, SLICE_SUMS, from, SLICES_TOGETHER)) sums.add(unpackSums(values));
  const canal = rolledUp(job, reaches, sums, run.dayCount);
  await saveRunReaches(tx, canal.rows);
  await deleteRunParts(tx, job);
  const parcelDays = run.parcelCount * run.dayCount;
  await makeStanding(tx, job.districtId, run.seasonCode, job.runId);
  const carriedOn = await listSeasonsCarriedFrom(tx, job.districtId, run.seasonCode, job.runId);
  await markRunsStale(tx, job.districtId, carriedOn, `season ${run.seasonCode}, whose soil water it carries over, was run again`);
  await updateGoingRun(tx, job.districtId, job.runId, {
    state: 'done',
    stage: 'finished',
    progress: 1,
    finishedAt: new Date(),
    balance: {
      parcel_days: parcelDays,
      max_residual_mm: maxResidual,
      roll_up_relative: canal.relativeError,
      estimated_share: sums.estimatedDays / parcelDays,
      fallback_shares: Object.fromEntries([...sums.fallbackDays].map(([name, days]) => [name, days / parcelDays])),
      seconds: run.startedAt ? (Date.now() - run.startedAt.getTime()) / 1000 : undefined,
      parcels_without_canal: sums.withoutCanal,
      warnings: runWarnings(sums.fallbackDays, parcelDays, sums.withoutCanal),
    },
  });
  await afterRun(tx, job, run);
}

/** Shares of parcel-days from which an estimate is worth a warning on the whole run. Common practice, no source. */
const WORTH_A_WARNING: Partial<Record<Fallback, number>> = {
  temperatureFromNormal: 0.05,
  precipitationAssumedZero: 0.05,
  temperatureExtremesFromMean: 0.05,
  referenceEtFromDailyWeather: 0.05,
};

function runWarnings(days: ReadonlyMap<Fallback, number>, parcelDays: number, withoutCanal: number): string[] {
  const warnings = (Object.entries(WORTH_A_WARNING) as [Fallback, number][])
    .filter(([name, share]) => (days.get(name) ?? 0) > share * parcelDays)
    .map(
      ([name]) =>
        `${Math.round((100 * (days.get(name) ?? 0)) / parcelDays)} % of the parcel-days rest on an estimate: ${FALLBACK_TEXT[name]}.`,
    );
  if (withoutCanal > 0)
    warnings.push(`${counted(withoutCanal, 'parcel names', 'parcels name')} no reach: the demand of these reaches no canal.`);
  return warnings;
}

function rolledUp(job: RunJob, reaches: Reaches, { demand, estimated }: RunSums, dayCount: number) {
  if (reaches.length === 0) return { rows: [], relativeError: 0 };
  const tree = buildTree(reaches);
  const flows = rollUp({
    tree,
    reaches: reaches.map((reach) => ({ length: reach.length, lossRule: reach.lossRule as LossRule })),
    turnoutDemand: demand,
  });
  const rows = reaches.map((reach, ordinal) => ({
    ...job,
    ordinal,
    reachCode: reach.code,
    parentCode: reach.parentCode,
    name: reach.name,
    kind: reach.kind,
    capacity: reach.capacity,
    length: reach.length,
    lossRule: reach.lossRule,
    daily: reachBytes(ordinal, dayCount, { demand, estimated, flows }),
  }));
  return { rows, relativeError: rollUpImbalance(tree, demand, flows) };
}

/** [4 × day]: turnout demand, loss, head inflow [m³ d⁻¹], area with estimated weather [m²]. */
function reachBytes(ordinal: number, dayCount: number, of: { demand: Float64Array; estimated: Float64Array; flows: RollUp }): Uint8Array {
  const days = new Float64Array(4 * dayCount);
  const span = [ordinal * dayCount, (ordinal + 1) * dayCount] as const;
  days.set(of.demand.subarray(...span), 0);
  days.set(of.flows.reachLoss.subarray(...span), dayCount);
  days.set(of.flows.headInflow.subarray(...span), 2 * dayCount);
  days.set(of.estimated.subarray(...span), 3 * dayCount);
  return new Uint8Array(days.buffer);
}
