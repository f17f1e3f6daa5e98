/** Turnout demand of the reaches: added up over the parcels of a slice, then over the slices of a run. */
import { depthToVolume } from '../base/units.ts';
import { variableIndex } from '../season/daily-store.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, MISSING_STORED } from '../season/types.ts';
import { ESTIMATED_BITS, FALLBACK, type Fallback } from '../weather/variable.ts';

/** What a slice adds to the canals and to the checks of a run. */
export interface SliceSums {
  /** reaches that parcels of the slice name, whether or not the district has them */
  readonly reaches: readonly { readonly code: string; readonly parcels: number }[];
  /** parcels that name no reach */
  readonly withoutReach: number;
  /** [reach × day] of `reaches` [m³ d⁻¹] */
  readonly demand: Float64Array;
  /** area of the parcels whose weather was filled or estimated, [reach × day] of `reaches` [m²] */
  readonly estimated: Float64Array;
  /** parcel-days of each fallback that is there */
  readonly fallbackDays: Partial<Record<Fallback, number>>;
  /** parcel-days with any filled or estimated value */
  readonly estimatedDays: number;
}

/** A parcel as far as its sums need it. */
interface DemandingParcel {
  readonly reach: string | null;
  /** m² */
  readonly area: number;
}

/**
 * Sums over the parcels of a slice.
 *
 * @param daily [parcel × variable × day] as stored
 * @param flags bits of FALLBACK [parcel × day]
 */
export function sliceSums(parcels: readonly DemandingParcel[], daily: Uint16Array, flags: Uint32Array, dayCount: number): SliceSums {
  const named = [...new Set(parcels.flatMap(({ reach }) => (reach === null ? [] : [reach])))];
  const place = new Map(named.map((code, index) => [code, index]));
  const demand = new Float64Array(named.length * dayCount);
  const estimated = new Float64Array(named.length * dayCount);
  const gross = variableIndex('gross_requirement');
  const { scale } = DAILY_VARIABLES[gross];
  const counts = new Array<number>(named.length).fill(0);
  let withoutReach = 0;
  parcels.forEach(({ reach, area }, p) => {
    if (reach === null) {
      withoutReach++;
      return;
    }
    const index = place.get(reach) as number;
    counts[index]++;
    const at = (p * DAILY_VARIABLE_COUNT + gross) * dayCount;
    for (let d = 0, i = index * dayCount; d < dayCount; d++, i++) {
      const stored = daily[at + d];
      if (stored !== 0) demand[i] += depthToVolume(stored === MISSING_STORED ? Number.NaN : stored / scale, area);
      if ((flags[p * dayCount + d] & ESTIMATED_BITS) !== 0) estimated[i] += area;
    }
  });
  const reaches = named.map((code, index) => ({ code, parcels: counts[index] }));
  return { reaches, withoutReach, demand, estimated, ...fallbackSums(flags) };
}

function fallbackSums(flags: Uint32Array): Pick<SliceSums, 'fallbackDays' | 'estimatedDays'> {
  const byBits = new Map<number, number>();
  for (let i = 0; i < flags.length; ) {
    const bits = flags[i];
    let end = i + 1;
    while (end < flags.length && flags[end] === bits) end++;
    byBits.set(bits, (byBits.get(bits) ?? 0) + end - i);
    i = end;
  }
  const fallbackDays: Partial<Record<Fallback, number>> = {};
  let estimatedDays = 0;
  for (const [bits, days] of byBits) {
    if ((bits & ESTIMATED_BITS) !== 0) estimatedDays += days;
    for (const [name, bit] of Object.entries(FALLBACK) as [Fallback, number][])
      if ((bits & bit) !== 0) fallbackDays[name] = (fallbackDays[name] ?? 0) + days;
  }
  return { fallbackDays, estimatedDays };
}

/** Bytes of a slice's sums: [Uint32 length of the header][header as JSON, padded to 8 bytes][demand][estimated]. */
export function packSums({ demand, estimated, ...told }: SliceSums): Uint8Array {
  const json = JSON.stringify(told);
  const length = Buffer.byteLength(json);
  const start = Math.ceil((4 + length) / 8) * 8;
  const bytes = new Uint8Array(start + demand.byteLength + estimated.byteLength);
  new DataView(bytes.buffer).setUint32(0, length, true);
  bytes.set(Buffer.from(json), 4);
  bytes.set(new Uint8Array(demand.buffer), start);
  bytes.set(new Uint8Array(estimated.buffer), start + demand.byteLength);
  return bytes;
}

/** Back from `packSums`. */
export function unpackSums(packed: Uint8Array): SliceSums {
  const bytes = Uint8Array.from(packed);
  const length = new DataView(bytes.buffer).getUint32(0, true);
  const told = JSON.parse(Buffer.from(bytes.buffer, 4, length).toString('utf8'));
  const start = Math.ceil((4 + length) / 8) * 8;
  const count = (bytes.byteLength - start) / 16;
  return {
    ...told,
    demand: new Float64Array(bytes.buffer, start, count),
    estimated: new Float64Array(bytes.buffer, start + 8 * count, count),
  };
}

/** The sums of every slice of a run, by reach of the district. */
export class RunSums {
  readonly demand: Float64Array;
  readonly estimated: Float64Array;
  readonly fallbackDays = new Map<Fallback, number>();
  estimatedDays = 0;
  /** parcels that name no reach, or none that the district has */
  withoutCanal = 0;
  private readonly index: ReadonlyMap<string, number>;

  /** @param codes reaches of the district, in the order of the arrays */
  constructor(
    codes: readonly string[],
    private readonly dayCount: number,
  ) {
    this.index = new Map(codes.map((code, ordinal) => [code, ordinal]));
    this.demand = new Float64Array(codes.length * dayCount);
    this.estimated = new Float64Array(codes.length * dayCount);
  }

  add(slice: SliceSums): void {
    this.withoutCanal += slice.withoutReach;
    this.estimatedDays += slice.estimatedDays;
    for (const [name, days] of Object.entries(slice.fallbackDays) as [Fallback, number][])
      this.fallbackDays.set(name, (this.fallbackDays.get(name) ?? 0) + days);
    slice.reaches.forEach(({ code, parcels }, k) => {
      const ordinal = this.index.get(code);
      if (ordinal === undefined) this.withoutCanal += parcels;
      else this.addReach(ordinal, slice, k);
    });
  }

  private addReach(ordinal: number, { demand, estimated }: SliceSums, k: number): void {
    for (let d = 0; d < this.dayCount; d++) {
      this.demand[ordinal * this.dayCount + d] += demand[k * this.dayCount + d];
      this.estimated[ordinal * this.dayCount + d] += estimated[k * this.dayCount + d];
    }
  }
}
