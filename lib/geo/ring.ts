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

/** Edges as x and y of both ends, four numbers each. */
type Edges = Float64Array;

/**
 * Number of pairs of edges that cross or run along each other, counted up to `limit`: with any, the rings do not bound an area as they
 * stand. Rings that touch in a single point do not count.
 */
export function crossingCount(rings: readonly (readonly Position[])[], limit: number): number {
  const edges = edgesOf(rings);
  return edges.length < INDEX_FROM * 4 ? countAllPairs(edges, limit) : countNearPairs(edges, limit);
}

function edgesOf(rings: readonly (readonly Position[])[]): Edges {
  const edges = new Float64Array(4 * rings.reduce((sum, ring) => sum + Math.max(0, ring.length - 1), 0));
  let at = 0;
  for (const ring of rings) {
    for (let k = 1; k < ring.length; k++, at += 4) {
      edges[at] = ring[k - 1][0];
      edges[at + 1] = ring[k - 1][1];
      edges[at + 2] = ring[k][0];
      edges[at + 3] = ring[k][1];
    }
  }
  return edges;
}

function countAllPairs(edges: Edges, limit: number): number {
  let count = 0;
  for (let i = 0; i < edges.length && count < limit; i += 4) {
    for (let j = i + 4; j < edges.length; j += 4) if (boxesMeet(edges, i, j) && edgesConflict(edges, i, j)) count++;
  }
  return Math.min(count, limit);
}

function countNearPairs(edges: Edges, limit: number): number {
  const index = new Flatbush(edges.length / 4);
  const box = (i: number) =>
    [
      Math.min(edges[i], edges[i + 2]),
      Math.min(edges[i + 1], edges[i + 3]),
      Math.max(edges[i], edges[i + 2]),
      Math.max(edges[i + 1], edges[i + 3]),
    ] as const;
  for (let i = 0; i < edges.length; i += 4) index.add(...box(i));
  index.finish();
  let count = 0;
  for (let i = 0; i < edges.length && count < limit; i += 4) {
    index.search(...box(i), (other) => {
      const j = other * 4;
      if (j > i && count < limit && edgesConflict(edges, i, j)) count++;
      return false;
    });
  }
  return count;
}

function boxesMeet(edges: Edges, i: number, j: number): boolean {
  return (
    Math.min(edges[i], edges[i + 2]) <= Math.max(edges[j], edges[j + 2]) &&
    Math.min(edges[j], edges[j + 2]) <= Math.max(edges[i], edges[i + 2]) &&
    Math.min(edges[i + 1], edges[i + 3]) <= Math.max(edges[j + 1], edges[j + 3]) &&
    Math.min(edges[j + 1], edges[j + 3]) <= Math.max(edges[i + 1], edges[i + 3])
  );
}

function edgesConflict(edges: Edges, i: number, j: number): boolean {
  const d1 = side(edges, j, edges[i], edges[i + 1]);
  const d2 = side(edges, j, edges[i + 2], edges[i + 3]);
  if (d1 === 0 && d2 === 0) return runAlong(edges, i, j);
  if (d1 * d2 >= 0) return false;
  return side(edges, i, edges[j], edges[j + 1]) * side(edges, i, edges[j + 2], edges[j + 3]) < 0;
}

/** Side of edge `j` on which a point lies: 1 left, −1 right, 0 on its line. */
function side(edges: Edges, j: number, x: number, y: number): number {
  const [ax, ay] = [edges[j], edges[j + 1]];
  return Math.sign((edges[j + 2] - ax) * (y - ay) - (edges[j + 3] - ay) * (x - ax));
}

/** Collinear edges that share more than a point: a spike, or one ring along another. */
function runAlong(edges: Edges, i: number, j: number): boolean {
  const axis = Math.abs(edges[i + 2] - edges[i]) >= Math.abs(edges[i + 3] - edges[i + 1]) ? 0 : 1;
  const [a, b, c, d] = [edges[i + axis], edges[i + 2 + axis], edges[j + axis], edges[j + 2 + axis]];
  return Math.min(Math.max(a, b), Math.max(c, d)) > Math.max(Math.min(a, b), Math.min(c, d));
}
