/**
 * How files name their coordinate system → an EPSG code, or the parts of a WKT or PROJJSON text that tell it.
 */

/** Longitude and latitude on WGS 84, in that order. */
export const WGS84 = 'wgs84';

export interface CrsDescription {
  /** EPSG code, where one is stated */
  readonly code: number | null;
  /** WKT or PROJJSON of the horizontal system, where the file has one */
  readonly definition: string | Readonly<Record<string, unknown>> | null;
  readonly name: string | null;
  /** names of the geographic system and of its datum */
  readonly datumNames: readonly string[];
}

type Json = Readonly<Record<string, unknown>>;

/** Longest definition that is looked at [characters]; real ones stay below 20,000. */
const LENGTH_LIMIT = 100_000;

const WGS84_TEXT = /^(urn:ogc:def:crs:)?(OGC:)?(OGC:[\d.]*:)?CRS:?84h?$|\/OGC\/[\d.]+\/CRS84h?$/i;
const CODE_TEXT =
  /^(?:urn:ogc:def:crs:EPSG:[\d.]*:|https?:\/\/(?:www\.)?opengis\.net\/def\/crs\/EPSG\/[\d.]+\/|https?:\/\/(?:www\.)?opengis\.net\/gml\/srs\/epsg\.xml#|EPSG::?|SRID:|)(\d{4,9})$/i;

/** Reads the text by which a file or a person names a coordinate system; null when it is none of the notations known. */
export function describeCrs(text: string): CrsDescription | typeof WGS84 | null {
  if (text.length > LENGTH_LIMIT) return null;
  const trimmed = text.trim();
  if (WGS84_TEXT.test(trimmed)) return WGS84;
  const code = CODE_TEXT.exec(trimmed)?.[1];
  if (code !== undefined) return { code: Number(code), definition: null, name: null, datumNames: [] };
  if (trimmed.startsWith('{')) return describeProjJson(trimmed);
  return /^[A-Z_0-9]+\s*\[/i.test(trimmed) ? describeWkt(trimmed) : null;
}

function describeProjJson(text: string): CrsDescription | typeof WGS84 | null {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    return null;
  }
  return describeProjJsonObject(value);
}

function describeProjJsonObject(value: unknown): CrsDescription | typeof WGS84 | null {
  if (!isObject(value)) return null;
  const id = isObject(value.id) ? value.id : {};
  const code = id.authority === 'EPSG' && /^\d+$/.test(String(id.code)) ? Number(id.code) : null;
  if (id.authority === 'OGC' && /^CRS84h?$/.test(String(id.code))) return WGS84;
  if (code === null && Array.isArray(value.components)) return describeProjJsonObject(value.components[0]);
  if (code === null && isObject(value.source_crs)) return describeProjJsonObject(value.source_crs);
  const base = isObject(value.base_crs) ? value.base_crs : value;
  const datum = isObject(base.datum) ? base.datum : isObject(base.datum_ensemble) ? base.datum_ensemble : {};
  return {
    code,
    definition: value,
    name: textOrNull(value.name),
    datumNames: [base.name, datum.name].filter((name) => typeof name === 'string'),
  };
}

function describeWkt(text: string): CrsDescription | null {
  const horizontal = /^(COMPD_CS|COMPOUNDCRS|BOUNDCRS)\s*\[/i.test(text) ? (wholeCode(text) ?? innerSystem(text)) : text;
  if (typeof horizontal === 'number') return { code: horizontal, definition: null, name: null, datumNames: [] };
  if (horizontal === null) return null;
  const name = /^[A-Z_0-9]+\s*\[\s*"([^"]*)"/i.exec(horizontal)?.[1] ?? null;
  const names = [
    /\b(?:GEOGCS|GEOGCRS|GEODCRS|BASEGEOGCRS|BASEGEODCRS|GEODETICCRS|GEOGRAPHICCRS)\s*\[\s*"([^"]*)"/i,
    /\b(?:DATUM|ENSEMBLE)\s*\[\s*"([^"]*)"/i,
  ];
  return {
    code: wholeCode(horizontal),
    definition: horizontal,
    name,
    datumNames: names.map((pattern) => pattern.exec(horizontal)?.[1]).filter((found) => found !== undefined),
  };
}

/** The EPSG code that the text as a whole carries, in its last member. */
function wholeCode(text: string): number | null {
  const found = /(?:AUTHORITY|ID)\s*\[\s*"EPSG"\s*,\s*"?(\d+)"?\s*\]\s*\]\s*$/i.exec(text);
  return found ? Number(found[1]) : null;
}

/** The projected or geographic system inside a compound or bound one. */
function innerSystem(text: string): string | null {
  const found = /\b(PROJCS|PROJCRS|PROJECTEDCRS|GEOGCS|GEOGCRS|GEODCRS)\s*\[/i.exec(text);
  if (!found) return null;
  let depth = 0;
  for (let i = found.index + found[0].length - 1; i < text.length; i++) {
    if (text[i] === '[') depth++;
    else if (text[i] === ']' && --depth === 0) return text.slice(found.index, i + 1);
  }
  return null;
}

function isObject(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function textOrNull(value: unknown): string | null {
  return typeof value === 'string' ? value : null;
}
