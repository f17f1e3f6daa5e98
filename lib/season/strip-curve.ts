/**
 * The strips of a parcel and the crops on them, day by day.
 */
import { isoDate } from '../base/civil-date.ts';
import { RangeViolation } from '../base/errors.ts';
import { layObserved } from '../crop/observed-cover.ts';
import { saltStress } from '../crop/salinity.ts';
import { findOverfullDay, type PlantingSpan, planStrips } from '../crop/strips.ts';
import { fillCapillaryRise } from './capillary.ts';
import { clearGrowth, deepestRootOf, drawCycle, drawDormancy, drawWeeds, fillAvailable, holdRootDepth, type Span } from './curve-rows.ts';
import { canopyOf, cycleCurve } from './cycle-curve.ts';
import { drawBareGround } from './initial-wetting.ts';
import type { PackedSeason } from './pack.ts';
import { clearPractice, drawDeliveries, drawPractice, hasPractice } from './practice-rows.ts';
import { cutShort, followsWeather, type PlantedCycles, plantedCycles } from './stage-days.ts';
import type { ApplicationMethod, ParcelInput, Planting, Soil } from './types.ts';

export type { PlantedCycles } from './stage-days.ts';

/** A strip of a parcel for a run. */
export interface StripPlan {
  readonly share: number;
  readonly planted: readonly PlantedCycles[];
}

/** The plantings of a parcel on the run's time axis. */
export interface ParcelPlan {
  readonly strips: readonly StripPlan[];
  /** every planting in the order of the parcel's list, those outside the run too */
  readonly plantings: readonly PlantedCycles[];
  /** true when nothing in it comes from the parcel's weather: the same object serves every parcel with the same plantings */
  readonly shared: boolean;
}

/** Plans kept for a season, so that parcels on the same crop, calendar and dates share one; and what the rows were left like. */
interface Kept {
  readonly plans: Map<string, ParcelPlan>;
  readonly numbers: WeakMap<object, number>;
  numbered: number;
  /** rows that most strips leave alone hold something */
  touched: boolean;
  /** what the rows were drawn from, so that an equal strip under the same weather need not be drawn again; null where the parcel has rows of its own */
  drawn: {
    readonly plan: StripPlan;
    readonly soil: Soil;
    readonly method: ApplicationMethod;
    readonly sky: ParcelInput;
    readonly deepest: number;
  } | null;
}

const MOST_PLANS = 4000;
const keptOf = new WeakMap<PackedSeason, Kept>();

function kept(season: PackedSeason): Kept {
  let known = keptOf.get(season);
  if (known === undefined) {
    known = { plans: new Map(), numbers: new WeakMap(), numbered: 0, touched: true, drawn: null };
    keptOf.set(season, known);
  }
  return known;
}

/**
 * Lays the plantings of a parcel on the run's time axis and on strips (`planStrips`).
 *
 * Calendars that follow the weather read `season.weather`: place the parcel's weather first. Parcels whose plantings are equal, and follow no
 * weather, get the same object. A planting without a harvest date whose end the weather decides makes way for the next on its land.
 *
 * @throws {RangeViolation} naming parcel and date when the shares planted at one time exceed the parcel
 */
export function planParcel(season: PackedSeason, parcel: ParcelInput): ParcelPlan {
  if (parcel.plantings.some(({ calendar }) => followsWeather(calendar))) return makePlan(season, parcel, false);
  const store = kept(season);
  let key = '';
  for (const planting of parcel.plantings) key += keyOf(store, planting);
  const known = store.plans.get(key);
  if (known !== undefined) return known;
  if (store.plans.size >= MOST_PLANS) store.plans.clear();
  const plan = makePlan(season, parcel, true);
  store.plans.set(key, plan);
  return plan;
}

function keyOf(store: Kept, planting: Planting): string {
  const { crop, calendar, plantingDate, harvestDate, cutDates, areaShare } = planting;
  const plain = `${numberOf(store, crop)}/${numberOf(store, calendar)}/${plantingDate}/${harvestDate}/${cutDates.length > 0 ? cutDates.join() : ''}/${areaShare};`;
  if (!hasPractice(planting) && planting.canopy === undefined) return plain;
  const { irrigation, mulch, canopy, preIrrigation, germination } = planting;
  return plain + JSON.stringify([irrigation, mulch, canopy, preIrrigation, germination]);
}

function numberOf(store: Kept, thing: object): number {
  let number = store.numbers.get(thing);
  if (number === undefined) {
    number = store.numbered++;
    store.numbers.set(thing, number);
  }
  return number;
}

function makePlan(season: PackedSeason, parcel: ParcelInput, shared: boolean): ParcelPlan {
  const plantings = parcel.plantings.map((planting, index) => plantedCycles(season, planting, index));
  let spans = spansOf(plantings, season.input.dayCount);
  for (let overfull = findOverfullDay(spans); overfull; overfull = findOverfullDay(spans)) {
    const { day, sum } = overfull;
    const yields = plantings.findIndex((planted) => makesWay(planted, day));
    if (yields < 0) {
      throw new RangeViolation(
        `plantings of parcel ${parcel.code} cover ${sum} of its area on ${isoDate(season.firstDay + day)}, more than 1: shorten a planting or lower an area share`,
      );
    }
    plantings[yields] = cutShort(plantings[yields], day);
    spans = spansOf(plantings, season.input.dayCount);
  }
  const strips = planStrips(spans).map((strip) => ({ share: strip.share, planted: strip.plantings.map((k) => plantings[k]) }));
  return { strips, plantings, shared };
}

function spansOf(plantings: readonly PlantedCycles[], days: number): PlantingSpan[] {
  return plantings.flatMap(({ planting, index, cycles }) => {
    const start = cycles[0]?.start ?? days;
    const end = cycles[cycles.length - 1]?.end ?? 0;
    return start < days && end > 0 ? [{ planting: index, start, end, share: planting.areaShare }] : [];
  });
}

/** A planting whose end the weather decides, without a harvest date, ends where another begins that needs its land. */
function makesWay({ planting, cycles }: PlantedCycles, day: number): boolean {
  if (planting.harvestDate !== null || !followsWeather(planting.calendar) || cycles.length === 0) return false;
  return cycles[0].start < day && cycles[cycles.length - 1].end > day;
}

/**
 * Fills `season.curve` for one strip, from the weather in `season.weather`.
 *
 * Between plantings nothing grows: Kcb 0, height of stubble, unless the settings let weeds stand or a standing crop is dormant; the root zone keeps the
 * depth of the planting before until the next one starts, and has the first planting's depth before that. Annual roots grow (Eq. 8-1); perennials, orchards
 * and forage keep their full depth all season, through cuts. A hard layer limits every depth.
 *
 * On single coefficients bare ground has the Kc of its rain (`drawBareGround`).
 *
 * Observed basal coefficients of the parcel lie over the curve of each planting (`layObserved`); on single coefficients they do not count.
 *
 * @param strips all strips of the parcel; recorded deliveries are shared among them
 * @returns deepest root of the run [m]
 */
export function drawCurve(season: PackedSeason, parcel: ParcelInput, plan: StripPlan, strips: readonly StripPlan[] = [plan]): number {
  const { curve, input } = season;
  const { soil } = parcel;
  const store = kept(season);
  const { drawn } = store;
  if (
    drawn &&
    drawn.plan === plan &&
    drawn.soil === soil &&
    drawn.method === parcel.method &&
    drawn.sky === season.sky &&
    !hasOwn(season, parcel)
  ) {
    return drawn.deepest;
  }
  clearGrowth(curve, soil, plan.planted[0]?.planting.crop, soleSpan(plan, input.dayCount));
  clearPractice(curve, parcel.method, store.touched);
  store.touched = touches(season, parcel, plan);
  let from = 0;
  for (const planted of plan.planted) {
    for (let k = 0; k < planted.cycles.length; k++)
      drawCycle(season, soil, planted, planted.cycles[k], cycleCurve(season, parcel, planted, k));
    from = holdRootDepth(curve.rootDepth, from, planted, soil);
  }
  for (const planted of plan.planted) drawDormancy(curve, planted);
  if (input.settings.fallow === 'weeds' && plan.planted.length > 0) drawWeeds(curve);
  for (const planted of plan.planted) drawPractice(season, planted);
  if (input.settings.coefficient === 'single') drawBareGround(season, parcel);
  const deepest = deepestRootOf(curve, plan.planted);
  fillAvailable(curve, soil, deepest);
  drawOwn(season, parcel, plan);
  drawDeliveries(season, parcel, plan, strips);
  store.drawn = season.sky === null || hasOwn(season, parcel) ? null : { plan, soil, method: parcel.method, sky: season.sky, deepest };
  return deepest;
}

/** Days of the planting that a strip carries alone; none where it carries several, or none. */
function soleSpan({ planted }: StripPlan, days: number): Span {
  if (planted.length !== 1 || planted[0].cycles.length === 0) return { from: 0, to: 0 };
  const { cycles } = planted[0];
  return { from: Math.max(0, cycles[0].start), to: Math.min(days, cycles[cycles.length - 1].end) };
}

/** Whether a parcel has rows of its own: recorded water, salt, a water table, observed cover. */
function hasOwn({ input }: PackedSeason, parcel: ParcelInput): boolean {
  const { water, capillaryRise, salinity } = input.settings;
  if ((water ?? 'rule') !== 'rule' || capillaryRise || (salinity ?? 'off') !== 'off') return true;
  return parcel.observedBasal !== undefined;
}

/** Whether a strip writes into the rows that most strips leave alone. */
function touches(season: PackedSeason, parcel: ParcelInput, plan: StripPlan): boolean {
  return hasOwn(season, parcel) || plan.planted.some(({ planting }) => hasPractice(planting) || canopyOf(planting) !== null);
}

/** Rows of what the parcel itself has: observed cover, salt, a water table. */
function drawOwn(season: PackedSeason, parcel: ParcelInput, plan: StripPlan): void {
  const { curve, input } = season;
  const { observedBasal, salinity } = parcel;
  for (const { planting, cycles } of plan.planted) {
    if (cycles.length === 0) continue;
    const [from, to] = [cycles[0].start, cycles[cycles.length - 1].end];
    if (observedBasal && input.settings.coefficient !== 'single' && layObserved(curve.basal, from, to, observedBasal) > 0) {
      curve.covered.fill(Number.NaN, Math.max(0, from), Math.max(0, to));
    }
    if (salinity && planting.crop.salinity && (input.settings.salinity ?? 'off') !== 'off') {
      const response = Number.isNaN(planting.crop.yieldResponse) ? 1 : planting.crop.yieldResponse;
      curve.saltStress.fill(saltStress(salinity.soil, planting.crop.salinity, response), Math.max(0, from), Math.max(0, to));
    }
  }
  if (input.settings.capillaryRise) fillCapillaryRise(parcel, curve.rootDepth, curve.capillaryMost);
}
