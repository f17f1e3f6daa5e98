/** What an import may bring: how many files, how large, and of what kind, told by content rather than by name. */
import { TooLarge, UnknownKind } from '../base/errors.ts';
import type { ImportFile, ImportKind } from '../files/reading.ts';
import { detectEncoding, looksBinary } from '../files/text-encoding.ts';

/** What each kind of import is read from. */
const ACCEPTED: Record<ImportKind, 'csv' | 'geojson'> = {
  stations: 'csv',
  weather: 'csv',
  parcels: 'geojson',
  canals: 'geojson',
  plantings: 'csv',
  soils: 'csv',
};

const ACCEPTED_TEXT = { csv: 'a table as text (CSV: comma, semicolon or tab between cells)', geojson: 'GeoJSON (RFC 7946)' } as const;

const MOST_FILES = 20;
const MEGABYTE = 1024 * 1024;

/** First bytes of files that people try. */
const SIGNATURES: readonly (readonly [string, readonly number[]])[] = [
  ['a ZIP archive or a spreadsheet', [0x50, 0x4b, 0x03, 0x04]],
  ['an older spreadsheet', [0xd0, 0xcf, 0x11, 0xe0]],
  ['a PDF document', [0x25, 0x50, 0x44, 0x46]],
  ['a gzip archive', [0x1f, 0x8b]],
  ['a PNG picture', [0x89, 0x50, 0x4e, 0x47]],
  ['a JPEG picture', [0xff, 0xd8, 0xff]],
  ['a shapefile', [0x00, 0x00, 0x27, 0x0a]],
  ['a SQLite database or GeoPackage', [0x53, 0x51, 0x4c, 0x69, 0x74, 0x65]],
  ['an HDF5 or NetCDF-4 file', [0x89, 0x48, 0x44, 0x46]],
  ['a NetCDF file', [0x43, 0x44, 0x46]],
];

/** @throws TooLarge or UnknownKind, saying the limit or what is accepted */
export function checkContent(kind: ImportKind, files: readonly ImportFile[], limitMegabytes: number): void {
  if (files.length > MOST_FILES) throw new TooLarge(`${files.length} files were sent; an import takes at most ${MOST_FILES}. Split them.`);
  const total = files.reduce((sum, file) => sum + file.bytes.length, 0);
  if (total > limitMegabytes * MEGABYTE) {
    throw new TooLarge(
      `The files have ${Math.ceil(total / MEGABYTE)} MB together; the limit is ${limitMegabytes} MB (TILLWATER_UPLOAD_LIMIT_MB). Split them.`,
    );
  }
  for (const file of files) checkFile(kind, file);
}

function checkFile(kind: ImportKind, file: ImportFile): void {
  const wanted = ACCEPTED[kind];
  const seen = kindOfContent(file.bytes);
  if (seen === wanted) return;
  throw new UnknownKind(
    `"${file.name}" is ${seen === 'csv' || seen === 'geojson' ? ACCEPTED_TEXT[seen] : seen}; ${kind} ${kind === 'weather' ? 'is' : 'are'} read from ${ACCEPTED_TEXT[wanted]}.`,
  );
}

/** `csv`, `geojson`, or what else it looks like in words. */
function kindOfContent(bytes: Uint8Array): 'csv' | 'geojson' | string {
  if (bytes.length === 0) return 'an empty file';
  const known = SIGNATURES.find(([, signature]) => signature.every((byte, i) => bytes[i] === byte));
  if (known) return known[0];
  const encoding = detectEncoding(bytes);
  if (looksBinary(bytes, encoding)) return 'a binary file of unknown kind';
  const start = Buffer.from(bytes.subarray(encoding.skip, encoding.skip + 400))
    .toString(encoding.name.startsWith('utf-16') ? 'utf16le' : 'latin1')
    .trimStart();
  if (start.startsWith('{') || start.startsWith('[')) return 'geojson';
  if (/^<(\?xml|!doctype|html|kml|gml)/i.test(start)) return 'a markup file (XML or HTML)';
  return 'csv';
}
