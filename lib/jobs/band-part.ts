/**
 * What one part of a band comes to, as bytes: a header with the parcels and reaches it is about, then Float32 arrays one after another:
 * quantiles of its parcels [variable × quantile × period × parcel], what its reaches' demand differs by [member × reach × day], and what the
 * district's volumes differ by [variable × member × period].
 */
import type { EnsembleOutput } from '../season/ensemble.ts';

export interface BandPart extends EnsembleOutput {
  /** place of each parcel in the run */
  readonly positions: readonly number[];
  /** reaches with parcels of the part, by ordinal in the run */
  readonly reaches: readonly number[];
}

export function packBandPart(part: BandPart): Uint8Array {
  const { positions, reaches, parcels, demand, volumes } = part;
  const arrays = [parcels, demand, volumes];
  const json = JSON.stringify({ positions, reaches, lengths: arrays.map(({ length }) => length) });
  const header = new TextEncoder().encode(json + ' '.repeat((4 - (new TextEncoder().encode(json).length % 4)) % 4));
  const bytes = new Uint8Array(4 + header.length + arrays.reduce((sum, { byteLength }) => sum + byteLength, 0));
  new DataView(bytes.buffer).setUint32(0, header.length, true);
  bytes.set(header, 4);
  let at = 4 + header.length;
  for (const array of arrays) {
    bytes.set(new Uint8Array(array.buffer, array.byteOffset, array.byteLength), at);
    at += array.byteLength;
  }
  return bytes;
}

export function unpackBandPart(packed: Uint8Array): BandPart {
  const bytes = packed.byteOffset % 4 === 0 ? packed : Uint8Array.from(packed);
  const length = new DataView(bytes.buffer, bytes.byteOffset).getUint32(0, true);
  const header = JSON.parse(new TextDecoder().decode(bytes.subarray(4, 4 + length))) as Pick<BandPart, 'positions' | 'reaches'> & {
    lengths: number[];
  };
  let at = bytes.byteOffset + 4 + length;
  const [parcels, demand, volumes] = header.lengths.map((count) => {
    const array = new Float32Array(bytes.buffer, at, count);
    at += array.byteLength;
    return array;
  });
  return { positions: header.positions, reaches: header.reaches, parcels, demand, volumes };
}
