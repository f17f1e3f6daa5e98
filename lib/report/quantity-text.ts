/**
 * Numbers for people: unit, sensible digits, groups of three. Missing is an en dash.
 *
 * Digits: depth 0.1 mm below 100 mm else 1 mm, or 0.01 in below 10 in else 0.1 in. Volume: m³ below 10 000, then thousand m³ (1 thousand m³ = 1 ML)
 * below 10 million, then million m³; acre-feet in US units. Flow: L/s below 1 m³/s, else m³/s; cfs. Three significant digits for both.
 */
import { BORDER_UNITS, type UnitSystem } from '../base/units.ts';

/** Border units of this room: the keys of BORDER_UNITS that reports use. */
export type Quantity = 'mm' | 'm3' | 'm3_s' | 'm2' | 'm';

export const MISSING_TEXT = '–';
/** Narrow no-break space groups digits in metric text (SI Brochure, section 5.4.4), a comma in US text. */
const GROUP: Record<UnitSystem, string> = { metric: '\u202f', us: ',' };

/** Value in the reader's units, not rounded. @example inUnits(25.4, 'mm', 'us') // 1 */
export function inUnits(value: number, quantity: Quantity, units: UnitSystem): number {
  return value * BORDER_UNITS[quantity][units].fromMetric;
}

/** Unit as readers see it. @example unitLabel('m2', 'us') // 'ac' */
export function unitLabel(quantity: Quantity, units: UnitSystem): string {
  return BORDER_UNITS[quantity][units].label;
}

/** Fixed decimals with grouped thousands. @example numberText(12345.678, 1, 'us') // '12,345.7' */
export function numberText(value: number, decimals: number, units: UnitSystem): string {
  if (!Number.isFinite(value)) return MISSING_TEXT;
  const [whole, fraction] = Math.abs(value).toFixed(decimals).split('.');
  const grouped = whole.replaceAll(/\B(?=(\d{3})+$)/g, GROUP[units]);
  const text = fraction ? `${grouped}.${fraction}` : grouped;
  return value < 0 && Number(value.toFixed(decimals)) !== 0 ? `−${text}` : text;
}

/** Decimals that show a value with so many significant digits, none past the limit. @example decimalsFor(0.01234, 3, 4) // 4 */
export function decimalsFor(value: number, digits: number, most: number): number {
  if (!Number.isFinite(value) || value === 0) return 0;
  return Math.min(most, Math.max(0, digits - 1 - Math.floor(Math.log10(Math.abs(value)))));
}

/** @example formatDepth(25.4, 'us') // '1.00 in' */
export function formatDepth(depth: number, units: UnitSystem): string {
  const value = inUnits(depth, 'mm', units);
  const size = Math.abs(value);
  const decimals = units === 'us' ? (size < 10 ? 2 : 1) : size < 100 ? 1 : 0;
  return withUnit(numberText(value, decimals, units), unitLabel('mm', units));
}

/** @example formatVolume(123456, 'us') // '100 ac-ft' */
export function formatVolume(volume: number, units: UnitSystem): string {
  if (units === 'us') {
    const acreFeet = inUnits(volume, 'm3', 'us');
    return withUnit(numberText(acreFeet, Math.abs(acreFeet) < 99.95 ? 1 : 0, units), unitLabel('m3', units));
  }
  const size = Math.abs(volume);
  if (size < 10_000) return withUnit(numberText(volume, 0, units), 'm³');
  const [value, unit] = size < 10_000_000 ? [volume / 1000, 'thousand m³'] : [volume / 1_000_000, 'million m³'];
  return withUnit(numberText(value, decimalsFor(value, 3, 1), units), unit);
}

/** @example formatFlow(0.25, 'metric') // '250 L/s' */
export function formatFlow(flow: number, units: UnitSystem): string {
  if (units === 'us') {
    const cfs = inUnits(flow, 'm3_s', 'us');
    return withUnit(numberText(cfs, decimalsFor(cfs, 3, 2), units), unitLabel('m3_s', units));
  }
  if (Math.abs(flow) < 1) return withUnit(numberText(flow * 1000, decimalsFor(flow * 1000, 3, 1), units), 'L/s');
  return withUnit(numberText(flow, decimalsFor(flow, 3, 2), units), 'm³/s');
}

/** @example formatArea(10000, 'metric') // '1.00 ha' */
export function formatArea(area: number, units: UnitSystem): string {
  const value = inUnits(area, 'm2', units);
  return withUnit(numberText(value, decimalsFor(value, 3, 2), units), unitLabel('m2', units));
}

/** @example formatShare(0.873) // '87 %' */
export function formatShare(share: number): string {
  return Number.isFinite(share) ? `${Math.round(share * 100)}\u00a0%`.replace('\u00a0', ' ') : MISSING_TEXT;
}

function withUnit(text: string, unit: string): string {
  return text === MISSING_TEXT ? text : `${text} ${unit}`;
}
