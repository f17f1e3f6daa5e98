/** The list of parcels over a period: filtered, sorted and paged from the run's arrays, so that it stays quick in a large district. */

export const LISTED_VARIABLES = [
  'crop_et',
  'adjusted_crop_et',
  'precipitation',
  'effective_precipitation',
  'net_requirement',
  'gross_requirement',
  'estimated_share',
] as const;
export type ListedVariable = (typeof LISTED_VARIABLES)[number];

export const SORT_KEYS = ['parcel', 'crops', 'area', 'reach', ...LISTED_VARIABLES, 'volume', 'stress'] as const;
export type SortKey = (typeof SORT_KEYS)[number];

/** What the arrays are in order of; the map's own description has this shape. */
export interface ListedParcels {
  readonly code: readonly string[];
  readonly area_m2: readonly number[];
  readonly crops: readonly string[];
  readonly reach: readonly (string | null)[];
}

export interface ParcelListInput {
  readonly parcels: ListedParcels;
  /** one depth per parcel [mm]; of `estimated_share` the share of days, 0–1 */
  readonly values: Readonly<Record<ListedVariable, ArrayLike<number>>>;
  readonly search?: string;
  readonly reach?: string;
  /** codes the reader may see; null for all */
  readonly own: readonly string[] | null;
  readonly sort: SortKey;
  readonly descending: boolean;
  readonly page: number;
  readonly pageSize: number;
}

export interface ListedParcel {
  readonly code: string;
  readonly crops: string;
  readonly reach: string | null;
  readonly area_ha: number;
  readonly values: Readonly<Record<ListedVariable, number>>;
  readonly volume_m3: number;
  /** share of crop ET that the crop could not take for want of water, 0–1 */
  readonly stress: number;
}

export interface ParcelListResult {
  readonly rows: readonly ListedParcel[];
  readonly count: number;
  readonly page: number;
  readonly pageCount: number;
  /** over all parcels found, not the page alone; depths are weighted by area */
  readonly total: { readonly area_ha: number; readonly volume_m3: number; readonly depths: Readonly<Record<ListedVariable, number>> };
}

/** One page of the list, with totals over every parcel that the search finds. Missing values sort last. */
export function parcelPage(input: ParcelListInput): ParcelListResult {
  const found = positionsFound(input);
  sortPositions(found, input);
  const pageCount = Math.max(1, Math.ceil(found.length / input.pageSize));
  const page = Math.min(Math.max(1, input.page), pageCount);
  const shown = found.slice((page - 1) * input.pageSize, page * input.pageSize);
  return { rows: shown.map((at) => rowAt(input, at)), count: found.length, page, pageCount, total: totalOf(input, found) };
}

function positionsFound({ parcels, own, search, reach }: ParcelListInput): number[] {
  const mine = own ? new Set(own) : null;
  const text = search?.toLocaleLowerCase('en');
  const found: number[] = [];
  for (let at = 0; at < parcels.code.length; at++) {
    if (mine && !mine.has(parcels.code[at])) continue;
    if (reach && parcels.reach[at] !== reach) continue;
    if (text && !matches(parcels, at, text)) continue;
    found.push(at);
  }
  return found;
}

function matches(parcels: ListedParcels, at: number, text: string): boolean {
  return [parcels.code[at], parcels.crops[at], parcels.reach[at] ?? ''].some((value) => value.toLocaleLowerCase('en').includes(text));
}

const IN_ORDER = new Intl.Collator('en', { numeric: true });

function sortPositions(found: number[], input: ParcelListInput): void {
  const { parcels, sort, descending } = input;
  const sign = descending ? -1 : 1;
  if (sort === 'parcel' || sort === 'crops' || sort === 'reach') {
    const names = sort === 'parcel' ? parcels.code : parcels[sort];
    found.sort((a, b) => sign * IN_ORDER.compare(names[a] ?? '', names[b] ?? '') || a - b);
    return;
  }
  const value = (at: number) => sortValue(input, sort, at);
  found.sort((a, b) => byNumber(value(a), value(b), sign) || a - b);
}

function sortValue(input: ParcelListInput, sort: Exclude<SortKey, 'parcel' | 'crops' | 'reach'>, at: number): number {
  if (sort === 'area') return input.parcels.area_m2[at];
  if (sort === 'volume') return volumeAt(input, at);
  if (sort === 'stress') return unmetShare(input.values.crop_et[at], input.values.adjusted_crop_et[at]);
  return input.values[sort][at];
}

function byNumber(a: number, b: number, sign: number): number {
  if (Number.isNaN(a) || Number.isNaN(b)) return Number(Number.isNaN(a)) - Number(Number.isNaN(b));
  return sign * (a - b);
}

function volumeAt(input: ParcelListInput, at: number): number {
  return (input.values.gross_requirement[at] * input.parcels.area_m2[at]) / 1000;
}

/** Share of crop ET not met, 0–1; NaN without crop ET. @example unmetShare(5, 4) // 0.2 */
export function unmetShare(cropEt: number, adjustedCropEt: number): number {
  return cropEt > 0 ? Math.max(0, 1 - adjustedCropEt / cropEt) : Number.NaN;
}

function rowAt(input: ParcelListInput, at: number): ListedParcel {
  const { parcels } = input;
  return {
    code: parcels.code[at],
    crops: parcels.crops[at],
    reach: parcels.reach[at],
    area_ha: parcels.area_m2[at] / 1e4,
    values: perVariable((variable) => input.values[variable][at]),
    volume_m3: volumeAt(input, at),
    stress: unmetShare(input.values.crop_et[at], input.values.adjusted_crop_et[at]),
  };
}

function totalOf(input: ParcelListInput, found: readonly number[]): ParcelListResult['total'] {
  const area = input.parcels.area_m2;
  const total = found.reduce((sum, at) => sum + area[at], 0);
  const volume = found.reduce((sum, at) => sum + (volumeAt(input, at) || 0), 0);
  return { area_ha: total / 1e4, volume_m3: volume, depths: perVariable((variable) => meanByArea(input.values[variable], area, found)) };
}

/** Mean weighted by area over the parcels that have a value; NaN when none has. */
function meanByArea(values: ArrayLike<number>, area: readonly number[], found: readonly number[]): number {
  let [sum, weight] = [0, 0];
  for (const at of found) {
    if (Number.isNaN(values[at])) continue;
    sum += values[at] * area[at];
    weight += area[at];
  }
  return weight > 0 ? sum / weight : Number.NaN;
}

function perVariable(value: (variable: ListedVariable) => number): Record<ListedVariable, number> {
  return Object.fromEntries(LISTED_VARIABLES.map((variable) => [variable, value(variable)])) as Record<ListedVariable, number>;
}

/** The numbers of a map array: little-endian 32-bit floats. */
export function floatsOf(bytes: Uint8Array): Float32Array {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  return Float32Array.from({ length: bytes.byteLength >> 2 }, (_, at) => view.getFloat32(at * 4, true));
}
