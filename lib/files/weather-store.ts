/**
 * Rows of daily weather while a file is read: one growing array per variable, and which row holds each site and day.
 */
import { civilFromDayNumber, type DayNumber, daysInMonth, isoDate } from '../base/civil-date.ts';
import { nullFromNaN } from '../base/missing.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import type { StagedBlock } from './reading.ts';

export const VARIABLE_NAMES = Object.keys(WEATHER_VARIABLES) as WeatherVariable[];
/** Decimals kept of a staged value: finer than the single precision of the store for every variable but specific humidity. */
const DECIMALS = 1e5;
const DECIMALS_RATIO = 1e8;

export class WeatherStore {
  rows = 0;
  private sites = new Int32Array(1024);
  private days = new Int32Array(1024);
  private lines = new Int32Array(1024);
  private values: (Float64Array | null)[] = VARIABLE_NAMES.map(() => null);
  private readonly bySite: Map<DayNumber, number>[] = [];

  /** Stored row of a site and day, or −1. */
  find(site: number, day: DayNumber): number {
    return this.bySite[site]?.get(day) ?? -1;
  }

  /** Line in its file of a stored row. */
  line(row: number): number {
    return this.lines[row];
  }

  /** True when the stored row holds exactly these values. */
  equals(row: number, values: Float64Array): boolean {
    return VARIABLE_NAMES.every((_, v) => Object.is(this.values[v]?.[row] ?? Number.NaN, values[v]));
  }

  /** Adds a row; `values` has one number per variable in the order of VARIABLE_NAMES, NaN where missing. */
  add(site: number, day: DayNumber, line: number, values: Float64Array): void {
    const row = this.rows++;
    if (row >= this.sites.length) this.grow();
    this.sites[row] = site;
    this.days[row] = day;
    this.lines[row] = line;
    for (let v = 0; v < values.length; v++) {
      if (Number.isNaN(values[v])) continue;
      this.column(v)[row] = values[v];
    }
    this.bySite[site] ??= new Map();
    this.bySite[site].set(day, row);
  }

  private column(v: number): Float64Array {
    let column = this.values[v];
    if (!column) {
      column = new Float64Array(this.sites.length).fill(Number.NaN);
      this.values[v] = column;
    }
    return column;
  }

  private grow(): void {
    const size = this.sites.length * 2;
    this.sites = extend(this.sites, new Int32Array(size));
    this.days = extend(this.days, new Int32Array(size));
    this.lines = extend(this.lines, new Int32Array(size));
    this.values = this.values.map((column) => column && extend(column, new Float64Array(size).fill(Number.NaN)));
  }

  /** Days held of a site: count, first and last. */
  extent(site: number): { count: number; first: DayNumber; last: DayNumber } | null {
    const days = this.bySite[site];
    if (!days || days.size === 0) return null;
    let first = Number.POSITIVE_INFINITY;
    let last = Number.NEGATIVE_INFINITY;
    for (const day of days.keys()) {
      if (day < first) first = day;
      if (day > last) last = day;
    }
    return { count: days.size, first, last };
  }

  /** Days of a site in order. */
  daysOf(site: number): DayNumber[] {
    return [...(this.bySite[site]?.keys() ?? [])].sort((a, b) => a - b);
  }

  /** Blocks of one variable and month each, over the sites that have a value in it, sites sorted by code. */
  blocks(siteCodes: readonly string[]): StagedBlock[] {
    const blocks: StagedBlock[] = [];
    for (const [v, variable] of VARIABLE_NAMES.entries()) {
      const column = this.values[v];
      if (!column) continue;
      for (const [month, sites] of this.byMonth(column, variable)) blocks.push(blockOf(variable, month, sites, siteCodes));
    }
    return blocks.sort((a, b) => (a.month < b.month ? -1 : a.month > b.month ? 1 : 0));
  }

  private byMonth(column: Float64Array, variable: WeatherVariable): Map<string, Map<number, (number | null)[]>> {
    const scale = variable === 'specific_humidity_kg_kg' ? DECIMALS_RATIO : DECIMALS;
    const months = new Map<string, Map<number, (number | null)[]>>();
    const place = monthPlaces();
    for (let row = 0; row < this.rows; row++) {
      const value = column[row];
      if (Number.isNaN(value)) continue;
      const { key, offset, length } = place(this.days[row]);
      let sites = months.get(key);
      if (!sites) {
        sites = new Map();
        months.set(key, sites);
      }
      let days = sites.get(this.sites[row]);
      if (!days) {
        days = new Array<number | null>(length).fill(null);
        sites.set(this.sites[row], days);
      }
      days[offset] = nullFromNaN(Math.round(value * scale) / scale);
    }
    return months;
  }
}

function extend<T extends Int32Array | Float64Array>(from: T, to: T): T {
  to.set(from);
  return to;
}

/** Month key, place in the month and length of the month of a day, remembered per day. */
function monthPlaces(): (day: DayNumber) => { key: string; offset: number; length: number } {
  const known = new Map<DayNumber, { key: string; offset: number; length: number }>();
  return (day) => {
    let place = known.get(day);
    if (!place) {
      const civil = civilFromDayNumber(day);
      place = { key: `${isoDate(day).slice(0, 8)}01`, offset: civil.day - 1, length: daysInMonth(civil.year, civil.month) };
      known.set(day, place);
    }
    return place;
  };
}

function blockOf(
  variable: WeatherVariable,
  month: string,
  sites: Map<number, (number | null)[]>,
  siteCodes: readonly string[],
): StagedBlock {
  const order = [...sites.keys()].sort((a, b) => (siteCodes[a] < siteCodes[b] ? -1 : 1));
  return {
    variable,
    month,
    siteCodes: order.map((site) => siteCodes[site]),
    values: order.map((site) => sites.get(site) as (number | null)[]),
  };
}
