/**
 * What the dimensions of a field run along: time, rows and columns of a grid, or a list of stations.
 */
import type { ArrayFile, ArrayVariable } from './array-file.ts';
import { nameKey, textAttribute } from './grid-roles.ts';
import { isTimeDimension } from './grid-time.ts';

/** The dimensions of a field by what they run along; −1 for none. */
export interface FieldDimensions {
  readonly time: number;
  readonly row: number;
  readonly column: number;
  /** the dimension of a list of stations, where there is one in place of rows and columns */
  readonly site: number;
}

const LATITUDE = { standard: 'latitude', units: /^degrees?_?n(orth)?$/i, names: /^(lat|latitude|latitudes|navlat|xlat|y)$/ };
const LONGITUDE = { standard: 'longitude', units: /^degrees?_?e(ast)?$/i, names: /^(lon|long|longitude|longitudes|navlon|xlong|x)$/ };

/** True when a variable gives latitudes (or longitudes) by its standard name, its units, or at last its name. */
export function isPlace(variable: ArrayVariable, which: 'latitude' | 'longitude'): boolean {
  const { standard, units, names } = which === 'latitude' ? LATITUDE : LONGITUDE;
  const standardName = textAttribute(variable.attributes, 'standard_name');
  if (standardName !== '' && standardName !== 'unknown') return standardName === standard;
  const unit = textAttribute(variable.attributes, 'units');
  if (units.test(unit)) return true;
  const key = nameKey(variable.name);
  return names.test(key) && key !== 'x' && key !== 'y' && !/^(m|km|metres?|meters?)$/.test(unit);
}

/** The coordinate variable of a dimension, or null. */
export function axisVariable(file: ArrayFile, dimension: string): ArrayVariable | null {
  return (
    file.variables.find((variable) => variable.name === dimension && variable.dimensions.length === 1) ??
    file.variables.find(
      (variable) =>
        variable.dimensions.length === 1 &&
        variable.dimensions[0] === dimension &&
        (isPlace(variable, 'latitude') || isPlace(variable, 'longitude')),
    ) ??
    null
  );
}

function runsAlong(file: ArrayFile, dimension: string, which: 'x' | 'y'): boolean {
  const variable = file.variables.find((candidate) => candidate.name === dimension && candidate.dimensions.length === 1);
  const key = nameKey(dimension);
  if (variable) {
    if (isPlace(variable, which === 'x' ? 'longitude' : 'latitude')) return true;
    const standardName = textAttribute(variable.attributes, 'standard_name');
    if (standardName === (which === 'x' ? 'projection_x_coordinate' : 'projection_y_coordinate')) return true;
    if (standardName === (which === 'x' ? 'grid_longitude' : 'grid_latitude')) return true;
    if (textAttribute(variable.attributes, 'axis') === which.toUpperCase()) return true;
  }
  return (
    which === 'x'
      ? /^(x|xc|ni|i|lon|longitude|easting|rlon|westeast|nlon|xdim)$/
      : /^(y|yc|nj|j|lat|latitude|northing|rlat|southnorth|nlat|ydim)$/
  ).test(key);
}

/**
 * What the dimensions of a variable run along, or null when it is no field of places: further dimensions longer than one, or no place.
 */
export function fieldDimensions(file: ArrayFile, variable: ArrayVariable): FieldDimensions | null {
  const found = { time: -1, row: -1, column: -1, site: -1 };
  const rest: number[] = [];
  for (const [i, dimension] of variable.dimensions.entries()) {
    if (found.time < 0 && isTimeDimension(file, dimension)) found.time = i;
    else if (found.row < 0 && runsAlong(file, dimension, 'y')) found.row = i;
    else if (found.column < 0 && runsAlong(file, dimension, 'x')) found.column = i;
    else if (variable.shape[i] !== 1 || isStationDimension(file, dimension)) rest.push(i);
  }
  if (found.row >= 0 && found.column >= 0) return rest.every((i) => variable.shape[i] === 1) ? found : null;
  if (found.row >= 0 || found.column >= 0 || rest.length > 1) return null;
  return { ...found, site: rest[0] ?? -1 };
}

function isStationDimension(file: ArrayFile, dimension: string): boolean {
  return file.variables.some(
    (variable) => variable.dimensions.length === 1 && variable.dimensions[0] === dimension && isPlace(variable, 'latitude'),
  );
}
