/**
 * Coordinate systems of grids: the text of a system, or the attributes of a CF grid mapping, → longitude and latitude in WGS 84.
 *
 * Source: CF Metadata Conventions 1.11, Appendix F "Grid Mappings". A sphere of a model is taken as it is: its latitude and longitude are
 * those of WGS 84, as the makers of such files do (common practice, no source).
 */
import proj4 from 'proj4';
import type { ArrayVariable } from './array-file.ts';
import { isCrsFault, projectionOf } from './crs.ts';
import { systemOf } from './crs-table.ts';
import { numberAttribute, textAttribute } from './grid-roles.ts';

/** [x, y] in the units of the system → [longitude, latitude] in degrees. */
export type ToDegrees = (x: number, y: number) => readonly [number, number];

/** A system that can be computed. */
export interface GridSystem {
  /** as proj4 understands it */
  readonly definition: string;
  readonly toDegrees: ToDegrees;
}

/** [longitude, latitude] → x and y of a definition that proj4 understands; the inverse of `toDegrees`. */
export function degreesTo(definition: string): (longitude: number, latitude: number) => readonly [number, number] {
  const converter = proj4('EPSG:4326', definition);
  return (longitude, latitude) => {
    const [x, y] = converter.forward([longitude, latitude]);
    return [x, y];
  };
}

/** The system that a text names: a PROJ string, an EPSG code, WKT or PROJJSON; null when it is none that is known. */
export function gridSystem(text: string): GridSystem | null {
  if (text.trim().startsWith('+')) return projString(text.trim());
  const projection = projectionOf(text);
  if (isCrsFault(projection)) return null;
  const known = /^EPSG:(\d+)/i.exec(projection.name);
  const system = known ? systemOf(Number(known[1])) : null;
  const shift = system?.shift.parameters ? ` +towgs84=${system.shift.parameters.join(',')}` : '';
  const { toWgs84 } = projection;
  return { definition: system ? `${system.definition}${shift}` : toWgs84 ? text : 'EPSG:4326', toDegrees: toWgs84 ?? ((x, y) => [x, y]) };
}

function projString(definition: string): GridSystem | null {
  try {
    const converter = proj4(definition, 'EPSG:4326');
    const toDegrees: ToDegrees = (x, y) => {
      const [longitude, latitude] = converter.forward([x, y]);
      return [longitude, latitude];
    };
    toDegrees(0, 0);
    return { definition, toDegrees };
  } catch {
    return null;
  }
}

/** Definition of the system that a CF grid mapping variable describes, or null when it has none of the known kinds. */
export function gridMappingDefinition(mapping: ArrayVariable): string | null {
  const text = (name: string) => textAttribute(mapping.attributes, name);
  const wkt = text('crs_wkt') || text('spatial_ref');
  if (wkt && gridSystem(wkt)) return wkt;
  if (text('proj4') || text('proj4text')) return text('proj4') || text('proj4text');
  const build = MAPPINGS[text('grid_mapping_name')];
  return build
    ? `${build((name) => (mapping.attributes[name] === undefined ? Number.NaN : numberAttribute(mapping.attributes, name)), mapping)} ${figure(mapping)} +no_defs`
    : null;
}

type Read = (name: string) => number;

const or = (value: number, otherwise: number) => (Number.isFinite(value) ? value : otherwise);

function parallels(mapping: ArrayVariable): string {
  const value = mapping.attributes.standard_parallel;
  const list = typeof value === 'string' ? value.split(/[\s,]+/).map(Number) : (value ?? []).map(Number);
  return `+lat_1=${or(list[0], 0)} +lat_2=${or(list[1], or(list[0], 0))}`;
}

function falseOrigin(read: Read): string {
  return `+x_0=${or(read('false_easting'), 0)} +y_0=${or(read('false_northing'), 0)}`;
}

const MAPPINGS: Record<string, (read: Read, mapping: ArrayVariable) => string> = {
  latitude_longitude: () => '+proj=longlat',
  rotated_latitude_longitude: (read) =>
    `+proj=ob_tran +o_proj=longlat +o_lat_p=${read('grid_north_pole_latitude')} +o_lon_p=${or(read('north_pole_grid_longitude'), 0)} +lon_0=${wrap(read('grid_north_pole_longitude') + 180)}`,
  lambert_conformal_conic: (read, mapping) =>
    `+proj=lcc ${parallels(mapping)} +lat_0=${read('latitude_of_projection_origin')} +lon_0=${read('longitude_of_central_meridian')} ${falseOrigin(read)}`,
  albers_conical_equal_area: (read, mapping) =>
    `+proj=aea ${parallels(mapping)} +lat_0=${read('latitude_of_projection_origin')} +lon_0=${read('longitude_of_central_meridian')} ${falseOrigin(read)}`,
  lambert_azimuthal_equal_area: (read) =>
    `+proj=laea +lat_0=${read('latitude_of_projection_origin')} +lon_0=${read('longitude_of_projection_origin')} ${falseOrigin(read)}`,
  transverse_mercator: (read) =>
    `+proj=tmerc +lat_0=${read('latitude_of_projection_origin')} +lon_0=${read('longitude_of_central_meridian')} +k=${or(read('scale_factor_at_central_meridian'), 1)} ${falseOrigin(read)}`,
  mercator: (read) =>
    Number.isFinite(read('standard_parallel'))
      ? `+proj=merc +lon_0=${read('longitude_of_projection_origin')} +lat_ts=${read('standard_parallel')} ${falseOrigin(read)}`
      : `+proj=merc +lon_0=${read('longitude_of_projection_origin')} +k=${or(read('scale_factor_at_projection_origin'), 1)} ${falseOrigin(read)}`,
  polar_stereographic: (read) =>
    `+proj=stere +lat_0=${or(read('latitude_of_projection_origin'), 90)} +lon_0=${or(read('straight_vertical_longitude_from_pole'), or(read('longitude_of_projection_origin'), 0))} +lat_ts=${or(read('standard_parallel'), 90)} ${falseOrigin(read)}`,
};

/** Figure of the earth: the ellipsoid or sphere that the mapping names, else WGS 84. */
function figure(mapping: ArrayVariable): string {
  const radius = numberAttribute(mapping.attributes, 'earth_radius');
  const axis = numberAttribute(mapping.attributes, 'semi_major_axis');
  const flattening = numberAttribute(mapping.attributes, 'inverse_flattening');
  const minor = numberAttribute(mapping.attributes, 'semi_minor_axis');
  if (radius > 0) return `+R=${radius}`;
  if (axis > 0 && flattening > 0) return `+a=${axis} +rf=${flattening}`;
  if (axis > 0 && minor > 0) return `+a=${axis} +b=${minor}`;
  return axis > 0 ? `+R=${axis}` : '+ellps=WGS84';
}

/** Longitude in −180 … 180. @example wrap(190) // -170 */
export function wrap(longitude: number): number {
  if (longitude >= -180 && longitude <= 180) return longitude;
  return longitude - 360 * Math.round(longitude / 360);
}
