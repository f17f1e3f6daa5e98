/**
 * Polygons over polygons by area: the soil classes under a parcel, the service areas around it.
 */
import Flatbush from 'flatbush';
import { type PlaneShape, sharedArea } from './plane-shape.ts';

/** Shares below this are slivers of two drawings of one line, and dropped. Common practice, no source. */
export const SLIVER_SHARE = 0.005;

/** A polygon of the cover and the share of the ground that it takes. */
export interface AreaShare {
  /** place of the polygon in the cover */
  readonly index: number;
  /** 0–1 */
  readonly share: number;
  /** share before overlaps were shared out, 0–1 */
  readonly held: number;
}

export interface Cover {
  /** Shares of one polygon's ground by the polygons of the cover, largest first. They sum to 1 at most. @param area of the polygon [m²] */
  readonly sharesOf: (shape: PlaneShape, area: number) => AreaShare[];
  /** polygons of the cover whose box holds a place */
  readonly near: (longitude: number, latitude: number) => number[];
}

/**
 * Indexes the polygons of a map that lie under others. Where polygons of the cover overlap each other so that the shares would sum to more
 * than 1, all are scaled down: the overlap is shared by area.
 */
export function coverOf(shapes: readonly PlaneShape[]): Cover {
  if (shapes.length === 0) return { sharesOf: () => [], near: () => [] };
  const index = new Flatbush(shapes.length);
  for (const { west, south, east, north } of shapes) index.add(west, south, east, north);
  index.finish();
  const sharesOf = (shape: PlaneShape, area: number): AreaShare[] => {
    if (!(area > 0)) return [];
    const found = index.search(shape.west, shape.south, shape.east, shape.north);
    const shares = found.map((one) => ({ index: one, held: Math.min(1, sharedArea(shape, shapes[one]) / area) }));
    return wholeAtMost(shares.filter(({ held }) => held >= SLIVER_SHARE));
  };
  return { sharesOf, near: (longitude, latitude) => index.search(longitude, latitude, longitude, latitude) };
}

function wholeAtMost(shares: readonly Omit<AreaShare, 'share'>[]): AreaShare[] {
  const sum = shares.reduce((total, { held }) => total + held, 0);
  const whole = Math.max(1, sum);
  return shares.map(({ index, held }) => ({ index, held, share: held / whole })).sort((a, b) => b.share - a.share || a.index - b.index);
}
