/**
 * The rows that say how a strip is watered: the irrigation rule of each planting, water given whatever the soil says, recorded deliveries, ponding, mulch.
 */
import { mulchEvaporationShare, mulchOpenShare } from '../crop/mulch.ts';
import { MARK, type PackedSeason, type StripCurve } from './pack.ts';
import type { PlantedCycles } from './stage-days.ts';
import type { StripPlan } from './strip-curve.ts';
import type { ApplicationMethod, IrrigationRule, ParcelInput } from './types.ts';

const STAGES = ['initial', 'development', 'mid', 'late'] as const;

/** Rows of a strip that nobody waters. `touched` says whether the rows that most strips leave alone must be put back. */
export function clearPractice(curve: StripCurve, method: ApplicationMethod, touched: boolean): void {
  curve.triggerShare.fill(method.triggerFraction);
  if (!touched) return;
  curve.refillShare.fill(1);
  curve.fixedDepth.fill(0);
  curve.prescribed.fill(0);
  curve.covered.fill(Number.NaN);
  curve.evaporationShare.fill(1);
  curve.openShare.fill(1);
  curve.saltStress.fill(1);
  curve.capillaryMost.fill(0);
}

/** Whether a planting needs any of the rows that most leave alone. */
export function hasPractice({ irrigation, mulch, preIrrigation, germination }: PlantedCycles['planting']): boolean {
  return irrigation !== undefined || mulch !== undefined || preIrrigation !== undefined || (germination?.length ?? 0) > 0;
}

/** Days of a planting within the run; to ≤ from when there are none. */
function spanOf(season: PackedSeason, { cycles }: PlantedCycles): { from: number; to: number } {
  if (cycles.length === 0) return { from: 0, to: 0 };
  return { from: Math.max(0, cycles[0].start), to: Math.min(season.input.dayCount, cycles[cycles.length - 1].end) };
}

/**
 * Draws how a planting is watered. Nothing where the run is rain-fed; mulch and bunds stand all the same.
 *
 * Days before the run are over: a pre-irrigation that falls there is left out, its water is in what the soil begins with.
 */
export function drawPractice(season: PackedSeason, planted: PlantedCycles): void {
  const { curve } = season;
  const { planting } = planted;
  const span = spanOf(season, planted);
  if (planting.mulch && span.to > span.from) {
    curve.evaporationShare.fill(mulchEvaporationShare(planting.mulch), span.from, span.to);
    curve.openShare.fill(mulchOpenShare(planting.mulch), span.from, span.to);
  }
  if (planted.flooding) floodField(curve, planted);
  if (!season.input.settings.irrigate) return;
  drawRule(curve, planted, span);
  prescribe(curve, planted);
}

function drawRule(curve: StripCurve, planted: PlantedCycles, { from, to }: { from: number; to: number }): void {
  const rule: IrrigationRule = planted.planting.irrigation ?? { kind: 'depletion' };
  const last = Math.min(to, Math.ceil(planted.lastIrrigation));
  if (rule.kind === 'none') return;
  if (rule.kind === 'interval' || rule.kind === 'daily') {
    const every = rule.kind === 'daily' ? 1 : rule.days;
    const start = planted.cycles[0]?.start ?? 0;
    const first = from + ((every - ((from - start) % every)) % every);
    for (let d = first; d < last; d += every) curve.mark[d] |= MARK.due;
    return;
  }
  for (let d = from; d < last; d++) curve.mark[d] |= MARK.mayIrrigate;
  if (to <= from) return;
  if (rule.kind === 'fixed-depth') {
    curve.fixedDepth.fill(rule.depth, from, to);
    curve.triggerShare.fill(1, from, to);
  } else if (rule.kind === 'deficit') {
    for (let d = from; d < to; d++) {
      const { trigger, refill } = rule.stages[STAGES[curve.stage[d]]];
      curve.triggerShare[d] = trigger;
      curve.refillShare[d] = refill;
    }
  } else {
    if (rule.trigger !== undefined) curve.triggerShare.fill(rule.trigger, from, to);
    if (rule.refill !== undefined) curve.refillShare.fill(rule.refill, from, to);
  }
}

/** Pre-irrigation, while no other crop stands, and germination. */
function prescribe(curve: StripCurve, { planting, cycles }: PlantedCycles): void {
  if (cycles.length === 0) return;
  const { start } = cycles[0];
  const { preIrrigation, germination } = planting;
  if (preIrrigation) {
    const day = start - preIrrigation.daysBefore;
    if (day >= 0 && day < curve.mark.length && (curve.planting[day] < 0 || day >= start)) {
      if (preIrrigation.depth === undefined) curve.mark[day] |= MARK.refill;
      else curve.prescribed[day] += preIrrigation.depth;
      refillFor(curve, day, start);
    }
  }
  for (const { daysAfter, depth } of germination ?? []) {
    const day = start + daysAfter;
    if (day >= 0 && day < curve.mark.length) curve.prescribed[day] += depth;
  }
}

/** A pre-irrigation is for the crop to come: its scheduling depth holds from that day on. */
function refillFor(curve: StripCurve, day: number, start: number): void {
  if (start < curve.scheduleDepth.length) curve.scheduleDepth.fill(curve.scheduleDepth[start], day, start);
}

/**
 * Bunds up from puddling to drainage, on days that carry no other crop. Puddling days carry the planting's index, so that its depths are known; they
 * are not planted yet.
 */
function floodField(curve: StripCurve, planted: PlantedCycles): void {
  if (planted.flooding === null) return;
  const { from, to } = planted.flooding;
  let ponded = from < 0 && to > 0;
  for (let d = Math.max(0, from); d < Math.min(curve.mark.length, to); d++) {
    if (curve.planting[d] >= 0 && curve.planting[d] !== planted.index) continue;
    curve.planting[d] = planted.index;
    curve.mark[d] |= MARK.ponded;
    ponded = true;
  }
  if (ponded && to >= 0 && to < curve.mark.length) curve.mark[to] |= MARK.drained;
}

/**
 * Recorded deliveries: on the days that are recorded, water is what was delivered and nothing else.
 *
 * A delivery is a depth over the whole parcel. Strips that carry a crop that day share it, in proportion to their area; without any, every strip
 * gets the same depth.
 */
export function drawDeliveries(season: PackedSeason, parcel: ParcelInput, plan: StripPlan, strips: readonly StripPlan[]): void {
  const { curve, input } = season;
  const { water, recordedUntil, irrigate } = input.settings;
  if (!irrigate || water === undefined || water === 'rule') return;
  const until = water === 'recorded' ? input.dayCount : Math.min(input.dayCount, recordedUntil ?? 0);
  const kept = ~(MARK.mayIrrigate | MARK.due | MARK.refill);
  for (let d = 0; d < until; d++) curve.mark[d] = (curve.mark[d] & kept) | MARK.recorded;
  curve.prescribed.fill(0, 0, Math.max(0, until));
  for (const [k, day] of (parcel.deliveries?.days ?? []).entries()) {
    if (day < 0 || day >= until) continue;
    curve.prescribed[day] += (parcel.deliveries?.values[k] ?? 0) * shareOfDelivery(plan, strips, day);
  }
}

/** Depth on this strip over the depth on the parcel. */
function shareOfDelivery(plan: StripPlan, strips: readonly StripPlan[], day: number): number {
  const carries = (strip: StripPlan) =>
    strip.planted.some(({ cycles }) => cycles.length > 0 && cycles[0].start <= day && day < cycles[cycles.length - 1].end);
  let cropped = 0;
  for (const strip of strips) if (carries(strip)) cropped += strip.share;
  if (cropped === 0) return 1;
  return carries(plan) ? 1 / cropped : 0;
}
