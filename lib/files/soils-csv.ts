/**
 * Soil classes, one row each, in a delimited file.
 */
import type { FindingList } from './finding-list.ts';
import { type PlainRow, readPlainTable } from './plain-table.ts';
import type { ImportContext, ImportFile, ImportOptions, ImportReading, Progress, StagedSoil } from './reading.ts';
import type { TableRole } from './table-columns.ts';

/** Depth of the layer that dries by evaporation where the table gives none [m]: FAO-56 chapter 7, 0.10 to 0.15 m. */
const EVAPORATION_DEPTH = 0.1;

export const SOIL_ROLES: readonly TableRole[] = [
  { role: 'code', names: ['code', 'soil', 'soil code', 'soil id', 'id'], required: true },
  { role: 'name', names: ['name', 'soil name', 'texture', 'description'] },
  { role: 'field_capacity', names: ['field capacity', 'fc', 'theta fc'], kind: 'share', required: true },
  { role: 'wilting_point', names: ['wilting point', 'wp', 'theta wp', 'permanent wilting point', 'pwp'], kind: 'share', required: true },
  { role: 'rew', names: ['rew', 'readily evaporable water'], kind: 'depth' },
  { role: 'tew', names: ['tew', 'total evaporable water'], kind: 'depth' },
  { role: 'ze', names: ['ze', 'evaporation depth'], kind: 'length' },
  { role: 'curve_number', names: ['curve number', 'cn'] },
  { role: 'root_limit', names: ['root limit', 'root limit depth', 'rooting depth limit'], kind: 'length' },
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
  const kept = new Map<string, { soil: StagedSoil; row: number }>();
  const derived = { tew: 0, rew: 0 };
  const known = new Set(context.soils);
  const each = (row: PlainRow) => {
    const soil = soilOf(row, files[0]?.name ?? 'import', derived);
    if (!soil) return;
    const earlier = kept.get(soil.code);
    if (earlier)
      return row.fail({
        code: 'duplicate-code',
        message: `Soil ${soil.code} stands in row ${earlier.row} already; the first is kept.`,
        role: 'code',
        advice: 'Delete the wrong row.',
      });
    kept.set(soil.code, { soil, row: row.row });
  };
  const finish = (findings: FindingList) => {
    if (derived.tew > 0)
      findings.note({ code: 'tew-derived', message: `TEW of ${derived.tew} soils is 1000 (FC − 0.5 WP) Ze (FAO-56 Eq. 73).` });
    if (derived.rew > 0)
      findings.note({ code: 'rew-derived', message: `REW of ${derived.rew} soils is taken by texture from FAO-56 Table 19.` });
    const again = [...kept.keys()].filter((code) => known.has(code));
    if (again.length > 0)
      findings.note({
        code: 'soil-replaced',
        message: `${again.length} soils are known already and will be replaced: ${again.slice(0, 10).join(', ')}.`,
      });
    return { kind: 'soils' as const, soils: findings.fatal ? [] : [...kept.values()].map(({ soil }) => soil) };
  };
  return readPlainTable({ files, options, progress, roles: SOIL_ROLES }, each, finish);
}

function soilOf(row: PlainRow, source: string, derived: { tew: number; rew: number }): StagedSoil | null {
  const code = row.text('code');
  if (code === null)
    row.fail({ code: 'missing-code', message: 'The row has no soil code.', role: 'code', advice: 'Give the soil a code.' });
  const fieldCapacity = waterContent(row, 'field_capacity');
  const wiltingPoint = waterContent(row, 'wilting_point');
  const evaporationDepth = row.number('ze', { low: 0.05, high: 0.3, unit: 'm' }) ?? EVAPORATION_DEPTH;
  const rew = row.number('rew', { low: 0, high: 30, unit: 'mm' });
  const tew = row.number('tew', { low: 1, high: 100, unit: 'mm' });
  const curveNumber = row.number('curve_number', { low: 30, high: 100, unit: '' });
  const rootLimit = row.number('root_limit', { low: 0.05, high: 5, unit: 'm' });
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
    name: row.text('name') ?? code,
    fieldCapacity,
    wiltingPoint,
    evaporationDepth,
    readilyEvaporableWater: round(readily),
    totalEvaporableWater: round(total),
    curveNumber,
    rootLimit,
    source: `imported from ${source}`,
  };
}

/** Water content as a fraction; values above 1 are percent by volume. */
function waterContent(row: PlainRow, role: string): number | null {
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
  const fraction = value > 1 ? value / 100 : value;
  if (fraction > 0 && fraction < 0.9) return round(fraction);
  row.fail({
    code: 'value-out-of-range',
    message: `${role.replace('_', ' ')} ${value} is not a water content.`,
    role,
    limit: '0 to 0.9 m³ m⁻³',
    advice: 'Give it as a fraction or in percent by volume.',
  });
  return null;
}

function round(value: number): number {
  return Math.round(value * 1e6) / 1e6;
}
