/**
 * Unit conversions that cross the border of the process. Inside the pure rooms every quantity has one fixed unit (see the nomenclature).
 *
 * Sources: NIST Special Publication 811 (2008), Appendix B (exact unless marked); FAO-56 Table 3 and Annex 1 for radiation.
 */
import { CELSIUS_OFFSET } from './constants.ts';

/** Cubic metres in an acre-foot (international foot, exact): 43 560 ft³. */
export const CUBIC_METRES_PER_ACRE_FOOT = 1233.48183754752;
/** m³ s⁻¹ in a cubic foot per second, exact. */
export const CUBIC_METRES_PER_CUBIC_FOOT = 0.028316846592;
/** m² in an acre (international), exact. */
export const SQUARE_METRES_PER_ACRE = 4046.8564224;
/** mm in an inch, exact. */
export const MILLIMETRES_PER_INCH = 25.4;
/** m in a foot, exact. */
export const METRES_PER_FOOT = 0.3048;
/** km in a mile (international), exact. */
export const KILOMETRES_PER_MILE = 1.609344;
/** m s⁻¹ in a mile per hour, exact. */
export const METRES_PER_SECOND_PER_MPH = 0.44704;
/** m s⁻¹ in a knot, exact 1852/3600. */
export const METRES_PER_SECOND_PER_KNOT = 1852 / 3600;
/** MJ m⁻² d⁻¹ in a W m⁻² held for a day, exact. */
export const MEGAJOULES_PER_DAY_PER_WATT = 0.0864;
/** MJ m⁻² in a calorie per cm² (IT calorie), FAO-56 Table 3. */
export const MEGAJOULES_PER_CALORIE_CM2 = 0.041868;
export const SECONDS_PER_DAY = 86400;
/** MJ m⁻² in a langley (thermochemical calorie per cm²), exact. */
export const MEGAJOULES_PER_LANGLEY = 0.04184;
/** m s⁻¹ in a kilometre of wind run per day, exact. */
export const METRES_PER_SECOND_PER_KM_DAY = 1000 / SECONDS_PER_DAY;
/** m s⁻¹ in a kilometre per hour, exact. */
export const METRES_PER_SECOND_PER_KM_HOUR = 1 / 3.6;

/** kPa in a millibar or hectopascal, exact. */
export const KILOPASCALS_PER_MILLIBAR = 0.1;
/** kPa in a conventional millimetre of mercury, exact: 13.5951 × 9.80665 Pa. */
export const KILOPASCALS_PER_MMHG = (13.5951 * 9.80665) / 1000;
/** kPa in a conventional centimetre of water, exact. */
export const KILOPASCALS_PER_CM_WATER = 0.0980665;
/** kPa in a standard atmosphere, exact. */
export const KILOPASCALS_PER_ATMOSPHERE = 101.325;
/** kPa in a pound-force per square inch: 0.45359237 × 9.80665 N on (0.0254 m)². */
export const KILOPASCALS_PER_PSI = (0.45359237 * 9.80665) / (0.0254 * 0.0254) / 1000;

/** m³ in a US gallon, exact: 231 in³. */
export const CUBIC_METRES_PER_US_GALLON = 0.003785411784;
/** m³ s⁻¹ in a US gallon per minute, exact. */
export const CUBIC_METRES_PER_SECOND_PER_GPM = CUBIC_METRES_PER_US_GALLON / 60;
/** m³ s⁻¹ in a million US gallons per day, exact. */
export const CUBIC_METRES_PER_SECOND_PER_MGD = (1e6 * CUBIC_METRES_PER_US_GALLON) / SECONDS_PER_DAY;
/** m³ s⁻¹ in a cubic foot per second, exact. */
export const CUBIC_METRES_PER_SECOND_PER_CFS = CUBIC_METRES_PER_CUBIC_FOOT;
/** m³ in a cubic foot per second held for a day, exact. */
export const CUBIC_METRES_PER_CFS_DAY = CUBIC_METRES_PER_CUBIC_FOOT * SECONDS_PER_DAY;
/** m³ s⁻¹ in an acre-foot per day, exact. */
export const CUBIC_METRES_PER_SECOND_PER_ACRE_FOOT_DAY = CUBIC_METRES_PER_ACRE_FOOT / SECONDS_PER_DAY;
/** m³ in an acre-inch, exact. */
export const CUBIC_METRES_PER_ACRE_INCH = CUBIC_METRES_PER_ACRE_FOOT / 12;
/** m³ in a megalitre, exact. */
export const CUBIC_METRES_PER_MEGALITRE = 1000;
/** m³ in a hectare-metre, exact. */
export const CUBIC_METRES_PER_HECTARE_METRE = 10000;
/** m² in a hectare, exact. */
export const SQUARE_METRES_PER_HECTARE = 10000;
/** mm d⁻¹ in a litre per second and hectare, exact. */
export const MILLIMETRES_PER_DAY_PER_LITRE_SECOND_HECTARE = 8.64;

/**
 * m³ s⁻¹ in a miner's inch, which is another flow in each place: an order in bare "inches" must name the rule it follows.
 *
 * Source: state statutes as quoted in extension literature (secondary copies): 1/50 ft³/s in Idaho, Kansas, Nebraska, New Mexico, North Dakota,
 * South Dakota, Utah; 1/40 in Arizona, California (statute), Montana, Nevada, Oregon; 1/38.4 in Colorado; 0.028 in British Columbia.
 */
export const CUBIC_METRES_PER_SECOND_PER_MINERS_INCH = {
  fiftieth: CUBIC_METRES_PER_CUBIC_FOOT / 50,
  fortieth: CUBIC_METRES_PER_CUBIC_FOOT / 40,
  colorado: CUBIC_METRES_PER_CUBIC_FOOT / 38.4,
  britishColumbia: CUBIC_METRES_PER_CUBIC_FOOT * 0.028,
} as const;

/** @example celsiusFromFahrenheit(212) // 100 */
export function celsiusFromFahrenheit(f: number): number {
  return ((f - 32) * 5) / 9;
}
/** @example fahrenheitFromCelsius(100) // 212 */
export function fahrenheitFromCelsius(c: number): number {
  return (c * 9) / 5 + 32;
}
/** Kelvin on the International Temperature Scale: offset 273.15. */
export function celsiusFromKelvin(k: number): number {
  return k - CELSIUS_OFFSET;
}
/** The inverse of `celsiusFromKelvin`. @example kelvinFromCelsius(0) // 273.15 */
export function kelvinFromCelsius(c: number): number {
  return c + CELSIUS_OFFSET;
}

/**
 * Volume [m³] of a depth [mm] over an area [m²]. @example depthToVolume(1, 10000) // 10
 */
export function depthToVolume(depth: number, area: number): number {
  return (depth * area) / 1000;
}

/** Depth [mm] of a volume [m³] over an area [m²]; the inverse of `depthToVolume`. @example volumeToDepth(10, 10000) // 1 */
export function volumeToDepth(volume: number, area: number): number {
  return (volume / area) * 1000;
}

/** Mean flow [m³ s⁻¹] of a volume [m³] over days. @example volumeToFlow(86400, 1) // 1 */
export function volumeToFlow(volume: number, days: number): number {
  return volume / (days * SECONDS_PER_DAY);
}

/** Volume [m³] of a flow [m³ s⁻¹] held for days; the inverse of `volumeToFlow`. @example flowToVolume(1, 1) // 86400 */
export function flowToVolume(flow: number, days: number): number {
  return flow * days * SECONDS_PER_DAY;
}

export type UnitSystem = 'metric' | 'us';

/** How a border quantity is written in each system: suffix of its name, factor from the metric unit, and the spelling readers see. */
export interface BorderUnit {
  readonly suffix: string;
  readonly label: string;
  readonly fromMetric: number;
}

/** Metric border unit → its pair. Keys are the metric suffixes used in column and JSON names. */
export const BORDER_UNITS: Record<string, { metric: BorderUnit; us: BorderUnit }> = {
  mm: { metric: { suffix: 'mm', label: 'mm', fromMetric: 1 }, us: { suffix: 'in', label: 'in', fromMetric: 1 / MILLIMETRES_PER_INCH } },
  m3: {
    metric: { suffix: 'm3', label: 'm³', fromMetric: 1 },
    us: { suffix: 'acft', label: 'ac-ft', fromMetric: 1 / CUBIC_METRES_PER_ACRE_FOOT },
  },
  m3_s: {
    metric: { suffix: 'm3_s', label: 'm³/s', fromMetric: 1 },
    us: { suffix: 'cfs', label: 'cfs', fromMetric: 1 / CUBIC_METRES_PER_CUBIC_FOOT },
  },
  m2: {
    metric: { suffix: 'ha', label: 'ha', fromMetric: 1e-4 },
    us: { suffix: 'ac', label: 'ac', fromMetric: 1 / SQUARE_METRES_PER_ACRE },
  },
  m: { metric: { suffix: 'm', label: 'm', fromMetric: 1 }, us: { suffix: 'ft', label: 'ft', fromMetric: 1 / METRES_PER_FOOT } },
  km: { metric: { suffix: 'km', label: 'km', fromMetric: 1 }, us: { suffix: 'mi', label: 'mi', fromMetric: 1 / KILOMETRES_PER_MILE } },
  m_s: {
    metric: { suffix: 'm_s', label: 'm/s', fromMetric: 1 },
    us: { suffix: 'mph', label: 'mph', fromMetric: 1 / METRES_PER_SECOND_PER_MPH },
  },
  mm_h: {
    metric: { suffix: 'mm_h', label: 'mm/h', fromMetric: 1 },
    us: { suffix: 'in_h', label: 'in/h', fromMetric: 1 / MILLIMETRES_PER_INCH },
  },
  l_s: {
    metric: { suffix: 'l_s', label: 'L/s', fromMetric: 1 },
    us: { suffix: 'gpm', label: 'gpm', fromMetric: 1e-3 / CUBIC_METRES_PER_SECOND_PER_GPM },
  },
  m3_h: {
    metric: { suffix: 'm3_h', label: 'm³/h', fromMetric: 1 },
    us: { suffix: 'cfs', label: 'cfs', fromMetric: 1 / (3600 * CUBIC_METRES_PER_CUBIC_FOOT) },
  },
};
