/** Arrays stored in blocks: which blocks a slab touches, and copying the part of a block that belongs to it. */
import { stridesOf } from './array-slab.ts';

/** The part that one stored block has in a slab. */
export interface Block {
  /** place of the block in the grid of blocks */
  readonly place: readonly number[];
  /** first index within the block, along each dimension */
  readonly from: readonly number[];
  /** lengths of the part */
  readonly count: readonly number[];
  /** place of its first value in the slab, row-major */
  readonly into: number;
  /** distance in the slab between neighbours along each dimension */
  readonly intoStride: readonly number[];
}

/** The blocks a slab touches, in row-major order; one for a scalar, none for an empty slab. */
export function* eachBlock(blockShape: readonly number[], start: readonly number[], count: readonly number[]): Generator<Block> {
  if (count.some((length) => length === 0)) return;
  const rank = start.length;
  const first = start.map((index, k) => Math.floor(index / blockShape[k]));
  const last = start.map((index, k) => Math.floor((index + count[k] - 1) / blockShape[k]));
  const intoStride = stridesOf(count);
  const place = [...first];
  for (;;) {
    const low = place.map((at, k) => Math.max(start[k], at * blockShape[k]));
    const high = place.map((at, k) => Math.min(start[k] + count[k], (at + 1) * blockShape[k]));
    yield {
      place: [...place],
      from: low.map((index, k) => index - place[k] * blockShape[k]),
      count: low.map((index, k) => high[k] - index),
      into: low.reduce((sum, index, k) => sum + (index - start[k]) * intoStride[k], 0),
      intoStride,
    };
    let k = rank - 1;
    while (k >= 0 && ++place[k] > last[k]) {
      place[k] = first[k];
      k--;
    }
    if (k < 0) return;
  }
}

/**
 * True when the next slab will probably want a block again: slabs follow one another along the first dimension (days), and this one ends
 * within the block. For tables of two dimensions, which may run either way, along any.
 */
export function isWantedAgain({ place, from, count }: Block, blockShape: readonly number[], shape: readonly number[]): boolean {
  const endsWithin = (k: number) => from[k] + count[k] < Math.min(blockShape[k], shape[k] - place[k] * blockShape[k]);
  return shape.length > 2 ? endsWithin(0) : shape.some((_, k) => endsWithin(k));
}

/** Values that are not plain numbers in a plain list: looked up by a function. */
interface Looked {
  get(index: number): unknown;
}

/**
 * Copies a block's part into a slab.
 *
 * @param chunk values of the whole block with the distances between neighbours; null: not stored, `fill` is put in their place
 */
export function copyBlock<T extends number | string>(
  block: Block,
  chunk: { readonly data: unknown; readonly stride: readonly number[] } | null,
  into: T extends number ? Float64Array : string[],
  fill: T,
): void {
  const rank = block.count.length;
  const inner = rank - 1;
  const length = rank === 0 ? 1 : block.count[inner];
  const step = rank === 0 || chunk === null ? 1 : chunk.stride[inner];
  const index = new Array<number>(Math.max(0, inner)).fill(0);
  for (;;) {
    let to = block.into;
    let from = 0;
    for (let k = 0; k < rank; k++) {
      const at = k < inner ? index[k] : 0;
      to += at * block.intoStride[k];
      if (chunk !== null) from += (block.from[k] + at) * chunk.stride[k];
    }
    if (chunk === null) (into as Float64Array).fill(fill as number, to, to + length);
    else copyRow(chunk.data, from, step, into, to, length);
    let k = inner - 1;
    while (k >= 0 && ++index[k] === block.count[k]) {
      index[k] = 0;
      k--;
    }
    if (k < 0) return;
  }
}

function copyRow(data: unknown, from: number, step: number, into: Float64Array | string[], to: number, length: number): void {
  if (Array.isArray(into)) {
    for (let k = 0; k < length; k++) into[to + k] = String(valueAt(data, from + k * step) ?? '');
  } else if (data instanceof BigInt64Array || data instanceof BigUint64Array || !ArrayBuffer.isView(data)) {
    for (let k = 0; k < length; k++) into[to + k] = Number(valueAt(data, from + k * step));
  } else if (step === 1) {
    into.set((data as Float64Array).subarray(from, from + length), to);
  } else {
    const numbers = data as Float64Array;
    for (let k = 0; k < length; k++) into[to + k] = numbers[from + k * step];
  }
}

function valueAt(data: unknown, index: number): unknown {
  return 'get' in (data as object) ? (data as Looked).get(index) : (data as ArrayLike<unknown>)[index];
}
