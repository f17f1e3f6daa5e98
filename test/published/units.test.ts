/**
 * Unit factors against published values: NIST Special Publication 811 (2008), Appendix B, and FAO-56 Annex 1. Each row carries the printed
 * value and is held to half a unit of its last digit.
 */
import { describe, expect, test } from 'vitest';
import * as units from '../../lib/base/units.ts';

const acre = units.SQUARE_METRES_PER_ACRE;
const acreFoot = units.CUBIC_METRES_PER_ACRE_FOOT;
const cfs = units.CUBIC_METRES_PER_SECOND_PER_CFS;
const gpm = units.CUBIC_METRES_PER_SECOND_PER_GPM;
const mgd = units.CUBIC_METRES_PER_SECOND_PER_MGD;
const acreFootDay = units.CUBIC_METRES_PER_SECOND_PER_ACRE_FOOT_DAY;
const miners = units.CUBIC_METRES_PER_SECOND_PER_MINERS_INCH;
const foot = units.CUBIC_METRES_PER_CUBIC_FOOT;

const ROWS: [name: string, value: number, printed: number, digits: number][] = [
  ['acre-foot 1233.48183754752 m³', acreFoot, 1233.48183754752, 10],
  ['acre-foot 43 560 ft³', acreFoot / foot, 43560, 6],
  ['acre-foot 325 851.4286 US gal', acreFoot / units.CUBIC_METRES_PER_US_GALLON, 325851.4286, 4],
  ['acre-inch 102.790153129 m³', units.CUBIC_METRES_PER_ACRE_INCH, 102.790153129, 9],
  ['acre 4046.8564224 m²', acre, 4046.8564224, 7],
  ['acre is a foot of depth under an acre-foot', acreFoot / acre / units.METRES_PER_FOOT, 1, 9],
  ['foot 12 inches', (units.METRES_PER_FOOT * 1000) / units.MILLIMETRES_PER_INCH, 12, 9],
  ['cfs 0.028316846592 m³ s⁻¹', cfs, 0.028316846592, 12],
  ['cfs 448.831169 gpm', cfs / gpm, 448.831169, 6],
  ['cfs-day 2446.5755455 m³', units.CUBIC_METRES_PER_CFS_DAY, 2446.5755455, 7],
  ['cfs-day 1.98347107 acre-ft', units.CUBIC_METRES_PER_CFS_DAY / acreFoot, 1.98347107, 8],
  ['cfs-hour 0.99173554 acre-inch', (cfs * 3600) / units.CUBIC_METRES_PER_ACRE_INCH, 0.99173554, 8],
  ['acre-ft/day 0.504166667 cfs', acreFootDay / cfs, 0.504166667, 9],
  ['acre-ft/day 226.285714 gpm', acreFootDay / gpm, 226.285714, 6],
  ['inch/day on an acre 18.857143 gpm', units.CUBIC_METRES_PER_ACRE_INCH / units.SECONDS_PER_DAY / gpm, 18.857143, 6],
  ['US gal 3.785411784 L', units.CUBIC_METRES_PER_US_GALLON * 1000, 3.785411784, 9],
  ['gpm 6.30901964 × 10⁻⁵ m³ s⁻¹', gpm * 1e5, 6.30901964, 8],
  ['mgd 3.0689 acre-ft/day', mgd / acreFootDay, 3.0689, 4],
  ['mgd 1.5472 cfs', mgd / cfs, 1.5472, 4],
  ['ML 0.810713 acre-ft', units.CUBIC_METRES_PER_MEGALITRE / acreFoot, 0.810713, 6],
  ['ML on a hectare 100 mm', units.volumeToDepth(units.CUBIC_METRES_PER_MEGALITRE, units.SQUARE_METRES_PER_HECTARE), 100, 9],
  ['ha-m 8.10713 acre-ft', units.CUBIC_METRES_PER_HECTARE_METRE / acreFoot, 8.10713, 5],
  ['mm on a hectare 10 m³', units.depthToVolume(1, units.SQUARE_METRES_PER_HECTARE), 10, 9],
  ['L s⁻¹ ha⁻¹ 8.640 mm d⁻¹', units.MILLIMETRES_PER_DAY_PER_LITRE_SECOND_HECTARE, 8.64, 9],
  ['mm d⁻¹ 0.11574 L s⁻¹ ha⁻¹', 1 / units.MILLIMETRES_PER_DAY_PER_LITRE_SECOND_HECTARE, 0.11574, 5],
  ['MJ m⁻² d⁻¹ 11.5740741 W m⁻²', 1 / units.MEGAJOULES_PER_DAY_PER_WATT, 11.5740741, 7],
  ['W m⁻² 0.0864 MJ m⁻² d⁻¹', units.MEGAJOULES_PER_DAY_PER_WATT, 0.0864, 9],
  ['MJ m⁻² d⁻¹ 23.9 cal cm⁻² d⁻¹ (FAO-56 Table 3)', 1 / units.MEGAJOULES_PER_CALORIE_CM2, 23.9, 1],
  ['cal cm⁻² 0.041868 MJ m⁻² (IT calorie)', units.MEGAJOULES_PER_CALORIE_CM2, 0.041868, 9],
  ['langley 41 840 J m⁻²', units.MEGAJOULES_PER_LANGLEY * 1e6, 41840, 6],
  ['mph 0.44704 m s⁻¹', units.METRES_PER_SECOND_PER_MPH, 0.44704, 9],
  ['knot 0.514444 m s⁻¹', units.METRES_PER_SECOND_PER_KNOT, 0.514444, 6],
  ['km/day 0.0115741 m s⁻¹', units.METRES_PER_SECOND_PER_KM_DAY, 0.0115741, 7],
  ['km/h 2.777778 × 10⁻¹ m s⁻¹', units.METRES_PER_SECOND_PER_KM_HOUR * 10, 2.777778, 6],
  ['mbar 0.1 kPa', units.KILOPASCALS_PER_MILLIBAR, 0.1, 9],
  ['mmHg 0.133322 kPa', units.KILOPASCALS_PER_MMHG, 0.133322, 6],
  ['cm of water 0.0980665 kPa', units.KILOPASCALS_PER_CM_WATER, 0.0980665, 7],
  ['atmosphere 101.325 kPa', units.KILOPASCALS_PER_ATMOSPHERE, 101.325, 9],
  // FAO-56 prints 6.896 for the psi, a slip; NIST has 6.894757.
  ['psi 6.894757 kPa', units.KILOPASCALS_PER_PSI, 6.894757, 6],
  ['inch of 1/50 cfs 8.977 gpm', miners.fiftieth / gpm, 8.977, 3],
  ['inch of 1/50 cfs 0.5663 L s⁻¹', miners.fiftieth * 1000, 0.5663, 4],
  ['inch of 1/40 cfs 11.221 gpm', miners.fortieth / gpm, 11.221, 3],
  ['inch of 1/40 cfs 0.7079 L s⁻¹', miners.fortieth * 1000, 0.7079, 4],
  ['inch of 1/38.4 cfs 11.688 gpm', miners.colorado / gpm, 11.688, 3],
  ['inch of 1/38.4 cfs 0.7374 L s⁻¹', miners.colorado * 1000, 0.7374, 4],
  ['inch of 0.028 cfs', miners.britishColumbia / cfs, 0.028, 9],
  ['28 °F −2.22 °C', units.celsiusFromFahrenheit(28), -2.22, 2],
  ['2 °F −16.67 °C', units.celsiusFromFahrenheit(2), -16.67, 2],
];

describe('factors', () => {
  test.each(ROWS)('%s', (_name, value, printed, digits) => {
    expect(Math.abs(value - printed)).toBeLessThanOrEqual(0.5 * 10 ** -digits);
  });
});

describe('inverse pairs return what went in', () => {
  const pairs: [name: string, there: (x: number) => number, back: (x: number) => number][] = [
    ['Fahrenheit', units.celsiusFromFahrenheit, units.fahrenheitFromCelsius],
    ['kelvin', units.celsiusFromKelvin, units.kelvinFromCelsius],
    ['depth and volume', (x) => units.depthToVolume(x, 12345), (x) => units.volumeToDepth(x, 12345)],
    ['volume and flow', (x) => units.volumeToFlow(x, 7), (x) => units.flowToVolume(x, 7)],
  ];
  test.each(pairs)('%s', (_name, there, back) => {
    for (const x of [-40, 0, 0.1, 17, 300]) expect(back(there(x))).toBeCloseTo(x, 10);
  });
});

describe('border units carry the factor of the published table', () => {
  const rows: [suffix: string, us: number, digits: number][] = [
    ['mm', 1 / 25.4, 12],
    ['m3', 0.000810713, 9],
    ['m3_s', 35.3146667, 7],
    ['m2', 0.000247105381, 12],
    ['m', 3.280839895, 9],
    ['m_s', 2.236936292, 9],
    // reciprocal of the mile of SP 811 Appendix B.8, 1.609344 km exact
    ['km', 1 / 1.609344, 12],
  ];
  test.each(rows)('%s', (suffix, us, digits) => {
    expect(Math.abs(units.BORDER_UNITS[suffix].us.fromMetric - us)).toBeLessThanOrEqual(0.5 * 10 ** -digits);
  });
});
