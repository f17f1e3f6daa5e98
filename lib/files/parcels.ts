/**
 * Parcels as polygons in any vector format → parcels with area, inside point and codes, the turnouts they name, and their plantings.
 */
import type { MultiPolygon, Polygon } from 'geojson';
import { findOverlaps } from '../geo/overlap.ts';
import { boxOf, pointInside } from '../geo/point-inside.ts';
import { type RepairedPolygon, type RepairNote, repairPolygon } from '../geo/polygon-repair.ts';
import { codeFault } from './code-text.ts';
import { attributesOf, type BoundProperties, bindWithCode, numberOf, textOf } from './feature-properties.ts';
import { FindingList, shown } from './finding-list.ts';
import { readLayerFeatures } from './layer-features.ts';
import { MapPreviewFeatures } from './map-preview.ts';
import { parcelJoins } from './parcel-joins.ts';
import { NOTE_TEXT, reportCrossing, reportFault } from './parcel-outline.ts';
import { cropsOf, mappingsOf, plantingsOf } from './parcel-plantings.ts';
import { warnFar, warnLarge, warnRemoved } from './parcel-plausible.ts';
import { PARCEL_ROLES } from './parcel-roles.ts';
import type { RawFeature } from './raw-feature.ts';
import type { CropCount, ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedParcel } from './reading.ts';
import { NOTHING_UNDERSTOOD } from './reading.ts';

/** Overlap of two parcels that is worth a warning, as a share of the smaller one. */
const OVERLAP_LIMIT = 0.01;
const OVERLAPS_REPORTED = 1000;
const BREATH = 500;
/** Share of the work that is reading the files. */
const READ_SHARE = 0.3;

/** Stands where a feature was once it is a parcel, so that its outline is not in memory twice. */
const TAKEN: RawFeature = { row: 0, file: '', properties: {}, geometry: null, problem: null };

interface Work {
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly findings: FindingList;
  readonly preview: MapPreviewFeatures;
  readonly parcels: StagedParcel[];
  readonly rows: { row: number; file: string }[];
  readonly byCode: Map<string, number>;
  /** codes of features that were left out */
  readonly refused: Set<string>;
  readonly repairs: Map<RepairNote, number>;
  readonly joins: ReturnType<typeof parcelJoins>;
}

/** Reads parcels from one or more vector files. */
export async function readParcels(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const findings = new FindingList();
  const read = await readLayerFeatures(files, ['Polygon', 'MultiPolygon'], options, findings, (done) => progress(READ_SHARE * done));
  const { features } = read;
  const chosen = { code: options.codeColumn, crop: options.cropColumn };
  const assumed = { length: context.districtUnits === 'us' ? 'ft' : 'm', flow: context.districtUnits === 'us' ? 'cfs' : 'm³/s' };
  const properties = bindWithCode(
    features,
    { roles: PARCEL_ROLES, options, chosen, assumed },
    { thing: 'parcel', numbered: 'P0001, P0002' },
    findings,
  );
  const crops = cropsOf(features, properties, options, context);
  const work: Work = {
    options,
    context,
    findings,
    preview: new MapPreviewFeatures(),
    parcels: [],
    rows: [],
    byCode: new Map(),
    refused: new Set(),
    repairs: new Map(),
    joins: parcelJoins(context, options, findings),
  };
  for (const [index, feature] of features.entries()) {
    takeFeature(feature, properties, crops, work);
    features[index] = TAKEN;
    if (index % BREATH === 0) await progress(READ_SHARE + ((0.9 - READ_SHARE) * index) / features.length);
  }
  finishNotes(work, properties, features);
  const plantings = plantingsOf(work, crops, properties);
  await progress(1);
  const keep = !findings.fatal;
  return {
    understood: {
      ...NOTHING_UNDERSTOOD,
      ...read.understood,
      columns: properties.columns,
      usableRows: work.parcels.length,
      crops: [...crops.values()],
      boundingBox: boxOfAll(work.parcels),
    },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: work.preview.preview(),
    staged: {
      kind: 'parcels',
      parcels: keep ? work.parcels : [],
      turnouts: keep ? work.joins.turnouts() : [],
      plantings: keep ? plantings : [],
      cropMappings: keep ? mappingsOf(crops) : {},
    },
  };
}

function takeFeature(feature: RawFeature, properties: BoundProperties, crops: ReadonlyMap<string, CropCount>, work: Work) {
  const { preview, findings, byCode } = work;
  const { row, file } = feature;
  const code = codeOf(feature, properties);
  const refuse = (reason: string) => {
    if (code !== null) work.refused.add(code);
    preview.add({ row, code, status: 'refused', reason }, feature.geometry);
  };
  if (!feature.geometry) return refuse(feature.problem ?? 'no geometry');
  if (code === null) {
    findings.error({
      code: 'missing-code',
      message: 'The parcel has no code.',
      file,
      row,
      column: properties.bound.get('code')?.header,
      advice: 'Give it a code.',
    });
    return refuse('The parcel has no code.');
  }
  const fault = codeFault('Parcel', code);
  if (fault) {
    findings.error({ ...fault, file, row, column: properties.bound.get('code')?.header, value: shown(code) });
    return refuse(fault.message);
  }
  const earlier = byCode.get(code);
  if (earlier !== undefined) {
    const message = `Parcel ${shown(code)} stands in feature ${work.rows[earlier].row} already; the first is kept.`;
    findings.error({
      code: 'duplicate-code',
      message,
      file,
      row,
      column: properties.bound.get('code')?.header,
      value: shown(code),
      limit: 'one feature per parcel',
      advice: 'Make one multipolygon of both, or give another code.',
    });
    return refuse(message);
  }
  const repaired = repairPolygon(feature.geometry as Polygon | MultiPolygon);
  if (repaired.geometry === null) return refuse(reportFault(feature, code, repaired, findings));
  for (const note of repaired.notes) work.repairs.set(note, (work.repairs.get(note) ?? 0) + 1);
  const change = reportCrossing(feature, code, repaired, findings);
  const { parcel, how } = parcelOf(feature, code, repaired, { properties, crops, work });
  const reason = [change, how].filter((part) => part !== null).join(' ') || null;
  preview.add({ row, code, status: change ? 'repaired' : 'ok', reason }, repaired.geometry);
  byCode.set(code, work.parcels.length);
  work.rows.push({ row, file });
  work.parcels.push(parcel);
}

function codeOf(feature: RawFeature, { bound }: BoundProperties): string | null {
  if (!bound.has('code')) return `P${String(feature.row).padStart(4, '0')}`;
  return textOf(feature, bound, 'code');
}

function parcelOf(
  feature: RawFeature,
  code: string,
  { geometry, area }: RepairedPolygon,
  { properties, crops, work }: { properties: BoundProperties; crops: ReadonlyMap<string, CropCount>; work: Work },
): { parcel: StagedParcel; how: string | null } {
  const shape = geometry as Polygon | MultiPolygon;
  const { bound } = properties;
  const [west, south, east, north] = boxOf(shape);
  const [longitude, latitude] = pointInside(shape);
  const foreign = textOf(feature, bound, 'crop');
  const { codes, how } = work.joins.join(feature, bound, { code, geometry: shape, area });
  const parcel = {
    code,
    name: textOf(feature, bound, 'name'),
    ...codes,
    area: Math.round(area * 1000) / 1000,
    elevation: numberOf(feature, bound, { role: 'elevation', low: -450, high: 9000, unit: 'm' }, work.findings),
    ...{ longitude, latitude, west, south, east, north },
    geometry: shape,
    attributes: attributesOf(feature, properties),
    crop: foreign === null ? null : (crops.get(foreign)?.cropCode ?? null),
  };
  return { parcel, how };
}

function finishNotes(work: Work, properties: BoundProperties, features: readonly RawFeature[]): void {
  const { findings, parcels } = work;
  for (const [note, count] of work.repairs)
    findings.note({ code: `polygon-${note}`, message: `${count} ${count === 1 ? 'polygon' : 'polygons'} ${NOTE_TEXT[note]}.` });
  work.joins.finish(parcels.length);
  if (features.length > 0 && !properties.bound.has('crop'))
    findings.note({ code: 'no-crop-column', message: 'No property holds a crop; the parcels come without plantings.' });
  warnLarge(work, findings);
  if (parcels.length > 0) warnFar(work, work.context, work.options, findings);
  if (work.options.replace === true && !findings.fatal) warnRemoved(parcels, work.refused, work.context, findings);
  warnOverlaps(work);
}

function warnOverlaps({ findings, parcels, rows }: Work): void {
  const shapes = parcels.map((parcel) => parcel.geometry);
  const areas = parcels.map((parcel) => parcel.area);
  for (const { first, second, share } of findOverlaps(shapes, areas, { threshold: OVERLAP_LIMIT, limit: OVERLAPS_REPORTED })) {
    findings.warn({
      code: 'parcels-overlap',
      message: `Parcels ${shown(parcels[first].code)} and ${shown(parcels[second].code)} overlap by ${overlapText(share)} % of the smaller one.`,
      file: rows[second].file,
      row: rows[second].row,
      value: shown(parcels[second].code),
      limit: `${OVERLAP_LIMIT * 100} % of the smaller parcel`,
      advice: 'Water would be counted twice on the shared land: correct the outlines.',
    });
  }
}

/** @example overlapText(0.995) // '100' */
function overlapText(share: number): string {
  return String(Number((share * 100).toPrecision(2)));
}

function boxOfAll(parcels: readonly StagedParcel[]): [number, number, number, number] | null {
  if (parcels.length === 0) return null;
  const box: [number, number, number, number] = [180, 90, -180, -90];
  for (const { west, south, east, north } of parcels) {
    box[0] = Math.min(box[0], west);
    box[1] = Math.min(box[1], south);
    box[2] = Math.max(box[2], east);
    box[3] = Math.max(box[3], north);
  }
  return box;
}
