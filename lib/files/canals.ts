/**
 * Canals as lines in any vector format → the reaches of one conveyance tree.
 */
import type { LineString, MultiLineString, Position } from 'geojson';
import { counted } from '../base/counted.ts';
import { geodesicLength } from '../geo/geodesic.ts';
import { samePosition } from '../geo/ring.ts';
import { reachesRemoved } from './canal-removal.ts';
import { CANAL_ROLES } from './canal-roles.ts';
import { checkTree, inferParents, type TreeReach } from './canal-tree.ts';
import { codeFault } from './code-text.ts';
import { type BoundProperties, bindWithCode, numberOf, textOf } from './feature-properties.ts';
import { FindingList, shown } from './finding-list.ts';
import { readLayerFeatures } from './layer-features.ts';
import { lossRuleOf, reportLossFault } from './loss-rule-columns.ts';
import { MapPreviewFeatures } from './map-preview.ts';
import { hasHeight, type RawFeature } from './raw-feature.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedReach } from './reading.ts';
import { NOTHING_UNDERSTOOD } from './reading.ts';

/** Largest reach that is believed [m³ s⁻¹]. */
const CAPACITY_HIGH = 5000;

interface Work {
  readonly findings: FindingList;
  readonly preview: MapPreviewFeatures;
  readonly reaches: { reach: StagedReach; row: number; file: string }[];
  readonly byCode: Map<string, number>;
  /** code → why its feature was left out */
  readonly leftOut: Map<string, string>;
  heights: number;
  percents: number;
}

/** Reads canals from one or more vector files. */
export async function readCanals(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const findings = new FindingList();
  const read = await readLayerFeatures(files, ['LineString', 'MultiLineString'], options, findings, (done) => progress(done / 2));
  const { features } = read;
  const assumed = { flow: context.districtUnits === 'us' ? 'cfs' : 'm³/s' };
  const request = { roles: CANAL_ROLES, options, chosen: { code: options.codeColumn }, assumed };
  const properties = bindWithCode(features, request, { thing: 'reach', numbered: 'R001, R002' }, findings);
  const work: Work = {
    findings,
    preview: new MapPreviewFeatures(),
    reaches: [],
    byCode: new Map(),
    leftOut: new Map(),
    heights: 0,
    percents: 0,
  };
  for (const feature of features) takeFeature(feature, properties, work);
  await progress(0.5);
  if (work.heights > 0)
    findings.note({
      code: 'line-height-dropped',
      message: `${counted(work.heights, 'line', 'lines')} carried heights, which are dropped.`,
    });
  if (work.percents > 0)
    findings.note({
      code: 'efficiency-percent',
      message: `The efficiency of ${counted(work.percents, 'reach', 'reaches')} is above 1 and read as percent.`,
      column: properties.bound.get('loss_value')?.header,
    });
  const reaches = asTree(work, properties, { options, context });
  await progress(1);
  return {
    understood: {
      ...NOTHING_UNDERSTOOD,
      ...read.understood,
      columns: properties.columns,
      usableRows: reaches.length,
      boundingBox: boxOfLines(reaches),
    },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: work.preview.preview(),
    staged: { kind: 'canals', reaches: findings.fatal ? [] : reaches },
  };
}

function takeFeature(feature: RawFeature, properties: BoundProperties, work: Work) {
  const { findings, preview, byCode } = work;
  const { row, file } = feature;
  const { bound } = properties;
  const code = bound.has('code') ? textOf(feature, bound, 'code') : `R${String(row).padStart(3, '0')}`;
  const refuse = (rule: string, reason: string, advice: string): void => {
    findings.error({ code: rule, message: reason, file, row, value: code === null ? undefined : shown(code), advice });
    leaveOut(reason);
  };
  const leaveOut = (reason: string): void => {
    if (code !== null && !byCode.has(code)) work.leftOut.set(code, reason);
    preview.add({ row, code, status: 'refused', reason }, feature.geometry);
  };
  if (!feature.geometry) return leaveOut(feature.problem ?? 'The feature has no geometry.');
  if (code === null) return refuse('missing-code', 'The reach has no code.', 'Give it a code.');
  const fault = codeFault('Reach', code);
  if (fault) {
    findings.error({ ...fault, file, row, column: bound.get('code')?.header, value: shown(code) });
    return leaveOut(fault.message);
  }
  const earlier = byCode.get(code);
  if (earlier !== undefined)
    return refuse(
      'duplicate-code',
      `Reach ${shown(code)} stands in feature ${work.reaches[earlier].row} already; the first is kept.`,
      'Join both lines, or give another code.',
    );
  const line = cleanLine(feature.geometry as LineString | MultiLineString, work);
  const length = line ? geodesicLength(line) : 0;
  if (!line || !(length > 0)) return refuse('zero-length', `Reach ${shown(code)} has no length.`, 'Draw the line again.');
  const loss = lossRuleOf(feature, bound);
  if (loss.rule === null) {
    const reason = `Reach ${shown(code)} is left out: ${loss.fault.message}`;
    reportLossFault(feature, reason, loss.fault, findings);
    return leaveOut(reason);
  }
  if (loss.percent) work.percents++;
  byCode.set(code, work.reaches.length);
  preview.add({ row, code, status: 'ok', reason: null }, line);
  const reach: StagedReach = {
    code,
    name: textOf(feature, bound, 'name') ?? code,
    parentCode: textOf(feature, bound, 'parent'),
    kind: textOf(feature, bound, 'kind')?.toLowerCase() ?? 'lateral',
    capacity: numberOf(feature, bound, { role: 'capacity', low: 0, high: CAPACITY_HIGH, unit: 'm³/s' }, findings),
    lossRule: loss.rule,
    length: Math.round(length * 1000) / 1000,
    geometry: line,
  };
  work.reaches.push({ reach, row, file });
}

/** Drops heights, repeated vertices and parts of a single point; null when nothing is left. */
function cleanLine(shape: LineString | MultiLineString, work: Work): LineString | MultiLineString | null {
  const parts = shape.type === 'LineString' ? [shape.coordinates] : shape.coordinates;
  if (hasHeight(parts)) work.heights++;
  const cleaned = parts.map(withoutRepeats).filter((part) => part.length >= 2);
  if (cleaned.length === 0) return null;
  return cleaned.length === 1 ? { type: 'LineString', coordinates: cleaned[0] } : { type: 'MultiLineString', coordinates: cleaned };
}

function withoutRepeats(part: readonly Position[]): Position[] {
  const kept: Position[] = [];
  for (const [x, y] of part) {
    const last = kept[kept.length - 1];
    if (!last || !samePosition(last, [x, y])) kept.push([x, y]);
  }
  return kept;
}

interface Surroundings {
  readonly options: ImportOptions;
  readonly context: ImportContext;
}

/** The reaches with their parents, or none when they and the stored reaches that stay would not be one tree. */
function asTree({ reaches, findings, leftOut }: Work, { bound }: BoundProperties, { options, context }: Surroundings): StagedReach[] {
  const tree: TreeReach[] = reaches.map(({ reach, row, file }) => ({
    code: reach.code,
    parentCode: reach.parentCode,
    geometry: reach.geometry,
    row,
    file,
  }));
  const parents = bound.has('parent') || tree.length === 0 ? tree : inferParents(tree, findings);
  const staged = reaches.map(({ reach }, index) => ({ ...reach, parentCode: parents[index].parentCode }));
  const stored = options.replace === true ? [] : context.knownReaches;
  const sound = checkTree(parents, { stored, leftOut }, findings);
  if (sound && options.replace === true) reachesRemoved(staged, leftOut, context, findings);
  return sound && !findings.fatal ? staged : [];
}

function boxOfLines(reaches: readonly StagedReach[]): [number, number, number, number] | null {
  if (reaches.length === 0) return null;
  const box: [number, number, number, number] = [180, 90, -180, -90];
  for (const { geometry } of reaches) {
    const parts = geometry.type === 'LineString' ? [geometry.coordinates] : geometry.coordinates;
    for (const [x, y] of parts.flat()) {
      box[0] = Math.min(box[0], x);
      box[1] = Math.min(box[1], y);
      box[2] = Math.max(box[2], x);
      box[3] = Math.max(box[3], y);
    }
  }
  return box;
}
