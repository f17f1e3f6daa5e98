/**
 * The strips of a parcel and the crops on them, day by day.
 */
import { dayNumber, isoDate } from '../base/civil-date.ts';
import { RangeViolation } from '../base/errors.ts';
import { adjustedCoefficient, END_ADJUSTED_FROM, heightFactor } from '../crop/climate-adjustment.ts';
import {
  type Cycle,
  cyclesOf,
  developmentProgress,
  growingRootDepth,
  plantHeight,
  type StageCoefficients,
  stageCoefficient,
} from '../crop/curve.ts';
import { scheduleDepth } from '../crop/root-zone.ts';
import { findOverfullDay, type PlantingSpan, planStrips } from '../crop/strips.ts';
import type { StripGround } from './day.ts';
import { MARK, type PackedSeason, type ParcelWeather, type StripCurve } from './pack.ts';
import type { Crop, ParcelInput, Planting, Soil } from './types.ts';

/** Height at which ground without a crop meets the wind in Kc max [m]: stubble and clods. Choice of ours; FAO-56 gives none. */
const BARE_HEIGHT = 0.05;

/** p of ground without a crop, used only to show a readily available water. Source: FAO-56, text of Eq. 83 (0.5 for many crops). */
const BARE_FRACTION = 0.5;

const BARE_HEIGHT_FACTOR = heightFactor(BARE_HEIGHT);

/** A planting on the run's time axis. */
export interface PlantedCycles {
  readonly planting: Planting;
  readonly cycles: readonly Cycle[];
  /** first day on which no irrigation starts or goes on; Infinity for none */
  readonly lastIrrigation: number;
}

/** A strip of a parcel for a run. */
export interface StripPlan {
  readonly share: number;
  readonly planted: readonly PlantedCycles[];
}

/**
 * Lays the plantings of a parcel that touch the run on strips (`planStrips`).
 *
 * @throws {RangeViolation} naming parcel and date when the shares planted at one time exceed the parcel
 */
export function layStrips(season: PackedSeason, parcel: ParcelInput): StripPlan[] {
  const all = parcel.plantings.map((planting) => plantedCycles(season, planting));
  const spans: PlantingSpan[] = [];
  for (const [k, { planting, cycles }] of all.entries()) {
    const start = cycles[0]?.start ?? season.input.dayCount;
    const end = cycles[cycles.length - 1]?.end ?? 0;
    if (start < season.input.dayCount && end > 0) spans.push({ planting: k, start, end, share: planting.areaShare });
  }
  const overfull = findOverfullDay(spans);
  if (overfull) {
    const day = isoDate(season.firstDay + overfull.day);
    throw new RangeViolation(
      `plantings of parcel ${parcel.code} cover ${overfull.sum} of its area on ${day}, more than 1: shorten a planting or lower an area share`,
    );
  }
  return planStrips(spans).map(({ share, plantings }) => ({ share, planted: plantings.map((k) => all[k]) }));
}

function plantedCycles(season: PackedSeason, planting: Planting): PlantedCycles {
  const { crop, calendar } = planting;
  const start = dayNumber(planting.plantingDate) - season.firstDay;
  const harvest = planting.harvestDate === null ? Number.POSITIVE_INFINITY : dayNumber(planting.harvestDate) - season.firstDay;
  const repeats = crop.type === 'forage-cut';
  const cuts = planting.cutDates.map((date) => dayNumber(date) - season.firstDay);
  const cycles = cyclesOf({ start, harvest, lengths: calendar, later: calendar.laterCycle, cuts, repeats, runEnd: season.input.dayCount });
  const open = repeats || cuts.length > 0 || crop.lastIrrigation >= 1;
  const toLate = calendar.initial + calendar.development + calendar.mid;
  return {
    planting,
    cycles,
    lastIrrigation: open ? Number.POSITIVE_INFINITY : start + toLate + crop.lastIrrigation * calendar.late,
  };
}

/** Stage of which a climate is taken, with what of it lies in the run: days `from … to − 1`. */
export interface StageClimate {
  readonly from: number;
  readonly to: number;
  /** mean u2 [m s⁻¹], NaN when no day of the stage is in the run */
  readonly windSpeed2m: number;
  /** mean RHmin [%], likewise */
  readonly humidityMinimum: number;
}

/**
 * Climate of the mid or late stage of a cycle: means over those of its days that lie in the run and in the cycle.
 *
 * @param from first day of the stage
 * @param length stage length [d]
 */
function stageClimate(weather: ParcelWeather, cycle: Cycle, from: number, length: number): StageClimate {
  const days = weather.windSpeed2m.length;
  const first = Math.max(0, from);
  const end = Math.min(days, cycle.end, from + length);
  const count = end - first;
  if (count <= 0) return { from: first, to: first, windSpeed2m: Number.NaN, humidityMinimum: Number.NaN };
  return {
    from: first,
    to: end,
    windSpeed2m: (weather.windSum[end] - weather.windSum[first]) / count,
    humidityMinimum: (weather.humiditySum[end] - weather.humiditySum[first]) / count,
  };
}

/** Mid and late stage of a cycle as the climate adjustment sees them. */
export function stageClimates(weather: ParcelWeather, cycle: Cycle): { mid: StageClimate; late: StageClimate } {
  const mid = cycle.start + cycle.lengths.initial + cycle.lengths.development;
  return {
    mid: stageClimate(weather, cycle, mid, cycle.lengths.mid),
    late: stageClimate(weather, cycle, mid + cycle.lengths.mid, cycle.lengths.late),
  };
}

/**
 * Basal coefficients of a cycle in the climate of the parcel.
 *
 * Kcb mid is adjusted to the mid stage, Kcb end to the late stage and only where the table gives at least 0.45. A stage with no day in the run keeps
 * its table value.
 *
 * Source: FAO-56 Eq. 70.
 */
export function cycleCoefficients(crop: Crop, climates: { mid: StageClimate; late: StageClimate }): StageCoefficients {
  const { mid, late } = climates;
  return {
    initial: crop.basalInitial,
    mid: adjustedCoefficient(crop.basalMid, mid.windSpeed2m, mid.humidityMinimum, crop.heightMax),
    end:
      crop.basalEnd < END_ADJUSTED_FROM
        ? crop.basalEnd
        : adjustedCoefficient(crop.basalEnd, late.windSpeed2m, late.humidityMinimum, crop.heightMax),
  };
}

/**
 * Fills `season.curve` for one strip, from the weather in `season.weather`.
 *
 * Between plantings nothing grows: Kcb 0, height `BARE_HEIGHT`; the root zone keeps the depth of the planting before until the next one starts, and
 * has the first planting's depth before that. Annual roots grow (Eq. 8-1); perennials, orchards and forage keep their full depth all season, through
 * cuts. A hard layer limits every depth.
 *
 * @returns deepest root of the run [m]
 */
export function drawCurve(season: PackedSeason, parcel: ParcelInput, plan: StripPlan): number {
  const { curve } = season;
  clearCurve(curve, parcel.soil, plan);
  let from = 0;
  for (const planted of plan.planted) {
    for (const cycle of planted.cycles) drawCycle(season, parcel.soil, planted, cycle);
    from = holdRootDepth(curve.rootDepth, from, planted, parcel.soil);
  }
  let deepest = 0;
  for (let d = 0; d < curve.rootDepth.length; d++) deepest = Math.max(deepest, curve.rootDepth[d]);
  return deepest;
}

function clearCurve(curve: StripCurve, soil: Soil, plan: StripPlan): void {
  curve.basal.fill(0);
  curve.height.fill(BARE_HEIGHT);
  curve.heightFactor.fill(BARE_HEIGHT_FACTOR);
  curve.mark.fill(0);
  curve.tableFraction.fill(plan.planted[0]?.planting.crop.depletionFraction ?? BARE_FRACTION);
  curve.rootDepth.fill(bareDepth(soil));
  curve.scheduleDepth.fill(0);
}

/** Depth of the store of ground that carries nothing all run: as deep as it takes to hold the evaporable water, at least Ze, at most the hard layer. */
function bareDepth(soil: Soil): number {
  const holding = soil.totalEvaporableWater / (1000 * (soil.fieldCapacity - soil.wiltingPoint));
  return limited(Math.max(soil.evaporationDepth, holding), soil);
}

function limited(depth: number, soil: Soil): number {
  return Number.isNaN(soil.rootLimit) ? depth : Math.min(depth, soil.rootLimit);
}

function rootDepthOf(crop: Crop, progress: number): number {
  return crop.type === 'annual' ? growingRootDepth(crop.rootDepthMin, crop.rootDepthMax, progress) : crop.rootDepthMax;
}

function drawCycle(season: PackedSeason, soil: Soil, planted: PlantedCycles, cycle: Cycle): void {
  const { curve, weather } = season;
  const { crop } = planted.planting;
  const last = Math.min(season.input.dayCount, cycle.end);
  if (last <= 0) return;
  const coefficients = cycleCoefficients(crop, stageClimates(weather, cycle));
  const plantingDay = planted.cycles[0].start;
  let height = Number.NaN;
  let factor = Number.NaN;
  for (let d = Math.max(0, cycle.start); d < last; d++) {
    const day = d - cycle.start + 1;
    const progress = developmentProgress(cycle.lengths, day);
    const basal = stageCoefficient(cycle.lengths, coefficients, day);
    const reached = plantHeight(basal, coefficients.mid, crop.heightMax, progress);
    if (reached !== height) factor = heightFactor(reached);
    height = reached;
    curve.basal[d] = basal;
    curve.height[d] = height;
    curve.heightFactor[d] = factor;
    curve.rootDepth[d] = limited(rootDepthOf(crop, progress), soil);
    curve.scheduleDepth[d] = limited(scheduleDepth(curve.rootDepth[d], crop.rootDepthMax), soil);
    curve.tableFraction[d] = crop.depletionFraction;
    curve.mark[d] = MARK.planted | (d === plantingDay ? MARK.firstDay : 0) | (d < planted.lastIrrigation ? MARK.mayIrrigate : 0);
  }
}

/** Keeps the root depth of the planting before up to this one; before the first it is this planting's own first depth. */
function holdRootDepth(rootDepth: Float64Array, from: number, planted: PlantedCycles, soil: Soil): number {
  const { cycles, planting } = planted;
  const start = Math.max(0, cycles[0].start);
  const end = Math.min(rootDepth.length, cycles[cycles.length - 1].end);
  const before = from > 0 ? rootDepth[from - 1] : limited(rootDepthOf(planting.crop, 0), soil);
  rootDepth.fill(before, from, Math.max(from, start));
  rootDepth.fill(rootDepth[end - 1], end);
  return end;
}

/** What stays the same on the strips of a parcel; `deepestRoot` is set per strip. */
export function groundOf(parcel: ParcelInput): StripGround {
  const { soil, method } = parcel;
  return {
    fieldCapacity: soil.fieldCapacity,
    wiltingPoint: soil.wiltingPoint,
    readilyEvaporable: soil.readilyEvaporableWater,
    totalEvaporable: soil.totalEvaporableWater,
    deepestRoot: Number.NaN,
    methodWetted: method.wettedFraction,
    underCanopy: method.underCanopy,
    maximumDailyDepth: method.maximumDailyDepth,
    triggerFraction: method.triggerFraction,
  };
}
