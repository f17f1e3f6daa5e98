/**
 * GeoTIFF and cloud-optimised GeoTIFF: every band is a variable [y × x], and the places of its cells are the variables "x" and "y".
 *
 * Only the tiles or strips a window touches are read, at full resolution; overviews are left aside.
 * Source: OGC GeoTIFF standard 19-008r4 (raster space, model transformation, GeoKeys); names of band metadata by the common practice of GDAL.
 */

import { inflateSync } from 'node:zlib';
import { addDecoder, BaseDecoder, GeoTIFF } from 'geotiff';
import { Refused } from '../base/errors.ts';
import type { ArrayFile, ArrayVariable, AttributeValue } from './array-file.ts';
import { CHUNK_LIMIT, checkLayout, checkSlab, unreadable, variableOf, variableUnreadable, widthOf } from './array-slab.ts';
import { type ByteSource, openBytes } from './byte-source.ts';
import type { FindingList } from './finding-list.ts';
import { type CellPlaces, cellPlaces, placesOf, placeVariables } from './geotiff-places.ts';
import type { ImportFile } from './reading.ts';

type Image = Awaited<ReturnType<GeoTIFF['getImage']>>;

/** Largest text of band metadata that is looked at [characters]. */
const METADATA_LIMIT = 1024 * 1024;

/** True when bytes start like a TIFF, classic or big, of either byte order. */
export function isTiff(head: Uint8Array): boolean {
  const start = String.fromCharCode(...head.subarray(0, 4));
  return ['II*\0', 'MM\0*', 'II+\0', 'MM\0+'].includes(start);
}

/**
 * Opens a GeoTIFF.
 *
 * @throws {Refused} when its header or tags are damaged, or its blocks are larger than is read
 */
export async function openGeotiff(file: ImportFile, findings?: FindingList): Promise<ArrayFile> {
  installInflate();
  const bytes = await openBytes(file);
  try {
    const source = new BlockSource(bytes);
    const tiff = await GeoTIFF.fromSource(source as never);
    const image = await tiff.getImage(0);
    source.limit = 2 * checkedBlock(file.name, image) + 65536;
    const places = cellPlaces(image.fileDirectory, image.getGeoKeys());
    const bands = await bandVariables(image, places);
    checkLayout(file.name, bands.length, 2);
    await noteFurtherImages(tiff, file.name, findings);
    if (places.transform === null) {
      findings?.warn({
        code: 'grid-without-place',
        message: 'The GeoTIFF does not say where its cells lie.',
        file: file.name,
        advice: 'Export it with its coordinate system and extent.',
      });
    }
    const shape = [image.getHeight(), image.getWidth()] as const;
    return new GeotiffFile(
      file.name,
      bytes,
      image,
      [...bands, ...placeVariables(places, shape)],
      places,
      await fileAttributes(image, places),
    );
  } catch (error) {
    await bytes.close();
    if (error instanceof Refused) throw error;
    const reason = error instanceof Error ? error.message : String(error);
    throw unreadable(file.name, `is not a sound GeoTIFF: ${reason}`, 'Copy or download it again, or export it anew.', undefined, error);
  }
}

/** The file as the TIFF library asks for it; a block larger than can belong to the image is refused. */
class BlockSource {
  limit = CHUNK_LIMIT;

  constructor(private readonly bytes: ByteSource) {}

  get fileSize(): number {
    return this.bytes.size;
  }

  async fetch(slices: readonly { offset: number; length: number }[]): Promise<ArrayBufferLike[]> {
    return Promise.all(slices.map(async (slice) => (await this.fetchSlice(slice)).data));
  }

  async fetchSlice({ offset, length }: { offset: number; length: number }) {
    if (length > Math.max(this.limit, 65536)) throw new Error(`a stored block of ${length} bytes is larger than its cells can take`);
    if (offset >= this.bytes.size) throw new Error(`the file ends at byte ${this.bytes.size}, before byte ${offset}`);
    const read = await this.bytes.read(offset, length);
    return { data: read.slice().buffer as ArrayBuffer, offset, length: read.length };
  }

  async close(): Promise<void> {
    await this.bytes.close();
  }
}

let inflateInstalled = false;

/** Deflate through the platform's zlib, with an upper bound; the library's own has none. */
function installInflate(): void {
  if (inflateInstalled) return;
  inflateInstalled = true;
  class BoundedInflate extends BaseDecoder {
    override decodeBlock(buffer: ArrayBuffer): ArrayBuffer {
      const plain = inflateSync(new Uint8Array(buffer), { maxOutputLength: CHUNK_LIMIT });
      return plain.buffer.slice(plain.byteOffset, plain.byteOffset + plain.byteLength) as ArrayBuffer;
    }
  }
  addDecoder([8, 32946], async () => BoundedInflate as never);
}

function checkedBlock(file: string, image: Image): number {
  const bands = image.planarConfiguration === 1 ? image.getSamplesPerPixel() : 1;
  const bytes = image.getTileWidth() * image.getTileHeight() * bands * Math.ceil(image.getBitsPerSample(0) / 8);
  if (!(bytes <= CHUNK_LIMIT)) {
    throw unreadable(file, 'is stored in blocks larger than are read', 'Export it in tiles.', `${CHUNK_LIMIT / 2 ** 20} MB`);
  }
  return bytes;
}

/** Says when a file holds more than the first image and its overviews and masks. */
async function noteFurtherImages(tiff: GeoTIFF, file: string, findings?: FindingList): Promise<void> {
  const second = await tiff.getImage(1).catch(() => null);
  if (second === null) return;
  const kind = Number(second.fileDirectory.getValue('NewSubfileType') ?? 0);
  if ((kind & 0b101) !== 0) return;
  findings?.warn({
    code: 'further-images-left-out',
    message: 'The GeoTIFF holds several images; the first is read.',
    file,
    advice: 'Export each image as a file or as a band of its own.',
  });
}

function typeOf(format: number, bits: number): ArrayVariable['type'] {
  if (format === 3) return bits === 64 ? 'float64' : bits === 32 || bits === 16 ? 'float32' : 'other';
  if ((format !== 1 && format !== 2) || bits > 32) return 'other';
  const width = bits <= 8 ? 8 : bits <= 16 ? 16 : 32;
  return format === 1 ? `uint${width}` : `int${width}`;
}

async function bandVariables(image: Image, places: CellPlaces): Promise<ArrayVariable[]> {
  const shape = [image.getHeight(), image.getWidth()];
  const chunk = [Math.min(shape[0], image.getTileHeight()), Math.min(shape[1], image.getTileWidth())];
  const common: Record<string, AttributeValue> = places.crs === null ? {} : { crs: places.crs };
  const missing = noDataOf(image);
  if (missing !== null) common._FillValue = [missing];
  return Promise.all(
    Array.from({ length: image.getSamplesPerPixel() }, async (_, band) => ({
      name: `band_${band + 1}`,
      dimensions: ['y', 'x'],
      shape,
      type: typeOf(image.getSampleFormat(band), image.getBitsPerSample(band)),
      chunk,
      attributes: { ...common, ...bandAttributes(await metadataOf(image, band)) },
    })),
  );
}

function noDataOf(image: Image): number | null {
  const text = image.fileDirectory.getValue('GDAL_NODATA' as never) as unknown;
  if (typeof text !== 'string') return null;
  const plain = text.replace(/\0/g, '').trim().toLowerCase();
  if (plain === 'nan' || plain === '-nan') return Number.NaN;
  return plain !== '' && Number.isFinite(Number(plain)) ? Number(plain) : null;
}

async function metadataOf(image: Image, band: number | null): Promise<Record<string, string>> {
  const text: unknown = await image.fileDirectory.loadValue('GDAL_METADATA');
  if (typeof text !== 'string' || text.length > METADATA_LIMIT) return {};
  const items = (await image.getGDALMetadata(band)) ?? {};
  return Object.fromEntries(Object.entries(items).map(([name, value]) => [name, plainText(plainText(String(value ?? '')))]));
}

/** Text of an XML item. The writer most in use escapes it twice, so that it is undone twice. */
function plainText(xml: string): string {
  return xml
    .replace(/&lt;/g, '<')
    .replace(/&gt;/g, '>')
    .replace(/&quot;/g, '"')
    .replace(/&apos;/g, "'")
    .replace(/&amp;/g, '&')
    .trim();
}

function bandAttributes(items: Readonly<Record<string, string>>): Record<string, AttributeValue> {
  const attributes: Record<string, AttributeValue> = {};
  for (const [name, value] of Object.entries(items)) {
    if (name === 'SCALE' || name === 'OFFSET') {
      if (Number.isFinite(Number(value))) attributes[name === 'SCALE' ? 'scale_factor' : 'add_offset'] = [Number(value)];
    } else if (name === 'UNITTYPE') attributes.units = value;
    else if (name === 'DESCRIPTION') attributes.long_name = value;
    else attributes[name] = value;
  }
  return attributes;
}

async function fileAttributes(image: Image, places: CellPlaces): Promise<Record<string, AttributeValue>> {
  const attributes: Record<string, AttributeValue> = { ...(await metadataOf(image, null)) };
  const made: unknown = await image.fileDirectory.loadValue('DateTime');
  if (typeof made === 'string') attributes.TIFFTAG_DATETIME = made.replace(/\0/g, '').trim();
  if (places.crs !== null) attributes.crs = places.crs;
  if (places.citation !== null) attributes.crs_citation = places.citation;
  return attributes;
}

class GeotiffFile implements ArrayFile {
  readonly format = 'geotiff' as const;

  constructor(
    private readonly name: string,
    private readonly bytes: ByteSource,
    private readonly image: Image,
    readonly variables: readonly ArrayVariable[],
    private readonly places: CellPlaces,
    readonly attributes: Readonly<Record<string, AttributeValue>>,
  ) {}

  async read(name: string, start: readonly number[], count: readonly number[]): Promise<Float64Array> {
    const variable = variableOf(this.variables, name);
    const size = checkSlab(variable, start, count);
    if (name === 'x' || name === 'y') return placesOf(this.places, name, start, count);
    if (widthOf(variable.type) === 0) {
      throw variableUnreadable(this.name, name, 'has numbers of a type that is not read', 'Export it as 16- or 32-bit numbers.');
    }
    if (size === 0) return new Float64Array(0);
    const window = [start[1], start[0], start[1] + count[1], start[0] + count[0]];
    try {
      const rasters = await this.image.readRasters({ window, samples: [Number(name.slice(5)) - 1], interleave: false });
      return Float64Array.from(rasters[0] as ArrayLike<number>);
    } catch (error) {
      const reason = error instanceof Error ? error.message : String(error);
      throw variableUnreadable(
        this.name,
        name,
        `has stored blocks that cannot be read (${reason})`,
        'Copy or download the file again.',
        error,
      );
    }
  }

  async readText(name: string): Promise<string[]> {
    throw variableUnreadable(this.name, name, 'holds numbers, not text', 'Read it as numbers.');
  }

  async close(): Promise<void> {
    await this.bytes.close();
  }
}
