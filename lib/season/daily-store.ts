/** How a parcel's season is stored: Uint16 [variable × day] in the order of DAILY_VARIABLES, packed; runs of kernel version 2 and before hold it plain, little-endian. */
import { isPacked, packDays, unpackDays, unpackFlags } from './day-pack.ts';
import { DAILY_VARIABLES, type DailyVariable, MISSING_STORED } from './types.ts';

const INDEX: ReadonlyMap<string, number> = new Map(DAILY_VARIABLES.map((variable, index) => [variable.id, index]));

/** Place of a variable in storage. */
export function variableIndex(variable: DailyVariable): number {
  return INDEX.get(variable) as number;
}

/** A value as the store holds it: rounded to the variable's scale, clipped to what fits, 65535 for missing. */
export function storedValue(value: number, scale: number): number {
  if (Number.isNaN(value)) return MISSING_STORED;
  const rounded = Math.round(value * scale);
  return rounded < 0 ? 0 : Math.min(rounded, MISSING_STORED - 1);
}

/** A variable that mostly equals another or runs along with it, which packs well. */
const LIKE: Partial<Record<DailyVariable, DailyVariable>> = {
  adjusted_crop_et: 'crop_et',
  effective_precipitation: 'precipitation',
  soil_water_depletion: 'root_zone_depletion',
};
const LIKE_ROW: readonly number[] = DAILY_VARIABLES.map(({ id }) => {
  const like = LIKE[id];
  return like === undefined ? -1 : variableIndex(like);
});

/**
 * Packs one parcel of a batch result [parcel × variable × day] for storage.
 *
 * @param into scratch of `mostPackedBytes(DAILY_VARIABLE_COUNT, dayCount)` from `to` on
 * @returns end of the parcel's bytes in `into`
 */
export function packParcelDays(daily: Uint16Array, parcel: number, dayCount: number, into: Uint8Array, to: number): number {
  return packDays(daily, parcel * LIKE_ROW.length * dayCount, dayCount, LIKE_ROW, into, to);
}

/** The stored bytes of one parcel as 16-bit numbers [variable × day]; plain bytes are copied only when they are not aligned. */
export function storedArray(bytes: Uint8Array): Uint16Array {
  if (isPacked(bytes)) return unpackDays(bytes);
  const aligned = bytes.byteOffset % 2 === 0 ? bytes : Uint8Array.from(bytes); // a Buffer's slice would not copy
  return new Uint16Array(aligned.buffer, aligned.byteOffset, aligned.byteLength >> 1);
}

/**
 * FALLBACK bits of one parcel by day from their bytes: runs of days; or 32 bits a day, or 16, in runs of earlier kernel versions, told apart by their length.
 */
export function storedFlags(bytes: Uint8Array, dayCount: number): Uint32Array {
  const packed = unpackFlags(bytes, dayCount);
  if (packed) return packed;
  if (bytes.byteLength === 2 * dayCount) return Uint32Array.from(storedArray(bytes));
  const aligned = bytes.byteOffset % 4 === 0 ? bytes : Uint8Array.from(bytes);
  return new Uint32Array(aligned.buffer, aligned.byteOffset, aligned.byteLength >> 2);
}

/**
 * One variable of one parcel over the season, in its own unit; missing is NaN.
 *
 * @param stored [variable × day]
 */
export function dailyValues(stored: Uint16Array, dayCount: number, variable: DailyVariable): Float64Array {
  const index = variableIndex(variable);
  const scale = DAILY_VARIABLES[index].scale;
  const values = new Float64Array(dayCount);
  for (let day = 0; day < dayCount; day++) {
    const raw = stored[index * dayCount + day];
    values[day] = raw === MISSING_STORED ? Number.NaN : raw / scale;
  }
  return values;
}
