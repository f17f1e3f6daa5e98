/**
 * Loss rules for reaches whose losses have not been measured, by kind of canal.
 *
 * Both tables are recalled, not re-read: a district with ponding or inflow–outflow tests should use those instead.
 */
import type { LossRule } from './loss-rule.ts';

const FAO_TRAINING_MANUAL_4 =
  'FAO Irrigation Water Management Training Manual 4 (1989), indicative conveyance efficiencies (recalled, not re-read)';
const ETCHEVERRY_HARDING =
  'Etcheverry & Harding (1933), Irrigation Practice and Engineering II, seepage by material (recalled, not re-read)';

type CanalBed = 'sand' | 'loam' | 'clay' | 'lined';

/** Conveyance efficiency of well-kept canals by length of canal: over 2000 m, 200–2000 m, under 200 m. Source: FAO training manual 4 (recalled). */
export const CONVEYANCE_EFFICIENCY: Record<CanalBed, { readonly long: number; readonly medium: number; readonly short: number }> = {
  sand: { long: 0.6, medium: 0.7, short: 0.8 },
  loam: { long: 0.7, medium: 0.75, short: 0.85 },
  clay: { long: 0.8, medium: 0.85, short: 0.9 },
  lined: { long: 0.95, medium: 0.95, short: 0.95 },
};

/**
 * Conveyance efficiency of a well-kept canal.
 *
 * @param length of the whole canal [m]
 * @example conveyanceEfficiency('loam', 1500) // 0.75
 * Source: FAO Irrigation Water Management Training Manual 4 (1989) (recalled, not re-read).
 */
export function conveyanceEfficiency(bed: CanalBed, length: number): number {
  const row = CONVEYANCE_EFFICIENCY[bed];
  if (length > 2000) return row.long;
  return length >= 200 ? row.medium : row.short;
}

/** mm d⁻¹ in a ft³ ft⁻² d⁻¹, exact. */
const MILLIMETRES_PER_DAY_PER_FOOT = 304.8;

/** Seepage of unlined canals, ft³ ft⁻² d⁻¹ as printed. Source: Etcheverry & Harding (1933) (recalled). */
export const SEEPAGE_BY_MATERIAL = [
  { code: 'impervious-clay-loam', name: 'Impervious clay loam', low: 0.25, high: 0.35 },
  { code: 'clay-loam-over-hardpan', name: 'Medium clay loam over hardpan', low: 0.35, high: 0.5 },
  { code: 'clay-loam', name: 'Ordinary clay loam, silt', low: 0.5, high: 0.75 },
  { code: 'gravelly-clay-loam', name: 'Gravelly or sandy clay loam', low: 0.75, high: 1 },
  { code: 'sandy-loam', name: 'Sandy loam', low: 1, high: 1.5 },
  { code: 'loose-sand', name: 'Loose sandy soil', low: 1.5, high: 1.75 },
  { code: 'gravelly-sand', name: 'Gravelly sandy soil', low: 2, high: 2.5 },
  { code: 'porous-gravel', name: 'Porous gravel', low: 2.5, high: 3 },
  { code: 'very-gravelly', name: 'Very gravelly soil', low: 3, high: 6 },
] as const;

interface ConveyancePreset {
  readonly code: string;
  readonly name: string;
  readonly source: string;
  /** true when the value comes from memory of the source, not from its text */
  readonly recalled: boolean;
  /** rule for a canal of this whole length [m] and wetted perimeter [m] */
  readonly rule: (canal: { readonly length: number; readonly wettedPerimeter: number }) => LossRule;
}

const NO_LOSS: ConveyancePreset = {
  code: 'no-loss',
  name: 'Pipe or no loss',
  source: 'a closed pipe in good repair; by definition',
  recalled: false,
  rule: () => ({ kind: 'none' }),
};

const BED_NAMES: Record<CanalBed, string> = {
  sand: 'Earth canal in sand',
  loam: 'Earth canal in loam',
  clay: 'Earth canal in clay',
  lined: 'Lined canal',
};

/** Every preset, pipe first, then by efficiency, then by seepage at the middle of the printed range. */
export const CONVEYANCE_PRESETS: readonly ConveyancePreset[] = [
  NO_LOSS,
  ...(Object.keys(BED_NAMES) as CanalBed[]).map((bed) => ({
    code: `efficiency-${bed}`,
    name: BED_NAMES[bed],
    source: FAO_TRAINING_MANUAL_4,
    recalled: true,
    rule: ({ length }: { readonly length: number }): LossRule => ({ kind: 'efficiency', efficiency: conveyanceEfficiency(bed, length) }),
  })),
  ...SEEPAGE_BY_MATERIAL.map((material) => ({
    code: `seepage-${material.code}`,
    name: `Seepage through ${material.name.toLowerCase()}`,
    source: `${ETCHEVERRY_HARDING}; middle of the printed range`,
    recalled: true,
    rule: ({ wettedPerimeter }: { readonly wettedPerimeter: number }): LossRule => ({
      kind: 'seepage',
      rate: Math.round(((material.low + material.high) / 2) * MILLIMETRES_PER_DAY_PER_FOOT),
      wettedPerimeter,
    }),
  })),
];
