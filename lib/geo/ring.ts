/**
 * Rings of polygons in plane longitude and latitude: orientation, cleaning, crossings.
 */

import Flatbush from 'flatbush';
import type { Position } from 'geojson';

/** Number of edges from which crossings are looked for through an index. */
const INDEX_FROM = 64;

/** Twice the signed plane area [degrees²], positive anticlockwise; computed about the first vertex to keep digits. */
export function planeDoubleArea(ring: readonly Position[]): number {
  let sum = 0;
  const [x0, y0] = ring[0] ?? [0, 0];
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    sum += (ring[j][0] - x0) * (ring[i][1] - y0) - (ring[i][0] - x0) * (ring[j][1] - y0);
  }
  return sum;
}

interface CleanRing {
  readonly ring: Position[];
  readonly closed: boolean;
  readonly duplicates: number;
  readonly reversed: boolean;
}

/**
 * Closes a ring, removes repeated vertices and heights, and turns it anticlockwise (or clockwise for a hole), as RFC 7946 section 3.1.6 asks.
 * Null when fewer than three different vertices remain.
 */
export function cleanRing(ring: readonly Position[], hole: boolean): CleanRing | null {
  const open: Position[] = [];
  for (const [x, y] of ring) {
    const last = open[open.length - 1];
    if (!last || last[0] !== x || last[1] !== y) open.push([x, y]);
  }
  const closed = open.length > 1 && samePosition(open[0], open[open.length - 1]);
  const duplicates = ring.length - open.length;
  if (closed) open.pop();
  if (open.length < 3) return null;
  const area = planeDoubleArea(open);
  const reversed = hole ? area > 0 : area < 0;
  const turned = reversed ? [open[0], ...open.slice(1).reverse()] : open;
  return { ring: [...turned, [...turned[0]]], closed, duplicates, reversed };
}

export function samePosition(a: Position, b: Position): boolean {
  return a[0] === b[0] && a[1] === b[1];
}

interface Edge {
  readonly a: Position;
  readonly b: Position;
}

/**
 * Number of pairs of edges that cross or run along each other, counted up to `limit`: with any, the rings do not bound an area as they
 * stand. Rings that touch in a single point do not count.
 */
export function crossingCount(rings: readonly (readonly Position[])[], limit: number): number {
  const edges = rings.flatMap((ring) => ring.slice(1).map((b, index): Edge => ({ a: ring[index], b })));
  return edges.length < INDEX_FROM ? countAllPairs(edges, limit) : countNearPairs(edges, limit);
}

function countAllPairs(edges: readonly Edge[], limit: number): number {
  let count = 0;
  for (let i = 0; i < edges.length && count < limit; i++) {
    for (let j = i + 1; j < edges.length; j++) if (edgesConflict(edges[i], edges[j])) count++;
  }
  return Math.min(count, limit);
}

function countNearPairs(edges: readonly Edge[], limit: number): number {
  const index = new Flatbush(edges.length);
  for (const { a, b } of edges) index.add(Math.min(a[0], b[0]), Math.min(a[1], b[1]), Math.max(a[0], b[0]), Math.max(a[1], b[1]));
  index.finish();
  let count = 0;
  for (let i = 0; i < edges.length && count < limit; i++) {
    const { a, b } = edges[i];
    index.search(Math.min(a[0], b[0]), Math.min(a[1], b[1]), Math.max(a[0], b[0]), Math.max(a[1], b[1]), (j) => {
      if (j > i && count < limit && edgesConflict(edges[i], edges[j])) count++;
      return false;
    });
  }
  return count;
}

function edgesConflict(p: Edge, q: Edge): boolean {
  const d1 = side(q.a, q.b, p.a);
  const d2 = side(q.a, q.b, p.b);
  const d3 = side(p.a, p.b, q.a);
  const d4 = side(p.a, p.b, q.b);
  if (d1 === 0 && d2 === 0) return runAlong(p, q);
  return d1 * d2 < 0 && d3 * d4 < 0;
}

function side(a: Position, b: Position, c: Position): number {
  return Math.sign((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]));
}

/** Collinear edges that share more than a point: a spike, or one ring along another. */
function runAlong(p: Edge, q: Edge): boolean {
  const axis = Math.abs(p.b[0] - p.a[0]) >= Math.abs(p.b[1] - p.a[1]) ? 0 : 1;
  const low = Math.max(Math.min(p.a[axis], p.b[axis]), Math.min(q.a[axis], q.b[axis]));
  const high = Math.min(Math.max(p.a[axis], p.b[axis]), Math.max(q.a[axis], q.b[axis]));
  return high > low;
}
