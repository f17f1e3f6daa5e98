/**
 * The single crop coefficient: transpiration and the mean evaporation of the soil in one number (FAO-56 chapter 6).
 */
import { initialCoefficient, type SoilTexture } from './initial-coefficient.ts';

/** Kc above Kcb where a table lists only one of them: bare initial stage, and mid and end (FAO-56 Table 18). */
const INITIAL_ABOVE_BASAL = 0.15;
const LATER_ABOVE_BASAL = 0.05;

/** Rain below this share of the day's reference ET does not count as a wetting (FAO-56, text of Eq. 77). */
const LEAST_RAIN = 0.2;

export interface SingleCoefficients {
  readonly initial: number;
  readonly mid: number;
  readonly end: number;
}

/**
 * Single coefficients of a crop whose table lists basal ones only.
 *
 *   Kc ini = Kcb + 0.15, Kc mid = Kcb + 0.05, Kc end = Kcb + 0.05
 *
 * Missing: NaN in any input gives NaN there.
 *
 * @example singleFromBasal({ initial: 0.15, mid: 1.1, end: 0.25 }) // { initial: 0.3, mid: 1.15, end: 0.3 }
 * Source: FAO-56 Table 18 turned round (mid of full cover, end of infrequent wetting; the initial stage as its annual crops).
 */
export function singleFromBasal(basal: SingleCoefficients): SingleCoefficients {
  const rounded = (value: number) => Math.round(value * 1000) / 1000;
  return {
    initial: rounded(basal.initial + INITIAL_ABOVE_BASAL),
    mid: rounded(basal.mid + LATER_ABOVE_BASAL),
    end: rounded(basal.end + LATER_ABOVE_BASAL),
  };
}

/**
 * Kcb from a single coefficient, where a table lists only that.
 *
 *   mid: Kc − 0.05 over full cover (more than 80 %), Kc − 0.10 below; end: Kc − 0.05 wetted seldom, Kc − 0.10 often; bare annual start: 0.15
 *
 * Missing: NaN gives NaN.
 *
 * @param single Kc [1]
 * @param dense cover above 80 % (mid), or seldom wetted (end)
 * @returns [1]
 * @example basalFromSingle(1.15, true) // 1.1
 * Source: FAO-56 Table 18.
 */
export function basalFromSingle(single: number, dense: boolean): number {
  return Math.round((single - (dense ? LATER_ABOVE_BASAL : 2 * LATER_ABOVE_BASAL)) * 1000) / 1000;
}

/**
 * Mean interval between wettings of a stage.
 *
 *   tw = L / (n + 0.5)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param days length of the stage L [d]
 * @param events wettings in it n
 * @returns [d]
 * @example wettingInterval(30, 4) // 6.67
 * Source: FAO-56 Annex 7, Eq. 7-7.
 */
export function wettingInterval(days: number, events: number): number {
  return days / (events + 0.5);
}

/** Rain of a stage as wettings: how many, and how much [mm]. */
export interface Wettings {
  readonly count: number;
  readonly depth: number;
}

/**
 * Rain events of days `from … to − 1`: days with more rain than a fifth of the reference ET.
 *
 * @param precipitation [day], mm d⁻¹
 * @param referenceEt [day], mm d⁻¹
 * @example rainEvents(Float64Array.of(0, 5, 0.5), Float64Array.of(4, 4, 4), 0, 3) // { count: 1, depth: 5 }
 * Source: FAO-56, text of Eq. 77 (rain below 0.2 ETo may be ignored).
 */
export function rainEvents(precipitation: Float64Array, referenceEt: Float64Array, from: number, to: number): Wettings {
  let count = 0;
  let depth = 0;
  for (let d = from; d < to; d++) {
    if (precipitation[d] <= LEAST_RAIN * referenceEt[d]) continue;
    count++;
    depth += precipitation[d];
  }
  return { count, depth };
}

export interface InitialStage {
  /** length of the stage in the run [d] */
  readonly days: number;
  /** mean reference ET [mm d⁻¹] */
  readonly referenceEt: number;
  readonly rain: Wettings;
  readonly irrigation: Wettings;
  /** fw of the irrigation [1] */
  readonly wettedFraction: number;
  readonly texture: SoilTexture;
}

/**
 * Kc ini of a stage from its wettings.
 *
 *   tw = L / (n + 0.5); Kc ini by Annex 7 for the mean infiltrated depth; × mean wetted fraction, events weighted alike
 *
 * An irrigation that wets a share fw of the surface infiltrates deeper there, Iw = I / fw. Missing: NaN in a number gives NaN out.
 *
 * @returns at most 1.15 [1]
 * Source: FAO-56 Annex 7 with Eq. 7-7, Eq. 59, 60 and 61; the mean over rain and partial wetting is a choice of ours.
 */
export function initialFromWettings(stage: InitialStage): number {
  const { rain, irrigation, wettedFraction } = stage;
  const events = rain.count + irrigation.count;
  const interval = wettingInterval(stage.days, events);
  const depth = events > 0 ? (rain.depth + irrigation.depth / wettedFraction) / events : 0;
  const wetted = events > 0 ? (rain.count + irrigation.count * wettedFraction) / events : 1;
  return wetted * initialCoefficient({ interval, referenceEt: stage.referenceEt }, stage.texture, depth);
}
