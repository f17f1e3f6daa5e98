/**
 * Turnouts: a delimited table, or points of any vector format.
 */
import type { MultiPoint, Point } from 'geojson';
import { bindWithCode, numberOf, textOf } from './feature-properties.ts';
import { FindingList, shown } from './finding-list.ts';
import { readLayerFeatures } from './layer-features.ts';
import { MapPreviewFeatures } from './map-preview.ts';
import { type PlainRow, readPlainTable } from './plain-table.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedTurnout } from './reading.ts';
import { NOTHING_UNDERSTOOD } from './reading.ts';
import { TURNOUT_CAPACITY_HIGH, TURNOUT_ROLES, TurnoutRules } from './turnout-rules.ts';

/** Reads turnouts; the first file tells whether they are a table or points. */
export async function readTurnouts(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const read = files[0] && isTable(files[0]) ? readTable : readPoints;
  return read(files, options, context, progress);
}

const TABLE_NAME = /\.(csv|tsv|txt|tab|dat)$/i;
const VECTOR_NAME = /\.(geojson|json|zip|shp|gpkg|fgb|parquet|geoparquet|kml|kmz)$/i;

/** A table by its name, or by a first character that opens no known vector format. */
function isTable(file: ImportFile): boolean {
  if (TABLE_NAME.test(file.name)) return true;
  if (VECTOR_NAME.test(file.name)) return false;
  const head = new TextDecoder('latin1').decode(file.bytes.subarray(0, 64)).trimStart();
  return !/^(\{|<|PK|SQLite|fgb|PAR1)/.test(head.replace(/^ï»¿/, ''));
}

const assumedOf = ({ districtUnits }: ImportContext) => ({ flow: districtUnits === 'us' ? 'cfs' : 'm³/s' });

function readTable(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const rules = new TurnoutRules(context, options);
  const each = (row: PlainRow) => {
    const facts = {
      code: row.text('code'),
      reach: row.text('reach'),
      capacity: row.number('capacity', { low: 0, high: TURNOUT_CAPACITY_HIGH, unit: 'm³/s', missingCodes: true }),
      longitude: row.number('longitude', { low: -180, high: 180, unit: '°', missingCodes: true }),
      latitude: row.number('latitude', { low: -90, high: 90, unit: '°', missingCodes: true }),
    };
    if (!row.good) return;
    const { fault } = rules.take(facts, row.row);
    if (fault) row.fail(fault);
  };
  const finish = (findings: FindingList) => {
    rules.finish(findings);
    return { kind: 'turnouts' as const, turnouts: findings.fatal ? [] : rules.turnouts() };
  };
  const request = { files, options, progress, roles: TURNOUT_ROLES, assumed: assumedOf(context) };
  return readPlainTable(request, each, finish, () => ({ boundingBox: boxOf(rules.turnouts()) }));
}

async function readPoints(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const findings = new FindingList();
  const preview = new MapPreviewFeatures();
  const { features, understood } = await readLayerFeatures(files, ['Point', 'MultiPoint'], options, findings, (part) =>
    progress(0.8 * part),
  );
  const request = { roles: TURNOUT_ROLES, options, chosen: { code: options.codeColumn }, assumed: assumedOf(context) };
  const properties = bindWithCode(features, request, { thing: 'turnout', numbered: 'T0001, T0002' }, findings);
  const rules = new TurnoutRules(context, options);
  for (const feature of features) {
    const { row, file } = feature;
    const code = properties.bound.has('code') ? textOf(feature, properties.bound, 'code') : `T${String(row).padStart(4, '0')}`;
    const place = placeOf(feature.geometry as Point | MultiPoint | null);
    if (!place) {
      preview.add({ row, code, status: 'refused', reason: feature.problem ?? 'no geometry' }, feature.geometry);
      continue;
    }
    const capacity = numberOf(feature, properties.bound, { role: 'capacity', low: 0, high: TURNOUT_CAPACITY_HIGH, unit: 'm³/s' }, findings);
    const [longitude, latitude] = place;
    const taken = rules.take({ code, reach: textOf(feature, properties.bound, 'reach'), capacity, longitude, latitude }, row);
    if (taken.fault) {
      const { role, ...fault } = taken.fault;
      findings.error({
        ...fault,
        file,
        row,
        column: role && properties.bound.get(role)?.header,
        value: code === null ? undefined : shown(code),
      });
      preview.add({ row, code, status: 'refused', reason: fault.message }, feature.geometry);
      continue;
    }
    preview.add({ row, code, status: 'ok', reason: taken.says }, feature.geometry);
  }
  rules.finish(findings);
  const turnouts = rules.turnouts();
  await progress(1);
  return {
    understood: {
      ...NOTHING_UNDERSTOOD,
      ...understood,
      columns: properties.columns,
      usableRows: turnouts.length,
      boundingBox: boxOf(turnouts),
    },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: preview.preview(),
    staged: { kind: 'turnouts', turnouts: findings.fatal ? [] : turnouts },
  };
}

function placeOf(geometry: Point | MultiPoint | null): readonly number[] | null {
  if (!geometry) return null;
  return (geometry.type === 'Point' ? geometry.coordinates : geometry.coordinates[0]) ?? null;
}

function boxOf(turnouts: readonly StagedTurnout[]): [number, number, number, number] | null {
  const longitudes = turnouts.flatMap(({ longitude }) => (typeof longitude === 'number' ? [longitude] : []));
  const latitudes = turnouts.flatMap(({ latitude }) => (typeof latitude === 'number' ? [latitude] : []));
  if (longitudes.length === 0 || latitudes.length === 0) return null;
  const least = (values: readonly number[]) => values.reduce((a, b) => Math.min(a, b));
  const most = (values: readonly number[]) => values.reduce((a, b) => Math.max(a, b));
  return [least(longitudes), least(latitudes), most(longitudes), most(latitudes)];
}
