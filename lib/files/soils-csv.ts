/**
 * Soil classes, one row each or one row for each of their layers, in a delimited file.
 */
import { counted } from '../base/counted.ts';
import { codeFault } from './code-text.ts';
import { type FindingList, shown } from './finding-list.ts';
import { type PlainRow, type PlainTable, readPlainTable } from './plain-table.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedSoil } from './reading.ts';
import { groundMembers, LAYER_ROLES, layerOf, type SoilRow, soilOfRows } from './soil-layers.ts';
import type { TableRole } from './table-columns.ts';

/** Columns of water contents. */
const WATER_ROLES = ['field_capacity', 'wilting_point', 'saturation'] as const;

/** Depth of the layer that dries by evaporation where the table gives none [m]: FAO-56 chapter 7, 0.10 to 0.15 m. */
const EVAPORATION_DEPTH = 0.1;

export const SOIL_ROLES: readonly TableRole[] = [
  { role: 'code', names: ['code', 'soil', 'soil code', 'soil id', 'id'], required: true },
  { role: 'name', names: ['name', 'soil name', 'description'] },
  { role: 'field_capacity', names: ['field capacity', 'fc', 'theta fc'], kind: 'share', required: true },
  { role: 'wilting_point', names: ['wilting point', 'wp', 'theta wp', 'permanent wilting point', 'pwp'], kind: 'share', required: true },
  { role: 'rew', names: ['rew', 'readily evaporable water'], kind: 'depth' },
  { role: 'tew', names: ['tew', 'total evaporable water'], kind: 'depth' },
  { role: 'ze', names: ['ze', 'evaporation depth'], kind: 'length' },
  { role: 'curve_number', names: ['curve number', 'cn'] },
  { role: 'root_limit', names: ['root limit', 'root limit depth', 'rooting depth limit'], kind: 'length' },
  ...LAYER_ROLES,
];

/**
 * Readily evaporable water from texture, told by field capacity: middle of the ranges printed for the textures of that field capacity.
 * Source: FAO-56 Table 19 (REW 2–7 sand … 8–12 clay).
 */
const REW_BY_FIELD_CAPACITY: readonly { readonly below: number; readonly rew: number; readonly texture: string }[] = [
  { below: 0.14, rew: 4.5, texture: 'sand' },
  { below: 0.19, rew: 6, texture: 'loamy sand' },
  { below: 0.25, rew: 8, texture: 'sandy loam' },
  { below: 0.3, rew: 9, texture: 'loam' },
  { below: 0.345, rew: 9.5, texture: 'silt loam' },
  { below: Number.POSITIVE_INFINITY, rew: 10, texture: 'clay' },
];

/**
 * Total evaporable water of the surface layer.
 *   TEW = 1000 (θFC − 0.5 θWP) Ze
 *
 * @param fieldCapacity [m³ m⁻³] @param wiltingPoint [m³ m⁻³] @param evaporationDepth Ze [m]
 * @returns [mm]
 * @example totalEvaporableWater(0.25, 0.12, 0.1) // 19
 * Source: FAO-56 Eq. 73.
 */
export function totalEvaporableWater(fieldCapacity: number, wiltingPoint: number, evaporationDepth: number): number {
  return 1000 * (fieldCapacity - 0.5 * wiltingPoint) * evaporationDepth;
}

/** Readily evaporable water [mm] for a field capacity [m³ m⁻³] where a table gives none. @example defaultReadilyEvaporableWater(0.25) // 9 */
export function defaultReadilyEvaporableWater(fieldCapacity: number): number {
  const row = REW_BY_FIELD_CAPACITY.find((candidate) => fieldCapacity < candidate.below);
  return row ? row.rew : Number.NaN;
}

/** Reads a table of soil classes. */
export async function readSoils(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const kept = new Map<string, SoilRow[]>();
  const derived = { tew: 0, rew: 0, unknownTextures: 0 };
  const known = new Set(context.soils);
  const units = await waterUnits(files, options);
  const each = (row: PlainRow, { file }: PlainTable) => {
    const edges = layerOf(row);
    const soil = soilOf(row, file, { derived, units });
    if (!soil) return;
    const earlier = kept.get(soil.code);
    if (earlier && (edges === null || earlier[0].edges === null))
      return row.fail({
        code: 'duplicate-code',
        message: `Soil ${soil.code} stands in row ${earlier[0].row} already; the first is kept.`,
        role: 'code',
        advice: 'Delete the wrong row, or give the depths of the layers.',
      });
    kept.set(soil.code, [...(earlier ?? []), { soil, edges, row: row.row }]);
  };
  const finish = (findings: FindingList) => {
    for (const unit of units.values()) noteUnit(unit, findings);
    if (derived.tew > 0)
      findings.note({
        code: 'tew-derived',
        message: `TEW of ${counted(derived.tew, 'soil', 'soils')} is 1000 (FC − 0.5 WP) Ze (FAO-56 Eq. 73).`,
      });
    if (derived.rew > 0)
      findings.note({
        code: 'rew-derived',
        message: `REW of ${counted(derived.rew, 'soil', 'soils')} is taken by texture from FAO-56 Table 19.`,
      });
    if (derived.unknownTextures > 0)
      findings.warn({
        code: 'texture-unknown',
        message: `The texture of ${counted(derived.unknownTextures, 'row', 'rows')} is not a known class; it is taken as medium, without capillary properties.`,
        advice: 'Name a texture class (sand … clay), or coarse, medium or fine.',
      });
    const again = [...kept.keys()].filter((code) => known.has(code));
    if (again.length > 0)
      findings.note({
        code: 'soil-replaced',
        message: `${counted(again.length, 'soil is', 'soils are')} known already and will be replaced: ${again.slice(0, 10).join(', ')}.`,
      });
    const soils = [...kept.values()].flatMap((rows) => soilOfRows(rows, findings) ?? []);
    return { kind: 'soils' as const, soils: findings.fatal ? [] : soils };
  };
  return readPlainTable({ files, options, progress, roles: SOIL_ROLES }, each, finish);
}

function soilOf(row: PlainRow, source: string, { derived, units }: SoilWork): StagedSoil | null {
  const code = row.text('code');
  if (code === null)
    row.fail({ code: 'missing-code', message: 'The row has no soil code.', role: 'code', advice: 'Give the soil a code.' });
  const fault = code === null ? null : codeFault('Soil', code);
  if (fault) row.fail({ ...fault, role: 'code' });
  const fieldCapacity = waterContent(row, 'field_capacity', units.get(`${source} field_capacity`));
  const wiltingPoint = waterContent(row, 'wilting_point', units.get(`${source} wilting_point`));
  const evaporationDepth = row.number('ze', { low: 0.05, high: 0.3, unit: 'm' }) ?? EVAPORATION_DEPTH;
  const rew = row.number('rew', { low: 0, high: 30, unit: 'mm' });
  const tew = row.number('tew', { low: 1, high: 100, unit: 'mm' });
  const curveNumber = row.number('curve_number', { low: 30, high: 100, unit: '' });
  const rootLimit = row.number('root_limit', { low: 0.05, high: 5, unit: 'm' });
  const saturation = row.text('saturation') === null ? null : waterContent(row, 'saturation', units.get(`${source} saturation`));
  const ground = groundMembers(row, derived);
  if (!row.good || code === null || fieldCapacity === null || wiltingPoint === null) return null;
  if (wiltingPoint >= fieldCapacity) {
    row.fail({
      code: 'wilting-above-field-capacity',
      message: `Wilting point ${wiltingPoint} is not below field capacity ${fieldCapacity}.`,
      role: 'wilting_point',
      limit: `below ${fieldCapacity}`,
      advice: 'Check that the columns are not exchanged.',
    });
    return null;
  }
  if (saturation !== null && saturation <= fieldCapacity) {
    row.fail({
      code: 'saturation-below-field-capacity',
      message: `Saturation ${saturation} is not above field capacity ${fieldCapacity}.`,
      role: 'saturation',
      limit: `above ${fieldCapacity}`,
      advice: 'Check that the columns are not exchanged.',
    });
    return null;
  }
  const total = tew ?? totalEvaporableWater(fieldCapacity, wiltingPoint, evaporationDepth);
  const readily = rew ?? Math.min(defaultReadilyEvaporableWater(fieldCapacity), total);
  if (readily > total) {
    row.fail({
      code: 'rew-above-tew',
      message: `REW ${readily} mm is above TEW ${round(total)} mm.`,
      role: 'rew',
      limit: `at most ${round(total)} mm`,
      advice: 'Correct one of the two.',
    });
    return null;
  }
  if (tew === null) derived.tew++;
  if (rew === null) derived.rew++;
  return {
    code,
    name: row.text('name') ?? row.text('texture') ?? code,
    fieldCapacity,
    wiltingPoint,
    evaporationDepth,
    readilyEvaporableWater: round(readily),
    totalEvaporableWater: round(total),
    curveNumber,
    rootLimit,
    ...(saturation === null ? {} : { saturation }),
    ...ground,
    source: `imported from ${source}`,
  };
}

/** Unit of a column of water contents. */
interface WaterUnit {
  readonly file: string;
  readonly header: string;
  readonly percent: boolean;
}

interface SoilWork {
  readonly derived: { tew: number; rew: number; unknownTextures: number };
  /** file and role → unit */
  readonly units: ReadonlyMap<string, WaterUnit>;
}

/** The unit of each column of water contents, told from all its values: percent by volume when their median is above 1, else fractions. */
async function waterUnits(files: readonly ImportFile[], options: ImportOptions): Promise<Map<string, WaterUnit>> {
  const columns = new Map<string, { file: string; header: string; values: number[] }>();
  const each = (row: PlainRow, { file }: PlainTable) => {
    for (const role of WATER_ROLES) {
      const value = row.number(role, { low: 0, high: 100, unit: '' });
      if (value === null) continue;
      const key = `${file} ${role}`;
      const column = columns.get(key) ?? { file, header: row.header(role) ?? role, values: [] };
      columns.set(key, column);
      column.values.push(value);
    }
  };
  const nothing = () => ({ kind: 'soils' as const, soils: [] });
  await readPlainTable({ files, options, progress: () => undefined, roles: SOIL_ROLES }, each, nothing);
  return new Map([...columns].map(([key, { file, header, values }]) => [key, { file, header, percent: medianOf(values) > 1 }]));
}

function medianOf(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const half = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[half] : (sorted[half - 1] + sorted[half]) / 2;
}

function noteUnit({ file, header, percent }: WaterUnit, findings: FindingList): void {
  findings.note({
    code: 'water-content-unit',
    message: `Column "${shown(header)}" is read ${percent ? 'in percent by volume: its median is above 1' : 'as fractions (m³ m⁻³): its median is not above 1'}.`,
    file,
    column: header,
  });
}

/** Water content as a fraction, from a cell in the unit of its column. */
function waterContent(row: PlainRow, role: string, unit: WaterUnit | undefined): number | null {
  const value = row.number(role, { low: 0, high: 100, unit: '% by volume' });
  if (value === null) {
    if (row.good)
      row.fail({
        code: 'missing-value',
        message: `The row has no ${role.replace('_', ' ')}.`,
        role,
        advice: 'Give it as a fraction or in percent by volume.',
      });
    return null;
  }
  const percent = unit?.percent === true;
  if (percent ? value >= 1 && value < 90 : value > 0 && value < 0.9) return round(percent ? value / 100 : value);
  row.fail({
    code: 'value-out-of-range',
    message: `${role.replace('_', ' ')} ${value} does not fit its column, which is read ${percent ? 'in percent by volume' : 'as fractions'}.`,
    role,
    limit: percent ? '1 to 90 % by volume' : '0 to 0.9 m³ m⁻³',
    advice: 'Write the whole column as fractions, or the whole column in percent by volume.',
  });
  return null;
}

function round(value: number): number {
  return Math.round(value * 1e6) / 1e6;
}
