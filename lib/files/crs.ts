/**
 * Coordinate systems: from any notation to a transformation into WGS 84, with what is known of its accuracy.
 *
 * Projections are computed by proj4. Shifts of the datum are the published three- or seven-parameter ones of the EPSG dataset (see
 * crs-definitions.md); grid-shift files are not used, and the transformation says what that costs.
 */
import proj4 from 'proj4';
import { type DatumShift, geographicByName, type KnownSystem, systemOf } from './crs-table.ts';
import { type CrsDescription, describeCrs, WGS84 } from './crs-text.ts';
import type { FeatureFault } from './raw-feature.ts';

/**
 * Longitude and latitude [degrees] of easting and northing (or longitude and latitude) of the file; `outside` is true where the projection
 * does not lead back to the position, which therefore lies beyond what it can map.
 */
export interface ToWgs84 {
  (x: number, y: number): [number, number];
  outside(x: number, y: number): boolean;
}

/** Largest difference after going there and back, as a share of the coordinate [1], and at least this much [units of the system]. */
const RETURN_SHARE = 1e-6;
const RETURN_LEAST = 0.1;

export interface Projection {
  /** as told to the user: "EPSG:28992 Amersfoort / RD New" */
  readonly name: string;
  /** what is done to the datum, in words; null when the coordinates are WGS 84 already */
  readonly transformation: string | null;
  /** expected error of a position [m]; null when it is not known, 0 on WGS 84 itself */
  readonly accuracy: number | null;
  /** what a grid-shift file would reach [m], where there is one and it is better */
  readonly gridAccuracy: number | null;
  /** null for longitude and latitude on WGS 84 */
  readonly toWgs84: ToWgs84 | null;
}

/** Error of taking a modern frame for WGS 84 where none is published [m]: plate motion and the drift of WGS 84 itself. Common practice, no source. */
const MODERN_ACCURACY = 3;
const MODERN = /ellps=(GRS80|WGS84)\b/;

const IDENTITY: Projection = {
  name: 'WGS 84 longitude and latitude',
  transformation: null,
  accuracy: 0,
  gridAccuracy: null,
  toWgs84: null,
};

/**
 * The projection a text names: an EPSG code ("EPSG:28992", "28992", OGC URN or URL), CRS84, WKT 1 or 2 (also of a .prj file), or PROJJSON.
 * Coordinates are taken easting (or longitude) first, as files store them whatever the axis order of the system.
 *
 * @returns the projection, or what is wrong with the text
 */
export function projectionOf(text: string): Projection | FeatureFault {
  const description = describeCrs(text);
  if (description === WGS84) return { ...IDENTITY, name: 'OGC:CRS84' };
  if (description === null) return unknown(text, 'is not a notation that is read');
  const known = description.code === null ? null : systemOf(description.code);
  if (known) return ofKnown(known);
  if (description.definition === null) return unknown(text, 'is not in the table of coordinate systems');
  return ofDefinition(description) ?? unknown(description.name ?? text, 'uses a projection that is not computed here');
}

/** True for a fault, as `projectionOf` returns it. */
export function isCrsFault(value: Projection | FeatureFault): value is FeatureFault {
  return 'message' in value;
}

function unknown(text: string, why: string): FeatureFault {
  const name = text.trim().slice(0, 80);
  return {
    code: 'unsupported-crs',
    message: `The coordinate system "${name}" ${why}.`,
    limit: 'EPSG codes of geographic and projected systems, WKT, PROJJSON, OGC:CRS84',
    advice: 'Name the system by its EPSG code in the options, or reproject the layer to WGS 84 (EPSG:4326) and export it again.',
  };
}

function ofKnown(system: KnownSystem): Projection {
  const { code, definition, shift } = system;
  const name = `EPSG:${code} ${system.name}`;
  if (code === 4326) return { ...IDENTITY, name };
  const towgs84 = shift.parameters && !definition.includes('nadgrids') ? ` +towgs84=${shift.parameters.join(',')}` : '';
  return {
    name,
    ...wordsOf(shift, MODERN.test(definition), system.datum),
    toWgs84: transformer(definition + towgs84, definition.includes('+axis=')),
  };
}

/** A system that only its WKT or PROJJSON tells; the shift is that of the datum it names. */
function ofDefinition({ definition, name, datumNames }: CrsDescription): Projection | null {
  const base = datumNames.map(geographicByName).find((system) => system !== null) ?? null;
  const parsed = parsedDefinition(definition);
  if (!parsed) return null;
  const own = Array.isArray(parsed.datum_params) && parsed.datum_params.length >= 3 ? parsed.datum_params.map(Number) : null;
  const shift: DatumShift = base?.shift ?? { parameters: own, accuracy: null, gridAccuracy: null };
  const title = name ?? 'unnamed system';
  if (base?.code === 4326 && parsed.projName === 'longlat') return { ...IDENTITY, name: title };
  const parameters = shift.parameters ? { datum_params: [...shift.parameters] } : { datum_params: undefined };
  try {
    const modern = Math.abs(Number(parsed.a) - 6_378_137) < 0.01;
    const toWgs84 = transformer({ ...parsed, ...parameters, datumCode: 'none', datum: undefined, nadgrids: undefined } as never, false);
    return { name: title, ...wordsOf(shift, modern, base?.datum ?? datumNames[0] ?? title), toWgs84 };
  } catch {
    return null;
  }
}

/** Name under which proj4 reads a text; it keeps what it reads under a name. */
const SCRATCH = 'tillwater:read';

interface Parsed extends Record<string, unknown> {
  readonly projName?: string;
}

/** proj4's own reading of a WKT or PROJJSON text. */
function parsedDefinition(definition: CrsDescription['definition']): Parsed | null {
  try {
    proj4.defs(SCRATCH, definition as never);
    const parsed = proj4.defs(SCRATCH) as unknown as Parsed | undefined;
    return parsed ? { ...parsed } : null;
  } catch {
    return null;
  }
}

function transformer(definition: string, enforceAxis: boolean): ToWgs84 {
  const converter = proj4(definition, 'WGS84');
  const convert = (x: number, y: number): [number, number] => {
    const [longitude, latitude] = converter.forward([x, y], enforceAxis);
    return [longitude, latitude];
  };
  const outside = (x: number, y: number) => {
    const [east, north] = converter.inverse(convert(x, y), enforceAxis);
    const near = (value: number, back: number) => Math.abs(value - back) <= Math.max(RETURN_LEAST, RETURN_SHARE * Math.abs(value));
    return !((near(x, east) || near(360, Math.abs(x - east))) && near(y, north));
  };
  return Object.assign(convert, { outside });
}

function wordsOf(shift: DatumShift, modern: boolean, datum: string): Pick<Projection, 'transformation' | 'accuracy' | 'gridAccuracy'> {
  const { parameters } = shift;
  const accuracy = shift.accuracy ?? (parameters === null && !modern ? null : MODERN_ACCURACY);
  const better = shift.gridAccuracy !== null && (accuracy === null || shift.gridAccuracy < accuracy) ? shift.gridAccuracy : null;
  if (accuracy === 0) return { transformation: 'computed from the projection, on WGS 84', accuracy: 0, gridAccuracy: null };
  const how =
    parameters === null
      ? `without a datum shift: none is published for ${datum}`
      : parameters.every((value) => value === 0)
        ? `${datum} taken as WGS 84`
        : `datum shift of ${parameters.length === 3 ? 'three' : 'seven'} parameters`;
  const error = accuracy === null ? 'positions may be off by several hundred metres' : `positions to about ${accuracy} m`;
  const grid = better === null ? '' : `; a grid-shift file would reach ${better} m and is not used`;
  return { transformation: `${how}; ${error}${grid}`, accuracy, gridAccuracy: better };
}
