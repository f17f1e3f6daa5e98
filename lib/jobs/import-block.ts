/**
 * Setting cells of a weather block and putting them back. A block is Float32 LE [site × day] with a quality byte per value; the image of
 * what was there before is kept per station, so that two imports of different stations of one month can be undone apart.
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
}

/** Values of one station for the days of the month, null where the file has none. */
interface BlockRow {
  readonly ordinal: number;
  readonly values: readonly (number | null)[];
}

interface Grid {
  readonly values: Float32Array;
  readonly quality: Uint8Array;
}

const VALUE_BYTES = 4;

/**
 * Sets the given values with quality "measured". Days without a value are left as they are; the last of two rows for one station wins.
 *
 * @param stored the block so far, or null when there is none
 * @returns null when every value is already there
 */
export function mergeBlock(
  stored: StoredBlock | null,
  dayCount: number,
  rows: readonly BlockRow[],
): { block: StoredBlock; image: BlockImage } | null {
  const changing = rows.filter((row) => changes(stored, dayCount, row));
  if (changing.length === 0) return null;
  const siteCount = Math.max(stored?.siteCount ?? 0, ...changing.map((row) => row.ordinal + 1));
  const grid = gridOf(stored, siteCount, dayCount);
  const images: Record<string, string | null> = {};
  for (const row of changing) {
    images[row.ordinal] = imageOf(stored, dayCount, row.ordinal);
    row.values.slice(0, dayCount).forEach((value, day) => {
      if (value === null) return;
      grid.values[row.ordinal * dayCount + day] = value;
      grid.quality[row.ordinal * dayCount + day] = QUALITY.measured;
    });
  }
  const version = (stored?.version ?? 0) + 1;
  return {
    block: { siteCount, dayCount, version, values: bytesOf(grid.values), quality: grid.quality },
    image: { block: stored ? { siteCount: stored.siteCount, version: stored.version } : null, versionAfter: version, rows: images },
  };
}

function changes(stored: StoredBlock | null, dayCount: number, row: BlockRow): boolean {
  const inside = stored !== null && row.ordinal < stored.siteCount;
  if (!inside) return row.values.some((value) => value !== null);
  const grid = gridOf(stored, stored.siteCount, dayCount);
  return row.values.some((value, day) => {
    const cell = row.ordinal * dayCount + day;
    return value !== null && day < dayCount && (grid.values[cell] !== Math.fround(value) || grid.quality[cell] !== QUALITY.measured);
  });
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
  const siteCount = untouched && image.block ? image.block.siteCount : now.siteCount;
  const grid = gridOf(now, siteCount, now.dayCount);
  for (const [ordinal, row] of Object.entries(image.rows)) {
    if (Number(ordinal) < siteCount) writeImage(grid, Number(ordinal), now.dayCount, row);
  }
  const version = untouched && image.block ? image.block.version : now.version + 1;
  return { siteCount, dayCount: now.dayCount, version, values: bytesOf(grid.values), quality: grid.quality };
}

/** A copy of a block, cut or grown to a number of sites; new rows are missing. */
function gridOf(stored: StoredBlock | null, siteCount: number, dayCount: number): Grid {
  const bytes = new Uint8Array(siteCount * dayCount * VALUE_BYTES);
  const quality = new Uint8Array(siteCount * dayCount);
  const values = new Float32Array(bytes.buffer).fill(Number.NaN);
  if (stored) {
    bytes.set(stored.values.subarray(0, bytes.length));
    quality.set(stored.quality.subarray(0, quality.length));
  }
  return { values, quality };
}

function imageOf(stored: StoredBlock | null, dayCount: number, ordinal: number): string | null {
  if (!stored || ordinal >= stored.siteCount) return null;
  const [from, to] = [ordinal * dayCount, (ordinal + 1) * dayCount];
  return Buffer.concat([stored.values.subarray(from * VALUE_BYTES, to * VALUE_BYTES), stored.quality.subarray(from, to)]).toString(
    'base64',
  );
}

function writeImage(grid: Grid, ordinal: number, dayCount: number, image: string | null): void {
  const [from, to] = [ordinal * dayCount, (ordinal + 1) * dayCount];
  if (image === null) {
    grid.values.fill(Number.NaN, from, to);
    grid.quality.fill(QUALITY.missing, from, to);
    return;
  }
  const bytes = Buffer.from(image, 'base64');
  new Uint8Array(grid.values.buffer).set(bytes.subarray(0, dayCount * VALUE_BYTES), from * VALUE_BYTES);
  grid.quality.set(bytes.subarray(dayCount * VALUE_BYTES), from);
}

function bytesOf(values: Float32Array): Uint8Array {
  return new Uint8Array(values.buffer, values.byteOffset, values.byteLength);
}
