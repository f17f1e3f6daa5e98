/** What a file is by its first bytes, whatever its name says. */
import { detectEncoding, looksBinary } from './text-encoding.ts';

export type ContentKind =
  | 'table'
  | 'json'
  | 'xml'
  | 'zip'
  | 'sqlite'
  | 'hdf5'
  | 'netcdf'
  | 'tiff'
  | 'flatgeobuf'
  | 'parquet'
  | 'shapefile-part'
  | 'empty'
  | 'other';

export const CONTENT_WORDS: Record<ContentKind, string> = {
  table: 'a table as text (CSV)',
  json: 'JSON',
  xml: 'a markup file (XML, KML or HTML)',
  zip: 'a ZIP archive',
  sqlite: 'a SQLite database or GeoPackage',
  hdf5: 'a NetCDF-4 or HDF5 file',
  netcdf: 'a NetCDF file',
  tiff: 'a GeoTIFF',
  flatgeobuf: 'a FlatGeobuf file',
  parquet: 'a Parquet file',
  'shapefile-part': 'a part of a shapefile',
  empty: 'an empty file',
  other: 'a binary file of unknown kind',
};

/** First bytes needed to tell. */
export const HEAD_BYTES = 4096;

const SIGNATURES: readonly (readonly [ContentKind, readonly number[]])[] = [
  ['zip', [0x50, 0x4b, 0x03, 0x04]],
  ['zip', [0x50, 0x4b, 0x05, 0x06]],
  ['sqlite', [0x53, 0x51, 0x4c, 0x69, 0x74, 0x65, 0x20, 0x66]],
  ['hdf5', [0x89, 0x48, 0x44, 0x46]],
  ['netcdf', [0x43, 0x44, 0x46, 0x01]],
  ['netcdf', [0x43, 0x44, 0x46, 0x02]],
  ['netcdf', [0x43, 0x44, 0x46, 0x05]],
  ['tiff', [0x49, 0x49, 0x2a, 0x00]],
  ['tiff', [0x4d, 0x4d, 0x00, 0x2a]],
  ['tiff', [0x49, 0x49, 0x2b, 0x00]],
  ['tiff', [0x4d, 0x4d, 0x00, 0x2b]],
  ['flatgeobuf', [0x66, 0x67, 0x62]],
  ['parquet', [0x50, 0x41, 0x52, 0x31]],
  ['shapefile-part', [0x00, 0x00, 0x27, 0x0a]],
];

/** Other things that people try, by name. */
const STRANGERS: readonly (readonly [string, readonly number[]])[] = [
  ['an older spreadsheet', [0xd0, 0xcf, 0x11, 0xe0]],
  ['a PDF document', [0x25, 0x50, 0x44, 0x46]],
  ['a gzip archive', [0x1f, 0x8b]],
  ['a PNG picture', [0x89, 0x50, 0x4e, 0x47]],
  ['a JPEG picture', [0xff, 0xd8, 0xff]],
];

const starts = (head: Uint8Array, signature: readonly number[]) => signature.every((byte, i) => head[i] === byte);

/**
 * Tells a file's kind.
 *
 * @param head its first `HEAD_BYTES`, or all of it
 * @param name only to tell the tables of a shapefile (.dbf, .prj, .cpg, .shx), which have no mark of their own
 */
export function contentKind(head: Uint8Array, name: string): ContentKind {
  if (head.length === 0) return 'empty';
  const known = SIGNATURES.find(([, signature]) => starts(head, signature));
  if (known) return known[0] === 'zip' && isOfficeDocument(head) ? 'other' : known[0];
  if (/\.(dbf|prj|cpg|shx)$/i.test(name)) return 'shapefile-part';
  const encoding = detectEncoding(head);
  if (looksBinary(head, encoding)) return 'other';
  const text = Buffer.from(head.subarray(encoding.skip, encoding.skip + 400))
    .toString(encoding.name.startsWith('utf-16') ? 'utf16le' : 'latin1')
    .trimStart();
  if (text.startsWith('{') || text.startsWith('[')) return 'json';
  return text.startsWith('<') ? 'xml' : 'table';
}

/** True for a spreadsheet or text document: an archive whose first member says so. */
function isOfficeDocument(head: Uint8Array): boolean {
  const length = head[26] + 256 * head[27];
  const first = Buffer.from(head.subarray(30, 30 + length)).toString('latin1');
  return first === '[Content_Types].xml' || first === '_rels/.rels' || /^(xl|word|docProps)\//.test(first) || first === 'mimetype';
}

/** The kind in words, as precise as its first bytes allow. */
export function contentWords(head: Uint8Array, name: string): string {
  if (starts(head, [0x50, 0x4b]) && isOfficeDocument(head)) return 'a spreadsheet or office document';
  return STRANGERS.find(([, signature]) => starts(head, signature))?.[0] ?? CONTENT_WORDS[contentKind(head, name)];
}
