/**
 * Classes of a choropleth: where the breaks fall, and how many parcels and how much area each class holds.
 *
 * Class i holds break[i] ≤ value < break[i+1]; the last class holds its upper break too.
 */
import { RangeViolation, ShapeError } from '../base/errors.ts';

export type ClassMethod = 'quantile' | 'equal-interval' | 'natural' | 'own';
export const CLASS_METHODS: Record<ClassMethod, string> = {
  quantile: 'Quantile',
  'equal-interval': 'Equal interval',
  natural: 'Natural breaks',
  own: 'Own breaks',
};
/** More classes than this cannot be told apart on a map. */
export const MOST_CLASSES = 9;

interface ClassRequest {
  readonly values: ArrayLike<number>;
  /** same length; without it areas are zero [m²] */
  readonly areas?: ArrayLike<number>;
  readonly method: ClassMethod;
  /** number of classes wanted, 1–9; not used by `own` */
  readonly count: number;
  /** limits between classes, ascending; only for `own` */
  readonly own?: readonly number[];
}

export interface Classes {
  readonly method: ClassMethod;
  /** one more than classes, ascending; empty when no value is known */
  readonly breaks: readonly number[];
  readonly counts: readonly number[];
  /** m² */
  readonly areas: readonly number[];
  readonly missingCount: number;
  readonly missingArea: number;
}

/**
 * Breaks, counts and areas. Fewer distinct values than classes give fewer classes; equal values give one; NaN is counted apart.
 *
 * Quantile: limits at the i/k quantiles, linear between order statistics (Hyndman & Fan 1996, type 7). Equal interval: the range in k parts.
 * Natural: the partition with least sum of squares within classes, exact.
 *
 * @throws {RangeViolation} for a count outside 1–9 or own limits that do not rise; {ShapeError} when areas do not fit.
 * @example classify({ values: [1, 2, 3, 4], method: 'equal-interval', count: 3 }).breaks // [1, 2, 3, 4]
 * Source: Fisher (1958), J. Am. Stat. Assoc. 53, 789–798; Jenks (1967), Int. Yearbook of Cartography 7, 186–190 (recalled, not re-read).
 */
export function classify(request: ClassRequest): Classes {
  checkRequest(request);
  const { values, areas, method } = request;
  const known = Float64Array.from(values)
    .filter((value) => Number.isFinite(value))
    .sort();
  const breaks =
    known.length === 0 ? [] : method === 'own' ? ownEdges(known, request.own as readonly number[]) : edges(known, limitsOf(known, request));
  const counts = new Array<number>(Math.max(0, breaks.length - 1)).fill(0);
  const classAreas = counts.slice();
  let [missingCount, missingArea] = [0, 0];
  for (let i = 0; i < values.length; i++) {
    const at = classOf(breaks, values[i]);
    const area = areas ? areas[i] : 0;
    if (at < 0) {
      missingCount++;
      missingArea += area;
    } else {
      counts[at]++;
      classAreas[at] += area;
    }
  }
  return { method, breaks, counts, areas: classAreas, missingCount, missingArea };
}

/**
 * Class of a value, −1 when it is missing or there are no classes. Values outside the breaks fall into the nearest class.
 *
 * @example classOf([0, 10, 20], 10) // 1
 */
export function classOf(breaks: readonly number[], value: number): number {
  if (!Number.isFinite(value) || breaks.length < 2) return -1;
  let [low, high] = [0, breaks.length - 2];
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (value < breaks[middle]) high = middle - 1;
    else low = middle;
  }
  return low;
}

function checkRequest({ values, areas, method, count, own }: ClassRequest): void {
  if (areas && areas.length !== values.length) throw new ShapeError(`${areas.length} areas for ${values.length} values`);
  if (method !== 'own') {
    if (!(Number.isInteger(count) && count >= 1 && count <= MOST_CLASSES))
      throw new RangeViolation(`${count} classes asked for: give a whole number from 1 to ${MOST_CLASSES}`);
    return;
  }
  if (!own || own.length === 0 || own.length >= MOST_CLASSES)
    throw new RangeViolation(`own breaks need 1 to ${MOST_CLASSES - 1} limits, got ${own?.length ?? 0}`);
  const falling = own.findIndex((limit, i) => !Number.isFinite(limit) || (i > 0 && limit <= own[i - 1]));
  if (falling >= 0) throw new RangeViolation(`own breaks must rise: limit ${falling + 1} is ${own[falling]} after ${own[falling - 1]}`);
}

function limitsOf(known: Float64Array, { method, count }: ClassRequest): readonly number[] {
  if (method === 'natural') return naturalLimits(known, count);
  const [low, high] = [known[0], known[known.length - 1]];
  return Array.from({ length: count - 1 }, (_, i) =>
    method === 'quantile' ? quantileSorted(known, (i + 1) / count) : low + ((high - low) * (i + 1)) / count,
  );
}

/** Own limits all stay, so that two maps can be compared; the ends go out as far as the values do. */
function ownEdges(known: Float64Array, own: readonly number[]): number[] {
  return [Math.min(known[0], own[0]), ...own, Math.max(known[known.length - 1], own[own.length - 1])];
}

/** Lowest and highest value about the limits; limits that would leave an empty first class or repeat are dropped. */
function edges(known: Float64Array, limits: readonly number[]): number[] {
  const [low, high] = [known[0], known[known.length - 1]];
  if (low === high) return [low, high];
  const rising = limits.filter((limit, i) => limit > low && limit <= high && (i === 0 || limit > limits[i - 1]));
  return [low, ...rising, high];
}

/**
 * Quantile of ascending values.
 *
 * @param share 0–1
 * @example quantileSorted([1, 2, 3, 4], 0.5) // 2.5
 * Source: Hyndman & Fan (1996), The American Statistician 50, 361–365, type 7.
 */
export function quantileSorted(sorted: ArrayLike<number>, share: number): number {
  const at = share * (sorted.length - 1);
  const below = Math.floor(at);
  const above = Math.min(sorted.length - 1, below + 1);
  return sorted[below] + (sorted[above] - sorted[below]) * (at - below);
}

/**
 * Lower limits of all natural classes but the first.
 *
 * Dynamic programme over distinct values weighted by how often they occur; each layer by divide and conquer, since the best
 * start of the last class never moves back as values are added. O(k n log n).
 */
function naturalLimits(known: Float64Array, count: number): number[] {
  const { distinct, cost } = sumsOfSquares(known);
  const n = distinct.length;
  const k = Math.min(count, n);
  let best = Float64Array.from({ length: n }, (_, i) => cost(0, i));
  const starts: Int32Array[] = [];
  for (let layer = 1; layer < k; layer++) {
    const next = new Float64Array(n).fill(Number.POSITIVE_INFINITY);
    const start = new Int32Array(n);
    fillLayer({ best, next, start, cost, layer });
    starts.push(start);
    best = next;
  }
  const limits: number[] = [];
  let last = n - 1;
  for (const start of starts.toReversed()) {
    limits.push(distinct[start[last]]);
    last = start[last] - 1;
  }
  return limits.reverse();
}

interface Layer {
  /** least cost of the values up to each index in one class fewer */
  readonly best: Float64Array;
  readonly next: Float64Array;
  /** where the last class starts */
  readonly start: Int32Array;
  readonly cost: (from: number, to: number) => number;
  readonly layer: number;
}

function fillLayer({ best, next, start, cost, layer }: Layer): void {
  const pending: [number, number, number, number][] = [[layer, best.length - 1, layer, best.length - 1]];
  for (let job = pending.pop(); job; job = pending.pop()) {
    const [from, to, low, high] = job;
    if (from > to) continue;
    const middle = (from + to) >> 1;
    for (let s = low; s <= Math.min(middle, high); s++) {
      const total = best[s - 1] + cost(s, middle);
      if (total < next[middle]) {
        next[middle] = total;
        start[middle] = s;
      }
    }
    pending.push([from, middle - 1, low, start[middle]], [middle + 1, to, start[middle], high]);
  }
}

/** Distinct values, and the sum of squares about the mean of those from one index to another, both included. */
function sumsOfSquares(known: Float64Array): { distinct: number[]; cost: (from: number, to: number) => number } {
  const centre = known[known.length >> 1];
  const distinct: number[] = [];
  const [weight, sum, square] = [[0], [0], [0]];
  for (const value of known) {
    if (value !== distinct.at(-1)) {
      distinct.push(value);
      for (const list of [weight, sum, square]) list.push(list[list.length - 1]);
    }
    const x = value - centre;
    const at = distinct.length;
    weight[at] += 1;
    sum[at] += x;
    square[at] += x * x;
  }
  const cost = (from: number, to: number) => {
    const s = sum[to + 1] - sum[from];
    return square[to + 1] - square[from] - (s * s) / (weight[to + 1] - weight[from]);
  };
  return { distinct, cost };
}
