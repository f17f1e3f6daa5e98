/**
 * The unit of a weather column whose header names none, told from its values.
 *
 * The limits are where no place on earth leaves two readings of the same numbers: no daily air temperature above 60 °C, no daily solar
 * radiation above 45 MJ m⁻². Where two units remain possible the choice follows the system of the other columns and is marked unsure.
 */
import { insideUnit, type UnitKind } from './unit.ts';
import type { WeatherValueRole } from './weather-column.ts';

interface UnitGuess {
  readonly unit: string;
  /** 0–1 */
  readonly confidence: number;
  readonly reason: string;
}

/** Spread of the sampled values of a column. */
export interface Spread {
  readonly count: number;
  readonly min: number;
  readonly median: number;
  /** nine values in ten lie at or below it: a slip of the pen does not move it */
  readonly high: number;
  readonly max: number;
}

/** Spread of the numbers of a sample, leaving out codes for missing. */
export function spreadOf(values: readonly number[]): Spread {
  const sorted = values.filter((v) => Number.isFinite(v) && v > -998 && v !== -99.9 && v !== 9999 && v !== 99999).sort((a, b) => a - b);
  const count = sorted.length;
  const at = (index: number) => sorted[index] ?? Number.NaN;
  return { count, min: at(0), median: at(count >> 1), high: at(Math.floor(0.9 * (count - 1))), max: at(count - 1) };
}

/**
 * Guesses a unit from values. `us` tells that the other columns, or the district, are in US units.
 *
 * @example guessUnit('air_temperature_mean_c', spreadOf([290, 301, 288]), false).unit // 'K'
 */
export function guessUnit(role: WeatherValueRole, kind: UnitKind, spread: Spread, us: boolean): UnitGuess {
  if (spread.count === 0) return { unit: insideUnit(kind), confidence: 0.3, reason: 'no values to tell the unit from' };
  const guess = GUESSES[kind]?.(spread, us, role);
  if (!guess) return { unit: insideUnit(kind), confidence: 0.5, reason: 'no unit given' };
  const [unit, confidence] = guess;
  return { unit, confidence, reason: `no unit given; values ${format(spread.min)} to ${format(spread.max)} read as ${unit}` };
}

function format(value: number): string {
  return String(Number(value.toPrecision(4)));
}

type Guess = (spread: Spread, us: boolean, role: WeatherValueRole) => [string, number];

const GUESSES: Partial<Record<UnitKind, Guess>> = {
  temperature: ({ min, max, high, median }, us) => {
    if (min > 180 && max < 350) return ['K', 0.9];
    if (high > 60 || (median > 45 && max > 50)) return ['°F', 0.8];
    if (us && high > 50) return ['°F', 0.5];
    return ['°C', us ? 0.6 : 0.8];
  },
  share: ({ max }) => (max <= 1.05 ? ['fraction', 0.8] : ['%', 0.9]),
  pressure: ({ max, median }, _us, role) => {
    if (role !== 'pressure_kpa') return max > 6 ? ['hPa', 0.7] : ['kPa', 0.5];
    if (median > 20000) return ['Pa', 0.9];
    if (median > 800) return ['hPa', 0.9];
    if (median > 450) return ['hPa', 0.5];
    return median > 40 ? ['kPa', 0.9] : ['inHg', 0.6];
  },
  speed: ({ median }, us) => {
    if (median > 70) return ['km/d', 0.6];
    if (median > 12) return [us ? 'mph' : 'km/h', 0.4];
    return us ? ['mph', 0.5] : ['m/s', 0.6];
  },
  radiation: ({ max, min }) => {
    if (max > 1500) return ['kJ/m²', 0.5];
    if (max > 480) return ['cal/cm²', 0.5];
    return max > 45 || min < -20 ? ['W/m²', 0.6] : ['MJ/m²/d', 0.6];
  },
  duration: ({ max }) => (max > 24 ? ['min', 0.7] : ['h', 0.8]),
  depth: ({ max }, us) => (us && max < 15 ? ['in', 0.5] : ['mm', us ? 0.5 : 0.7]),
  ratio: ({ max }) => (max > 0.05 ? ['g/kg', 0.8] : ['kg/kg', 0.8]),
};
