/**
 * Soil classes every district starts with.
 */
import type { Soil } from '../../lib/season/types.ts';

interface LibrarySoil extends Soil {
  readonly source: string;
}

/** Runoff curve numbers of straight-row crops in good condition by hydrologic soil group. Source: NEH 630 chapter 9, Table 9-1 (recalled, not re-read). */
const ROW_CROP_CURVE_NUMBER = { A: 67, B: 78, C: 85, D: 89 } as const;

const SOURCE =
  'FAO-56 Table 19, middle of the printed ranges, Ze 0.10 m; curve number of row crops recalled from NEH 630 (not re-read), soil group by texture';

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
  source: SOURCE,
}));

function middle([low, high]: readonly [number, number]): number {
  return Math.round(((low + high) / 2) * 10000) / 10000;
}
