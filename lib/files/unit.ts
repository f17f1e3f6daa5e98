/**
 * Units as files write them, and their conversion to the unit a quantity has inside.
 *
 * Sources: NIST SP 811 (2008) Appendix B for the factors (through `lib/base/units.ts`); FAO-56 Table 3 for radiation;
 * conventional millimetre and inch of mercury, NIST SP 811 Appendix B.8.
 */
import {
  CUBIC_METRES_PER_ACRE_FOOT,
  CUBIC_METRES_PER_ACRE_INCH,
  CUBIC_METRES_PER_CFS_DAY,
  CUBIC_METRES_PER_CUBIC_FOOT,
  CUBIC_METRES_PER_HECTARE_METRE,
  CUBIC_METRES_PER_MEGALITRE,
  CUBIC_METRES_PER_US_GALLON,
  celsiusFromFahrenheit,
  celsiusFromKelvin,
  MEGAJOULES_PER_CALORIE_CM2,
  MEGAJOULES_PER_DAY_PER_WATT,
  METRES_PER_FOOT,
  METRES_PER_SECOND_PER_KNOT,
  METRES_PER_SECOND_PER_MPH,
  MILLIMETRES_PER_INCH,
  SECONDS_PER_DAY,
} from '../base/units.ts';

/** kPa in a conventional millimetre of mercury. */
const KILOPASCALS_PER_MMHG = 0.1333224;
/** kPa in a conventional inch of mercury. */
const KILOPASCALS_PER_INHG = 3.386389;
const METRES_PER_MILE = 1609.344;

export type UnitKind =
  | 'temperature'
  | 'pressure'
  | 'share'
  | 'ratio'
  | 'speed'
  | 'radiation'
  | 'duration'
  | 'depth'
  | 'length'
  | 'flow'
  | 'volume'
  | 'conductivity';

interface UnitDefinition {
  readonly kind: UnitKind;
  /** the unit's spelling in the product */
  readonly name: string;
  /** spellings in files, normalised by `unitKey` */
  readonly spellings: readonly string[];
  readonly convert: (value: number) => number;
}

const times = (factor: number) => (value: number) => value * factor;
const same = (value: number) => value;

/** Every unit a file may use; the first of each kind is the one used inside. */
const UNITS: readonly UnitDefinition[] = [
  {
    kind: 'temperature',
    name: '°C',
    spellings: ['c', 'degc', 'celsius', 'degreesc', 'degcelsius', 'degreescelsius', 'degreecelsius', 'degreec', 'gradc'],
    convert: same,
  },
  {
    kind: 'temperature',
    name: '°F',
    spellings: ['f', 'degf', 'fahrenheit', 'degreesf', 'degfahrenheit', 'degreesfahrenheit', 'degreefahrenheit', 'degreef'],
    convert: celsiusFromFahrenheit,
  },
  { kind: 'temperature', name: 'K', spellings: ['k', 'kelvin', 'degk'], convert: celsiusFromKelvin },
  { kind: 'pressure', name: 'kPa', spellings: ['kpa', 'kilopascal'], convert: same },
  { kind: 'pressure', name: 'hPa', spellings: ['hpa', 'hectopascal', 'mbar', 'mb', 'millibar'], convert: times(0.1) },
  { kind: 'pressure', name: 'Pa', spellings: ['pa', 'pascal'], convert: times(0.001) },
  { kind: 'pressure', name: 'mmHg', spellings: ['mmhg', 'torr'], convert: times(KILOPASCALS_PER_MMHG) },
  { kind: 'pressure', name: 'inHg', spellings: ['inhg'], convert: times(KILOPASCALS_PER_INHG) },
  { kind: 'share', name: '%', spellings: ['%', 'pct', 'percent', 'per cent', 'prozent'], convert: same },
  {
    kind: 'share',
    name: 'fraction',
    spellings: ['fraction', '0-1', 'frac', 'm3/m3', 'm3m3', 'm3m-3', 'cm3/cm3', 'cm3cm3', 'cm3cm-3', 'mm/mm', 'in/in'],
    convert: times(100),
  },
  { kind: 'ratio', name: 'kg/kg', spellings: ['kg/kg', 'kgkg-1', 'kgkg'], convert: same },
  { kind: 'ratio', name: 'g/kg', spellings: ['g/kg', 'gkg-1', 'gkg'], convert: times(0.001) },
  { kind: 'speed', name: 'm/s', spellings: ['m/s', 'ms-1', 'ms', 'mps', 'm/sec', 'metrespersecond'], convert: same },
  { kind: 'speed', name: 'km/h', spellings: ['km/h', 'kmh-1', 'kmh', 'kph', 'kmph', 'km/hr'], convert: times(1 / 3.6) },
  { kind: 'speed', name: 'mph', spellings: ['mph', 'mi/h', 'mileshour', 'miles/hour'], convert: times(METRES_PER_SECOND_PER_MPH) },
  { kind: 'speed', name: 'knots', spellings: ['knots', 'knot', 'kt', 'kts', 'kn'], convert: times(METRES_PER_SECOND_PER_KNOT) },
  { kind: 'speed', name: 'km/d', spellings: ['km/d', 'kmd-1', 'kmd', 'km/day', 'kmday'], convert: times(1000 / SECONDS_PER_DAY) },
  { kind: 'speed', name: 'mi/d', spellings: ['mi/d', 'mi/day', 'miday', 'miles/day'], convert: times(METRES_PER_MILE / SECONDS_PER_DAY) },
  {
    kind: 'radiation',
    name: 'MJ/m²/d',
    spellings: ['mj/m2/d', 'mjm2d', 'mj/m2', 'mjm2', 'mjm-2', 'mjm-2d-1', 'mj/m2/day', 'mjm2day', 'mjm-2day-1', 'mj/(m2d)'],
    convert: same,
  },
  {
    kind: 'radiation',
    name: 'W/m²',
    spellings: ['w/m2', 'wm2', 'wm-2', 'watt/m2', 'watts/m2'],
    convert: times(MEGAJOULES_PER_DAY_PER_WATT),
  },
  {
    kind: 'radiation',
    name: 'cal/cm²',
    spellings: ['cal/cm2', 'calcm2', 'calcm-2', 'ly', 'langley', 'langleys', 'ly/d', 'ly/day', 'cal/cm2/d', 'cal/cm2/day'],
    convert: times(MEGAJOULES_PER_CALORIE_CM2),
  },
  { kind: 'radiation', name: 'kWh/m²', spellings: ['kwh/m2', 'kwhm2', 'kwhm-2', 'kwh/m2/d', 'kwh/m2/day'], convert: times(3.6) },
  { kind: 'radiation', name: 'Wh/m²', spellings: ['wh/m2', 'whm2', 'whm-2'], convert: times(0.0036) },
  { kind: 'radiation', name: 'J/cm²', spellings: ['j/cm2', 'jcm2', 'jcm-2'], convert: times(0.01) },
  { kind: 'radiation', name: 'kJ/m²', spellings: ['kj/m2', 'kjm2', 'kjm-2', 'kj/m2/d', 'kj/m2/day'], convert: times(0.001) },
  { kind: 'duration', name: 'h', spellings: ['h', 'hr', 'hrs', 'hour', 'hours'], convert: same },
  { kind: 'duration', name: 'min', spellings: ['min', 'mins', 'minute', 'minutes'], convert: times(1 / 60) },
  {
    kind: 'depth',
    name: 'mm',
    spellings: ['mm', 'mm/d', 'mmd-1', 'mm/day', 'mmd', 'mmday', 'kg/m2', 'kgm-2', 'l/m2', 'millimetre', 'millimeters'],
    convert: same,
  },
  { kind: 'depth', name: 'in', spellings: ['in', 'inch', 'inches', '"', 'in/d', 'in/day'], convert: times(MILLIMETRES_PER_INCH) },
  { kind: 'depth', name: 'cm', spellings: ['cm', 'cm/d', 'cm/day'], convert: times(10) },
  { kind: 'depth', name: 'kg/m²/s', spellings: ['kg/m2/s', 'kgm-2s-1', 'mm/s', 'mms-1'], convert: times(SECONDS_PER_DAY) },
  { kind: 'length', name: 'm', spellings: ['m', 'metre', 'metres', 'meter', 'meters', 'masl'], convert: same },
  { kind: 'length', name: 'ft', spellings: ['ft', 'feet', 'foot'], convert: times(METRES_PER_FOOT) },
  { kind: 'length', name: 'cm', spellings: ['cm'], convert: times(0.01) },
  { kind: 'length', name: 'mm', spellings: ['mm'], convert: times(0.001) },
  { kind: 'length', name: 'in', spellings: ['in', 'inch', 'inches'], convert: times(MILLIMETRES_PER_INCH / 1000) },
  { kind: 'flow', name: 'm³/s', spellings: ['m3/s', 'm3s', 'm3s-1', 'cms', 'cumec', 'cumecs'], convert: same },
  { kind: 'flow', name: 'L/s', spellings: ['l/s', 'ls', 'ls-1', 'lps'], convert: times(0.001) },
  { kind: 'flow', name: 'cfs', spellings: ['cfs', 'ft3/s', 'ft3s', 'ft3s-1'], convert: times(CUBIC_METRES_PER_CUBIC_FOOT) },
  {
    kind: 'volume',
    name: 'm³',
    spellings: ['m3', 'cubicmetre', 'cubicmetres', 'cubicmeter', 'cubicmeters', 'cum', 'kl', 'kilolitre', 'kilolitres'],
    convert: same,
  },
  {
    kind: 'volume',
    name: 'ML',
    spellings: ['ml', 'megalitre', 'megalitres', 'megaliter', 'megaliters', 'dam3'],
    convert: times(CUBIC_METRES_PER_MEGALITRE),
  },
  { kind: 'volume', name: 'L', spellings: ['l', 'litre', 'litres', 'liter', 'liters'], convert: times(0.001) },
  {
    kind: 'volume',
    name: 'ac-ft',
    spellings: ['ac-ft', 'acft', 'acrefoot', 'acrefeet', 'acre-foot', 'acre-feet', 'acreft', 'af'],
    convert: times(CUBIC_METRES_PER_ACRE_FOOT),
  },
  {
    kind: 'volume',
    name: 'ac-in',
    spellings: ['ac-in', 'acin', 'acreinch', 'acreinches', 'acre-inch', 'acre-inches'],
    convert: times(CUBIC_METRES_PER_ACRE_INCH),
  },
  {
    kind: 'volume',
    name: 'ha-m',
    spellings: ['ha-m', 'ham', 'hectaremetre', 'hectaremetres', 'hectaremeter', 'hectaremeters'],
    convert: times(CUBIC_METRES_PER_HECTARE_METRE),
  },
  { kind: 'volume', name: 'ft³', spellings: ['ft3', 'cubicfoot', 'cubicfeet', 'cf'], convert: times(CUBIC_METRES_PER_CUBIC_FOOT) },
  {
    kind: 'volume',
    name: 'US gal',
    spellings: ['gal', 'usgal', 'gallon', 'gallons', 'usgallon'],
    convert: times(CUBIC_METRES_PER_US_GALLON),
  },
  {
    kind: 'volume',
    name: 'cfs-day',
    spellings: ['cfs-day', 'cfsday', 'cfs-days', 'cfsdays', 'cfsd'],
    convert: times(CUBIC_METRES_PER_CFS_DAY),
  },
  {
    kind: 'conductivity',
    name: 'dS/m',
    spellings: ['ds/m', 'dsm', 'dsm-1', 'ms/cm', 'mscm', 'mscm-1', 'mmho/cm', 'mmhocm', 'mmhos/cm', 'mmhoscm'],
    convert: same,
  },
  { kind: 'conductivity', name: 'mS/m', spellings: ['ms/m', 'msm', 'msm-1'], convert: times(0.01) },
  { kind: 'conductivity', name: 'µS/cm', spellings: ['us/cm', 'uscm', 'uscm-1', 'µs/cm', 'µscm', 'μs/cm'], convert: times(0.001) },
  { kind: 'flow', name: 'ML/d', spellings: ['ml/d', 'mld', 'ml/day', 'mld-1'], convert: times(1000 / SECONDS_PER_DAY) },
];

const byKind = new Map<UnitKind, Map<string, UnitDefinition>>();
for (const unit of UNITS) {
  const spellings = byKind.get(unit.kind) ?? new Map<string, UnitDefinition>();
  for (const spelling of [...unit.spellings, unitKey(unit.name)]) if (!spellings.has(spelling)) spellings.set(spelling, unit);
  byKind.set(unit.kind, spellings);
}

/** One key for the many ways a unit is typed: `W m⁻²`, `W/m^2`, `w_m2` … @example unitKey('°C') // 'degc' */
export function unitKey(text: string): string {
  return text
    .trim()
    .toLowerCase()
    .replace(/[²]/g, '2')
    .replace(/[³]/g, '3')
    .replace(/[⁻−–]/g, '-')
    .replace(/¹/g, '1')
    .replace(/[°º˚]/g, 'deg')
    .replace(/[\s_.·*^[\]]/g, '')
    .replace(/^deg(?=\d)/, '');
}

/** The unit of this kind that the text names, or null. @example findUnit('temperature', 'Deg. F') // '°F' */
export function findUnit(kind: UnitKind, text: string): string | null {
  return byKind.get(kind)?.get(unitKey(text))?.name ?? null;
}

/** True when the text is a unit of any kind, or a mark that a column has none. */
export function isUnitText(text: string): boolean {
  const key = unitKey(text);
  if (/^(-|--|none|text|yyyy-?mm-?dd|dd\/mm\/yyyy|mm\/dd\/yyyy|date|id|nodim|degrees?|degn|dege|deg)$/.test(key)) return true;
  for (const spellings of byKind.values()) if (spellings.has(key)) return true;
  return false;
}

/** Converter from a named unit to the inside unit of its kind. @throws nothing: an unknown unit gives null */
export function unitConverter(kind: UnitKind, unit: string): ((value: number) => number) | null {
  return byKind.get(kind)?.get(unitKey(unit))?.convert ?? null;
}

/** The unit used inside for a kind. @example insideUnit('depth') // 'mm' */
export function insideUnit(kind: UnitKind): string {
  const unit = UNITS.find((candidate) => candidate.kind === kind);
  return unit ? unit.name : '';
}

/** Names of the units of a kind, the inside one first. */
export function unitNames(kind: UnitKind): string[] {
  return UNITS.filter((unit) => unit.kind === kind).map((unit) => unit.name);
}
