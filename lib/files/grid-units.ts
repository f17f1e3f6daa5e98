/**
 * Units of fields → straight lines: value inside = stored value × factor + offset, per second, per day or per step of the file.
 *
 * Factors come through `unit.ts` and `lib/base/units.ts` (NIST SP 811; FAO-56 Table 3). Water has 1000 kg m⁻³, so that 1 kg m⁻² is 1 mm.
 */
import { MEGAJOULES_PER_CALORIE_CM2, MILLIMETRES_PER_INCH, SECONDS_PER_DAY } from '../base/units.ts';
import type { GridRole } from './grid-role-names.ts';
import { GRID_ROLE_KIND } from './grid-roles.ts';
import { findUnit, type UnitKind, unitConverter, unitKey } from './unit.ts';
import { guessUnit, type Spread } from './unit-guess.ts';
import type { WeatherValueRole } from './weather-column.ts';

/** What a stored value is of: a state, or an amount per second, per day, or per step of the file. */
export type Per = 'value' | 'second' | 'day' | 'step';

/** A unit of a field: inside value = stored × factor + offset [inside unit, per `per`]. */
export interface GridUnit {
  readonly name: string;
  readonly factor: number;
  readonly offset: number;
  readonly per: Per;
}

/** Standard gravity [m s⁻²], exact: CGPM 1901. Turns geopotential into height. */
const STANDARD_GRAVITY = 9.80665;

const amount = (name: string, factor: number, per: Per, spellings: string) => ({ unit: { name, factor, offset: 0, per }, spellings });

/** Amounts, whose rate matters; spellings as `unitKey` leaves them, separated by blanks. */
const AMOUNTS: Partial<Record<UnitKind, readonly { unit: GridUnit; spellings: string }[]>> = {
  depth: [
    amount('kg/m²/s', 1, 'second', 'kgm-2s-1 kg/m2/s kg/(m2s) mms-1 mm/s mm/sec'),
    amount('m/s', 1000, 'second', 'ms-1 m/s'),
    amount('mm/h', 1 / 3600, 'second', 'mmh-1 mm/h mm/hr mmhr-1 mm/hour kgm-2h-1 kg/m2/h'),
    amount('mm/d', 1, 'day', 'mmd-1 mm/d mm/day mmday-1 mmd mmday kgm-2d-1 kgm-2day-1 kg/m2/d kg/m2/day'),
    amount('m/d', 1000, 'day', 'md-1 m/d m/day mday-1'),
    amount('in/d', MILLIMETRES_PER_INCH, 'day', 'in/d in/day ind-1'),
    amount('mm', 1, 'step', 'mm kgm-2 kg/m2 l/m2 millimeter millimeters millimetre millimetres'),
    amount('m', 1000, 'step', 'm mofwaterequivalent mofwater metre metres meter meters'),
    amount('cm', 10, 'step', 'cm'),
    amount('in', MILLIMETRES_PER_INCH, 'step', 'in inch inches'),
  ],
  radiation: [
    amount('W/m²', 1e-6, 'second', 'wm-2 w/m2 wm2 watt/m2 wattsm-2 wattm-2 js-1m-2 jm-2s-1'),
    amount('MJ/m²/d', 1, 'day', 'mjm-2d-1 mj/m2/d mj/m2/day mjm-2day-1 mjm2d mjm2day mj/(m2d)'),
    amount('kJ/m²/d', 0.001, 'day', 'kjm-2d-1 kj/m2/d kj/m2/day kjm-2day-1'),
    amount('J/m²', 1e-6, 'step', 'jm-2 j/m2 jm2'),
    amount('kJ/m²', 1e-3, 'step', 'kjm-2 kj/m2'),
    amount('MJ/m²', 1, 'step', 'mjm-2 mj/m2 mjm2'),
    amount('Wh/m²', 0.0036, 'step', 'whm-2 wh/m2'),
    amount('kWh/m²', 3.6, 'step', 'kwhm-2 kwh/m2'),
    amount('cal/cm²', MEGAJOULES_PER_CALORIE_CM2, 'step', 'calcm-2 cal/cm2 ly langley langleys'),
  ],
  duration: [
    amount('s', 1 / 3600, 'step', 's sec second seconds'),
    amount('min', 1 / 60, 'step', 'min minute minutes'),
    amount('h', 1, 'step', 'h hr hrs hour hours'),
    amount('h/d', 1, 'day', 'h/d h/day hd-1 hday-1'),
  ],
};

/** The unit that a text names for a role, or null. @example gridUnit('precipitation_mm', 'kg m-2 s-1')?.per // 'second' */
export function gridUnit(role: GridRole, text: string): GridUnit | null {
  const kind = GRID_ROLE_KIND[role];
  const key = unitKey(text);
  const amounts = AMOUNTS[kind];
  if (amounts) return amounts.find(({ unit, spellings }) => spellings.split(' ').includes(key) || unitKey(unit.name) === key)?.unit ?? null;
  if (kind === 'ratio' && (key === '1' || key === 'kgkg-1')) return line('kg/kg', 1, 0);
  if (kind === 'length' && /^(m2s-2|m2\/s2|jkg-1|j\/kg)$/.test(key)) return line('m²/s²', 1 / STANDARD_GRAVITY, 0);
  const name = findUnit(kind, text);
  const convert = name === null ? null : unitConverter(kind, name);
  if (name === null || convert === null) return null;
  return line(name, (convert(100) - convert(0)) / 100, convert(0));
}

function line(name: string, factor: number, offset: number): GridUnit {
  return { name, factor, offset, per: 'value' };
}

/** Unit taken for a field, with what was assumed when the file does not say or cannot be right. */
export interface ChosenUnit {
  readonly unit: GridUnit;
  /** why it is not what the file says; null when it is */
  readonly assumed: string | null;
  readonly confidence: number;
}

/** Limits of single values of each kind that any place on earth keeps, in the inside unit; rates per second. */
const PLAUSIBLE: Partial<Record<GridRole, readonly [number, number]>> = {
  pressure_kpa: [45, 110],
  specific_humidity_kg_kg: [-1e-4, 0.05],
  vapour_pressure_kpa: [-0.01, 8],
  vapour_pressure_deficit_kpa: [-0.1, 12],
  elevation_m: [-500, 9000],
};

/**
 * The unit of a field from its attribute, held against a sample of its values.
 *
 * @param text the attribute as written, '' when there is none
 * @param spread of stored values without missing ones, unpacked
 * @param stepSeconds length of a step
 */
export function chooseUnit(role: GridRole, text: string, spread: Spread, stepSeconds: number): ChosenUnit {
  const stated = gridUnit(role, text);
  if (GRID_ROLE_KIND[role] === 'share') return shareUnit(stated, text, spread);
  if (stated && isPlausible(role, stated, spread, stepSeconds)) return { unit: stated, assumed: null, confidence: 1 };
  const kind = GRID_ROLE_KIND[role];
  const guess = guessFor(role, kind, spread, stepSeconds);
  const why = stated
    ? `values ${shortNumber(spread.min)} to ${shortNumber(spread.max)} cannot be ${stated.name}`
    : text === ''
      ? 'the file names no unit'
      : `"${text}" is not a unit of this quantity`;
  if (stated && (guess === null || guess.name === stated.name)) return { unit: stated, assumed: null, confidence: 0.5 };
  const unit = guess ?? gridUnit(role, text) ?? fallbackUnit(role);
  return { unit, assumed: `${why}; ${unit.name} is taken`, confidence: 0.5 };
}

function shareUnit(stated: GridUnit | null, text: string, spread: Spread): ChosenUnit {
  const fraction = line('fraction', 100, 0);
  const percent = line('%', 1, 0);
  const isFraction = spread.count > 0 && spread.max <= 1.5;
  if (stated?.name === '%' && isFraction)
    return { unit: fraction, assumed: `values up to ${shortNumber(spread.max)} cannot be %; a fraction is taken`, confidence: 0.6 };
  if (stated?.name === 'fraction' && spread.max > 1.5)
    return { unit: percent, assumed: `values up to ${shortNumber(spread.max)} cannot be a fraction; % is taken`, confidence: 0.6 };
  if (stated) return { unit: stated, assumed: null, confidence: 1 };
  const unit = isFraction ? fraction : percent;
  const said = text === '' || text === '1' ? `the unit is "${text}"` : `"${text}" is not a unit of this quantity`;
  return {
    unit,
    assumed: `${said}; values ${shortNumber(spread.min)} to ${shortNumber(spread.max)} are taken as ${isFraction ? 'a fraction' : '%'}`,
    confidence: 0.8,
  };
}

/** True when the middle of the sample, in this unit, lies where such values lie. */
function isPlausible(role: GridRole, unit: GridUnit, spread: Spread, stepSeconds: number): boolean {
  if (spread.count === 0) return true;
  const inside = (value: number) => value * unit.factor + unit.offset;
  const perDay = unit.per === 'second' ? SECONDS_PER_DAY : unit.per === 'step' ? SECONDS_PER_DAY / Math.max(1, stepSeconds) : 1;
  switch (GRID_ROLE_KIND[role]) {
    case 'temperature':
      return inside(spread.median) > -80 && inside(spread.median) < 55;
    case 'depth':
      return inside(spread.median) * perDay < 600;
    case 'radiation':
      return inside(spread.median) * perDay < 150;
    case 'speed':
      return inside(spread.median) < 60;
    default: {
      const limits = PLAUSIBLE[role];
      return !limits || (inside(spread.median) >= limits[0] && inside(spread.median) <= limits[1]);
    }
  }
}

function guessFor(role: GridRole, kind: UnitKind, spread: Spread, stepSeconds: number): GridUnit | null {
  if (spread.count === 0) return null;
  if (kind === 'depth') return stepDepth(spread, stepSeconds);
  if (kind === 'radiation') return gridUnit(role, radiationUnit(spread, stepSeconds));
  if (kind === 'length') return line('m', 1, 0);
  return gridUnit(role, guessUnit(role as WeatherValueRole, kind, spread, false).unit);
}

/** Water per step without a unit: a rate per second never passes 0.05, a depth in metres a day's 1. */
function stepDepth(spread: Spread, stepSeconds: number): GridUnit | null {
  if (spread.max > 0 && spread.max < 0.01 && stepSeconds >= SECONDS_PER_DAY) return gridUnit('precipitation_mm', 'kg/m²/s');
  return gridUnit('precipitation_mm', 'mm');
}

function radiationUnit(spread: Spread, stepSeconds: number): string {
  if (spread.max > 20_000) return 'J/m²';
  if (spread.max > 1600) return 'kJ/m²';
  return spread.max > (stepSeconds >= SECONDS_PER_DAY ? 45 : 6) ? 'W/m²' : 'MJ/m²';
}

function fallbackUnit(role: GridRole): GridUnit {
  const inside: Partial<Record<UnitKind, string>> = {
    temperature: 'K',
    depth: 'mm',
    radiation: 'W/m²',
    duration: 'h',
    speed: 'm/s',
    pressure: 'Pa',
    ratio: 'kg/kg',
  };
  return gridUnit(role, inside[GRID_ROLE_KIND[role]] ?? '') ?? line('m', 1, 0);
}

function shortNumber(value: number): string {
  return String(Number(value.toPrecision(4)));
}
