/**
 * Polygons packed for overlay, and the area two of them share.
 *
 * The shared area is summed over level slabs. A slab ends wherever a corner of either polygon lies or two of their edges cross, so that
 * within it every width changes linearly, and two points of it give its area, the metres of a degree changing with latitude. Inside is what
 * an odd number of edges lies west of: rings that touch themselves or each other need no repair, and nothing is clipped that could fail.
 */
import type { MultiPolygon, Polygon } from 'geojson';
import { degreeLengths } from './degree-lengths.ts';

/** A polygon as closed edges. */
export interface PlaneShape {
  /** x, y of the start and of the end of each edge [degrees] */
  readonly edges: Float64Array;
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

/**
 * Packs a polygon; its rings may be open or closed and in any direction.
 *
 * @param shape positions in degrees
 */
export function planeShape(shape: Polygon | MultiPolygon): PlaneShape {
  const rings = (shape.type === 'Polygon' ? [shape.coordinates] : shape.coordinates).flat();
  const edges = new Float64Array(4 * rings.reduce((sum, ring) => sum + ring.length, 0));
  let [west, south, east, north] = [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY];
  let used = 0;
  for (const ring of rings) {
    for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
      const [x, y] = ring[i];
      west = Math.min(west, x);
      east = Math.max(east, x);
      south = Math.min(south, y);
      north = Math.max(north, y);
      if (ring[j][0] === x && ring[j][1] === y) continue;
      edges.set([ring[j][0], ring[j][1], x, y], used);
      used += 4;
    }
  }
  return { edges: used === edges.length ? edges : edges.slice(0, used), west, south, east, north };
}

/** True when two shapes have the same edges in the same order. */
export function sameShape(a: PlaneShape, b: PlaneShape): boolean {
  if (a.edges.length !== b.edges.length || a.west !== b.west || a.south !== b.south || a.east !== b.east || a.north !== b.north)
    return false;
  for (let i = 0; i < a.edges.length; i++) if (a.edges[i] !== b.edges[i]) return false;
  return true;
}

/** Numbers gathered for one overlay and used again for the next: a hundred thousand parcels make a million of them. */
class Scratch {
  numbers = new Float64Array(256);
  length = 0;

  push(value: number): void {
    if (this.length === this.numbers.length) {
      const wider = new Float64Array(2 * this.length);
      wider.set(this.numbers);
      this.numbers = wider;
    }
    this.numbers[this.length++] = value;
  }

  sort(): void {
    const { numbers, length } = this;
    if (length > 48) {
      numbers.subarray(0, length).sort();
      return;
    }
    for (let i = 1; i < length; i++) {
      const value = numbers[i];
      let j = i - 1;
      for (; j >= 0 && numbers[j] > value; j--) numbers[j + 1] = numbers[j];
      numbers[j + 1] = value;
    }
  }
}

const FIRST = new Scratch();
const SECOND = new Scratch();
const LEVELS = new Scratch();
const FIRST_ENDS = new Scratch();
const SECOND_ENDS = new Scratch();

/**
 * Area that two polygons share, their edges straight in longitude and latitude.
 *
 * @returns [m²], 0 when they only touch
 */
export function sharedArea(a: PlaneShape, b: PlaneShape): number {
  const west = Math.max(a.west, b.west);
  const south = Math.max(a.south, b.south);
  const east = Math.min(a.east, b.east);
  const north = Math.min(a.north, b.north);
  if (!(north > south) || !(east > west)) return 0;
  takeEdges(a.edges, south, north, FIRST);
  takeEdges(b.edges, south, north, SECOND);
  takeLevels({ west, south, east, north });
  let area = 0;
  for (let i = 1; i < LEVELS.length; i++) {
    const height = LEVELS.numbers[i] - LEVELS.numbers[i - 1];
    if (height <= 0) continue;
    const middle = LEVELS.numbers[i - 1] + height / 2;
    area += ((stripAt(middle - GAUSS * height) + stripAt(middle + GAUSS * height)) * height) / 2;
  }
  return area;
}

/** Half the distance of the two points of Gauss–Legendre quadrature, in units of the interval. Source: Abramowitz and Stegun Table 25.4, n = 2. */
const GAUSS = 0.5 / Math.sqrt(3);

/** Shared area per degree of latitude at a level [m² degree⁻¹]. */
function stripAt(level: number): number {
  takeEnds(FIRST, level, FIRST_ENDS);
  takeEnds(SECOND, level, SECOND_ENDS);
  const width = commonWidth(FIRST_ENDS, SECOND_ENDS);
  if (width <= 0) return 0;
  const unit = degreeLengths(level);
  return width * unit.east * unit.north;
}

/** Edges that reach into a band, each turned upwards; level edges bound no width and are left out. */
function takeEdges(edges: Float64Array, south: number, north: number, into: Scratch): void {
  into.length = 0;
  for (let i = 0; i < edges.length; i += 4) {
    const y1 = edges[i + 1];
    const y2 = edges[i + 3];
    if (y1 === y2 || (y1 <= south && y2 <= south) || (y1 >= north && y2 >= north)) continue;
    const up = y1 < y2;
    into.push(edges[up ? i : i + 2]);
    into.push(up ? y1 : y2);
    into.push(edges[up ? i + 2 : i]);
    into.push(up ? y2 : y1);
  }
}

interface Band {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

/** Levels at which a width may bend, ascending: ends of the band, corners, crossings. */
function takeLevels(band: Band): void {
  const { south, north } = band;
  LEVELS.length = 0;
  LEVELS.push(south);
  LEVELS.push(north);
  for (const { numbers, length } of [FIRST, SECOND]) {
    for (let i = 1; i < length; i += 2) if (numbers[i] > south && numbers[i] < north) LEVELS.push(numbers[i]);
  }
  const p = FIRST.numbers;
  for (let i = 0; i < FIRST.length; i += 4) {
    if ((p[i] < band.west && p[i + 2] < band.west) || (p[i] > band.east && p[i + 2] > band.east)) continue;
    takeCrossings(i, band);
  }
  LEVELS.sort();
}

/** Levels at which one edge of the first polygon crosses edges of the second. */
function takeCrossings(i: number, { south, north }: Band): void {
  const p = FIRST.numbers;
  const q = SECOND.numbers;
  const [x, y, top] = [p[i], p[i + 1], p[i + 3]];
  const dx = p[i + 2] - x;
  const dy = top - y;
  const least = Math.min(x, p[i + 2]);
  const most = Math.max(x, p[i + 2]);
  for (let j = 0; j < SECOND.length; j += 4) {
    if (q[j + 1] > top || q[j + 3] < y) continue;
    if ((q[j] < least && q[j + 2] < least) || (q[j] > most && q[j + 2] > most)) continue;
    const ex = q[j + 2] - q[j];
    const ey = q[j + 3] - q[j + 1];
    const cross = dx * ey - dy * ex;
    if (cross === 0) continue;
    const t = ((q[j] - x) * ey - (q[j + 1] - y) * ex) / cross;
    const level = y + t * dy;
    if (t >= 0 && t <= 1 && level > south && level < north) LEVELS.push(level);
  }
}

/** Where a level meets the edges, ascending. */
function takeEnds({ numbers, length }: Scratch, y: number, into: Scratch): void {
  into.length = 0;
  for (let i = 0; i < length; i += 4) {
    if (numbers[i + 1] > y || numbers[i + 3] <= y) continue;
    into.push(numbers[i] + ((y - numbers[i + 1]) / (numbers[i + 3] - numbers[i + 1])) * (numbers[i + 2] - numbers[i]));
  }
  into.sort();
}

/** Width that both sets of stretches cover; their ends stand in pairs, ascending. */
function commonWidth({ numbers: a, length: ends }: Scratch, { numbers: b, length: others }: Scratch): number {
  let width = 0;
  for (let i = 0, j = 0; i + 1 < ends && j + 1 < others; ) {
    const stretch = Math.min(a[i + 1], b[j + 1]) - Math.max(a[i], b[j]);
    if (stretch > 0) width += stretch;
    if (a[i + 1] < b[j + 1]) i += 2;
    else j += 2;
  }
  return width;
}

/** True when a place lies inside a polygon. @param x [degrees] @param y [degrees] */
export function insideShape({ edges, west, south, east, north }: PlaneShape, x: number, y: number): boolean {
  if (x < west || x > east || y < south || y > north) return false;
  let inside = false;
  for (let i = 0; i < edges.length; i += 4) {
    const [y1, y2] = [edges[i + 1], edges[i + 3]];
    if (y1 > y !== y2 > y && x < edges[i] + ((y - y1) / (y2 - y1)) * (edges[i + 2] - edges[i])) inside = !inside;
  }
  return inside;
}
