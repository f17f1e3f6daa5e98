/**
 * How a figure is written on a screen: converted to the reader's units, with a fixed number of decimals, and a dash for missing.
 */
import { BORDER_UNITS, fahrenheitFromCelsius, METRES_PER_FOOT, type UnitSystem } from '../../lib/base/units.ts';
import {
  decimalsFor,
  formatArea,
  formatDepth,
  formatFlow,
  formatVolume,
  MISSING_TEXT,
  numberText,
} from '../../lib/report/quantity-text.ts';

/** A quantity as the answers carry it: always the metric border unit. */
export type Quantity = 'depth' | 'volume' | 'flow' | 'area' | 'length' | 'distance' | 'elevation' | 'speed' | 'temperature';

export type Maybe = number | null | undefined;

export const MISSING_MARK = MISSING_TEXT;

interface Writing {
  readonly label: Readonly<Record<UnitSystem, string>>;
  readonly decimals: Readonly<Record<UnitSystem, number>>;
  readonly us: (value: number) => number;
}

const METRES_PER_MILE = 5280 * METRES_PER_FOOT;
const by = (key: string) => (value: number) => value * BORDER_UNITS[key].us.fromMetric;

const WRITINGS: Record<Quantity, Writing> = {
  depth: { label: { metric: 'mm', us: 'in' }, decimals: { metric: 1, us: 2 }, us: by('mm') },
  volume: { label: { metric: 'm³', us: 'ac-ft' }, decimals: { metric: 0, us: 2 }, us: by('m3') },
  flow: { label: { metric: 'm³/s', us: 'cfs' }, decimals: { metric: 3, us: 2 }, us: by('m3_s') },
  area: {
    label: { metric: 'ha', us: 'ac' },
    decimals: { metric: 2, us: 2 },
    us: (hectares) => hectares * 1e4 * BORDER_UNITS.m2.us.fromMetric,
  },
  length: { label: { metric: 'm', us: 'ft' }, decimals: { metric: 2, us: 2 }, us: by('m') },
  elevation: { label: { metric: 'm', us: 'ft' }, decimals: { metric: 0, us: 0 }, us: by('m') },
  distance: { label: { metric: 'km', us: 'mi' }, decimals: { metric: 2, us: 2 }, us: (km) => (km * 1000) / METRES_PER_MILE },
  speed: { label: { metric: 'm/s', us: 'mph' }, decimals: { metric: 1, us: 1 }, us: by('m_s') },
  temperature: { label: { metric: '°C', us: '°F' }, decimals: { metric: 1, us: 1 }, us: fahrenheitFromCelsius },
};

/** Spelling of a quantity's unit. @example unitOf('depth', 'us') // 'in' */
export function unitOf(quantity: Quantity, units: UnitSystem): string {
  return WRITINGS[quantity].label[units];
}

/** A value in the reader's unit; missing becomes NaN. @example inUnits(25.4, 'depth', 'us') // 1 */
export function inUnits(value: Maybe, quantity: Quantity, units: UnitSystem): number {
  if (value === null || value === undefined) return Number.NaN;
  return units === 'us' ? WRITINGS[quantity].us(value) : value;
}

/** The number alone, for a column whose head names the unit. @example figure(25.4, 'depth', 'us') // '1.00' */
export function figure(value: Maybe, quantity: Quantity, units: UnitSystem): string {
  return numberText(inUnits(value, quantity, units), WRITINGS[quantity].decimals[units], units);
}

/** Quantities whose digits in running text follow their size, as in every report. */
const IN_TEXT: Partial<Record<Quantity, (value: number, units: UnitSystem) => string>> = {
  depth: formatDepth,
  volume: formatVolume,
  flow: formatFlow,
  area: (hectares, units) => formatArea(hectares * 1e4, units),
};

/** Number and unit, for running text. @example figureWithUnit(12.34, 'depth', 'metric') // '12.3 mm' */
export function figureWithUnit(value: Maybe, quantity: Quantity, units: UnitSystem): string {
  const inText = IN_TEXT[quantity];
  if (inText) return inText(value ?? Number.NaN, units);
  const text = figure(value, quantity, units);
  return text === MISSING_MARK ? text : `${text} ${unitOf(quantity, units)}`;
}

const MILLION = 1e6;

/**
 * A headline: the number and its unit apart, three significant digits. Volumes that stand side by side count in millions from one million on.
 *
 * @example headline(3412433, 'volume', 'metric') // ['3.41', 'million m³']
 */
export function headline(value: Maybe, quantity: Quantity, units: UnitSystem): [string, string] {
  if (quantity === 'volume' && units === 'metric' && value && Math.abs(value) >= MILLION) {
    const millions = value / MILLION;
    return [numberText(millions, decimalsFor(millions, 3, 2), units), 'million m³'];
  }
  const text = figureWithUnit(value, quantity, units);
  const at = text.indexOf(' ');
  return at < 0 ? [text, ''] : [text.slice(0, at), text.slice(at + 1)];
}

/** A flow beside a drawing: three significant digits in the table's unit. @example shortFlow(0.3874, 'metric') // '0.387' */
export function shortFlow(value: Maybe, units: UnitSystem): string {
  const flow = inUnits(value, 'flow', units);
  return numberText(flow, decimalsFor(flow, 3, WRITINGS.flow.decimals[units]), units);
}

/** A number with fixed decimals and thin spaces between thousands. @example plain(12345.6, 1) // '12\u202f345.6' */
export function plain(value: Maybe, decimals: number): string {
  return numberText(value ?? Number.NaN, decimals, 'metric');
}

/** A share 0–1 as percent. @example percent(0.256) // '26 %' */
export function percent(share: Maybe, decimals = 0): string {
  if (share === null || share === undefined || !Number.isFinite(share)) return MISSING_MARK;
  return `${plain(share * 100, decimals)}\u00a0%`;
}

/** A number to a count of significant digits, in powers of ten outside 10⁻⁴ … 10⁶. @example significant(0.0012345678) // '0.0012346' */
export function significant(value: Maybe, digits = 5): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return MISSING_MARK;
  if (value === 0) return '0';
  const exponent = Math.floor(Math.log10(Math.abs(value)));
  if (exponent < -4 || exponent > 6) return powerOfTen(value, digits);
  if (Number.isInteger(value)) return plain(value, 0);
  return plain(value, Math.max(0, digits - 1 - exponent))
    .replace(/(\.\d*?)0+$/, '$1')
    .replace(/\.$/, '');
}

const SUPERSCRIPTS: Record<string, string> = {
  '-': '⁻',
  '0': '⁰',
  '1': '¹',
  '2': '²',
  '3': '³',
  '4': '⁴',
  '5': '⁵',
  '6': '⁶',
  '7': '⁷',
  '8': '⁸',
  '9': '⁹',
};

function powerOfTen(value: number, digits: number): string {
  const [mantissa, exponent] = value.toExponential(digits - 1).split('e');
  const raised = [...String(Number(exponent))].map((character) => SUPERSCRIPTS[character]).join('');
  return `${String(Number(mantissa)).replace('-', '−')} × 10${raised}`;
}

/** Sum that skips missing values; NaN when all are missing. */
export function sumOf<Row>(rows: readonly Row[], pick: (row: Row) => Maybe): number {
  const values = rows.map(pick).filter((value): value is number => typeof value === 'number' && Number.isFinite(value));
  return values.length ? values.reduce((total, value) => total + value, 0) : Number.NaN;
}
