/** What a reading staged, cut into gzipped pieces and read back one at a time: JSON, but for weather, whose numbers stay bytes. */
import { promisify } from 'node:util';
import { gunzip, gzip } from 'node:zlib';
import type { Tx } from '../../db/connect.ts';
import { findStagedPiece } from '../../db/queries/import-row.ts';
import type {
  ImportKind,
  StagedArea,
  StagedBlock,
  StagedCell,
  StagedDelivery,
  StagedImageMean,
  StagedImport,
  StagedMeasurement,
  StagedParcel,
  StagedPlanting,
  StagedReach,
  StagedSite,
  StagedSoil,
  StagedSoilArea,
  StagedTurnout,
} from '../files/reading.ts';
import type { GridShape } from '../weather/variable.ts';

/** First piece: everything but the long lists. */
export interface StagedHead {
  readonly kind: ImportKind;
  /** name of the weather source, for weather */
  readonly source: string | null;
  /** lattice of the grid the blocks are of, null for stations */
  readonly grid: GridShape | null;
  readonly cropMappings: Readonly<Record<string, string | null>>;
  /** length of each list over all pieces */
  readonly counts: Readonly<Partial<Record<StagedPart['part'], number>>>;
  readonly pieces: number;
  /** ordinals of the pieces that others rest on */
  readonly first: readonly number[];
}

export type StagedPart =
  | { readonly part: 'sites'; readonly items: readonly StagedSite[] }
  | { readonly part: 'cells'; readonly items: readonly StagedCell[] }
  | { readonly part: 'blocks'; readonly items: readonly StagedBlock[] }
  | { readonly part: 'turnouts'; readonly items: readonly StagedTurnout[] }
  | { readonly part: 'parcels'; readonly items: readonly StagedParcel[] }
  | { readonly part: 'plantings'; readonly items: readonly StagedPlanting[] }
  | { readonly part: 'reaches'; readonly items: readonly StagedReach[] }
  | { readonly part: 'areas'; readonly items: readonly StagedArea[] }
  | { readonly part: 'soilAreas'; readonly items: readonly StagedSoilArea[] }
  | { readonly part: 'images'; readonly items: readonly StagedImageMean[] }
  | { readonly part: 'deliveries'; readonly items: readonly StagedDelivery[] }
  | { readonly part: 'measurements'; readonly items: readonly StagedMeasurement[] }
  | { readonly part: 'soils'; readonly items: readonly StagedSoil[] };

const ITEMS_IN_PIECE = 1000;
const BLOCKS_IN_PIECE = 24;
const pack = promisify(gzip);
const unpack = promisify(gunzip);

/** Pieces of a staged import, the head first. */
export async function stagedPieces(staged: StagedImport): Promise<Uint8Array[]> {
  const pieces: Uint8Array[] = [];
  const writer = new PieceWriter(async (piece) => {
    pieces.push(piece);
  });
  const head = await writer.finish(staged);
  return [head, ...pieces];
}

/** Parts that others rest on: applied first, in whatever order they were read. */
const FIRST: readonly StagedPart['part'][] = ['sites', 'cells', 'turnouts'];

/** Packs what a reading stages, piece by piece, in the order in which it is to be applied. */
export class PieceWriter {
  private counts: Partial<Record<StagedPart['part'], number>> = {};
  private first: number[] = [];
  private pieces = 0;

  /** @param put takes a packed piece; waited for before the next is made */
  constructor(private readonly put: (piece: Uint8Array) => Promise<void>) {}

  /** Packs one block of weather as soon as it is read. */
  readonly block = (block: StagedBlock): Promise<void> => this.write({ part: 'blocks', items: [block] });

  /** Packs what is left and answers the packed head, which is stored first and written last. */
  async finish(staged: StagedImport): Promise<Uint8Array> {
    if (staged.kind === 'weather' && staged.sites === 0) this.forget();
    for (const part of partsOf(staged)
      .filter((each) => each.items.length > 0)
      .flatMap(cutPart))
      await this.write(part);
    const head: StagedHead = {
      kind: staged.kind,
      source: staged.kind === 'weather' ? staged.source : null,
      grid: staged.kind === 'weather' ? (staged.grid ?? null) : null,
      cropMappings: staged.kind === 'parcels' ? staged.cropMappings : {},
      counts: this.counts,
      pieces: this.pieces,
      first: this.first,
    };
    return packJson(head);
  }

  /** A reading that came to nothing leaves nothing to apply, whatever was handed over on the way. */
  private forget(): void {
    this.counts = {};
    this.first = [];
    this.pieces = 0;
  }

  private async write(part: StagedPart): Promise<void> {
    this.counts[part.part] = (this.counts[part.part] ?? 0) + part.items.length;
    this.pieces++;
    if (FIRST.includes(part.part)) this.first.push(this.pieces);
    await this.put(part.part === 'blocks' ? await packBlocks(part.items) : await packJson(part));
  }
}

function packJson(value: unknown): Promise<Uint8Array> {
  return pack(JSON.stringify(value), { level: 1 });
}

/** First bytes of a piece of weather: then a header's length, the header as JSON, and the Float32 values of each block in turn. */
const BLOCK_MARK = 0x57424c4b;
const PREFIX_BYTES = 8;

type BlockHeader = Omit<StagedBlock, 'values'> & { readonly length: number };

async function packBlocks(blocks: readonly StagedBlock[]): Promise<Uint8Array> {
  const headers: BlockHeader[] = blocks.map(({ values, ...rest }) => ({ ...rest, length: values.length }));
  const header = Buffer.from(JSON.stringify(headers));
  const prefix = Buffer.alloc(PREFIX_BYTES);
  prefix.writeUInt32BE(BLOCK_MARK, 0);
  prefix.writeUInt32LE(header.length, 4);
  const values = blocks.map((block) => Buffer.from(block.values.buffer, block.values.byteOffset, block.values.byteLength));
  return pack(Buffer.concat([prefix, header, ...values]), { level: 1 });
}

function unpackPart(bytes: Buffer): StagedPart {
  if (bytes.length < PREFIX_BYTES || bytes.readUInt32BE(0) !== BLOCK_MARK) return JSON.parse(bytes.toString('utf8')) as StagedPart;
  const start = PREFIX_BYTES + bytes.readUInt32LE(4);
  const headers = JSON.parse(bytes.subarray(PREFIX_BYTES, start).toString('utf8')) as BlockHeader[];
  const body = Uint8Array.from(bytes.subarray(start)).buffer;
  let at = 0;
  const items = headers.map(({ length, ...rest }): StagedBlock => {
    const values = new Float32Array(body, at, length);
    at += values.byteLength;
    return { ...rest, values };
  });
  return { part: 'blocks', items };
}

function partsOf(staged: StagedImport): StagedPart[] {
  switch (staged.kind) {
    case 'stations':
      return [{ part: 'sites', items: staged.sites }];
    case 'images':
      return [{ part: 'images', items: staged.images }];
    case 'deliveries':
      return [{ part: 'deliveries', items: staged.deliveries }];
    case 'measurements':
      return [{ part: 'measurements', items: staged.measurements }];
    case 'weather':
      return [
        { part: 'sites', items: staged.stations ?? [] },
        { part: 'cells', items: staged.cells ?? [] },
        { part: 'blocks', items: staged.blocks },
      ];
    case 'parcels':
      return [
        { part: 'turnouts', items: staged.turnouts },
        { part: 'parcels', items: staged.parcels },
        { part: 'plantings', items: staged.plantings },
      ];
    case 'canals':
      return [{ part: 'reaches', items: staged.reaches }];
    case 'turnouts':
      return [{ part: 'turnouts', items: staged.turnouts }];
    case 'areas':
      return [{ part: 'areas', items: staged.areas }];
    case 'soil-areas':
      return [{ part: 'soilAreas', items: staged.soilAreas }];
    case 'plantings':
      return [{ part: 'plantings', items: staged.plantings }];
    case 'soils':
      return [{ part: 'soils', items: staged.soils }];
  }
}

function cutPart(part: StagedPart): StagedPart[] {
  if (part.part === 'plantings') {
    const pieces = piecesOfGroups(part.items, ({ seasonCode, parcelCode }) => `${seasonCode}\n${parcelCode}`);
    return pieces.map((items) => ({ part: 'plantings', items }));
  }
  if (part.part === 'measurements') {
    const pieces = piecesOfGroups(part.items, ({ parcelCode, date, quantity }) => `${parcelCode}\n${date}\n${quantity}`);
    return pieces.map((items) => ({ part: 'measurements', items }));
  }
  const size = part.part === 'blocks' ? BLOCKS_IN_PIECE : ITEMS_IN_PIECE;
  const pieces: StagedPart[] = [];
  for (let from = 0; from < part.items.length; from += size) {
    pieces.push({ part: part.part, items: part.items.slice(from, from + size) } as StagedPart);
  }
  return pieces;
}

/** Plantings of one parcel and season, and readings of one parcel, day and quantity, are replaced together, so they must never be cut apart. */
function piecesOfGroups<Item>(items: readonly Item[], keyOf: (item: Item) => string): Item[][] {
  const groups = new Map<string, Item[]>();
  for (const item of items) {
    const group = groups.get(keyOf(item));
    if (group) group.push(item);
    else groups.set(keyOf(item), [item]);
  }
  const pieces: Item[][] = [];
  let last: Item[] = [];
  for (const group of groups.values()) {
    if (last.length === 0 || last.length + group.length > ITEMS_IN_PIECE) {
      last = [];
      pieces.push(last);
    }
    last.push(...group);
  }
  return pieces;
}

export async function findStagedHead(tx: Tx, districtId: string, importId: string): Promise<StagedHead | null> {
  const bytes = await findStagedPiece(tx, districtId, importId, 0);
  return bytes ? (JSON.parse((await unpack(bytes)).toString('utf8')) as StagedHead) : null;
}

/** The pieces after the head, one in memory at a time: those that others rest on first. */
export async function* stagedParts(tx: Tx, own: { districtId: string; importId: string }, head: StagedHead): AsyncGenerator<StagedPart> {
  const rest = Array.from({ length: head.pieces }, (_, i) => i + 1).filter((ordinal) => !head.first.includes(ordinal));
  for (const ordinal of [...head.first, ...rest]) {
    const bytes = await findStagedPiece(tx, own.districtId, own.importId, ordinal);
    if (bytes) yield unpackPart(await unpack(bytes));
  }
}
