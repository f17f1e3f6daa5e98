/**
 * One strip of a parcel through one day: the only place where the soil water of a season is stepped.
 *
 * Order of the day: roots grow → rain and its runoff → irrigation is decided → the root zone refills and drains → the surface
 * layer is wetted → evaporation and transpiration → the balance is drawn up. Rain and irrigation fall early in the day, and
 * water above field capacity drains before the day's ET (see `refilledDepletion`). Irrigation refills the soil down to the scheduling depth
 * (see `scheduleDepth`), so what of it passes a shallow root zone is kept below it and nothing of it is lost. The dryness of the bare surface does
 * not by itself call for water: watering it would only feed evaporation again; but a root zone so dry that the crop runs short
 * always does (common practice, no source).
 *
 * Two stores close the balance exactly while the root depth changes: the root zone (depletion Dr) and the soil below it down to the deepest root of
 * the run (depletion Db). The surface layer (depletion De) is the separate account that FAO-56 keeps of the top of the root zone.
 */
import { coefficientMaximum, exposedWettedFraction, fractionCovered } from '../crop/cover.ts';
import {
  depletionFraction,
  drainage,
  movedDepletion,
  refilledDepletion,
  stressCoefficient,
  totalAvailableWater,
} from '../crop/root-zone.ts';
import {
  driedSurfaceDepletion,
  evaporationReduction,
  evaporationCoefficient as soilEvaporation,
  wettedSurfaceDepletion,
} from '../crop/surface-layer.ts';
import type { Trace } from './types.ts';
import { recordUse } from './use-working.ts';
import { recordWetting } from './wetting-working.ts';

/** Root-zone depletion [mm] at or below which an irrigation counts as finished, and none is started. */
const REFILLED = 0.5;

/** Rain [mm d⁻¹] above which the whole surface is wetted. Source: FAO-56, text of Eq. 75 (3 … 4 mm). */
export const WETTING_RAIN = 3;

/** What does not change on a strip during a run. Water contents [m³ m⁻³], depths [m], water [mm], fractions 0–1. */
export interface StripGround {
  fieldCapacity: number;
  wiltingPoint: number;
  /** REW [mm] */
  readilyEvaporable: number;
  /** TEW [mm] */
  totalEvaporable: number;
  /** lower edge of the soil below the root zone [m] */
  deepestRoot: number;
  /** fw of the application method */
  methodWetted: number;
  underCanopy: boolean;
  /** mm d⁻¹, net */
  maximumDailyDepth: number;
  triggerFraction: number;
}

/** What a strip carries from one day to the next. */
export interface StripState {
  /** Zr [m] */
  rootDepth: number;
  /** Dr [mm] */
  depletion: number;
  /** Db [mm], of the soil between the root zone and the deepest root */
  belowDepletion: number;
  /** De [mm] */
  surfaceDepletion: number;
  /** fw of the last wetting */
  wettedFraction: number;
  /** few of the last day: share of the surface that evaporates */
  exposedWetted: number;
  /** p of the last cropped day; the table value on the first day of a planting */
  depletionFraction: number;
  /** an irrigation is under way and goes on until the root zone is refilled */
  irrigating: boolean;
}

/** One day of one strip: what is given, and what leaves it for the parcel. Water [mm], coefficients and fractions [1]. */
export interface StripDay {
  /** mm d⁻¹ */
  referenceEt: number;
  /** climate part of Kc max, see `climateTerm` */
  climate: number;
  precipitation: number;
  surfaceRunoff: number;
  /** Kcb; 0 where nothing is planted */
  basal: number;
  /** m */
  height: number;
  /** (h/3)^0.3 */
  heightFactor: number;
  /** Zr of the day [m] */
  rootDepth: number;
  /** Zs, depth irrigation is scheduled over [m]; taken between Zr and the deepest root of the run */
  scheduleDepth: number;
  /** p of the table */
  tableFraction: number;
  planted: boolean;
  firstDay: boolean;
  mayIrrigate: boolean;

  /** Dr + Db as the day began */
  opening: number;
  /** TAW */
  available: number;
  /** I, net */
  irrigation: number;
  /** Dr after wetting and drainage, before the day's water use */
  refilled: number;
  /** De after wetting */
  wettedSurface: number;
  /** infiltrated rain less what of it percolates past the deepest root */
  effectivePrecipitation: number;
  deepPercolation: number;
  /** ETc, unstressed */
  cropEt: number;
  /** RAW */
  readilyAvailable: number;
  stress: number;
  transpiration: number;
  evaporation: number;
  /** Dr at the end of the day */
  closingDepletion: number;
  /** Db at the end of the day */
  closingBelow: number;
  /** what the day's water balance fails to close by */
  residual: number;
}

/** How the day's wetting went, told when someone asks for the working. */
export interface WettingRecord {
  readonly openingRootDepth: number;
  readonly openingDepletion: number;
  readonly openingBelow: number;
  /** depletion that came with the soil the roots grew into; negative when the root zone became shallower */
  readonly moved: number;
  readonly grownDepletion: number;
  readonly infiltration: number;
  readonly rainedDepletion: number;
  /** Zs [m], within the soil of the run */
  readonly scheduleDepth: number;
  /** depletion of the soil down to Zs after rain */
  readonly scheduleDepletion: number;
  /** De after rain */
  readonly rainedSurface: number;
  /** few of the day before */
  readonly openingExposed: number;
  /** depletion that is not the dryness of the bare surface: what calls for water */
  readonly drawnDepletion: number;
  /** p that the trigger was taken with */
  readonly triggerDepletionFraction: number;
  /** depletion at which an irrigation starts */
  readonly trigger: number;
  /** root-zone depletion above which the crop runs short: starts an irrigation too */
  readonly stressFrom: number;
  readonly wasIrrigating: boolean;
  /** rain leaving the root zone downwards */
  readonly rainExcess: number;
  /** irrigation leaving the root zone downwards, kept in the soil below */
  readonly irrigationExcess: number;
  readonly openingSurface: number;
}

/** How the day's water use went, told when someone asks for the working. */
export interface UseRecord {
  readonly wettedFraction: number;
  /** Kc max */
  readonly maximum: number;
  readonly covered: number;
  readonly exposedWetted: number;
  readonly reduction: number;
  readonly evaporationCoefficient: number;
  readonly depletionFraction: number;
  readonly closingSurface: number;
  readonly closingBelow: number;
}

/**
 * Takes one strip through one day.
 *
 * Reads the given part of `day`, fills the rest of it, and moves `state` on. With a trace every equation is recorded as it was
 * evaluated, from the very numbers it used; without one nothing is allocated.
 *
 * Missing: the given values must be finite; the caller has refused missing weather before.
 *
 * Source: FAO-56 chapters 7 and 8 and Annex 8; deviations stand with the equations in `lib/crop`.
 */
export function stepDay(ground: StripGround, state: StripState, day: StripDay, trace: Trace | null): void {
  wetStrip(ground, state, day, trace);
  spendWater(ground, state, day, trace);
}

/** Morning: roots grow, rain and irrigation fall, the root zone refills and drains, the surface layer is wetted. */
function wetStrip(ground: StripGround, state: StripState, day: StripDay, trace: Trace | null): void {
  const {
    rootDepth: openingRootDepth,
    depletion: openingDepletion,
    belowDepletion: openingBelow,
    surfaceDepletion: openingSurface,
  } = state;
  const wasIrrigating = state.irrigating;
  const growth = day.rootDepth - openingRootDepth;
  let moved = 0;
  if (growth > 0) moved = movedDepletion(openingBelow, ground.deepestRoot - openingRootDepth, growth);
  else if (growth < 0) moved = -movedDepletion(openingDepletion, openingRootDepth, -growth);
  const grownDepletion = openingDepletion + moved;
  const below = openingBelow - moved;
  const available = totalAvailableWater(ground.fieldCapacity, ground.wiltingPoint, day.rootDepth);

  const infiltration = day.precipitation - day.surfaceRunoff;
  const rainedDepletion = refilledDepletion(grownDepletion, infiltration, 0);
  const triggerDepletionFraction = day.firstDay ? day.tableFraction : state.depletionFraction;
  const rainExcess = drainage(grownDepletion, infiltration, 0);
  const rainKept = Math.min(below, rainExcess);
  const rainedBelow = below - rainKept;

  const schedule = Math.max(day.rootDepth, Math.min(day.scheduleDepth, ground.deepestRoot));
  const underRoots =
    schedule > day.rootDepth ? movedDepletion(rainedBelow, ground.deepestRoot - day.rootDepth, schedule - day.rootDepth) : 0;
  const scheduleDepletion = rainedDepletion + underRoots;
  const held = totalAvailableWater(ground.fieldCapacity, ground.wiltingPoint, schedule);
  const trigger = ground.triggerFraction * triggerDepletionFraction * held;
  const stressFrom = triggerDepletionFraction * available;
  const rainedSurface = wettedSurfaceDepletion(openingSurface, infiltration, 0, 1);
  const openingExposed = state.exposedWetted;
  const drawnDepletion = Math.max(0, scheduleDepletion - openingExposed * rainedSurface);
  const irrigates =
    day.mayIrrigate && scheduleDepletion > REFILLED && (wasIrrigating || drawnDepletion >= trigger || rainedDepletion > stressFrom);
  const irrigation = irrigates ? Math.min(scheduleDepletion, ground.maximumDailyDepth) : 0;
  const irrigationExcess = drainage(rainedDepletion, 0, irrigation);

  state.rootDepth = day.rootDepth;
  state.belowDepletion = Math.max(0, rainedBelow - irrigationExcess);
  state.depletionFraction = triggerDepletionFraction;
  state.irrigating = irrigates && scheduleDepletion - irrigation > REFILLED;
  if (irrigates) state.wettedFraction = ground.methodWetted;
  else if (day.precipitation > WETTING_RAIN) state.wettedFraction = 1;

  day.opening = openingDepletion + openingBelow;
  day.available = available;
  day.irrigation = irrigation;
  day.refilled = refilledDepletion(grownDepletion, infiltration, irrigation);
  day.wettedSurface = wettedSurfaceDepletion(openingSurface, infiltration, irrigation, ground.methodWetted);
  day.deepPercolation = rainExcess - rainKept;
  day.effectivePrecipitation = infiltration - day.deepPercolation;
  if (trace === null) return;
  const roots = { openingRootDepth, openingDepletion, openingBelow, moved, grownDepletion };
  const water = { infiltration, rainedDepletion, rainExcess, irrigationExcess, openingSurface };
  const surface = { rainedSurface, openingExposed, drawnDepletion };
  const decision = { ...surface, scheduleDepth: schedule, scheduleDepletion, triggerDepletionFraction, trigger, stressFrom, wasIrrigating };
  recordWetting(ground, day, { ...roots, ...water, ...decision }, trace);
}

/**
 * Day: evaporation and transpiration, and the balance. Together the two cannot take more than the root zone holds above wilting point: what is
 * left is transpired first, since the surface layer's own account reaches below the wilting point.
 */
function spendWater(ground: StripGround, state: StripState, day: StripDay, trace: Trace | null): void {
  const { basal, referenceEt, available, refilled, wettedSurface } = day;
  const { wettedFraction, belowDepletion: closingBelow } = state;
  const maximum = coefficientMaximum(basal, day.climate, day.heightFactor);
  const covered = fractionCovered(basal, maximum, day.height);
  const exposedWetted = exposedWettedFraction(covered, wettedFraction, ground.underCanopy);
  const reduction = evaporationReduction(wettedSurface, ground.readilyEvaporable, ground.totalEvaporable);
  const evaporationCoefficient = soilEvaporation({ reduction, basal, maximum, exposedWetted });

  const cropEt = (basal + evaporationCoefficient) * referenceEt;
  const fraction = day.planted ? depletionFraction(day.tableFraction, cropEt) : state.depletionFraction;
  const stress = day.planted ? stressCoefficient(refilled, available, fraction) : 1;
  const left = Math.max(0, available - refilled);
  const transpiration = Math.min(left, stress * basal * referenceEt);
  const evaporation = Math.min(left - transpiration, evaporationCoefficient * referenceEt);
  const closingSurface = driedSurfaceDepletion(wettedSurface, evaporation, exposedWetted, ground.totalEvaporable);
  const closingDepletion = Math.min(available, refilled + transpiration + evaporation);
  state.depletionFraction = fraction;
  state.exposedWetted = exposedWetted;
  state.surfaceDepletion = closingSurface;
  state.depletion = closingDepletion;

  day.cropEt = cropEt;
  day.readilyAvailable = fraction * available;
  day.stress = stress;
  day.transpiration = transpiration;
  day.evaporation = evaporation;
  day.closingDepletion = closingDepletion;
  day.closingBelow = closingBelow;
  const gain = day.opening - closingDepletion - closingBelow;
  day.residual = day.precipitation + day.irrigation - day.surfaceRunoff - evaporation - transpiration - day.deepPercolation - gain;
  if (trace === null) return;
  const surface = { wettedFraction, maximum, covered, exposedWetted, reduction, evaporationCoefficient, closingSurface };
  recordUse(ground, day, { ...surface, depletionFraction: fraction, closingBelow }, trace);
}

/** A strip day with every number unset. The NaNs keep the fields in double representation, so that the loop over days allocates nothing. */
export function emptyStripDay(): StripDay {
  const unset = Number.NaN;
  return {
    referenceEt: unset,
    climate: unset,
    precipitation: unset,
    surfaceRunoff: unset,
    basal: unset,
    height: unset,
    heightFactor: unset,
    rootDepth: unset,
    scheduleDepth: unset,
    tableFraction: unset,
    planted: false,
    firstDay: false,
    mayIrrigate: false,
    opening: unset,
    available: unset,
    irrigation: unset,
    refilled: unset,
    wettedSurface: unset,
    effectivePrecipitation: unset,
    deepPercolation: unset,
    cropEt: unset,
    readilyAvailable: unset,
    stress: unset,
    transpiration: unset,
    evaporation: unset,
    closingDepletion: unset,
    closingBelow: unset,
    residual: unset,
  };
}

/** A strip state with every number unset; see `emptyStripDay`. */
export function emptyStripState(): StripState {
  const unset = Number.NaN;
  return {
    rootDepth: unset,
    depletion: unset,
    belowDepletion: unset,
    surfaceDepletion: unset,
    wettedFraction: unset,
    exposedWetted: unset,
    depletionFraction: unset,
    irrigating: false,
  };
}
