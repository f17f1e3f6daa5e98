/**
 * One parcel walked many times: weather and curves are placed once, every member of an ensemble then walks them with factors of its own.
 */
import { openStrip, placeParcel } from './kernel.ts';
import { emptyCurve, type PackedSeason, type StripCurve } from './pack.ts';
import { groundOf, groundWithEfficiency, type StripGround } from './strip-ground.ts';
import type { MemberRows, StripWalk } from './strip-walk.ts';
import type { ParcelInput } from './types.ts';
import { walkStrip } from './walk.ts';

export type { MemberRows } from './strip-walk.ts';

/** A parcel with its weather and curves in place, see `placeMembers`. Holds until the next parcel is placed in the same season. */
export interface PlacedParcel {
  readonly parcel: ParcelInput;
  readonly ground: StripGround;
  readonly strips: readonly PlacedStrip[];
}

/** A strip's curves as drawn, with rows of its own for what a member changes, and how it opens. */
interface PlacedStrip {
  readonly drawn: StripCurve;
  readonly member: StripCurve;
  opening: Pick<StripWalk, 'depletion' | 'below' | 'surface' | 'snow' | 'share' | 'stateShare'>;
}

/** What one member differs by from the plain run. Every factor 1 is the plain run, bit for bit. */
export interface MemberFactors {
  /** on reference ET, by day stepped from `referenceEtFrom` on: a row of a [member × day] matrix needs no copy */
  readonly referenceEt: Float64Array;
  readonly referenceEtFrom: number;
  /** on Kcb or Kc, by planting of the parcel's list */
  readonly basal: Float64Array;
  /** on the available water of the soil, to every depth, with the depletion of the first morning */
  readonly available: number;
  /** on the application efficiency; the product is held at 1 */
  readonly efficiency: number;
}

/** Rows that members reuse, per season. */
interface Scratch {
  readonly referenceEt: Float64Array;
  readonly stageEt: Float64Array;
  readonly strips: PlacedStrip[];
}

const scratches = new WeakMap<PackedSeason, Scratch>();

function scratchOf(season: PackedSeason): Scratch {
  let scratch = scratches.get(season);
  if (scratch === undefined) {
    scratch = { referenceEt: new Float64Array(season.input.dayCount), stageEt: new Float64Array(season.stageEt.length), strips: [] };
    scratches.set(season, scratch);
  }
  return scratch;
}

/**
 * Places a parcel's weather and the curves of its strips.
 *
 * @throws as `runSeason`
 */
export function placeMembers(season: PackedSeason, parcel: ParcelInput): PlacedParcel {
  const { strips } = placeParcel(season, parcel);
  const scratch = scratchOf(season);
  let planted = 0;
  for (const strip of strips) if (strip.planted.length > 0) planted += strip.share;
  for (let k = 0; k < strips.length; k++) {
    openStrip(season, parcel, strips[k], strips, planted);
    if (scratch.strips.length <= k) scratch.strips.push(emptyStrip(season));
    const { depletion, below, surface, snow, share, stateShare } = season.walk;
    scratch.strips[k].opening = { depletion, below, surface, snow, share, stateShare };
    copyCurve(season.curve, scratch.strips[k].drawn);
  }
  return { parcel, ground: groundOf(parcel, season.input.settings), strips: scratch.strips.slice(0, strips.length) };
}

function emptyStrip({ input }: PackedSeason): PlacedStrip {
  const drawn = emptyCurve(input.dayCount);
  const own = () => new Float64Array(input.dayCount);
  const none = { depletion: 0, below: 0, surface: 0, snow: 0, share: 0, stateShare: 0 };
  return { drawn, member: { ...drawn, basal: own(), available: own(), scheduleAvailable: own() }, opening: none };
}

function copyCurve(from: StripCurve, into: StripCurve): void {
  for (const name of Object.keys(from) as (keyof StripCurve)[]) {
    if (name !== 'deepestAvailable') into[name].set(from[name]);
  }
  into.deepestAvailable = from.deepestAvailable;
}

/**
 * Walks the placed parcel once with the factors of a member, and fills the rows asked for.
 *
 * Growing plants only have the factor on their coefficient: what stands between crops keeps its own.
 *
 * @returns largest absolute balance residual of its strips and days [mm]
 */
export function walkWithFactors(season: PackedSeason, placed: PlacedParcel, factors: MemberFactors, rows: MemberRows): number {
  const { walk, weather } = season;
  const scratch = scratchOf(season);
  const { referenceEt, referenceEtFrom, available, efficiency } = factors;
  for (let d = 0; d < walk.days; d++) scratch.referenceEt[d] = weather.referenceEt[d] * referenceEt[referenceEtFrom + d];
  rows.netRequirement?.fill(0);
  rows.grossRequirement?.fill(0);
  rows.adjustedCropEt?.fill(0);
  const kept = { referenceEt: walk.referenceEt, curve: walk.curve, stageEt: walk.stageEt };
  walk.referenceEt = scratch.referenceEt;
  walk.stageEt = scratch.stageEt;
  walk.ground = efficiency === 1 ? placed.ground : groundWithEfficiency(placed.parcel, placed.ground, efficiency);
  walk.daily = null;
  walk.stored = null;
  walk.rows = rows;
  walk.heardDay = -1;
  walk.hear = null;
  let worst = 0;
  for (const { drawn, member, opening } of placed.strips) {
    scaleCurve(drawn, member, factors);
    walk.curve = member;
    Object.assign(walk, opening);
    walk.depletion = opening.depletion * available;
    walk.below = opening.below * available;
    worst = Math.max(worst, walkStrip(walk));
  }
  walk.rows = null;
  Object.assign(walk, kept);
  return worst;
}

function scaleCurve(drawn: StripCurve, member: StripCurve, { basal, available }: MemberFactors): void {
  const { planting } = drawn;
  for (let d = 0; d < planting.length; d++) {
    member.basal[d] = planting[d] >= 0 ? drawn.basal[d] * basal[planting[d]] : drawn.basal[d];
    member.available[d] = drawn.available[d] * available;
    member.scheduleAvailable[d] = drawn.scheduleAvailable[d] * available;
  }
  member.deepestAvailable = drawn.deepestAvailable * available;
}
