/**
 * Stations of array files: series with a list of places instead of a grid, and grids of one cell.
 *
 * Source: CF Metadata Conventions 1.11, chapter 9 "Discrete Sampling Geometries".
 */
import { counted } from '../base/counted.ts';
import { Refused } from '../base/errors.ts';
import type { ArrayVariable } from './array-file.ts';
import { codeFault } from './code-text.ts';
import type { FindingList } from './finding-list.ts';
import { isPlace } from './grid-axes.ts';
import type { Field } from './grid-fields.ts';
import type { GridFile } from './grid-files.ts';
import { decimal } from './grid-lattice.ts';
import { wrap } from './grid-projection.ts';
import { nameKey, textAttribute } from './grid-roles.ts';
import { packingOf } from './grid-unpack.ts';
import type { ImportOptions } from './reading.ts';

/** Most stations of a file. */
export const STATION_LIMIT = 20_000;

/** A station of a file, and its place in the file's list. */
export interface FileStation {
  readonly code: string;
  readonly index: number;
  readonly longitude: number;
  readonly latitude: number;
  /** m, NaN when the file does not say */
  readonly elevation: number;
}

/** The stations of a field's file, sorted by code. @throws {Refused} when they have no places */
export async function readStations(field: Field, options: ImportOptions, findings: FindingList): Promise<FileStation[]> {
  const { file, variable, dimensions } = field;
  const dimension = dimensions.site >= 0 ? variable.dimensions[dimensions.site] : null;
  const count = dimension === null ? 1 : variable.shape[dimensions.site];
  if (count > STATION_LIMIT) throw new Refused(`"${file.name}" lists ${count} stations; at most ${STATION_LIMIT} are read.`);
  const latitudes = await placeValues(file, dimension, count, 'latitude');
  const longitudes = await placeValues(file, dimension, count, 'longitude');
  if (!latitudes || !longitudes)
    throw new Refused(
      `Nothing in "${file.name}" says where its ${counted(count, 'station is', 'stations are')}: latitude and longitude are missing.`,
    );
  const elevations = await elevationValues(file, dimension, count);
  const codes = dimension === null ? [options.site ?? placeCode(longitudes[0], latitudes[0])] : await stationCodes(file, dimension, count);
  const stations: FileStation[] = [];
  for (let index = 0; index < count; index++) {
    const code = codes[index];
    const [longitude, latitude] = [wrap(longitudes[index]), latitudes[index]];
    const fault = codeFault('Station', code);
    if (fault) findings.error({ ...fault, file: file.name });
    else if (!(Math.abs(latitude) <= 90) || !(Math.abs(longitude) <= 180)) noPlace(code, file.name, findings);
    else stations.push({ code, index, longitude, latitude, elevation: elevations?.[index] ?? Number.NaN });
  }
  return stations.sort((a, b) => (a.code < b.code ? -1 : 1));
}

function noPlace(code: string, file: string, findings: FindingList): void {
  findings.warn({
    code: 'station-without-place',
    message: `Station "${code}" has no longitude and latitude in the file; it is left out.`,
    file,
    value: code,
    advice: 'Give its place in the file, or import it as a station first.',
  });
}

/** Code of a station that is named by nothing but its place. @example placeCode(12.495, 55.695) // '55.695N-12.495E' */
export function placeCode(longitude: number, latitude: number): string {
  const degrees = (value: number, plus: string, minus: string) => `${Number(Math.abs(value).toFixed(4))}${value < 0 ? minus : plus}`;
  return `${degrees(latitude, 'N', 'S')}-${degrees(wrap(longitude), 'E', 'W')}`;
}

async function placeValues(
  file: GridFile,
  dimension: string | null,
  count: number,
  which: 'latitude' | 'longitude',
): Promise<Float64Array | null> {
  const variable = file.arrays.variables.find(
    (candidate) => candidate.type !== 'text' && isOver(candidate, dimension) && isPlace(candidate, which),
  );
  return variable ? readList(file, variable, count) : null;
}

/** True for a variable over the stations alone, or, of a single place, with one value. */
function isOver(variable: ArrayVariable, dimension: string | null): boolean {
  if (dimension === null) return variable.shape.every((length) => length === 1);
  return variable.dimensions.length === 1 && variable.dimensions[0] === dimension;
}

async function readList(file: GridFile, variable: ArrayVariable, count: number): Promise<Float64Array> {
  const raw = await file.arrays.read(
    variable.name,
    variable.shape.map(() => 0),
    variable.shape,
  );
  const { scale, offset, fills } = packingOf(variable);
  return raw
    .slice(0, count)
    .map((stored) => (fills.includes(stored) || Math.abs(stored) > 1e10 ? Number.NaN : decimal(stored * scale + offset, variable)));
}

async function elevationValues(file: GridFile, dimension: string | null, count: number): Promise<Float64Array | null> {
  const variable = file.arrays.variables.find(
    (candidate) =>
      candidate.type !== 'text' &&
      isOver(candidate, dimension) &&
      (/^(surface_altitude|altitude|height_above_mean_sea_level)$/.test(textAttribute(candidate.attributes, 'standard_name')) ||
        /^(elevation|elev|altitude|alt|surfacealtitude)$/.test(nameKey(candidate.name))),
  );
  return variable ? readList(file, variable, count) : null;
}

/** Codes from a text variable over the stations, else their number in the list. */
async function stationCodes(file: GridFile, dimension: string, count: number): Promise<string[]> {
  const texts = file.arrays.variables.filter(
    (variable) => variable.type === 'text' && variable.dimensions[0] === dimension && variable.shape[0] === count,
  );
  const score = (variable: ArrayVariable) =>
    textAttribute(variable.attributes, 'cf_role') === 'timeseries_id'
      ? 3
      : variable.name === dimension
        ? 2
        : /code|id|station|site|location|name/i.test(variable.name)
          ? 1
          : 0;
  const [best] = texts.sort((a, b) => score(b) - score(a));
  const numbered = Array.from({ length: count }, (_, i) => `s${String(i + 1).padStart(String(count).length, '0')}`);
  if (!best) return numbered;
  const names = (
    await file.arrays.readText(
      best.name,
      best.shape.map(() => 0),
      best.shape,
    )
  ).map((name) => name.replace(/\0/g, '').trim());
  const unique = names.length === count && names.every((name) => name !== '') && new Set(names).size === count;
  return unique ? names : numbered;
}
