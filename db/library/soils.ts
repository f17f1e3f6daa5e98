/**
 * Soil classes every district starts with.
 */
import type { Soil } from '../../lib/season/types.ts';

interface LibrarySoil extends Soil {
  readonly source: string;
}

/** Runoff curve numbers of straight-row crops in good condition by hydrologic soil group. Source: NEH 630 chapter 9, Table 9-1 (recalled, not re-read). */
const ROW_CROP_CURVE_NUMBER = { A: 67, B: 78, C: 85, D: 89 } as const;

/**
 * Total porosity, taken for saturation [m³ m⁻³], saturated conductivity [mm d⁻¹], bubbling head [m] and exponent b = 1 / pore-size index, by texture; of silt none are
 * printed. Source: Rawls, Brakensiek & Saxton 1982, Table 2 (recalled, not re-read), as `lib/crop/capillary-rise` has them.
 */
const HYDRAULIC: Readonly<Record<string, readonly [number, number, number, number]>> = {
  sand: [0.437, 5040, 0.0726, 1 / 0.592],
  'loamy-sand': [0.437, 1466.4, 0.0869, 1 / 0.474],
  'sandy-loam': [0.453, 621.6, 0.1466, 1 / 0.322],
  loam: [0.463, 316.8, 0.1115, 1 / 0.22],
  'silt-loam': [0.501, 163.2, 0.2076, 1 / 0.211],
  'silt-clay-loam': [0.471, 36, 0.3256, 1 / 0.151],
  'silty-clay': [0.479, 21.6, 0.3419, 1 / 0.127],
  clay: [0.475, 14.4, 0.373, 1 / 0.131],
};

/** Soils whose texture moves p: coarse raise it, fine lower it. Source: FAO-56, note to Table 22; which classes count: common practice, no source. */
const SHIFTED: Readonly<Record<string, Soil['texture']>> = { sand: 'coarse', 'loamy-sand': 'coarse', 'silty-clay': 'fine', clay: 'fine' };

const SOURCE =
  'FAO-56 Table 19, middle of the printed ranges, Ze 0.10 m; curve number of row crops recalled from NEH 630 (not re-read), soil group by texture; saturation and capillary properties Rawls et al. 1982 Table 2 (recalled, not re-read)';

/** Printed ranges: field capacity, wilting point [m³ m⁻³], readily and totally evaporable water [mm], hydrologic group by texture (TR-55 appendix A, recalled). */
const RANGES = [
  ['sand', 'Sand', [0.07, 0.17], [0.02, 0.07], [2, 7], [6, 12], 'A'],
  ['loamy-sand', 'Loamy sand', [0.11, 0.19], [0.03, 0.1], [4, 8], [9, 14], 'A'],
  ['sandy-loam', 'Sandy loam', [0.18, 0.28], [0.06, 0.16], [6, 10], [15, 20], 'A'],
  ['loam', 'Loam', [0.2, 0.3], [0.07, 0.17], [8, 10], [16, 22], 'B'],
  ['silt-loam', 'Silt loam', [0.22, 0.36], [0.09, 0.21], [8, 11], [18, 25], 'B'],
  ['silt', 'Silt', [0.28, 0.36], [0.12, 0.22], [8, 11], [22, 26], 'B'],
  ['silt-clay-loam', 'Silt clay loam', [0.3, 0.37], [0.17, 0.24], [8, 11], [22, 27], 'D'],
  ['silty-clay', 'Silty clay', [0.3, 0.42], [0.17, 0.29], [8, 12], [22, 28], 'D'],
  ['clay', 'Clay', [0.32, 0.4], [0.2, 0.24], [8, 12], [22, 29], 'D'],
] as const;

export const LIBRARY_SOILS: readonly LibrarySoil[] = RANGES.map(([code, name, capacity, wilting, ready, total, group]) => ({
  code,
  name,
  fieldCapacity: middle(capacity),
  wiltingPoint: middle(wilting),
  evaporationDepth: 0.1,
  readilyEvaporableWater: middle(ready),
  totalEvaporableWater: middle(total),
  curveNumber: ROW_CROP_CURVE_NUMBER[group],
  rootLimit: Number.NaN,
  ...profileOf(code),
  source: SOURCE,
}));

/** The members of a soil that only some have. */
function profileOf(code: string): Pick<Soil, 'saturation' | 'texture' | 'capillary'> {
  const printed = HYDRAULIC[code];
  const texture = SHIFTED[code];
  const shift = texture ? { texture } : {};
  if (!printed) return shift;
  const [saturation, conductivity, bubblingHead, exponent] = printed;
  return { ...shift, saturation, capillary: { conductivity, bubblingHead, exponent } };
}

function middle([low, high]: readonly [number, number]): number {
  return Math.round(((low + high) / 2) * 10000) / 10000;
}
