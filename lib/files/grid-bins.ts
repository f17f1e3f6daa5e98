/**
 * Steps shorter than a day → values of local days and of hours: sums, means and extremes over the part of each step that lies in the day.
 */
import { civilFromDayNumber, type DayNumber } from '../base/civil-date.ts';
import { standardOffset } from '../base/time-zone.ts';
import { SECONDS_PER_DAY } from '../base/units.ts';
import type { ValueStore } from './grid-store.ts';
import { localDayOf, startOfLocalDay, type ZoneOffset } from './grid-zone.ts';

/** Hours of a day that make its values when the user names no other number. */
export const DEFAULT_MINIMUM_HOURS = 22;
/** Share of an hour that must be covered. */
const HOUR_COVER = 0.99;

/** A run of time that values are gathered over. */
interface Bin {
  readonly day: DayNumber;
  readonly step: number;
  readonly start: number;
  readonly end: number;
}

/** Finds the bin of an instant. */
type BinOf = (instant: number) => Bin;

/** Local days, each with its own length. */
export function dayBins(zone: ZoneOffset): BinOf {
  const starts = new Map<DayNumber, number>();
  const startOf = (day: DayNumber) => {
    let start = starts.get(day);
    if (start === undefined) {
      start = startOfLocalDay(day, zone);
      starts.set(day, start);
    }
    return start;
  };
  return (instant) => {
    const day = localDayOf(instant, zone);
    return { day, step: 0, start: startOf(day), end: startOf(day + 1) };
  };
}

/** Hours of the zone's clock without daylight saving. */
export function hourBins(zone: string, near: number): BinOf {
  const offset = standardOffset(zone, civilFromDayNumber(Math.floor(near / SECONDS_PER_DAY)).year) * 60;
  return (instant) => {
    const hour = Math.floor((instant + offset) / 3600);
    const day = Math.floor(hour / 24);
    return { day, step: hour - day * 24, start: hour * 3600 - offset, end: (hour + 1) * 3600 - offset };
  };
}

/** One value that is made of the steps of a bin. */
export interface BinOutput {
  readonly statistic: 'mean' | 'max' | 'min' | 'sum';
  readonly store: ValueStore;
}

/** What gathering met. */
export interface BinCounts {
  /** cell-days with some hours, but fewer than needed */
  short: number;
  /** first of them */
  firstShort: DayNumber | null;
}

/** Gathers the steps of a run of cells, in the order of time. */
export class Bins {
  private readonly sum: Float64Array;
  private readonly hours: Float64Array;
  private readonly highest: Float64Array;
  private readonly lowest: Float64Array;
  private readonly result: Float64Array;
  private bin: Bin | null = null;

  /**
   * @param first place of the first of the cells among all
   * @param minimumHours of a day of 24 hours; for hours a share of them
   */
  constructor(
    private readonly count: number,
    private readonly first: number,
    private readonly binOf: BinOf,
    private readonly outputs: readonly BinOutput[],
    private readonly minimumHours: number,
    private readonly counts: BinCounts,
  ) {
    this.sum = new Float64Array(count);
    this.hours = new Float64Array(count);
    this.highest = new Float64Array(count).fill(Number.NEGATIVE_INFINITY);
    this.lowest = new Float64Array(count).fill(Number.POSITIVE_INFINITY);
    this.result = new Float64Array(count);
  }

  /** Adds a step [from, to); amounts are per hour. Wait for what it returns, if anything, before the next. */
  add(from: number, to: number, values: Float64Array): Promise<void> | null {
    const { bin } = this;
    if (bin === null || from < bin.start || to > bin.end) return this.addAcross(from, to, values);
    this.gather(values, (to - from) / 3600, true);
    return null;
  }

  private async addAcross(from: number, to: number, values: Float64Array): Promise<void> {
    const centre = (from + to) / 2;
    for (let at = from; at < to; ) {
      const bin = this.bin !== null && at >= this.bin.start && at < this.bin.end ? this.bin : await this.open(this.binOf(at));
      const until = Math.min(to, bin.end);
      this.gather(values, (until - at) / 3600, centre >= bin.start && centre < bin.end);
      at = until;
    }
  }

  private gather(values: Float64Array, hours: number, extremes: boolean): void {
    const { sum, hours: covered, highest, lowest } = this;
    for (let cell = 0; cell < this.count; cell++) {
      const value = values[cell];
      if (Number.isNaN(value)) continue;
      sum[cell] += value * hours;
      covered[cell] += hours;
      if (!extremes) continue;
      if (value > highest[cell]) highest[cell] = value;
      if (value < lowest[cell]) lowest[cell] = value;
    }
  }

  private async open(bin: Bin): Promise<Bin> {
    await this.close();
    this.bin = bin;
    return bin;
  }

  /** Hands on the bin that is open. */
  async close(): Promise<void> {
    const bin = this.bin;
    if (bin === null) return;
    this.bin = null;
    const length = (bin.end - bin.start) / 3600;
    const needed = length < 2 ? HOUR_COVER * length : (this.minimumHours * length * 3600) / SECONDS_PER_DAY - 1e-6;
    this.countShort(needed, bin.day);
    for (const { statistic, store } of this.outputs) {
      await store.advance(bin.day);
      this.fill(statistic, needed);
      store.put(bin.day, bin.step, this.result, this.first);
    }
    this.sum.fill(0);
    this.hours.fill(0);
    this.highest.fill(Number.NEGATIVE_INFINITY);
    this.lowest.fill(Number.POSITIVE_INFINITY);
  }

  private countShort(needed: number, day: DayNumber): void {
    for (let cell = 0; cell < this.count; cell++) {
      if (this.hours[cell] === 0 || this.hours[cell] >= needed) continue;
      this.counts.short++;
      this.counts.firstShort ??= day;
    }
  }

  private fill(statistic: BinOutput['statistic'], needed: number): void {
    const { sum, hours, result } = this;
    const source = statistic === 'max' ? this.highest : statistic === 'min' ? this.lowest : sum;
    const mean = statistic === 'mean';
    for (let cell = 0; cell < this.count; cell++) {
      const value = mean ? sum[cell] / hours[cell] : source[cell];
      result[cell] = hours[cell] > 0 && hours[cell] >= needed && Number.isFinite(value) ? value : Number.NaN;
    }
  }
}
