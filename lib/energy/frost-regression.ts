/**
 * The minimum of a night from the evening before, by a line fitted to the station's own nights.
 */
import { ShapeError } from '../base/errors.ts';

/** Evenings with the minimum that followed, same length each [°C]. */
export interface NightRecord {
  readonly airTemperature: ArrayLike<number>;
  readonly dewPoint: ArrayLike<number>;
  readonly minimum: ArrayLike<number>;
}

/** Tmin = a T0 + b Td + c. */
export interface MinimumLine {
  /** a [1] */
  readonly ofAirTemperature: number;
  /** b [1] */
  readonly ofDewPoint: number;
  /** c [°C] */
  readonly constant: number;
  /** nights it was fitted to */
  readonly nights: number;
  /** root of the mean squared error of a night that was left out of the fit [°C] */
  readonly error: number;
}

/** Fewest nights that a line is fitted to. Choice of ours: ten nights for each of two slopes. */
export const FEWEST_NIGHTS = 20;

type Three = readonly [number, number, number];

/**
 * Line of the night's minimum on evening temperature and dew point, by least squares, with the error of leaving each night out in turn.
 *   Tmin = a T0 + b Td + c
 *
 * The error of a left-out night comes from the whole fit by its leverage: e / (1 − h).
 *
 * Missing: a night with NaN is passed over.
 *
 * @returns null with fewer than 20 nights, or when the evenings do not span both temperatures
 * @throws {ShapeError} when the three are not equally long
 * Source: form after Allen (1957) as in Snyder & de Melo-Abreu (2005), Frost Protection, FAO, volume 2 (recalled; there the evening is two hours after
 * sunset); leave-one-out residual: Cook & Weisberg (1982), Residuals and Influence in Regression (recalled).
 */
export function fitMinimumLine({ airTemperature, dewPoint, minimum }: NightRecord): MinimumLine | null {
  const { length } = minimum;
  if (airTemperature.length !== length || dewPoint.length !== length) {
    throw new ShapeError(`${airTemperature.length} evening temperatures and ${dewPoint.length} dew points for ${length} minima`);
  }
  const whole = Array.from({ length }, (_, i) => i).filter((i) => !Number.isNaN(airTemperature[i] + dewPoint[i] + minimum[i]));
  if (whole.length < FEWEST_NIGHTS) return null;
  const centre = [airTemperature, dewPoint, minimum].map((series) => mean(whole, series)) as unknown as Three;
  const rows = whole.map((i): Three => [airTemperature[i] - centre[0], dewPoint[i] - centre[1], minimum[i] - centre[2]]);
  const sum = (pick: (row: Three) => number) => rows.reduce((total, row) => total + pick(row), 0);
  const [tt, td, dd] = [sum(([t]) => t * t), sum(([t, d]) => t * d), sum(([, d]) => d * d)];
  const [ty, dy] = [sum(([t, , y]) => t * y), sum(([, d, y]) => d * y)];
  const determinant = tt * dd - td * td;
  if (!(determinant > 1e-9 * tt * dd)) return null;
  const a = (ty * dd - dy * td) / determinant;
  const b = (dy * tt - ty * td) / determinant;
  const squares = sum(([t, d, y]) => {
    const leverage = 1 / rows.length + (t * t * dd - 2 * t * d * td + d * d * tt) / determinant;
    return ((y - a * t - b * d) / (1 - leverage)) ** 2;
  });
  return {
    ofAirTemperature: a,
    ofDewPoint: b,
    constant: centre[2] - a * centre[0] - b * centre[1],
    nights: rows.length,
    error: Math.sqrt(squares / rows.length),
  };
}

function mean(of: readonly number[], series: ArrayLike<number>): number {
  return of.reduce((sum, i) => sum + series[i], 0) / of.length;
}

/**
 * Minimum that a fitted line gives.
 *   Tmin = a T0 + b Td + c
 *
 * @returns Tmin [°C], not above T0
 * @example minimumByLine({ ofAirTemperature: 0.5, ofDewPoint: 0.3, constant: -4, nights: 30, error: 1.5 }, 8, -5) // -1.5
 * Source: as `fitMinimumLine`.
 */
export function minimumByLine(line: MinimumLine, airTemperature: number, dewPoint: number): number {
  return Math.min(airTemperature, line.ofAirTemperature * airTemperature + line.ofDewPoint * dewPoint + line.constant);
}

/** Mean and root mean squared error of an estimate over nights that have both. */
export interface EstimateError {
  readonly nights: number;
  /** estimate less observed [°C] */
  readonly bias: number;
  /** [°C] */
  readonly error: number;
}

/**
 * Error of an estimate of the minimum over past nights.
 *
 * @returns NaN for bias and error where no night has both
 * @example estimateError([1, 2], [0, 2]) // { nights: 2, bias: 0.5, error: Math.SQRT1_2 }
 * Source: definitions of mean error and root mean squared error.
 */
export function estimateError(estimated: ArrayLike<number>, observed: ArrayLike<number>): EstimateError {
  let [nights, sum, squares] = [0, 0, 0];
  for (let i = 0; i < observed.length; i++) {
    const error = estimated[i] - observed[i];
    if (Number.isNaN(error)) continue;
    nights++;
    sum += error;
    squares += error * error;
  }
  return { nights, bias: sum / nights, error: Math.sqrt(squares / nights) };
}
