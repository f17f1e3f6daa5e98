import { BORDER_UNITS, type UnitSystem } from '../../../../../lib/base/units.ts';

/** How a difference of a variable is written in the reader's units: its unit and what the metric number is multiplied by. */
export interface ErrorUnit {
  readonly unit: string;
  readonly factor: number;
  readonly decimals: number;
}

const US: Readonly<Record<string, Omit<ErrorUnit, 'decimals'>>> = {
  // a difference of temperatures has no offset
  '°C': { unit: '°F', factor: 1.8 },
  mm: { unit: 'in', factor: BORDER_UNITS.mm.us.fromMetric },
  'm/s': { unit: 'mph', factor: BORDER_UNITS.m_s.us.fromMetric },
};

/** Decimals by the size of what is usual in the unit. */
const DECIMALS: Readonly<Record<string, number>> = { kPa: 3, in: 4 };

/** @example errorUnit('°C', 'us') // { unit: '°F', factor: 1.8, decimals: 2 } */
export function errorUnit(metric: string, units: UnitSystem): ErrorUnit {
  const written = (units === 'us' ? US[metric] : undefined) ?? { unit: metric, factor: 1 };
  return { ...written, decimals: DECIMALS[written.unit] ?? 2 };
}

/** A term inside a sentence; an abbreviation keeps its capitals. @example inSentence('Reference ET') // 'reference ET' */
export function inSentence(term: string): string {
  return term.charAt(0).toLowerCase() + term.slice(1);
}

/** Square of a unit, for semivariance. @example squareOf('MJ m⁻² d⁻¹') // '(MJ m⁻² d⁻¹)²' */
export function squareOf(unit: string): string {
  return /[ /]/.test(unit) ? `(${unit})²` : `${unit}²`;
}
