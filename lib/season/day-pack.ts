/**
 * A parcel's season in few bytes, without loss. Most rows of a season are zero for weeks, keep still, or follow another row; a plain array of them is three to
 * four times as long, and writing it is most of what storing a run costs.
 *
 * Layout, little-endian: [Uint16 65535, which no plain array begins with][Uint16 version][Uint16 rows][Uint16 days], then for each row a tag and, unless it
 * is zero throughout, its steps. The tag is 255 for a row of zeros, 254 for a row by itself, else the row it is told as the difference from. A step is
 * the change from the day before (before the first day: 0) modulo 65536, signs folded in (0, −1, 1, −2 … as 0, 1, 2, 3 …), in one byte below 160, in two below 16,544,
 * else in three; the bytes from 225 on are runs of 2 to 32 days without a change.
 */

const MARK = 0xffff;
const VERSION = 1;
const HEADER = 8;
const ZERO_ROW = 255;
const PLAIN_ROW = 254;
const TWO_BYTES = 160;
const THREE_BYTES = 224;
/** a run of n days is the byte RUN + n */
const RUN = 223;
const LONGEST_RUN = 32;
const LEAST_IN_THREE = TWO_BYTES + (THREE_BYTES - TWO_BYTES) * 256;

/** True for bytes that `packDays` made; false for a plain array, which earlier kernels stored: it begins with a reference ET, which is never missing. */
export function isPacked(bytes: Uint8Array): boolean {
  return bytes.length >= HEADER && bytes[0] === 0xff && bytes[1] === 0xff && bytes[2] === VERSION && bytes[3] === 0;
}

/** Most bytes that a season can take. */
export function mostPackedBytes(rows: number, days: number): number {
  return HEADER + rows * (1 + 3 * days);
}

/**
 * Packs the rows of one parcel.
 *
 * @param from the rows [row × day] begin at `at`
 * @param like for each row one of the first 254 that stands before it and that it mostly equals or runs along with, or −1
 * @param into scratch of `mostPackedBytes`, from `to` on
 * @returns end of the packed bytes in `into`
 */
export function packDays(from: Uint16Array, at: number, days: number, like: readonly number[], into: Uint8Array, to: number): number {
  let end = packHeader(into, to, like.length, days);
  for (let row = 0; row < like.length; row++) {
    const start = at + row * days;
    if (isZero(from, start, days)) into[end++] = ZERO_ROW;
    else if (like[row] < 0) {
      into[end++] = PLAIN_ROW;
      end = packRow(from, start, -1, days, into, end);
    } else {
      into[end++] = like[row];
      end = packRow(from, start, at + like[row] * days, days, into, end);
    }
  }
  return end;
}

function packHeader(into: Uint8Array, at: number, rows: number, days: number): number {
  into[at] = MARK & 255;
  into[at + 1] = MARK >> 8;
  into[at + 2] = VERSION;
  into[at + 3] = 0;
  into[at + 4] = rows & 255;
  into[at + 5] = rows >> 8;
  into[at + 6] = days & 255;
  into[at + 7] = days >> 8;
  return at + HEADER;
}

function isZero(from: Uint16Array, start: number, days: number): boolean {
  for (let i = start; i < start + days; i++) if (from[i] !== 0) return false;
  return true;
}

/** @param like where the row begins that this one is told from; −1 for none */
function packRow(from: Uint16Array, start: number, like: number, days: number, into: Uint8Array, to: number): number {
  let end = to;
  let before = 0;
  let still = 0;
  for (let d = 0; d < days; d++) {
    const value = like < 0 ? from[start + d] : from[start + d] - from[like + d];
    const step = ((value - before) << 16) >> 16;
    before = value;
    if (step === 0) {
      still++;
      if (still < LONGEST_RUN) continue;
    }
    if (still > 0) {
      into[end++] = still === 1 ? 0 : RUN + still;
      still = 0;
    }
    if (step === 0) continue;
    const folded = (step << 1) ^ (step >> 31);
    if (folded < TWO_BYTES) into[end++] = folded;
    else if (folded < LEAST_IN_THREE) {
      into[end++] = TWO_BYTES + ((folded - TWO_BYTES) >> 8);
      into[end++] = (folded - TWO_BYTES) & 255;
    } else {
      into[end++] = THREE_BYTES;
      into[end++] = folded & 255;
      into[end++] = folded >> 8;
    }
  }
  if (still > 0) into[end++] = still === 1 ? 0 : RUN + still;
  return end;
}

/** The rows of packed bytes as a plain array [row × day]. */
export function unpackDays(bytes: Uint8Array): Uint16Array {
  const rows = bytes[4] + 256 * bytes[5];
  const days = bytes[6] + 256 * bytes[7];
  const plain = new Uint16Array(rows * days);
  let at = HEADER;
  for (let row = 0; row < rows; row++) {
    const tag = bytes[at++];
    if (tag === ZERO_ROW) continue;
    const start = row * days;
    at = unpackRow(bytes, at, plain, start, days);
    if (tag !== PLAIN_ROW) for (let d = 0; d < days; d++) plain[start + d] += plain[tag * days + d];
  }
  return plain;
}

function unpackRow(bytes: Uint8Array, from: number, plain: Uint16Array, start: number, days: number): number {
  let at = from;
  let value = 0;
  for (let d = 0; d < days; ) {
    const first = bytes[at++];
    if (first > THREE_BYTES) {
      plain.fill(value, start + d, start + d + first - RUN);
      d += first - RUN;
      continue;
    }
    let folded = first;
    if (first === THREE_BYTES) {
      folded = bytes[at] + 256 * bytes[at + 1];
      at += 2;
    } else if (first >= TWO_BYTES) folded = TWO_BYTES + 256 * (first - TWO_BYTES) + bytes[at++];
    value += (folded >>> 1) ^ -(folded & 1);
    plain[start + d++] = value;
  }
  return at;
}

const FLAGS_MARK = 0xffffffff;

/**
 * Bits of a parcel by day as runs: [Uint32 4294967295, a set of bits no day has], then for each run [Uint32 bits][Uint16 days].
 */
export function packFlags(flags: Uint32Array, at: number, days: number): Uint8Array {
  const runs: number[] = [];
  for (let d = 0; d < days; d++) {
    if (d > 0 && flags[at + d] === flags[at + d - 1]) runs[runs.length - 1]++;
    else runs.push(flags[at + d], 1);
  }
  const view = new DataView(new ArrayBuffer(4 + 3 * runs.length));
  view.setUint32(0, FLAGS_MARK, true);
  for (let k = 0; k < runs.length; k += 2) {
    view.setUint32(4 + 3 * k, runs[k], true);
    view.setUint16(8 + 3 * k, runs[k + 1], true);
  }
  return new Uint8Array(view.buffer);
}

/** The bits by day of what `packFlags` made; null for bytes that it did not make. */
export function unpackFlags(bytes: Uint8Array, days: number): Uint32Array | null {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (bytes.byteLength < 4 || view.getUint32(0, true) !== FLAGS_MARK) return null;
  const flags = new Uint32Array(days);
  for (let at = 4, d = 0; at < bytes.byteLength; at += 6) {
    const count = view.getUint16(at + 4, true);
    flags.fill(view.getUint32(at, true), d, d + count);
    d += count;
  }
  return flags;
}
