/**
 * Readings of a table with several a day, as they come: growing columns of numbers, and no decision yet on what their stamps mean.
 */
import { VARIABLE_NAMES } from './weather-store.ts';

/** Readings of one file that share a step. */
export class ReadingStore {
  count = 0;
  sites = new Int32Array(4096);
  /** line in the file */
  lines = new Int32Array(4096);
  /** min since 1970-01-01 00:00 of the file's clock */
  stamps = new Float64Array(4096);
  /** by variable in the order of VARIABLE_NAMES; in the units of `readingMeaning` */
  readonly values: (Float32Array | null)[] = VARIABLE_NAMES.map(() => null);

  private grouped: Map<number, Int32Array> | null = null;

  constructor(
    readonly file: string,
    /** time a reading covers [min] */
    readonly step: number,
  ) {}

  add(site: number, stamp: number, line: number, values: Float64Array): void {
    const row = this.count++;
    if (row >= this.sites.length) this.grow();
    this.sites[row] = site;
    this.stamps[row] = stamp;
    this.lines[row] = line;
    for (let v = 0; v < values.length; v++) {
      if (Number.isNaN(values[v])) continue;
      let column = this.values[v];
      if (column === null) {
        column = new Float32Array(this.sites.length).fill(Number.NaN);
        this.values[v] = column;
      }
      column[row] = values[v];
    }
  }

  private grow(): void {
    const size = this.sites.length * 2;
    this.sites = extended(this.sites, new Int32Array(size));
    this.lines = extended(this.lines, new Int32Array(size));
    this.stamps = extended(this.stamps, new Float64Array(size));
    for (let v = 0; v < this.values.length; v++) {
      const column = this.values[v];
      if (column) this.values[v] = extended(column, new Float32Array(size).fill(Number.NaN));
    }
  }

  /** Rows of each site, in file order; made once, when the last row is in. */
  bySite(): ReadonlyMap<number, Int32Array> {
    this.grouped ??= this.group();
    return this.grouped;
  }

  private group(): Map<number, Int32Array> {
    const counts = new Map<number, number>();
    for (let row = 0; row < this.count; row++) counts.set(this.sites[row], (counts.get(this.sites[row]) ?? 0) + 1);
    const rows = new Map([...counts].map(([site, count]) => [site, new Int32Array(count)]));
    const at = new Map<number, number>();
    for (let row = 0; row < this.count; row++) {
      const site = this.sites[row];
      const place = at.get(site) ?? 0;
      (rows.get(site) as Int32Array)[place] = row;
      at.set(site, place + 1);
    }
    return rows;
  }
}

function extended<T extends Int32Array | Float32Array | Float64Array>(from: T, to: T): T {
  to.set(from);
  return to;
}
