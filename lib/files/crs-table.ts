/**
 * Coordinate systems by their EPSG code, known without a network: projection, name, shift of the datum to WGS 84 and its accuracy.
 * Where the table comes from and how it was made stands in crs-definitions.md.
 */
import { readFileSync } from 'node:fs';

/** The shift of a datum to WGS 84. */
export interface DatumShift {
  /** three translations [m], or seven parameters (translations [m], rotations ["], position vector, scale [ppm]); null where none is published */
  readonly parameters: readonly number[] | null;
  /** published accuracy of the shift [m]; null where none is stated */
  readonly accuracy: number | null;
  /** accuracy that a grid-shift file would reach [m]; null where there is none */
  readonly gridAccuracy: number | null;
}

export interface KnownSystem {
  readonly code: number;
  readonly name: string;
  /** name of its geographic system */
  readonly datum: string;
  /** projection in PROJ's notation, without the datum shift */
  readonly definition: string;
  readonly shift: DatumShift;
}

interface Table {
  readonly geodetic: Readonly<Record<string, string>>;
  readonly shifts: readonly string[];
  readonly systems: Readonly<Record<string, string>>;
  readonly compound: Readonly<Record<string, number>>;
}

let loaded: Table | null = null;
let byName: Map<string, number> | null = null;

function table(): Table {
  loaded ??= JSON.parse(readFileSync(new URL('./crs-definitions.json', import.meta.url), 'utf-8')) as Table;
  return loaded;
}

/** The system of an EPSG code; a compound system gives its horizontal part. Null when it is not in the table. */
export function systemOf(code: number): KnownSystem | null {
  const { systems, geodetic, shifts, compound } = table();
  const own = compound[code] ?? code;
  const row = systems[own];
  if (row === undefined) return null;
  const [name, definition, base, shift] = row.split('|');
  const datum = geodetic[base].split('|')[0];
  return {
    code: own,
    name: name.startsWith('~') ? `${datum} / ${name.slice(1)}` : name,
    datum,
    definition: expanded(definition),
    shift: shiftOf(shifts[Number(shift)]),
  };
}

/** The geographic system by one of its names or its datum's, as a WKT text has them; null when the name is not known. */
export function geographicByName(name: string): KnownSystem | null {
  byName ??= namesOf(table());
  const code = byName.get(plainName(name));
  return code === undefined ? null : systemOf(code);
}

function namesOf({ geodetic, systems }: Table): Map<string, number> {
  const names = new Map<string, number>();
  for (const [code, list] of Object.entries(geodetic)) {
    if (systems[code] === undefined) continue;
    for (const name of list.split('|')) if (!names.has(plainName(name))) names.set(plainName(name), Number(code));
  }
  return names;
}

/** @example plainName('GCS_NZGD_2000') // 'nzgd2000' */
function plainName(name: string): string {
  return name
    .toLowerCase()
    .replace(/^(gcs|d)_/, '')
    .replace(/[^a-z0-9]/g, '')
    .replace(/ensemble$/, '');
}

/** "tmerc lon_0=3" → "+proj=tmerc +lon_0=3 …", with the zeros that the table leaves out. */
function expanded(definition: string): string {
  const text = `+proj=${definition.replaceAll(' ', ' +')}`;
  const zeros = ['lat_0', 'x_0', 'y_0'].filter((name) => !text.includes(`+${name}=`)).map((name) => ` +${name}=0`);
  return text + zeros.join('');
}

function shiftOf(text: string): DatumShift {
  const [parameters, accuracy, grid] = text.split('|');
  return {
    parameters: parameters === '' ? null : parameters.split(',').map(Number),
    accuracy: accuracy === '' ? null : Number(accuracy),
    gridAccuracy: grid === '' ? null : Number(grid),
  };
}
