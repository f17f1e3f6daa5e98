/** Demand, loss and flow by reach and period, from the stored canal days of a run. */

import type { Tx } from '../../../db/connect.ts';
import { listReachAreas, listRunReaches, type RunHead } from '../../../db/queries/run-read.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import type { Period } from '../../base/civil-date.ts';
import { nanFromNull, nullFromNaN, roundOrNull } from '../../base/missing.ts';
import { type ReachPeriod as CanalPeriod, reachPeriods } from '../../canal/reach-period.ts';
import { buildTree, type ConveyanceTree, reachesBelow } from '../../canal/tree.ts';
import type { ReachPeriod, ReachValues } from '../contract/run.ts';
import { periodsWanted, readFinishedRun, type SpanWanted } from './run.ts';

type ReachRow = Awaited<ReturnType<typeof listRunReaches>>[number];

/** The conveyance tree of a run with its flows. */
export interface CanalSeason {
  readonly rows: readonly ReachRow[];
  readonly tree: ConveyanceTree;
  /** of each reach and period, reaches outer */
  periods(periods: readonly Period[]): CanalPeriod[];
  /** sum over the days of a period of the area with estimated weather, of the parcels on a reach [m² d]; NaN for runs that did not keep it */
  estimatedArea(reach: number, period: Period): number;
}

/** Null where the run has no canals, and for growers: flow in a small reach would tell a neighbour's use. */
export async function readCanalSeason(tx: Tx, caller: Caller, run: RunHead): Promise<CanalSeason | null> {
  const rows = caller.parcels ? [] : await listRunReaches(tx, { districtId: caller.districtId, runId: run.runId });
  if (rows.length === 0) return null;
  const tree = buildTree(rows.map((row) => ({ code: row.reachCode, parentCode: row.parentCode })));
  const { dayCount } = run;
  const [turnoutDemand, reachLoss, headInflow] = [0, 1, 2].map((part) => partOf(rows, part, dayCount));
  const capacity = rows.map((row) => nanFromNull(row.capacity));
  const periods = (wanted: readonly Period[]) =>
    reachPeriods({ tree, turnoutDemand, flows: { reachLoss, headInflow, dayCount }, capacity, periods: wanted });
  const estimated = partOf(rows, 3, dayCount);
  const estimatedArea = (reach: number, { from, to }: Period) =>
    estimated.subarray(reach * dayCount + from, reach * dayCount + to + 1).reduce((sum, area) => sum + area, 0);
  return { rows, tree, periods, estimatedArea };
}

/** One of the stored parts of every reach, [reach × day]; NaN where a run did not keep it. */
function partOf(rows: readonly ReachRow[], part: number, dayCount: number): Float64Array {
  const all = new Float64Array(rows.length * dayCount);
  rows.forEach((row, reach) => {
    const bytes = Uint8Array.from(row.daily);
    if (bytes.byteLength < (part + 1) * dayCount * 8) all.fill(Number.NaN, reach * dayCount, (reach + 1) * dayCount);
    else all.set(new Float64Array(bytes.buffer, part * dayCount * 8, dayCount), reach * dayCount);
  });
  return all;
}

export function answerReaches(caller: Caller, runId: string, wanted: SpanWanted): Promise<{ items: ReachPeriod[] }> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const run = await readFinishedRun(tx, districtId, runId);
    const periods = periodsWanted(run, caller, wanted);
    const canal = await readCanalSeason(tx, caller, run);
    if (!canal) return { items: [] };
    const areas = new Map((await listReachAreas(tx, { districtId, runId })).map((row) => [row.reachCode, row]));
    const flows = canal.periods(periods);
    const items: ReachPeriod[] = [];
    for (const reach of canal.tree.order) {
      const { count = 0, area = 0 } = areas.get(canal.rows[reach].reachCode) ?? {};
      for (const [index, period] of periods.entries()) {
        const flow = flows[reach * periods.length + index];
        const lossBelow = lossBelowOf(canal.tree, flows, periods.length, flow);
        items.push({
          ...headOf(canal, reach, period),
          ...flowMembers(flow, lossBelow),
          parcel_count: count,
          area_ha: round(area / 1e4) ?? 0,
          estimated_share: roundOrNull(estimatedBelow(canal, areas, reach, period), 4),
        });
      }
    }
    return { items };
  });
}

function headOf({ rows, tree }: CanalSeason, reach: number, period: Period) {
  const row = rows[reach];
  return {
    reach: row.reachCode,
    name: row.name,
    parent: row.parentCode,
    level: tree.depth[reach],
    kind: row.kind,
    start: period.start,
    end: period.end,
    length_km: round(row.length / 1000) ?? 0,
  };
}

function lossBelowOf(tree: ConveyanceTree, flows: readonly CanalPeriod[], periodCount: number, at: CanalPeriod): number {
  let loss = 0;
  for (const reach of reachesBelow(tree, at.reach)) loss += flows[reach * periodCount + at.period].loss;
  return loss;
}

/** Area-weighted over the parcels on the reach and below it; NaN where there are none. */
function estimatedBelow(canal: CanalSeason, areas: ReadonlyMap<string | null, { area: number }>, reach: number, period: Period): number {
  let [estimated, area] = [0, 0];
  for (const below of reachesBelow(canal.tree, reach)) {
    estimated += canal.estimatedArea(below, period);
    area += areas.get(canal.rows[below].reachCode)?.area ?? 0;
  }
  return area > 0 ? estimated / (area * (period.to - period.from + 1)) : Number.NaN;
}

function flowMembers(flow: CanalPeriod, lossBelow: number) {
  return {
    turnout_demand_m3: roundOrNull(flow.turnoutDemand, 3),
    demand_below_m3: roundOrNull(flow.demandBelow, 3),
    reach_loss_m3: roundOrNull(flow.loss, 3),
    loss_below_m3: roundOrNull(lossBelow, 3),
    head_inflow_m3: roundOrNull(flow.headInflow, 3),
    mean_inflow_m3_s: round(flow.meanFlow),
    peak_inflow_m3_s: round(flow.peakFlow),
    busiest_week_inflow_m3_s: round(flow.busiestFlow),
    capacity_m3_s: nullFromNaN(flow.capacity),
    capacity_share: round(flow.capacityShare),
  };
}

function round(value: number): number | null {
  return roundOrNull(value, 6);
}

const KIND = { weeks: 'week', months: 'month', season: 'season' } as const;

/** Canal numbers for the map, [period][reach], reaches in the order of the run. */
export function reachValues(caller: Caller, runId: string, which: keyof typeof KIND): Promise<ReachValues> {
  return database().inDistrict(caller.districtId, async (tx) => {
    const run = await readFinishedRun(tx, caller.districtId, runId);
    const periods = periodsWanted(run, caller, { period: KIND[which] });
    const canal = await readCanalSeason(tx, caller, run);
    const flows = canal?.periods(periods) ?? [];
    const reaches = canal?.rows.map((row) => row.reachCode) ?? [];
    const table = (value: (flow: CanalPeriod) => number) =>
      periods.map((_, period) => reaches.map((_reach, reach) => round(value(flows[reach * periods.length + period]))));
    return {
      reaches,
      periods: periods.map(({ start, end }) => ({ start, end })),
      mean_inflow_m3_s: table((flow) => flow.meanFlow),
      capacity_share: table((flow) => flow.capacityShare),
    };
  });
}
