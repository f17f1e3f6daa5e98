/**
 * Soil water at the two ends of a run: how the stores of a strip open, and what a parcel hands on to the season that follows.
 *
 * Within a piece of a profile the depletion is spread in proportion to what the soil holds there, as the stores of the season spread theirs. So a
 * profile that a season leaves behind gives the next one the same water over the same depth.
 */
import { availableTo, depthHolding, profileOf, type SoilProfile } from './soil-profile.ts';
import type { DepletionProfile, InitialWater, ParcelInput, SeasonSettings, Soil } from './types.ts';

/** The stores of a strip on the first morning [mm]. */
export interface StripOpening {
  /** Dr of the root zone */
  readonly rootDepletion: number;
  /** Db of the soil between the root zone and the deepest root of the run */
  readonly belowDepletion: number;
  /** De of the surface layer */
  readonly surfaceDepletion: number;
  /** water above field capacity: a run begins without any */
  readonly pond: 0;
}

/** The edges of a strip's two stores [m]. */
export interface StripDepths {
  /** Zr on the first day stepped */
  readonly rootDepth: number;
  /** deepest root of the run, at least `rootDepth` */
  readonly deepestRoot: number;
}

/** What an opening is read from: the parcel's own water, or the share of the settings. */
export interface OpeningRule {
  readonly initialWater?: InitialWater;
  /** depletion as a share of available water where no profile tells, 0–1 */
  readonly initialDepletion: number;
}

/**
 * Opening of a strip's stores.
 *
 *   Dr = Σ depletion of the profile over 0 … Zr;   Db = Σ over Zr … deepest root;   below the profile: `initialDepletion` × what the soil holds
 *   De = surface share × TEW, else share of the available water that the layer Ze lacks × TEW
 *
 * A piece of the profile drier than wilting point counts as at wilting point, one wetter than field capacity as at field capacity.
 *
 * @param parcel its soil and initial water
 * @param settings the share that stands in
 * @returns [mm]
 * Source: FAO-56 Eq. 87 (Dr = 1000 (θFC − θ) Zr), over the pieces of a profile; spreading within a piece: choice of the product.
 */
export function openState(
  parcel: Pick<ParcelInput, 'soil' | 'initialWater'>,
  settings: Pick<SeasonSettings, 'initialDepletion'>,
  depths: StripDepths,
): StripOpening {
  const { soil, initialWater } = parcel;
  const profile = profileOf(soil);
  const rule: OpeningRule = { initialWater, initialDepletion: settings.initialDepletion };
  const rootDepletion = depletionBetween(profile, rule, 0, depths.rootDepth);
  const belowDepletion = depletionBetween(profile, rule, depths.rootDepth, depths.deepestRoot);
  return { rootDepletion, belowDepletion, surfaceDepletion: openSurface(soil, profile, rule), pond: 0 };
}

function openSurface(soil: Soil, profile: SoilProfile, rule: OpeningRule): number {
  const share = rule.initialWater?.surfaceShare;
  if (share !== undefined) return Math.min(1, Math.max(0, share)) * soil.totalEvaporableWater;
  if (!hasProfile(rule)) return rule.initialDepletion * soil.totalEvaporableWater;
  const held = availableTo(profile, soil.evaporationDepth);
  return (depletionBetween(profile, rule, 0, soil.evaporationDepth) / held) * soil.totalEvaporableWater;
}

function hasProfile({ initialWater }: OpeningRule): boolean {
  return initialWater !== undefined && initialWater.profile.length > 0;
}

/**
 * Depletion of the soil between two depths on the first morning [mm].
 *
 * @param top upper depth [m]
 * @param bottom lower depth [m], at least `top`
 */
export function depletionBetween(soil: SoilProfile, rule: OpeningRule, top: number, bottom: number): number {
  if (!(bottom > top)) return 0;
  const pieces = rule.initialWater?.profile ?? [];
  let sum = 0;
  let from = 0;
  for (const piece of pieces) {
    sum += depletionOfPiece(soil, from, piece, top, bottom);
    from = piece.bottom;
  }
  const rest = Math.max(top, from);
  if (bottom > rest) sum += rule.initialDepletion * (availableTo(soil, bottom) - (rest > 0 ? availableTo(soil, rest) : 0));
  return sum;
}

/** The part of one piece of a profile, from `from` to its bottom, that lies between two depths. */
function depletionOfPiece(soil: SoilProfile, from: number, piece: DepletionProfile[number], top: number, bottom: number): number {
  const high = Math.max(from, top);
  const low = Math.min(piece.bottom, bottom);
  if (!(low > high)) return 0;
  const above = availableTo(soil, from);
  const held = availableTo(soil, piece.bottom) - above;
  const depletion = Math.min(held, Math.max(0, piece.depletion));
  if (high === from && low === piece.bottom) return depletion;
  return (depletion * (availableTo(soil, low) - availableTo(soil, high))) / held;
}

/** Depth to which water that has percolated past the roots is followed [m]. Choice of the product. */
const DEEPEST_FOLLOWED = 3;

/** A strip as the run left it. Depths [m], water [mm]. */
export interface StripClosing {
  /** share of the parcel's area, 0–1 */
  readonly share: number;
  /** Zr on the last day */
  readonly rootDepth: number;
  readonly deepestRoot: number;
  /** Dr */
  readonly rootDepletion: number;
  /** Db */
  readonly belowDepletion: number;
  /** De */
  readonly surfaceDepletion: number;
  /** water that passed below the deepest root during the run; left out: 0 */
  readonly percolation?: number;
}

/** A strip with the depth to which its percolation has refilled the soil [m]. */
interface FollowedStrip extends StripClosing {
  readonly refilled: number;
}

/**
 * What a parcel hands on: one profile for the whole parcel, the strips weighted by area.
 *
 * The profile reaches to the deepest root of any strip, to the bottom of the profile that the run began with, or to where percolation has refilled the soil,
 * whichever lies deepest. Soil below the deepest root of a strip is as the run found it, refilled from above by what percolated past the roots: after a
 * fallow year, whose strip is shallow, the winter's rain is there. Percolation is followed to 3 m; what is left leaves the soil. Water above field
 * capacity in a ponded field is not handed on: it drains between seasons.
 *
 * @param strips all strips of the parcel; shares sum to 1
 * @param snow water of the snow on the ground [mm]
 * @returns depletion per piece over the parcel; `surfaceShare` is De / TEW
 * Source: conservation of water; choice of the product.
 */
export function closingWater(
  parcel: Pick<ParcelInput, 'soil' | 'initialWater'>,
  settings: Pick<SeasonSettings, 'initialDepletion'>,
  strips: readonly StripClosing[],
  snow: number,
): InitialWater {
  const total = parcel.soil.totalEvaporableWater;
  const profile = profileOf(parcel.soil);
  const rule: OpeningRule = { initialWater: parcel.initialWater, initialDepletion: settings.initialDepletion };
  const followed = strips.map((strip) => ({ ...strip, refilled: refilledTo(profile, rule, strip.deepestRoot, strip.percolation ?? 0) }));
  if (followed.length === 1 && !hasProfile(rule)) {
    return { profile: piecesOf(followed[0]), surfaceShare: followed[0].surfaceDepletion / total, snow };
  }
  let share = 0;
  let surface = 0;
  for (const strip of strips) {
    share += strip.share;
    surface += strip.share * strip.surfaceDepletion;
  }
  const edges = edgesOf(followed, parcel.initialWater);
  const pieces = edges.map((bottom, k) => {
    const top = k === 0 ? 0 : edges[k - 1];
    let depletion = 0;
    for (const strip of followed) depletion += strip.share * closingBetween(profile, rule, strip, top, bottom);
    return { bottom, depletion: depletion / share };
  });
  return { profile: pieces, surfaceShare: surface / share / total, snow };
}

/**
 * Depth to which water that comes from above refills the soil as the run found it.
 *
 * @param from where the water comes in [m]
 * @param water [mm]
 */
function refilledTo(soil: SoilProfile, rule: OpeningRule, from: number, water: number): number {
  if (!(water > 0) || from >= DEEPEST_FOLLOWED) return from;
  let top = from;
  let left = water;
  for (const { bottom } of rule.initialWater?.profile ?? []) {
    if (bottom <= top) continue;
    const need = depletionBetween(soil, rule, top, bottom);
    if (need > left) return Math.min(DEEPEST_FOLLOWED, within(soil, top, bottom, left / need));
    left -= need;
    top = bottom;
  }
  const need = depletionBetween(soil, rule, top, DEEPEST_FOLLOWED);
  return need > left ? within(soil, top, DEEPEST_FOLLOWED, left / need) : Math.max(top, DEEPEST_FOLLOWED);
}

/** Depth that has a share of the water held between two depths above it. */
function within(soil: SoilProfile, top: number, bottom: number, share: number): number {
  const above = availableTo(soil, top);
  return depthHolding(soil, above + share * (availableTo(soil, bottom) - above));
}

/** A strip's stores and the refilled soil below them as pieces of a profile: the common case of one strip, without a profile at the start. */
function piecesOf({ rootDepth, deepestRoot, rootDepletion, belowDepletion, refilled }: FollowedStrip): DepletionProfile {
  const pieces = [{ bottom: rootDepth, depletion: rootDepletion }];
  if (deepestRoot > rootDepth) pieces.push({ bottom: deepestRoot, depletion: belowDepletion });
  if (refilled > deepestRoot) pieces.push({ bottom: refilled, depletion: 0 });
  return pieces;
}

/** Depths at which the water of any strip, or the profile the run began with, changes; ascending, each once. */
function edgesOf(strips: readonly FollowedStrip[], initial: InitialWater | undefined): number[] {
  const all = strips.flatMap(({ rootDepth, deepestRoot, refilled }) => [rootDepth, deepestRoot, refilled]);
  for (const { bottom } of initial?.profile ?? []) all.push(bottom);
  return [...new Set(all)].filter((depth) => depth > 0).sort((a, b) => a - b);
}

/** Depletion of a strip between two neighbouring edges. */
function closingBetween(soil: SoilProfile, rule: OpeningRule, strip: FollowedStrip, top: number, bottom: number): number {
  if (bottom <= strip.rootDepth) return spread(soil, strip.rootDepletion, 0, strip.rootDepth, top, bottom);
  if (bottom <= strip.deepestRoot) return spread(soil, strip.belowDepletion, strip.rootDepth, strip.deepestRoot, top, bottom);
  return bottom <= strip.refilled ? 0 : depletionBetween(soil, rule, top, bottom);
}

/** A store's depletion between two depths within it, by what the soil holds there. */
function spread(soil: SoilProfile, depletion: number, storeTop: number, storeBottom: number, top: number, bottom: number): number {
  if (top === storeTop && bottom === storeBottom) return depletion;
  const above = availableTo(soil, storeTop);
  return (depletion * (availableTo(soil, bottom) - availableTo(soil, top))) / (availableTo(soil, storeBottom) - above);
}
