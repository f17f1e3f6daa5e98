/**
 * What the printed crop table does not hold: response to shortage by stage, ponding, canopies, dormancy, and the table of critical temperatures a crop has.
 */
import type { Crop } from '../../lib/season/types.ts';

export type CropAdditions = Pick<Crop, 'stageResponse' | 'paddy' | 'canopy' | 'dormantBasal' | 'frostTable'>;

const FAO_33 =
  'FAO-33 Table 24 (recalled, not re-read): vegetative, flowering, yield formation and ripening periods; development takes the vegetative, mid season the larger of flowering and yield formation, late the ripening value';

/** Ky of the vegetative, flowering, yield formation and ripening periods, null where none is listed; potato: early and late vegetative apart. */
const RESPONSE: Readonly<
  Record<string, { readonly periods: readonly [number | null, number | null, number | null, number | null]; readonly early?: number }>
> = {
  'maize-grain': { periods: [0.4, 1.5, 0.5, 0.2] },
  'maize-sweet': { periods: [0.4, 1.5, 0.5, 0.2] },
  'winter-wheat-frozen-soils': { periods: [0.2, 0.6, 0.5, null] },
  'winter-wheat-non-frozen-soils': { periods: [0.2, 0.6, 0.5, null] },
  'spring-wheat': { periods: [0.2, 0.65, 0.55, null] },
  'bean-dry': { periods: [0.2, 1.1, 0.75, 0.2] },
  'bean-green': { periods: [0.2, 1.1, 0.75, 0.2] },
  groundnut: { periods: [0.2, 0.8, 0.6, 0.2] },
  sorghum: { periods: [0.2, 0.55, 0.45, 0.2] },
  'sorghum-grain': { periods: [0.2, 0.55, 0.45, 0.2] },
  tomato: { periods: [0.4, 1.1, 0.8, 0.4] },
  potato: { periods: [0.8, null, 0.7, 0.2], early: 0.45 },
  cotton: { periods: [0.2, 0.5, null, 0.25] },
  'onion-dry': { periods: [0.45, null, 0.8, 0.3] },
  'pea-fresh': { periods: [0.2, 0.9, 0.7, 0.2] },
  'sugarcane-ratoon': { periods: [0.75, null, 0.5, 0.1] },
  'sugarcane-virgin': { periods: [0.75, null, 0.5, 0.1] },
  soybean: { periods: [0.2, 0.8, 1, null] },
  cabbage: { periods: [0.2, null, 0.45, 0.6] },
};

/**
 * Ky by stage of FAO-56 from the periods of FAO-33; undefined for a crop that is not listed.
 *
 * @example stageResponseOf('maize-grain') // { development: 0.4, mid: 1.5, late: 0.2 }
 */
export function stageResponseOf(code: string): Crop['stageResponse'] {
  const listed = RESPONSE[code];
  if (!listed) return undefined;
  const [vegetative, flowering, formation, ripening] = listed.periods;
  const mid = Math.max(flowering ?? 0, formation ?? 0);
  return {
    ...(listed.early === undefined ? {} : { initial: listed.early }),
    ...(vegetative === null ? {} : { development: vegetative }),
    ...(mid > 0 ? { mid } : {}),
    ...(ripening === null ? {} : { late: ripening }),
  };
}

/** Cover printed in the name of the crop, middle of a range. */
const PRINTED_COVER: Readonly<Record<string, number>> = {
  'citrus-70-canopy-no-cover': 0.7,
  'citrus-50-canopy-no-cover': 0.5,
  'olive-40-60-cover': 0.5,
};

/** Cover of a mature orchard whose table value has no cover printed. */
const MATURE_COVER = 0.7;

/**
 * Canopy of an orchard over bare ground. Its Kcb is the table's; the cover says how much ground is open to evaporation, which Eq. 76 cannot tell of
 * tall trees. Over green ground the whole surface is covered, and Eq. 76 holds.
 */
function canopyOf({ code, type, heightMax }: CropKey): Crop['canopy'] {
  if (type !== 'orchard' || code.includes('active-cover')) return undefined;
  return { cover: PRINTED_COVER[code] ?? MATURE_COVER, height: heightMax };
}

const PADDY: NonNullable<Crop['paddy']> = {
  floodFrom: -10,
  drainBefore: 14,
  pondTarget: 50,
  pondMinimum: 10,
  bund: 150,
  puddledDepth: 0.2,
};

/** Kcb of the bare stand outside its season. Deciduous trees and vines over bare ground, forage stubble, and green ground cover under trees. */
function dormantBasalOf(code: string): number | undefined {
  if (code.includes('active-cover')) return 0.45;
  if (/^(almond|apple|peach|pistachio|walnut|grape|kiwi|hops)/.test(code)) return 0.15;
  if (code.startsWith('alfalfa')) return 0.15;
  return code.startsWith('pasture') ? 0.3 : undefined;
}

function frostTableOf(code: string): Crop['frostTable'] {
  if (code.startsWith('apple')) return 'apple';
  return code.startsWith('peach') ? 'peach' : undefined;
}

/** What the additions of a crop depend on. */
export type CropKey = Pick<Crop, 'code' | 'type' | 'heightMax'>;

/** The additions of a crop; members that do not apply are left out. */
export function additionsOf(crop: CropKey): CropAdditions {
  const { code } = crop;
  const all = {
    stageResponse: stageResponseOf(code),
    paddy: code === 'rice-paddy' ? PADDY : undefined,
    canopy: canopyOf(crop),
    dormantBasal: dormantBasalOf(code),
    frostTable: frostTableOf(code),
  };
  return Object.fromEntries(Object.entries(all).filter(([, value]) => value !== undefined)) as CropAdditions;
}

const SOURCES: Readonly<Record<keyof CropAdditions, string>> = {
  stageResponse: FAO_33,
  paddy: 'common practice, no source: flooded ten days before planting, drained two weeks before harvest, 50 mm of water, bunds of 150 mm',
  canopy:
    'cover as the name of the crop in FAO-56 Table 17 prints it, else 0.7 of a mature orchard (common practice, no source); height FAO-56 Table 12, middle of the range',
  dormantBasal:
    'Kc min 0.15 of dry bare ground (FAO-56, text of Eq. 76); green ground cover and pasture keep the initial Kcb of FAO-56 Table 17',
  frostTable: 'which table of critical temperatures the crop has: apple and pear buds for pome fruit, peach for stone fruit',
};

/** Source of each addition a crop has. */
export function additionSources(additions: CropAdditions): Partial<Record<keyof Crop, string>> {
  return Object.fromEntries(Object.keys(additions).map((key) => [key, SOURCES[key as keyof CropAdditions]]));
}
