/** How a parcel's season is stored: Uint16, little-endian, [variable × day], in the order of DAILY_VARIABLES. */
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, type DailyVariable, MISSING_STORED } from './types.ts';

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

/** The bytes of one parcel as a view on 16-bit numbers; copies only when the bytes are not aligned. */
export function storedArray(bytes: Uint8Array): Uint16Array {
  const aligned = bytes.byteOffset % 2 === 0 ? bytes : Uint8Array.from(bytes); // a Buffer's slice would not copy
  return new Uint16Array(aligned.buffer, aligned.byteOffset, aligned.byteLength >> 1);
}

/**
 * FALLBACK bits of one parcel by day from their bytes: 32 bits a day, or 16 in runs of the first kernel version, told apart by their length.
 */
export function storedFlags(bytes: Uint8Array, dayCount: number): Uint32Array {
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

/** Bytes of one parcel's slice of a batch result [parcel × variable × day]. */
export function parcelBytes(daily: Uint16Array, parcel: number, dayCount: number): Uint8Array {
  const length = DAILY_VARIABLE_COUNT * dayCount;
  const part = daily.subarray(parcel * length, (parcel + 1) * length);
  return new Uint8Array(part.buffer, part.byteOffset, part.byteLength);
}
