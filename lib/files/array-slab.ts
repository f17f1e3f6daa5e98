/** Hyperslabs of arrays: the limits every format reader keeps, and the walk over the contiguous stretches a slab is made of. */
import { RangeViolation, Refused } from '../base/errors.ts';
import type { ArrayVariable, AttributeValue } from './array-file.ts';
import { shown } from './finding-list.ts';

/** Most variables of a file. */
export const VARIABLE_LIMIT = 5000;
/** Most dimensions of a variable. */
export const DIMENSION_LIMIT = 10;
/** Most values of one read: 256 MB of doubles. */
export const READ_LIMIT = (256 * 1024 * 1024) / 8;
/** Largest stored block that is decoded [bytes]. */
export const CHUNK_LIMIT = 256 * 1024 * 1024;

type ValueType = ArrayVariable['type'];

const WIDTH: Readonly<Record<ValueType, number>> = {
  int8: 1,
  uint8: 1,
  int16: 2,
  uint16: 2,
  int32: 4,
  uint32: 4,
  int64: 8,
  uint64: 8,
  float32: 4,
  float64: 8,
  text: 1,
  other: 0,
};

/** Stored bytes of one value; text counts as one byte a character. */
export function widthOf(type: ValueType): number {
  return WIDTH[type];
}

/** Number of values of a shape; 1 for a scalar. */
export function sizeOf(shape: readonly number[]): number {
  return shape.reduce((product, length) => product * length, 1);
}

/** Products of the lengths after each dimension: how far apart neighbours lie, in values. */
export function stridesOf(shape: readonly number[]): number[] {
  const strides = new Array<number>(shape.length).fill(1);
  for (let k = shape.length - 2; k >= 0; k--) strides[k] = strides[k + 1] * shape[k + 1];
  return strides;
}

/** The variable of that name. @throws {RangeViolation} when there is none */
export function variableOf<T extends ArrayVariable>(variables: readonly T[], name: string): T {
  const found = variables.find((variable) => variable.name === name);
  if (found === undefined) throw new RangeViolation(`The file has no variable "${shown(name)}".`);
  return found;
}

/**
 * Checks a slab against the shape of its variable and the size of a read.
 *
 * @returns the number of values
 * @throws {RangeViolation} outside the shape; {Refused} above `READ_LIMIT`
 */
export function checkSlab(variable: ArrayVariable, start: readonly number[], count: readonly number[]): number {
  const { name, shape } = variable;
  const name_ = `variable "${shown(name)}" [${shape.join(' × ')}]`;
  if (start.length !== shape.length || count.length !== shape.length) {
    throw new RangeViolation(`The ${name_} has ${shape.length} dimensions; start has ${start.length} and count ${count.length}.`);
  }
  for (let k = 0; k < shape.length; k++) {
    const whole = Number.isInteger(start[k]) && Number.isInteger(count[k]) && start[k] >= 0 && count[k] >= 0;
    if (!whole || start[k] + count[k] > shape[k]) {
      throw new RangeViolation(`The ${name_} has no values ${start[k]} to ${start[k] + count[k]} along dimension ${k + 1}.`);
    }
  }
  const size = sizeOf(count);
  if (size > READ_LIMIT) throw new Refused(`${size} values of the ${name_} are more than one read may take (${READ_LIMIT}).`);
  return size;
}

/** Refuses a file whose layout is beyond what is read. */
export function checkLayout(file: string, variables: number, dimensions: number): void {
  if (variables > VARIABLE_LIMIT) {
    throw unreadable(file, `has ${variables} variables`, 'Send only the variables that are needed.', `${VARIABLE_LIMIT} variables`);
  }
  if (dimensions > DIMENSION_LIMIT) {
    throw unreadable(file, `has a variable of ${dimensions} dimensions`, 'Leave that variable out.', `${DIMENSION_LIMIT} dimensions`);
  }
}

/** A refusal of a file as a whole, with its finding. */
export function unreadable(file: string, what: string, advice: string, limit?: string, cause?: unknown): Refused {
  const message = `${file} ${what}.`;
  return new Refused(message, [{ severity: 'error', code: 'file-unreadable', message, file, limit, advice }], { cause });
}

/** A refusal of one variable whose stored bytes cannot be read. */
export function variableUnreadable(file: string, variable: string, what: string, advice: string, cause?: unknown): Refused {
  const message = `Variable "${shown(variable)}" of ${file} ${what}.`;
  const finding = { severity: 'error', code: 'variable-unreadable', message, file, column: variable, advice } as const;
  return new Refused(message, [finding], { cause });
}

/** One contiguous stretch of a slab within the whole array, counted in values. */
export interface Run {
  /** first value in the array */
  readonly from: number;
  /** its place in the slab */
  readonly into: number;
  readonly length: number;
}

/** The contiguous stretches of a slab, first to last; trailing dimensions that are taken whole are joined to longer stretches. */
export function* runsOf(shape: readonly number[], start: readonly number[], count: readonly number[]): Generator<Run> {
  const total = sizeOf(count);
  if (total === 0) return;
  const strides = stridesOf(shape);
  let joined = shape.length;
  let length = 1;
  while (joined > 0) {
    joined--;
    length *= count[joined];
    if (count[joined] !== shape[joined]) break;
  }
  const index = new Array<number>(joined).fill(0);
  const base = start.reduce((sum, first, k) => sum + first * strides[k], 0);
  for (let into = 0; into < total; into += length) {
    let from = base;
    for (let k = 0; k < joined; k++) from += index[k] * strides[k];
    yield { from, into, length };
    for (let k = joined - 1; k >= 0 && ++index[k] === count[k]; k--) index[k] = 0;
  }
}

/** Text of bytes up to the first zero: UTF-8, or Windows-1252 where it is not; trailing blanks left out. */
export function textOf(bytes: Uint8Array): string {
  const zero = bytes.indexOf(0);
  const used = zero < 0 ? bytes : bytes.subarray(0, zero);
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(used).trimEnd();
  } catch {
    return new TextDecoder('windows-1252').decode(used).trimEnd();
  }
}

/** Attribute from what a format's library gives: text, numbers or texts; null for anything else. */
export function attributeOf(value: unknown): AttributeValue | null {
  if (typeof value === 'string') return value;
  if (typeof value === 'number' || typeof value === 'bigint' || typeof value === 'boolean') return [Number(value)];
  if (ArrayBuffer.isView(value)) return Array.from(value as unknown as ArrayLike<number | bigint>, Number);
  if (!Array.isArray(value) || value.length === 0) return null;
  if (value.every((item) => typeof item === 'number' || typeof item === 'bigint')) return value.map(Number);
  return value.every((item) => typeof item === 'string') ? (value as string[]) : null;
}
