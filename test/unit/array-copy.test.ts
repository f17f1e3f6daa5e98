/** Copying the wanted part of a chunk: every type, shuffled or not, against the numbers the chunk was made of. */
import { describe, expect, it } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { eachBlock } from '../../lib/files/array-block.ts';
import { copyChunk } from '../../lib/files/hdf5-copy.ts';

const TYPES = {
  int8: Int8Array,
  uint8: Uint8Array,
  int16: Int16Array,
  uint16: Uint16Array,
  int32: Int32Array,
  uint32: Uint32Array,
  float32: Float32Array,
  float64: Float64Array,
} as const;
type Copied = keyof typeof TYPES;

/** Byte k of all values together, after the description of the filter. */
function shuffled(bytes: Uint8Array, width: number): Uint8Array {
  const values = bytes.length / width;
  const result = new Uint8Array(bytes.length);
  for (let k = 0; k < bytes.length; k++) result[(k % width) * values + Math.floor(k / width)] = bytes[k];
  return result;
}

/** Numbers over the whole range of a type, negative and with all their bytes in use. */
function numbersOf(type: Copied, count: number): InstanceType<(typeof TYPES)[Copied]> {
  const random = mulberry32(5);
  if (type.startsWith('float')) return new TYPES[type](Array.from({ length: count }, () => (random() - 0.5) * 1e5));
  const bytes = new Uint8Array(count * TYPES[type].BYTES_PER_ELEMENT).map(() => Math.floor(random() * 256));
  return new TYPES[type](bytes.buffer);
}

const SHAPES = [[5], [300], [4, 6], [3, 4, 5], [2, 3, 2, 150]];

describe.each(Object.keys(TYPES) as Copied[])('a chunk of %s', (type) => {
  it.each([false, true])('shuffled: %s', (isShuffled) => {
    const random = mulberry32(9);
    for (const chunk of SHAPES) {
      const numbers = numbersOf(
        type,
        chunk.reduce((product, length) => product * length, 1),
      );
      const plain = new Uint8Array(numbers.buffer);
      // bytes at an odd place of their buffer, as they may come
      const stored = new Uint8Array(plain.length + 1).subarray(1);
      stored.set(isShuffled ? shuffled(plain, numbers.BYTES_PER_ELEMENT) : plain);
      for (let turn = 0; turn < 20; turn++) {
        const start = turn === 0 ? chunk.map(() => 0) : chunk.map((length) => Math.floor(random() * length));
        const count = chunk.map((length, k) => (turn === 0 ? length : 1 + Math.floor(random() * (length - start[k]))));
        const [block] = eachBlock(chunk, start, count);
        const size = count.reduce((product, length) => product * length, 1);
        const found = new Float64Array(size);
        copyChunk(stored, isShuffled, type, chunk, block, found);
        const wanted = Array.from({ length: size }, (_, flat) => {
          let [rest, place, apart] = [flat, 0, 1];
          for (let k = chunk.length - 1; k >= 0; k--) {
            place += (start[k] + (rest % count[k])) * apart;
            rest = Math.floor(rest / count[k]);
            apart *= chunk[k];
          }
          return numbers[place];
        });
        expect(Array.from(found), `[${chunk}] from [${start}], [${count}]`).toEqual(wanted);
      }
    }
  });
});

it('puts the parts of neighbouring chunks side by side', () => {
  const left = Int16Array.of(1, 2, 3, 4, 5, 6);
  const right = Int16Array.of(-1, -2, -3, -4, -5, -6);
  const found = new Float64Array(4);
  // an array of 2 × 6 in chunks of 2 × 3, of which columns 2 and 3 are wanted
  for (const [k, block] of [...eachBlock([2, 3], [0, 2], [2, 2])].entries()) {
    copyChunk(shuffled(new Uint8Array([left, right][k].buffer), 2), true, 'int16', [2, 3], block, found);
  }
  expect(Array.from(found)).toEqual([3, -1, 6, -4]);
});
