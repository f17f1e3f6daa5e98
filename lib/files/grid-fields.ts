/**
 * The fields of the files of an import: what each is, where its cells are, and when its steps are.
 */
import type { ArrayVariable } from './array-file.ts';
import { type FindingList, shown } from './finding-list.ts';
import { type FieldDimensions, fieldDimensions } from './grid-axes.ts';
import type { GridFile } from './grid-files.ts';
import { bandOf } from './grid-geotiff.ts';
import { type FieldRole, fieldRole, textAttribute, windHeightOfField } from './grid-roles.ts';
import { isTimeFault, readScalarTime, readTimeAxis, type TimeAxis, type TimeFault } from './grid-time.ts';
import type { ImportOptions } from './reading.ts';

/** One variable of one file that has a role. */
export interface Field {
  readonly file: GridFile;
  readonly variable: ArrayVariable;
  /** name shown to the user */
  readonly label: string;
  readonly role: FieldRole;
  readonly dimensions: FieldDimensions;
  /** cells of a grid, or a list of stations (a grid of one cell included) */
  readonly layout: 'grid' | 'sites';
  readonly time: TimeAxis | null;
  /** m */
  readonly windHeight: number | null;
}

/** What is told about every variable, with or without a role. */
export interface FieldNote {
  readonly file: GridFile;
  readonly variable: ArrayVariable;
  readonly label: string;
  readonly role: FieldRole;
}

export interface FoundFields {
  readonly fields: readonly Field[];
  readonly notes: readonly FieldNote[];
}

const COORDINATE_NAME = /(^|_)(bnds|bounds|vertices|crs|spatial_ref)$/i;

/** Finds the fields of all files. */
export async function findFields(files: readonly GridFile[], options: ImportOptions, findings: FindingList): Promise<FoundFields> {
  const fields: Field[] = [];
  const notes: FieldNote[] = [];
  for (const file of files) {
    const axes = new Map<string, TimeAxis | TimeFault>();
    for (const variable of file.arrays.variables.filter((candidate) => isField(file, candidate))) {
      const found = await readField(file, variable, { options, findings, axes });
      notes.push(found.note);
      if (found.field) fields.push(found.field);
    }
  }
  return { fields, notes };
}

/** True for a variable that is neither a coordinate, nor bounds of one, nor text, nor a single number. */
function isField({ arrays }: GridFile, variable: ArrayVariable): boolean {
  if (variable.type === 'text' || variable.type === 'other' || variable.dimensions.length === 0) return false;
  if (variable.dimensions.length === 1 && variable.dimensions[0] === variable.name) return false;
  const standardName = textAttribute(variable.attributes, 'standard_name');
  if (/^(latitude|longitude|time|projection_[xy]_coordinate|grid_(lat|long)itude)$/.test(standardName)) return false;
  if (/^degrees?_?(n|e|north|east)$/i.test(textAttribute(variable.attributes, 'units')) && variable.dimensions.length <= 2) return false;
  if (/^(lat|lon|latitude|longitude|xlat|xlong|nav_lat|nav_lon)$/i.test(variable.name)) return false;
  if (COORDINATE_NAME.test(variable.name) || textAttribute(variable.attributes, 'grid_mapping_name') !== '') return false;
  return !arrays.variables.some(
    (other) =>
      textAttribute(other.attributes, 'bounds') === variable.name || textAttribute(other.attributes, 'climatology') === variable.name,
  );
}

interface Reading {
  readonly options: ImportOptions;
  readonly findings: FindingList;
  readonly axes: Map<string, TimeAxis | TimeFault>;
}

async function readField(file: GridFile, variable: ArrayVariable, reading: Reading): Promise<{ note: FieldNote; field: Field | null }> {
  const band = file.arrays.format === 'geotiff' ? bandOf(file, variable) : null;
  const label = band?.label ?? variable.name;
  const named = fieldRole(variable, label, reading.options);
  const dimensions = fieldDimensions(file.arrays, variable);
  const role = dimensions === null && named.role !== null ? placeless(variable) : named;
  const note = { file, variable, label, role };
  if (dimensions === null || role.role === null) return { note, field: null };
  const isElevation = role.role === 'elevation_m';
  const time = isElevation ? null : await timeOf({ file, variable, dimensions }, band?.time ?? null, reading);
  if (time === null && !isElevation) return { note, field: null };
  const layout = dimensions.row >= 0 && !isOneCell(variable, dimensions) ? 'grid' : 'sites';
  const windHeight = /wind/.test(role.role) ? windHeightOfField(variable, label, await heightCoordinate(file, variable)) : null;
  return { note, field: { file, variable, label, role, dimensions, layout, time, windHeight } };
}

function isOneCell(variable: ArrayVariable, { row, column }: FieldDimensions): boolean {
  return variable.shape[row] === 1 && variable.shape[column] === 1;
}

function placeless(variable: ArrayVariable): FieldRole {
  return {
    role: null,
    confidence: 0,
    reason: `its dimensions (${variable.dimensions.map(shown).join(', ')}) are not a time and a place`,
    taken: false,
  };
}

async function timeOf(
  { file, variable, dimensions }: { file: GridFile; variable: ArrayVariable; dimensions: FieldDimensions },
  given: TimeAxis | TimeFault | null,
  { findings, axes }: Reading,
): Promise<TimeAxis | null> {
  const dimension = dimensions.time < 0 ? '' : variable.dimensions[dimensions.time];
  const isNew = !axes.has(dimension) || given !== null;
  const known = given ?? axes.get(dimension);
  const time =
    known ??
    (dimension === ''
      ? ((await readScalarTime(file.arrays)) ?? undatedField(file))
      : await readTimeAxis(file.arrays, dimension, variable.shape[dimensions.time]));
  if (given === null) axes.set(dimension, time);
  if (!isTimeFault(time)) {
    if (isNew && time.note) findings.warn({ ...time.note, file: file.name });
    return time;
  }
  if (isNew) findings.error({ code: time.code, message: time.message, file: file.name, column: variable.name, advice: time.advice });
  return null;
}

function undatedField(file: GridFile): TimeFault {
  return {
    code: 'no-time',
    message: `Nothing in "${file.name}" says when its fields are.`,
    advice: 'Add a time coordinate with units such as "days since 2020-01-01".',
  };
}

/** Value of the scalar height coordinate of a field [m], NaN when it has none. */
async function heightCoordinate({ arrays }: GridFile, variable: ArrayVariable): Promise<number> {
  const names = textAttribute(variable.attributes, 'coordinates').split(/\s+/);
  const height = arrays.variables.find(
    (candidate) => names.includes(candidate.name) && /^height/.test(candidate.name) && candidate.shape.every((length) => length === 1),
  );
  if (!height || height.type === 'text') return Number.NaN;
  const [value] = await arrays.read(
    height.name,
    height.shape.map(() => 0),
    height.shape.map(() => 1),
  );
  return value;
}
