/** What an import may bring: how many files, how large, and of what kind, told by content rather than by name. */
import { TooLarge, UnknownKind } from '../base/errors.ts';
import { type ContentKind, contentKind, contentWords } from '../files/content-kind.ts';
import type { ImportKind } from '../files/reading.ts';

const TABLES: readonly ContentKind[] = ['table', 'zip'];
const SHAPES: readonly ContentKind[] = ['json', 'zip', 'sqlite', 'flatgeobuf', 'parquet', 'xml', 'shapefile-part'];
const ARRAYS: readonly ContentKind[] = ['netcdf', 'hdf5', 'tiff'];

const SHAPE_WORDS =
  'GeoJSON, zipped shapefile, GeoPackage, FlatGeobuf, GeoParquet or KML. A file geodatabase must be exported to one of these first';
const TABLE_WORDS = 'a table as text (CSV: comma, semicolon or tab between cells)';

/** What each kind of import is read from. */
const ACCEPTED: Record<ImportKind, { readonly kinds: readonly ContentKind[]; readonly words: string }> = {
  stations: { kinds: TABLES, words: TABLE_WORDS },
  weather: {
    kinds: [...TABLES, ...ARRAYS],
    words: `${TABLE_WORDS}, NetCDF, GeoTIFF, zipped Zarr, or a ZIP archive of such files`,
  },
  parcels: { kinds: SHAPES, words: SHAPE_WORDS },
  canals: { kinds: SHAPES, words: SHAPE_WORDS },
  turnouts: { kinds: ['table', ...SHAPES], words: `${TABLE_WORDS}, or ${SHAPE_WORDS}` },
  areas: { kinds: SHAPES, words: SHAPE_WORDS },
  'soil-areas': { kinds: SHAPES, words: SHAPE_WORDS },
  plantings: { kinds: TABLES, words: TABLE_WORDS },
  soils: { kinds: TABLES, words: TABLE_WORDS },
  deliveries: { kinds: TABLES, words: TABLE_WORDS },
  measurements: { kinds: TABLES, words: TABLE_WORDS },
  images: { kinds: ['tiff'], words: 'GeoTIFF, one image a file' },
};

const MOST_FILES = 400;
const MEGABYTE = 1024 * 1024;

/** A file as far as it has to be known to be let in. */
export interface FileHead {
  readonly name: string;
  readonly size: number;
  /** first bytes */
  readonly head: Uint8Array;
}

/** @throws TooLarge or UnknownKind, saying the limit or what is accepted */
export function checkContent(kind: ImportKind, files: readonly FileHead[], limitMegabytes: number): void {
  if (files.length > MOST_FILES) throw new TooLarge(`${files.length} files were sent; an import takes at most ${MOST_FILES}. Split them.`);
  const total = files.reduce((sum, file) => sum + file.size, 0);
  if (total > limitMegabytes * MEGABYTE) {
    throw new TooLarge(
      `The files have ${Math.ceil(total / MEGABYTE)} MB together; the limit is ${limitMegabytes} MB (TILLWATER_UPLOAD_LIMIT_MB). Split them.`,
    );
  }
  for (const file of files) checkFile(kind, file);
}

function checkFile(kind: ImportKind, { name, head }: FileHead): void {
  const { kinds, words } = ACCEPTED[kind];
  if (kinds.includes(contentKind(head, name))) return;
  throw new UnknownKind(`"${name}" is ${contentWords(head, name)}; ${kind} ${kind === 'weather' ? 'is' : 'are'} read from ${words}.`);
}
