/**
 * Rows of weather while a file is read: one growing array per variable, and which row holds each site and day.
 */
import { civilFromDayNumber, type DayNumber, daysInMonth, isoDate } from '../base/civil-date.ts';
import { HOURS_PER_DAY } from '../weather/hours.ts';
import { type BlockVariable, type HourVariable, isHourVariable, WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import type { StagedBlock } from './reading.ts';

export const VARIABLE_NAMES = Object.keys(WEATHER_VARIABLES) as WeatherVariable[];
/** Rows are found through runs of this many days of a site. */
const RUN_BITS = 9;
const RUN_MASK = (1 << RUN_BITS) - 1;
/** Place of the run that begins at day 0: day numbers before 1970 are negative. */
const RUN_ORIGIN = 1024;
/** Decimals kept of a staged value: finer than the single precision of the store for every variable but specific humidity. */
const DECIMALS = 1e5;
const DECIMALS_RATIO = 1e8;

export class WeatherStore {
  rows = 0;
  private sites = new Int32Array(1024);
  private days = new Int32Array(1024);
  private lines = new Int32Array(1024);
  private values: (Float64Array | null)[] = VARIABLE_NAMES.map(() => null);
  /** site → run of days → row + 1 of each day, 0 where there is none */
  private readonly bySite: (Int32Array | undefined)[][] = [];

  /** Stored row of a site and day, or −1. */
  find(site: number, day: DayNumber): number {
    const run = this.bySite[site]?.[(day >> RUN_BITS) + RUN_ORIGIN];
    return run === undefined ? -1 : run[day & RUN_MASK] - 1;
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
    this.bySite[site] ??= [];
    const runs = this.bySite[site];
    const place = (day >> RUN_BITS) + RUN_ORIGIN;
    let run = runs[place];
    if (run === undefined) {
      run = new Int32Array(1 << RUN_BITS);
      runs[place] = run;
    }
    run[day & RUN_MASK] = row + 1;
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
    const days = this.daysOf(site);
    return days.length === 0 ? null : { count: days.length, first: days[0], last: days[days.length - 1] };
  }

  /** Days of a site in order. */
  daysOf(site: number): DayNumber[] {
    const days: DayNumber[] = [];
    this.bySite[site]?.forEach((run, place) => {
      const first = (place - RUN_ORIGIN) << RUN_BITS;
      run?.forEach((row, day) => {
        if (row > 0) days.push(first + day);
      });
    });
    return days;
  }

  /** Blocks of one variable and month each, over the sites that have a value in it, sites sorted by code. */
  blocks(siteCodes: readonly string[]): StagedBlock[] {
    const order = sortedSites(siteCodes);
    const rank = new Int32Array(siteCodes.length);
    order.forEach((site, place) => {
      rank[site] = place;
    });
    const months = new MonthPlaces(this.days, this.rows);
    const blocks = VARIABLE_NAMES.flatMap((variable, v) => {
      const column = this.values[v];
      return column ? this.blocksOf(variable, column, { months, order, rank, siteCodes }) : [];
    });
    return blocks.sort(byMonthOrder);
  }

  private blocksOf(
    variable: WeatherVariable,
    column: Float64Array,
    { months, order, rank, siteCodes }: { months: MonthPlaces; order: readonly number[]; rank: Int32Array; siteCodes: readonly string[] },
  ): StagedBlock[] {
    const width = order.length;
    /** month × rank of site → place of the site in the block + 1 */
    const places = new Int32Array(months.keys.length * width);
    for (let row = 0; row < this.rows; row++) {
      if (!Number.isNaN(column[row])) places[months.month[row] * width + rank[this.sites[row]]] = 1;
    }
    const blocks = months.keys.map((month, m) => {
      const codes: string[] = [];
      for (let place = 0; place < width; place++) {
        if (places[m * width + place] === 1) places[m * width + place] = codes.push(siteCodes[order[place]]);
      }
      return {
        variable,
        month,
        siteCodes: codes,
        steps: 1 as const,
        values: new Float32Array(codes.length * months.lengths[m]).fill(Number.NaN),
      };
    });
    const scale = scaleOf(variable);
    for (let row = 0; row < this.rows; row++) {
      const value = column[row];
      if (Number.isNaN(value)) continue;
      const m = months.month[row];
      const site = places[m * width + rank[this.sites[row]]] - 1;
      blocks[m].values[site * months.lengths[m] + months.offset[row]] = Math.round(value * scale) / scale;
    }
    return blocks.filter((block) => block.siteCodes.length > 0);
  }
}

/** Sites in the order of their codes. */
function sortedSites(siteCodes: readonly string[]): number[] {
  return [...siteCodes.keys()].sort((a, b) => (siteCodes[a] < siteCodes[b] ? -1 : 1));
}

/** The month of each row and its place in it. */
class MonthPlaces {
  /** first day of each month */
  readonly keys: string[] = [];
  readonly lengths: number[] = [];
  /** row → index of its month */
  readonly month: Int32Array;
  /** row → day of the month, from 0 */
  readonly offset: Uint8Array;

  constructor(days: Int32Array, rows: number) {
    this.month = new Int32Array(rows);
    this.offset = new Uint8Array(rows);
    const known = new Map<string, number>();
    const place = monthPlaces();
    let [last, month, offset] = [Number.NaN, 0, 0];
    for (let row = 0; row < rows; row++) {
      if (days[row] !== last) {
        last = days[row];
        const { key, offset: within, length } = place(last);
        month = known.get(key) ?? this.keys.length;
        offset = within;
        if (month === this.keys.length) {
          known.set(key, month);
          this.keys.push(key);
          this.lengths.push(length);
        }
      }
      this.month[row] = month;
      this.offset[row] = offset;
    }
  }
}

/** Hours of days while they are gathered, as blocks of 24 steps a day. */
export class HourStore {
  private readonly values = new Map<HourVariable, Map<string, Map<number, Float32Array>>>();
  private readonly place = monthPlaces();

  private readonly extents = new Map<number, { first: DayNumber; last: DayNumber }>();

  /** First and last day of a site with an hour; null when it has none. */
  extent(site: number): { first: DayNumber; last: DayNumber } | null {
    return this.extents.get(site) ?? null;
  }

  /** Keeps the 24 hours of a day that has any. */
  add(variable: HourVariable, site: number, day: DayNumber, hours: Float64Array): void {
    if (hours.every(Number.isNaN)) return;
    const { key, offset, length } = this.place(day);
    const extent = this.extents.get(site) ?? { first: day, last: day };
    this.extents.set(site, { first: Math.min(extent.first, day), last: Math.max(extent.last, day) });
    let months = this.values.get(variable);
    if (!months) {
      months = new Map();
      this.values.set(variable, months);
    }
    const row = monthRow(months, key, site, length * HOURS_PER_DAY);
    for (let hour = 0; hour < HOURS_PER_DAY; hour++) {
      if (!Number.isNaN(hours[hour])) row[offset * HOURS_PER_DAY + hour] = Math.round(hours[hour] * DECIMALS) / DECIMALS;
    }
  }

  /** Blocks of one variable and month each, sites sorted by code. */
  blocks(siteCodes: readonly string[]): StagedBlock[] {
    const blocks: StagedBlock[] = [];
    for (const [variable, months] of this.values)
      for (const [month, sites] of months) blocks.push(blockOf(variable, month, sites, siteCodes));
    return blocks.sort(byMonthOrder);
  }
}

function monthRow(months: Map<string, Map<number, Float32Array>>, key: string, site: number, length: number): Float32Array {
  let sites = months.get(key);
  if (!sites) {
    sites = new Map();
    months.set(key, sites);
  }
  let row = sites.get(site);
  if (!row) {
    row = new Float32Array(length).fill(Number.NaN);
    sites.set(site, row);
  }
  return row;
}

function scaleOf(variable: WeatherVariable): number {
  return variable === 'specific_humidity_kg_kg' ? DECIMALS_RATIO : DECIMALS;
}

function byMonthOrder(a: StagedBlock, b: StagedBlock): number {
  return a.month < b.month ? -1 : a.month > b.month ? 1 : 0;
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
  variable: BlockVariable,
  month: string,
  sites: ReadonlyMap<number, Float32Array>,
  siteCodes: readonly string[],
): StagedBlock {
  const order = [...sites.keys()].sort((a, b) => (siteCodes[a] < siteCodes[b] ? -1 : 1));
  const rows = order.map((site) => sites.get(site) as Float32Array);
  const values = new Float32Array(rows.reduce((length, row) => length + row.length, 0));
  let at = 0;
  for (const row of rows) {
    values.set(row, at);
    at += row.length;
  }
  return { variable, month, siteCodes: order.map((site) => siteCodes[site]), steps: isHourVariable(variable) ? HOURS_PER_DAY : 1, values };
}
