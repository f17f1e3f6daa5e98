/**
 * Setting cells of a weather block and putting them back. A block is Float32 LE [site × day × step] with a quality byte per value; the image
 * of what was there before is kept per site, so that two imports of different sites of one month can be undone apart.
 */
import type { StoredBlock } from '../../db/queries/import-weather.ts';
import { QUALITY } from '../weather/variable.ts';

/** What an import changed in a block, as it was before. */
export interface BlockImage {
  /** shape and version of the block, null when there was none */
  readonly block: { readonly siteCount: number; readonly version: number } | null;
  /** version the import left */
  readonly versionAfter: number;
  /** site ordinal → base64 of its values and quality bytes, null when the block did not reach that far */
  readonly rows: Readonly<Record<string, string | null>>;
  /** runs of site ordinals, first and last, that the block did not reach before */
  readonly absent?: readonly (readonly [number, number])[];
}

/** Values of one site for the days of the month, [day × step], NaN where the file has none. */
export interface BlockRow {
  readonly ordinal: number;
  readonly values: Float32Array;
}

/** Shape of the block the rows belong to. */
export interface BlockShape {
  readonly dayCount: number;
  /** values a day */
  readonly steps: number;
}

interface Grid {
  readonly values: Float32Array;
  readonly quality: Uint8Array;
}

const VALUE_BYTES = 4;

/**
 * Sets the given values with quality "measured". Days without a value are left as they are; the last of two rows for one site wins.
 *
 * @param stored the block so far, or null when there is none
 * @returns null when every value is already there
 */
export function mergeBlock(
  stored: StoredBlock | null,
  shape: BlockShape,
  rows: readonly BlockRow[],
): { block: StoredBlock; image: BlockImage } | null {
  const length = shape.dayCount * shape.steps;
  const before = stored ? viewOf(stored) : null;
  const changing = rows.filter((row) => changes(stored, before, length, row));
  if (changing.length === 0) return null;
  const siteCount = changing.reduce((most, row) => Math.max(most, row.ordinal + 1), stored?.siteCount ?? 0);
  const grid = gridOf(stored, siteCount, length);
  for (const row of changing) setRow(grid, row, length);
  const version = (stored?.version ?? 0) + 1;
  return {
    block: { siteCount, ...shape, version, values: bytesOf(grid.values), quality: grid.quality },
    image: {
      block: stored ? { siteCount: stored.siteCount, version: stored.version } : null,
      versionAfter: version,
      ...imagesOf(stored, length, changing),
    },
  };
}

function setRow(grid: Grid, row: BlockRow, length: number): void {
  const start = row.ordinal * length;
  const count = Math.min(length, row.values.length);
  for (let i = 0; i < count; i++) {
    const value = row.values[i];
    if (Number.isNaN(value)) continue;
    grid.values[start + i] = value;
    grid.quality[start + i] = QUALITY.measured;
  }
}

function changes(stored: StoredBlock | null, before: Grid | null, length: number, row: BlockRow): boolean {
  const inside = stored !== null && before !== null && row.ordinal < stored.siteCount;
  const count = Math.min(length, row.values.length);
  for (let i = 0; i < count; i++) {
    const value = row.values[i];
    if (Number.isNaN(value)) continue;
    if (!inside) return true;
    const cell = row.ordinal * length + i;
    if (before.values[cell] !== value || before.quality[cell] !== QUALITY.measured) return true;
  }
  return false;
}

/** What stood under the rows: bytes where the block reached, runs of ordinals where it did not. */
function imagesOf(stored: StoredBlock | null, length: number, changing: readonly BlockRow[]): Pick<BlockImage, 'rows' | 'absent'> {
  const rows: Record<string, string | null> = {};
  const absent: [number, number][] = [];
  for (const ordinal of [...new Set(changing.map((row) => row.ordinal))].sort((a, b) => a - b)) {
    if (stored && ordinal < stored.siteCount) {
      rows[ordinal] = imageOf(stored, length, ordinal);
      continue;
    }
    const last = absent.at(-1);
    if (last && last[1] === ordinal - 1) last[1] = ordinal;
    else absent.push([ordinal, ordinal]);
  }
  return { rows, absent };
}

/**
 * Puts the imaged rows back. When nobody changed the block since, its shape and version go back too; otherwise it keeps its shape and
 * counts up.
 *
 * @returns null when the block is to be deleted
 */
export function restoreBlock(now: StoredBlock, image: BlockImage): StoredBlock | null {
  const untouched = now.version === image.versionAfter;
  if (untouched && image.block === null) return null;
  const length = now.dayCount * now.steps;
  const siteCount = untouched && image.block ? image.block.siteCount : now.siteCount;
  const grid = gridOf(now, siteCount, length);
  for (const [ordinal, row] of Object.entries(image.rows)) {
    if (Number(ordinal) < siteCount) writeImage(grid, Number(ordinal), length, row);
  }
  for (const [first, last] of image.absent ?? []) {
    for (let ordinal = first; ordinal <= last && ordinal < siteCount; ordinal++) writeImage(grid, ordinal, length, null);
  }
  const version = untouched && image.block ? image.block.version : now.version + 1;
  return { siteCount, dayCount: now.dayCount, steps: now.steps, version, values: bytesOf(grid.values), quality: grid.quality };
}

/** The stored block without copying it, where its bytes lie evenly in memory. */
function viewOf(stored: StoredBlock): Grid {
  const aligned = stored.values.byteOffset % VALUE_BYTES === 0 ? stored.values : Uint8Array.from(stored.values);
  return {
    values: new Float32Array(aligned.buffer, aligned.byteOffset, Math.floor(aligned.byteLength / VALUE_BYTES)),
    quality: stored.quality,
  };
}

/** A copy of a block, cut or grown to a number of sites; new rows are missing. */
function gridOf(stored: StoredBlock | null, siteCount: number, length: number): Grid {
  const bytes = new Uint8Array(siteCount * length * VALUE_BYTES);
  const quality = new Uint8Array(siteCount * length);
  const values = new Float32Array(bytes.buffer).fill(Number.NaN);
  if (stored) {
    bytes.set(stored.values.subarray(0, bytes.length));
    quality.set(stored.quality.subarray(0, quality.length));
  }
  return { values, quality };
}

function imageOf(stored: StoredBlock, length: number, ordinal: number): string {
  const [from, to] = [ordinal * length, (ordinal + 1) * length];
  return Buffer.concat([stored.values.subarray(from * VALUE_BYTES, to * VALUE_BYTES), stored.quality.subarray(from, to)]).toString(
    'base64',
  );
}

function writeImage(grid: Grid, ordinal: number, length: number, image: string | null): void {
  const [from, to] = [ordinal * length, (ordinal + 1) * length];
  if (image === null) {
    grid.values.fill(Number.NaN, from, to);
    grid.quality.fill(QUALITY.missing, from, to);
    return;
  }
  const bytes = Buffer.from(image, 'base64');
  new Uint8Array(grid.values.buffer).set(bytes.subarray(0, length * VALUE_BYTES), from * VALUE_BYTES);
  grid.quality.set(bytes.subarray(length * VALUE_BYTES), from);
}

function bytesOf(values: Float32Array): Uint8Array {
  return new Uint8Array(values.buffer, values.byteOffset, values.byteLength);
}
