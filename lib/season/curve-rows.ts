/**
 * The rows of a cycle: coefficient, height, roots, stage, cover; and of the days between crops.
 */
import { powerOfShare } from '../base/power.ts';
import { heightFactor } from '../crop/climate-adjustment.ts';
import { BARE_SOIL_COEFFICIENT } from '../crop/cover.ts';
import { type Cycle, growingRootDepth, plantHeight } from '../crop/curve.ts';
import { scheduleDepth } from '../crop/root-zone.ts';
import { tallRatio } from '../crop/surface-coefficient.ts';
import { WEED_HEIGHT, weedBasal } from '../crop/weeds.ts';
import type { CycleCurve } from './cycle-curve.ts';
import { MARK, type PackedSeason, type StripCurve } from './pack.ts';
import { availableTo, profileOf } from './soil-profile.ts';
import type { PlantedCycles } from './stage-days.ts';
import type { Crop, Soil } from './types.ts';

/** Height at which ground without a crop meets the wind in Kc max [m]: stubble and clods. Choice of ours; FAO-56 gives none. */
export const BARE_HEIGHT = 0.05;

/** p of ground without a crop, used only to show a readily available water. Source: FAO-56, text of Eq. 83 (0.5 for many crops). */
const BARE_FRACTION = 0.5;

const BARE_HEIGHT_FACTOR = heightFactor(BARE_HEIGHT);
const WEED_HEIGHT_FACTOR = heightFactor(WEED_HEIGHT);
const WEED_BASAL = weedBasal();

/** Shift of p by texture: fine soils give up their water less readily, coarse ones more. Source: FAO-56, text of Table 22 (5 to 10 % either way). */
const TEXTURE_SHIFT = { coarse: 1.1, medium: 1, fine: 0.9 } as const;

/**
 * Depletion fraction p of a crop on a soil.
 *
 *   p × 1.1 on coarse, × 0.9 on fine soil
 *
 * Source: FAO-56, text of Table 22 (the upper end of its 5 to 10 %).
 */
export function tableFractionOf(crop: Crop, soil: Soil): number {
  return crop.depletionFraction * TEXTURE_SHIFT[soil.texture ?? 'medium'];
}

/** Depth of the store of ground that carries nothing all run: as deep as it takes to hold the evaporable water, at least Ze, at most the hard layer. */
export function bareDepth(soil: Soil): number {
  const holding = soil.totalEvaporableWater / (1000 * (soil.fieldCapacity - soil.wiltingPoint));
  return limited(Math.max(soil.evaporationDepth, holding), soil);
}

export function limited(depth: number, soil: Soil): number {
  return Number.isNaN(soil.rootLimit) ? depth : Math.min(depth, soil.rootLimit);
}

export function rootDepthOf(crop: Crop, progress: number): number {
  return crop.type === 'annual' ? growingRootDepth(crop.rootDepthMin, crop.rootDepthMax, progress) : crop.rootDepthMax;
}

/**
 * Rows of ground that carries nothing, but for the days `kept.from … kept.to − 1`, which a crop is going to fill.
 *
 * Root depth only where there is no such crop: with one, `holdRootDepth` fills it.
 */
export function clearGrowth(curve: StripCurve, soil: Soil, firstCrop: Crop | undefined, kept: Span): void {
  fillAround(curve.basal, 0, kept);
  fillAround(curve.height, BARE_HEIGHT, kept);
  fillAround(curve.heightFactor, BARE_HEIGHT_FACTOR, kept);
  fillAround(curve.scheduleDepth, 0, kept);
  fillAround(curve.tableFraction, firstCrop ? tableFractionOf(firstCrop, soil) : BARE_FRACTION, kept);
  curve.mark.fill(0);
  curve.stage.fill(0);
  curve.planting.fill(-1);
  if (kept.to <= kept.from) curve.rootDepth.fill(bareDepth(soil));
}

function fillAround(row: Float64Array, value: number, { from, to }: Span): void {
  if (to <= from) row.fill(value);
  else {
    row.fill(value, 0, from);
    row.fill(value, to);
  }
}

/** Days within the run; none where `to` is not above `from`. */
export interface Span {
  readonly from: number;
  readonly to: number;
}

/**
 * Draws a cycle: coefficient (FAO-56 Eq. 66), height and roots (Annex 8), stage.
 *
 * A coefficient on tall reference ET becomes one on short by the ratio of each day (Eq. 67 and 68).
 */
export function drawCycle(season: PackedSeason, soil: Soil, planted: PlantedCycles, cycle: Cycle, drawn: CycleCurve): void {
  const { curve } = season;
  const { crop } = planted.planting;
  const span = { from: Math.max(0, cycle.start), to: Math.min(season.input.dayCount, cycle.end) };
  if (span.to <= span.from) return;
  drawCoefficient(curve, cycle, drawn, span);
  drawRoots(curve, cycle, crop, soil, span);
  drawStage(curve.stage, cycle, span);
  curve.tableFraction.fill(tableFractionOf(crop, soil), span.from, span.to);
  curve.planting.fill(planted.index, span.from, span.to);
  curve.mark.fill(MARK.planted, span.from, span.to);
  if (cycle === planted.cycles[0] && cycle.start >= 0) curve.mark[cycle.start] |= MARK.firstDay;
  if (drawn.canopy !== null) coverGround(curve, drawn, span);
  if (crop.surface === 'tall') onShortSurface(curve.basal, season.weather.climate, span);
}

function drawCoefficient(curve: StripCurve, { start, lengths }: Cycle, drawn: CycleCurve, { from, to }: Span): void {
  const { basal, height, heightFactor: factor } = curve;
  const { initial, mid, end } = drawn.coefficients;
  const toDevelopment = start + lengths.initial;
  const toMid = start + Math.max(lengths.initial, lengths.initial + lengths.development - 1);
  const toLate = start + lengths.initial + lengths.development + lengths.mid;
  const toEnd = Math.max(toLate, toLate + lengths.late - 1);
  const tall = drawn.canopy ? drawn.heightMax : plantHeight(initial, mid, drawn.heightMax, 0);
  const growing = !drawn.canopy;
  fill(basal, initial, from, Math.min(to, toDevelopment));
  fill(height, tall, from, Math.min(to, toDevelopment));
  fill(factor, heightFactor(tall), from, Math.min(to, toDevelopment));
  const full = heightFactor(drawn.heightMax);
  fill(height, drawn.heightMax, Math.max(from, toDevelopment), to);
  fill(factor, full, Math.max(from, toDevelopment), to);
  for (let d = Math.max(from, toDevelopment); d < Math.min(to, toMid); d++) {
    const value = initial + ((d + 1 - toDevelopment) / lengths.development) * (mid - initial);
    basal[d] = value;
    if (!growing || value >= mid) continue;
    height[d] = (drawn.heightMax * value) / mid;
    factor[d] = full * powerOfShare(value / mid, 0.3);
  }
  fill(basal, mid, Math.max(from, toMid), Math.min(to, toLate));
  for (let d = Math.max(from, toLate); d < Math.min(to, toEnd); d++) basal[d] = mid + ((d + 1 - toLate) / lengths.late) * (end - mid);
  fill(basal, end, Math.max(from, toEnd), to);
}

function fill(row: Float64Array, value: number, from: number, to: number): void {
  if (to > from) row.fill(value, from, to);
}

/** Annual roots grow (Eq. 8-1); those of a standing crop keep their depth. A hard layer limits every depth. */
function drawRoots(curve: StripCurve, { start, lengths }: Cycle, crop: Crop, soil: Soil, { from, to }: Span): void {
  const { rootDepth, scheduleDepth: schedule } = curve;
  const grown = limited(crop.rootDepthMax, soil);
  rootDepth.fill(grown, from, to);
  schedule.fill(grown, from, to);
  if (crop.type !== 'annual') return;
  const toDevelopment = start + lengths.initial;
  const toMid = Math.min(to, toDevelopment + lengths.development - 1);
  const sown = limited(crop.rootDepthMin, soil);
  fill(rootDepth, sown, from, Math.min(to, toDevelopment));
  fill(schedule, limited(scheduleDepth(sown, crop.rootDepthMax), soil), from, Math.min(to, toDevelopment));
  for (let d = Math.max(from, toDevelopment); d < toMid; d++) {
    const depth = growingRootDepth(crop.rootDepthMin, crop.rootDepthMax, (d + 1 - toDevelopment) / lengths.development);
    rootDepth[d] = limited(depth, soil);
    schedule[d] = limited(scheduleDepth(rootDepth[d], crop.rootDepthMax), soil);
  }
}

function drawStage(stage: Uint8Array, { start, lengths }: Cycle, { from, to }: Span): void {
  const development = start + lengths.initial;
  const mid = development + lengths.development;
  const late = mid + lengths.mid;
  // each later stage overwrites the end of the one before
  stage.fill(0, from, to);
  if (development < to) stage.fill(1, Math.max(from, development), to);
  if (mid < to) stage.fill(2, Math.max(from, mid), to);
  if (late < to) stage.fill(3, Math.max(from, late), to);
}

/**
 * Cover of a given canopy: its own fc in mid season, before and after in proportion to what Kcb has above the ground between the plants.
 *
 * Source: choice of ours; FAO-56 gives fc of orchards at mid season only.
 */
function coverGround(curve: StripCurve, { canopy, coefficients }: CycleCurve, { from, to }: Span): void {
  if (canopy === null) return;
  const ground = Math.min(canopy.groundBasal ?? BARE_SOIL_COEFFICIENT, coefficients.mid);
  const whole = coefficients.mid - Math.min(ground, BARE_SOIL_COEFFICIENT);
  for (let d = from; d < to; d++) {
    const share = whole > 0 ? (curve.basal[d] - Math.min(ground, BARE_SOIL_COEFFICIENT)) / whole : 1;
    curve.covered[d] = canopy.cover * Math.min(1, Math.max(0, share));
  }
}

function onShortSurface(basal: Float64Array, climate: Float64Array, { from, to }: Span): void {
  for (let d = from; d < to; d++) basal[d] *= tallRatio(climate[d]);
}

/** A standing crop that is dormant, before its start and after its end: its dormant Kcb, on days that carry nothing else. */
export function drawDormancy(curve: StripCurve, { planting, earliest, dormantTo }: PlantedCycles): void {
  const { crop, canopy } = planting;
  if (dormantTo === null || !crop.dormantBasal) return;
  const height = crop.type === 'orchard' ? ((canopy ?? crop.canopy)?.height ?? crop.heightMax) : BARE_HEIGHT;
  const factor = heightFactor(height);
  for (let d = Math.max(0, earliest); d < Math.min(curve.basal.length, dormantTo); d++) {
    if (curve.planting[d] >= 0) continue;
    curve.basal[d] = crop.dormantBasal;
    curve.height[d] = height;
    curve.heightFactor[d] = factor;
  }
}

/** Weeds on the days of a cropped strip that carry no crop, growing or dormant. */
export function drawWeeds(curve: StripCurve): void {
  for (let d = 0; d < curve.basal.length; d++) {
    if (curve.planting[d] >= 0 || curve.basal[d] > 0) continue;
    curve.basal[d] = WEED_BASAL;
    curve.height[d] = WEED_HEIGHT;
    curve.heightFactor[d] = WEED_HEIGHT_FACTOR;
  }
}

/** Keeps the root depth of the planting before up to this one; before the first it is this planting's own first depth. */
export function holdRootDepth(rootDepth: Float64Array, from: number, { cycles, planting }: PlantedCycles, soil: Soil): number {
  if (cycles.length === 0) return from;
  const start = Math.max(0, cycles[0].start);
  const end = Math.min(rootDepth.length, cycles[cycles.length - 1].end);
  if (end <= start) return from;
  const before = from > 0 ? rootDepth[from - 1] : limited(rootDepthOf(planting.crop, 0), soil);
  rootDepth.fill(before, from, Math.max(from, start));
  rootDepth.fill(rootDepth[end - 1], end);
  return end;
}

/** Deepest root of a strip [m]: on the last day of one of its cycles, since roots do not become shallower within one. */
export function deepestRootOf({ rootDepth }: StripCurve, planted: readonly PlantedCycles[]): number {
  let deepest = rootDepth[0];
  for (const { cycles } of planted) {
    for (let k = 0; k < cycles.length; k++) {
      const last = Math.min(rootDepth.length, cycles[k].end) - 1;
      if (last >= 0 && rootDepth[last] > deepest) deepest = rootDepth[last];
    }
  }
  return deepest;
}

/**
 * Fills what the soil holds to the roots and to the scheduling depth, anew only where a depth has moved.
 *
 * @param deepest deepest root of the run [m]
 */
export function fillAvailable(curve: StripCurve, soil: Soil, deepest: number): void {
  const { rootDepth, scheduleDepth: schedule, available, scheduleAvailable } = curve;
  const profile = profileOf(soil);
  for (let d = 0; d < rootDepth.length; ) {
    const root = rootDepth[d];
    const asked = schedule[d];
    let to = d + 1;
    while (to < rootDepth.length && rootDepth[to] === root && schedule[to] === asked) to++;
    const toRoot = availableTo(profile, root);
    const depth = Math.max(root, Math.min(asked, deepest));
    const toSchedule = depth === root ? toRoot : availableTo(profile, depth);
    if (to === d + 1) {
      available[d] = toRoot;
      scheduleAvailable[d] = toSchedule;
    } else {
      available.fill(toRoot, d, to);
      scheduleAvailable.fill(toSchedule, d, to);
    }
    d = to;
  }
  curve.deepestAvailable = availableTo(profile, deepest);
}
