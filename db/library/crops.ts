/**
 * The crop library every district starts with, made from the printed tables in `crop-table.ts`.
 *
 * Choices, stated once: a printed range becomes its middle; variants that differ only in stage lengths become calendars of one crop;
 * cutting cycles become one crop whose calendars restart after each cut. Every value names its source in `sources`.
 */
import type { Crop } from '../../lib/season/types.ts';
import { type LibraryCalendar, libraryCalendars } from './calendars.ts';
import { additionSources, additionsOf } from './crop-additions.ts';
import { type CropRow, cropRows } from './crop-rows.ts';

interface CropLibrary {
  readonly crops: readonly Crop[];
  /** source of each value, by crop code and then by member of Crop */
  readonly sources: Readonly<Record<string, Readonly<Partial<Record<keyof Crop, string>>>>>;
  /** what the printed tables add in words, by crop code */
  readonly notes: Readonly<Record<string, string>>;
  readonly calendars: readonly LibraryCalendar[];
  /** salt tolerance, by crop code; absent where not listed: threshold of saturation extract [dS m⁻¹], yield decline [% per dS m⁻¹] */
  readonly salinity: Readonly<Record<string, { readonly threshold: number; readonly slope: number }>>;
}

/** End-of-season Kcb at or below which a crop is taken to dry off before harvest. */
const DRIES_OFF_BELOW = 0.35;
const RANGE = 'middle of the printed range where one is printed';

/**
 * The library as typed values. The same objects on every call.
 *
 * @example cropLibrary().crops.find((crop) => crop.code === 'maize-sweet')?.basalMid // 1.1
 * Source: FAO-56 Tables 11, 12, 17, 22, 23, 24.
 */
export function cropLibrary(): CropLibrary {
  library ??= makeLibrary();
  return library;
}

let library: CropLibrary | undefined;

function makeLibrary(): CropLibrary {
  const rows = cropRows();
  const first = new Map<string, CropRow>();
  for (const row of rows) if (!first.has(row.code)) first.set(row.code, row);
  const variants = [...first.values()];
  return {
    crops: variants.map(cropOf),
    sources: Object.fromEntries(variants.map((row) => [row.code, sourcesOf(row)])),
    notes: Object.fromEntries(variants.filter((row) => row.notes !== '').map((row) => [row.code, row.notes])),
    calendars: libraryCalendars(rows),
    salinity: Object.fromEntries(
      variants
        .filter((row) => !Number.isNaN(row.salinityThreshold))
        .map((row) => [row.code, { threshold: row.salinityThreshold, slope: row.salinitySlope }]),
    ),
  };
}

function cropOf(row: CropRow): Crop {
  const basal = basalOf(row);
  return {
    code: row.code,
    name: row.name,
    group: row.group,
    type: row.type,
    surface: 'short',
    ...basal,
    heightMax: row.heightMax,
    rootDepthMin: rootDepthMin(row),
    rootDepthMax: row.rootDepthMax,
    depletionFraction: row.depletionFraction,
    yieldResponse: row.yieldResponse,
    lastIrrigation: basal.basalEnd <= DRIES_OFF_BELOW ? 0.5 : 1,
    ...singleOf(row),
    ...saltOf(row),
    ...additionsOf(row),
  };
}

function singleOf(row: CropRow): Pick<Crop, 'single'> {
  if (Number.isNaN(row.singleInitial + row.singleMid + row.singleEnd)) return {};
  return { single: { initial: row.singleInitial, mid: row.singleMid, end: row.singleEnd } };
}

function saltOf(row: CropRow): Pick<Crop, 'salinity'> {
  return Number.isNaN(row.salinityThreshold) ? {} : { salinity: { threshold: row.salinityThreshold, slope: row.salinitySlope } };
}

/** Kcb of Table 17; where it lists none, from Kc by the rule of Table 18 (mid and end less 0.05), with the initial value of the cut crop. */
function basalOf(row: CropRow): Pick<Crop, 'basalInitial' | 'basalMid' | 'basalEnd'> {
  if (!Number.isNaN(row.basalMid)) return { basalInitial: initialOf(row), basalMid: row.basalMid, basalEnd: row.basalEnd };
  return { basalInitial: round(row.singleInitial - 0.1), basalMid: round(row.singleMid - 0.05), basalEnd: round(row.singleEnd - 0.05) };
}

/** Winter wheat is printed with two initial values: the low one for bare or frozen ground, the high one for a green cover that goes on using water. */
function initialOf(row: CropRow): number {
  return row.code === 'winter-wheat-frozen-soils' ? row.basalInitialLow : row.basalInitialHigh;
}

/** Roots of what stands for years do not start anew; annuals start at the depth of the seedbed. */
function rootDepthMin(row: CropRow): number {
  if (row.type !== 'annual') return row.rootDepthMax;
  return row.rootDepthMax < 0.6 ? 0.2 : 0.3;
}

function sourcesOf(row: CropRow): Partial<Record<keyof Crop, string>> {
  const basal = basalSource(row);
  return {
    basalInitial:
      row.basalInitialLow === row.basalInitialHigh ? basal : `${basal}; prints 0.15–0.5 for winter wheat: ${initialOf(row)} chosen`,
    basalMid: basal,
    basalEnd: basal,
    heightMax: `FAO-56 Table 12; ${RANGE}`,
    rootDepthMin:
      row.type === 'annual'
        ? 'convention for a sown crop; FAO-56 Annex 8 uses 0.2 m in its example'
        : 'roots of a standing crop stay at full depth; common practice, no source',
    rootDepthMax: `FAO-56 Table 22; ${RANGE}`,
    depletionFraction: 'FAO-56 Table 22',
    ...(Number.isNaN(row.yieldResponse) ? {} : { yieldResponse: `FAO-56 Table 24; ${RANGE}` }),
    lastIrrigation: 'FAO-56 Annex 8 for crops that dry off (Kcb end ≤ 0.35): middle of the late stage; otherwise until harvest',
    ...(singleOf(row).single ? { single: `FAO-56 Table 12; ${RANGE}` } : {}),
    ...(saltOf(row).salinity ? { salinity: `FAO-56 Table 23; ${RANGE}` } : {}),
    ...additionSources(additionsOf(row)),
  };
}

function basalSource(row: CropRow): string {
  return Number.isNaN(row.basalMid)
    ? 'no basal value listed: from Kc (FAO-56 Table 12) by the rule of FAO-56 Table 18'
    : `FAO-56 Table 17; ${RANGE}`;
}

function round(value: number): number {
  return Math.round(value * 1000) / 1000;
}
