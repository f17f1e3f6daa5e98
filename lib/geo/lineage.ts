/**
 * Two generations of parcels on the same ground: what became of each parcel, told by shared area.
 */
import Flatbush from 'flatbush';
import { SLIVER_SHARE } from './area-shares.ts';
import { type PlaneShape, sameShape, sharedArea } from './plane-shape.ts';

/**
 * Two parcels belong together when they share at least this much of the smaller one: a moved boundary does not make a split of it.
 * Common practice, no source.
 */
export const LINK_SHARE = 0.25;
/** Two drawings show the same ground when they share at least this much of both together. Common practice, no source. */
export const SAME_GROUND = 0.995;

export interface Ground {
  readonly code: string;
  readonly shape: PlaneShape;
  /** m² */
  readonly area: number;
}

/** `recoded`: the same ground under another code. `vanished`: no parcel stands on most of it any more. */
export type GroundChange = 'unchanged' | 'recoded' | 'reshaped' | 'split' | 'merged' | 'vanished';

export interface Descent {
  readonly change: GroundChange;
  /** parcels that stand on its ground now, with the share of its area that each has, largest first; slivers are left out */
  readonly successors: readonly { readonly index: number; readonly share: number }[];
}

export interface Lineage {
  /** one for each parcel of the first generation, in its order */
  readonly descents: readonly Descent[];
  /** parcels of the second generation on ground that no parcel of the first held */
  readonly fresh: readonly number[];
}

interface Link {
  readonly index: number;
  /** m² */
  readonly shared: number;
  readonly linked: boolean;
}

/**
 * Compares two generations. A parcel with several successors is split; several with one successor are merged; with one successor alone it
 * is unchanged, recoded or reshaped. Ground that is both cut and joined counts as split for the parcels that were cut.
 */
export function lineageOf(before: readonly Ground[], after: readonly Ground[]): Lineage {
  if (after.length === 0) return { descents: before.map(() => ({ change: 'vanished', successors: [] })), fresh: [] };
  const boxes = new Flatbush(after.length);
  for (const { shape } of after) boxes.add(shape.west, shape.south, shape.east, shape.north);
  boxes.finish();
  const near = before.map(({ shape }) => boxes.search(shape.west, shape.south, shape.east, shape.north));
  const twins = twinsOf(before, after, near);
  const taken = new Set(twins.filter((twin) => twin !== null));
  const links = before.map((one, at) =>
    twins[at] === null ? linksOf(one, after, near[at], taken) : [{ index: twins[at], shared: one.area, linked: true }],
  );
  const origins = new Uint32Array(after.length);
  for (const list of links) for (const { index, linked } of list) if (linked) origins[index]++;
  return {
    descents: before.map((one, at) => descentOf(one, after, links[at], origins)),
    fresh: after.map((_, index) => index).filter((index) => origins[index] === 0),
  };
}

/** For each parcel the one of the second generation with the very same outline, the same code before others; null where there is none. */
function twinsOf(before: readonly Ground[], after: readonly Ground[], near: readonly (readonly number[])[]): (number | null)[] {
  const taken = new Set<number>();
  const take = (index: number | undefined): number | null => {
    if (index !== undefined) taken.add(index);
    return index ?? null;
  };
  const byCode = new Map(after.map(({ code }, index) => [code, index]));
  const twins = before.map(({ code, shape }) => {
    const index = byCode.get(code);
    return take(index !== undefined && sameShape(shape, after[index].shape) ? index : undefined);
  });
  return twins.map(
    (twin, at) => twin ?? take(near[at].find((index) => !taken.has(index) && sameShape(before[at].shape, after[index].shape))),
  );
}

function linksOf(one: Ground, after: readonly Ground[], near: readonly number[], taken: ReadonlySet<number>): Link[] {
  const links: Link[] = [];
  for (const index of near) {
    const other = after[index];
    if (taken.has(index)) continue;
    const shared = sharedArea(one.shape, other.shape);
    const linked = shared >= LINK_SHARE * Math.min(one.area, other.area);
    if (linked || shared >= SLIVER_SHARE * one.area) links.push({ index, shared, linked });
  }
  return links.sort((a, b) => b.shared - a.shared || a.index - b.index);
}

function descentOf(one: Ground, after: readonly Ground[], links: readonly Link[], origins: Uint32Array): Descent {
  const heirs = links.filter(({ linked }) => linked);
  const successors = links.map(({ index, shared }) => ({ index, share: Math.min(1, shared / one.area) }));
  if (heirs.length === 0) return { change: 'vanished', successors };
  if (heirs.length > 1) return { change: 'split', successors };
  const [{ index, shared }] = heirs;
  if (origins[index] > 1) return { change: 'merged', successors };
  const heir = after[index];
  const same = shared >= SAME_GROUND * (one.area + heir.area - shared);
  if (!same) return { change: 'reshaped', successors };
  return { change: heir.code === one.code ? 'unchanged' : 'recoded', successors };
}
