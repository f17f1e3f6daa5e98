import type { FieldQuantity } from '../../db/schema/land.ts';

/** What an import changed, in numbers: `parcels_added`, `sites_changed`, `weather_blocks_changed` … */
export type ApplyCounts = Record<string, number>;

/** Records that changed, with their first and last day. */
export interface RecordsTouched {
  /** deliveries, or the quantities that were measured */
  readonly what: 'deliveries' | readonly FieldQuantity[];
  readonly from: string;
  readonly to: string;
}

/** Which seasons an import may bear on. */
export interface Touched {
  /** true: land, stations or soils changed, which every season rests on */
  readonly everything: boolean;
  /** months of changed weather, YYYY-MM-01 */
  readonly months: readonly string[];
  readonly seasons: readonly string[];
  /** deliveries or measurements that changed: they bear on the seasons whose run takes them */
  readonly records?: RecordsTouched;
}

export function countsChanged(counts: ApplyCounts): boolean {
  return Object.values(counts).some((count) => count > 0);
}

/** Gathers which records an import brings. */
export class RecordDays {
  private readonly quantities = new Set<FieldQuantity>();
  private deliveries = false;
  private from = '9999-12-31';
  private to = '0000-01-01';

  add(what: 'deliveries' | FieldQuantity, date: string): void {
    if (what === 'deliveries') this.deliveries = true;
    else this.quantities.add(what);
    if (date < this.from) this.from = date;
    if (date > this.to) this.to = date;
  }

  /** Undefined when it brings none. */
  touched(): RecordsTouched | undefined {
    const { from, to } = this;
    if (this.deliveries) return { what: 'deliveries', from, to };
    return this.quantities.size > 0 ? { what: [...this.quantities], from, to } : undefined;
  }
}
