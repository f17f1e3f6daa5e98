/** Last piece of a run: map arrays, canal roll-up, checks, and the swap that makes it the standing run. One transaction. */

import type { Tx } from '../../db/connect.ts';
import { listReaches, listTurnouts } from '../../db/queries/run-inputs.ts';
import { listParcelDays, saveRunReaches, saveRunValues } from '../../db/queries/run-results.ts';
import { countSlices, findRun, makeStanding, type RunRow, updateGoingRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { type Period, periodsOf } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { depthToVolume } from '../base/units.ts';
import type { LossRule } from '../canal/loss-rule.ts';
import { rollUp, rollUpImbalance } from '../canal/roll-up.ts';
import { buildTree } from '../canal/tree.ts';
import { dailyValues, storedArray, storedFlags } from '../season/daily-store.ts';
import { ESTIMATED_BITS, FALLBACK, FALLBACK_TEXT, type Fallback } from '../weather/variable.ts';
import { MapArrays } from './map-arrays.ts';
import { failRun, type RunJob } from './run-failure.ts';

type FinishedRun = Omit<RunRow, 'frozen'>;
const PAGE = 1000;

/** The job: idempotent; a run already finished is left alone. */
export async function finishRun(job: RunJob): Promise<void> {
  await failRun(job, () => database().inDistrict(job.districtId, (tx) => closeRun(tx, job)));
}

async function closeRun(tx: Tx, job: RunJob): Promise<void> {
  const run = await findRun(tx, job.districtId, job.runId);
  if (run?.state !== 'running') return;
  const slices = await countSlices(tx, job.districtId, job.runId);
  if (slices.done < slices.all) return;
  const { week_start: weekStart } = run.manifest as { week_start: number };
  const periods = periodSets(run, weekStart);
  const arrays = new MapArrays(run.parcelCount, run.dayCount, periods);
  const demand = new ReachDemand(await canalsOf(tx, job.districtId), run.dayCount);
  const fallbackDays = new Map<Fallback, number>();
  let estimatedDays = 0;
  await eachParcel(tx, job, (parcel) => {
    const stored = storedArray(parcel.daily);
    const flags = storedFlags(parcel.flags, run.dayCount);
    arrays.add(parcel.position, stored, flags);
    demand.add(parcel.reachCode, dailyValues(stored, run.dayCount, 'gross_requirement'), flags, parcel.area);
    estimatedDays += countFallbacks(fallbackDays, flags);
  });
  await saveRunValues(tx, arrays.rows(job));
  const canal = demand.rolledUp(job);
  await saveRunReaches(tx, canal.rows);
  const parcelDays = run.parcelCount * run.dayCount;
  await makeStanding(tx, job.districtId, run.seasonCode, job.runId);
  await updateGoingRun(tx, job.districtId, job.runId, {
    state: 'done',
    stage: 'finished',
    progress: 1,
    finishedAt: new Date(),
    balance: {
      parcel_days: parcelDays,
      max_residual_mm: slices.maxResidual,
      roll_up_relative: canal.relativeError,
      estimated_share: estimatedDays / parcelDays,
      fallback_shares: Object.fromEntries([...fallbackDays].map(([name, days]) => [name, days / parcelDays])),
      seconds: run.startedAt ? (Date.now() - run.startedAt.getTime()) / 1000 : undefined,
      parcels_without_canal: demand.withoutCanal,
      warnings: runWarnings(fallbackDays, parcelDays, demand.withoutCanal),
    },
  });
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

function periodSets(run: FinishedRun, weekStart: number): { kind: 'week' | 'month' | 'season'; periods: Period[] }[] {
  return (['week', 'month', 'season'] as const).map((kind) => ({ kind, periods: periodsOf(kind, run.startDate, run.endDate, weekStart) }));
}

async function eachParcel(
  tx: Tx,
  job: RunJob,
  visit: (parcel: { position: number; area: number; reachCode: string | null; daily: Uint8Array; flags: Uint8Array }) => void,
): Promise<void> {
  let after = -1;
  for (;;) {
    const page = await listParcelDays(tx, job, after, PAGE);
    for (const row of page) {
      if (!row.daily || !row.flags)
        throw new Error(`parcel position ${row.position} of run ${job.runId} has no days although its slice is done`);
      visit({ ...row, daily: row.daily, flags: row.flags });
    }
    if (page.length < PAGE) return;
    after = page[page.length - 1].position;
  }
}

/** Adds up the days of each fallback; answers on how many days any value was filled or estimated. */
function countFallbacks(days: Map<Fallback, number>, flags: Uint32Array): number {
  for (const [name, bit] of Object.entries(FALLBACK) as [Fallback, number][]) {
    let count = 0;
    for (const flag of flags) if ((flag & bit) !== 0) count++;
    if (count > 0) days.set(name, (days.get(name) ?? 0) + count);
  }
  return flags.reduce((count, flag) => count + ((flag & ESTIMATED_BITS) === 0 ? 0 : 1), 0);
}

async function canalsOf(tx: Tx, districtId: string) {
  const [reaches, turnouts] = [await listReaches(tx, districtId), await listTurnouts(tx, districtId)];
  return { reaches, turnouts };
}

/** Turnout demand of every reach and day, and its roll-up to the headworks. */
class ReachDemand {
  withoutCanal = 0;
  private readonly demand: Float64Array;
  /** area with filled or estimated weather, of the parcels on each reach [m²] */
  private readonly estimated: Float64Array;
  private readonly index: Map<string, number>;

  constructor(
    private readonly canals: Awaited<ReturnType<typeof canalsOf>>,
    private readonly dayCount: number,
  ) {
    this.index = new Map(canals.reaches.map((reach, ordinal) => [reach.code, ordinal]));
    this.demand = new Float64Array(canals.reaches.length * dayCount);
    this.estimated = new Float64Array(canals.reaches.length * dayCount);
  }

  add(reachCode: string | null, gross: Float64Array, flags: Uint32Array, area: number): void {
    const ordinal = reachCode === null ? undefined : this.index.get(reachCode);
    if (ordinal === undefined) {
      this.withoutCanal++;
      return;
    }
    for (let day = 0; day < this.dayCount; day++) {
      this.demand[ordinal * this.dayCount + day] += depthToVolume(gross[day], area);
      if ((flags[day] & ESTIMATED_BITS) !== 0) this.estimated[ordinal * this.dayCount + day] += area;
    }
  }

  rolledUp(job: RunJob) {
    const { reaches } = this.canals;
    if (reaches.length === 0) return { rows: [], relativeError: 0 };
    const tree = buildTree(reaches);
    const flows = rollUp({
      tree,
      reaches: reaches.map((reach) => ({ length: reach.length, lossRule: reach.lossRule as LossRule })),
      turnoutDemand: this.demand,
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
      daily: this.dailyBytes(ordinal, flows),
    }));
    return { rows, relativeError: rollUpImbalance(tree, this.demand, flows) };
  }

  /** [4 × day]: turnout demand, loss, head inflow [m³ d⁻¹], area with estimated weather [m²]. */
  private dailyBytes(ordinal: number, flows: { reachLoss: Float64Array; headInflow: Float64Array }): Uint8Array {
    const days = new Float64Array(4 * this.dayCount);
    const span = [ordinal * this.dayCount, (ordinal + 1) * this.dayCount] as const;
    days.set(this.demand.subarray(...span), 0);
    days.set(flows.reachLoss.subarray(...span), this.dayCount);
    days.set(flows.headInflow.subarray(...span), 2 * this.dayCount);
    days.set(this.estimated.subarray(...span), 3 * this.dayCount);
    return new Uint8Array(days.buffer);
  }
}
