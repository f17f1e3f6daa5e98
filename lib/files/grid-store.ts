/**
 * Daily (or hourly) values of the cells of a grid on their way to monthly blocks.
 *
 * `MonthBuffer` takes days in order and holds one month; `CellRows` takes cells one after the other and holds their whole record.
 */
import { civilFromDayNumber, type DayNumber, dayNumberOf, daysInMonth } from '../base/civil-date.ts';
import { type BlockVariable, HOUR_VARIABLES, isHourVariable, WEATHER_VARIABLES } from '../weather/variable.ts';
import type { StagedBlock } from './reading.ts';

/** Takes a block that is complete. */
export type Emit = (block: StagedBlock) => Promise<void>;

/** Counts of a variable that the user is told. */
export interface StoreCounts {
  /** values that lie outside the limits of the variable */
  outside: number;
  firstOutside: { readonly cell: number; readonly day: DayNumber; readonly value: number } | null;
  /** values kept */
  values: number;
  first: DayNumber;
  last: DayNumber;
}

/** Where values of one variable go. */
export interface ValueStore {
  readonly variable: BlockVariable;
  readonly counts: StoreCounts;
  /** Makes ready for a day; wait for it before `put`. */
  advance(day: DayNumber): Promise<void>;
  /** Values of a day (and hour) of the cells [first, first + values.length). */
  put(day: DayNumber, step: number, values: Float64Array, first: number): void;
  finish(): Promise<void>;
}

function newCounts(): StoreCounts {
  return { outside: 0, firstOutside: null, values: 0, first: Number.POSITIVE_INFINITY, last: Number.NEGATIVE_INFINITY };
}

function stepsOf(variable: BlockVariable): 1 | 24 {
  return isHourVariable(variable) ? 24 : 1;
}

function limitsOf(variable: BlockVariable): { readonly low: number; readonly high: number } {
  return isHourVariable(variable) ? HOUR_VARIABLES[variable] : WEATHER_VARIABLES[variable];
}

/** A value within the limits, 0 for what rounding has put below 0, NaN otherwise. */
function keepable(value: number, low: number, high: number, cell: number, day: DayNumber, counts: StoreCounts): number {
  if (value >= low && value <= high) {
    counts.values++;
    return value;
  }
  if (Number.isNaN(value)) return value;
  if (low === 0 && value < 0 && value > -1e-6) {
    counts.values++;
    return 0;
  }
  counts.outside++;
  counts.firstOutside ??= { cell, day, value };
  return Number.NaN;
}

function monthText(year: number, month: number): string {
  return `${String(year).padStart(4, '0')}-${String(month).padStart(2, '0')}-01`;
}

/** Names of the cells that have values; the same list is shared by blocks of the same cells. */
class PresentCells {
  private last: { cells: Int32Array; codes: readonly string[] } | null = null;

  constructor(
    readonly codes: readonly string[],
    readonly seen: Uint8Array,
  ) {}

  codesOf(cells: Int32Array): readonly string[] {
    if (cells.length === this.codes.length) return this.codes;
    const last = this.last;
    if (last && last.cells.length === cells.length && last.cells.every((cell, i) => cell === cells[i])) return last.codes;
    const codes = Array.from(cells, (cell) => this.codes[cell]);
    this.last = { cells, codes };
    return codes;
  }
}

/** Holds one month of every cell; days come in order. */
export class MonthBuffer implements ValueStore {
  readonly counts = newCounts();
  private readonly steps: 1 | 24;
  private readonly present: PresentCells;
  private from = Number.NaN;
  private days = 0;
  private month = '';
  private values = new Float32Array(0);
  private used = false;

  /** @param codes of the cells, sorted @param seen set to 1 for each cell that has a value */
  constructor(
    readonly variable: BlockVariable,
    codes: readonly string[],
    seen: Uint8Array,
    private readonly emit: Emit,
  ) {
    this.steps = stepsOf(variable);
    this.present = new PresentCells(codes, seen);
  }

  async advance(day: DayNumber): Promise<void> {
    if (day >= this.from && day < this.from + this.days) return;
    await this.finish();
    const { year, month } = civilFromDayNumber(day);
    this.from = dayNumberOf(year, month, 1);
    this.days = daysInMonth(year, month);
    this.month = monthText(year, month);
    this.values = new Float32Array(this.present.codes.length * this.days * this.steps).fill(Number.NaN);
    this.used = false;
  }

  put(day: DayNumber, step: number, values: Float64Array, first: number): void {
    const { low, high } = limitsOf(this.variable);
    const stride = this.days * this.steps;
    const before = this.counts.values;
    let place = first * stride + (day - this.from) * this.steps + step;
    for (let i = 0; i < values.length; i++, place += stride) {
      const value = values[i];
      if (!Number.isNaN(value)) this.values[place] = keepable(value, low, high, first + i, day, this.counts);
    }
    if (this.counts.values === before) return;
    this.used = true;
    this.counts.first = Math.min(this.counts.first, day);
    this.counts.last = Math.max(this.counts.last, day);
  }

  async finish(): Promise<void> {
    if (!this.used) return;
    this.used = false;
    const stride = this.days * this.steps;
    const cells = cellsWithValues(this.values, stride, this.present.seen);
    const all = cells.length === this.present.codes.length;
    const values = all ? this.values : new Float32Array(cells.length * stride);
    if (!all) for (const [i, cell] of cells.entries()) values.set(this.values.subarray(cell * stride, (cell + 1) * stride), i * stride);
    this.values = new Float32Array(0);
    this.days = 0;
    await this.emit({ variable: this.variable, month: this.month, siteCodes: this.present.codesOf(cells), steps: this.steps, values });
  }
}

function cellsWithValues(values: Float32Array, stride: number, seen: Uint8Array): Int32Array {
  const cells = new Int32Array(seen.length);
  let count = 0;
  for (let cell = 0; cell < seen.length; cell++) {
    for (let i = cell * stride, end = i + stride; i < end; i++) {
      if (Number.isNaN(values[i])) continue;
      cells[count++] = cell;
      seen[cell] = 1;
      break;
    }
  }
  return cells.slice(0, count);
}

/** Holds the whole record of each cell that has a value; cells come one after the other. */
export class CellRows implements ValueStore {
  readonly counts = newCounts();
  private readonly steps: 1 | 24;
  private readonly present: PresentCells;
  private readonly rows: (Float32Array | null)[];

  /** @param from first day of the record @param dayCount days of it */
  constructor(
    readonly variable: BlockVariable,
    codes: readonly string[],
    seen: Uint8Array,
    private readonly emit: Emit,
    private readonly span: { readonly from: DayNumber; readonly dayCount: number },
  ) {
    this.steps = stepsOf(variable);
    this.present = new PresentCells(codes, seen);
    this.rows = codes.map(() => null);
  }

  async advance(): Promise<void> {}

  put(day: DayNumber, step: number, values: Float64Array, first: number): void {
    const { low, high } = limitsOf(this.variable);
    const place = (day - this.span.from) * this.steps + step;
    for (let i = 0; i < values.length; i++) {
      const value = values[i];
      if (Number.isNaN(value)) continue;
      const kept = keepable(value, low, high, first + i, day, this.counts);
      if (Number.isNaN(kept)) continue;
      let row = this.rows[first + i];
      if (!row) {
        row = new Float32Array(this.span.dayCount * this.steps).fill(Number.NaN);
        this.rows[first + i] = row;
      }
      row[place] = kept;
      if (day < this.counts.first) this.counts.first = day;
      if (day > this.counts.last) this.counts.last = day;
    }
  }

  async finish(): Promise<void> {
    const end = this.span.from + this.span.dayCount;
    for (let day = this.span.from; day < end; ) {
      const { year, month } = civilFromDayNumber(day);
      const start = dayNumberOf(year, month, 1);
      await this.emitMonth(start, daysInMonth(year, month), monthText(year, month));
      day = start + daysInMonth(year, month);
    }
    this.rows.fill(null);
  }

  private async emitMonth(start: DayNumber, days: number, month: string): Promise<void> {
    const stride = days * this.steps;
    const skip = Math.max(0, this.span.from - start) * this.steps;
    const begin = Math.max(0, start - this.span.from) * this.steps;
    const end = Math.min(this.span.dayCount, start + days - this.span.from) * this.steps;
    const cells = Int32Array.from(Array.from(this.rows.keys()).filter((cell) => hasValue(this.rows[cell], begin, end)));
    if (cells.length === 0) return;
    const values = new Float32Array(cells.length * stride).fill(Number.NaN);
    for (const [i, cell] of cells.entries()) {
      this.present.seen[cell] = 1;
      values.set((this.rows[cell] as Float32Array).subarray(begin, end), i * stride + skip);
    }
    await this.emit({ variable: this.variable, month, siteCodes: this.present.codesOf(cells), steps: this.steps, values });
  }
}

function hasValue(row: Float32Array | null, begin: number, end: number): boolean {
  if (!row) return false;
  for (let i = begin; i < end; i++) if (!Number.isNaN(row[i])) return true;
  return false;
}
