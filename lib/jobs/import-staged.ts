/** What a reading staged, cut into gzipped JSON pieces and read back one at a time. */
import { promisify } from 'node:util';
import { gunzip, gzip } from 'node:zlib';
import type { Tx } from '../../db/connect.ts';
import { findStagedPiece } from '../../db/queries/import-row.ts';
import type {
  ImportKind,
  StagedBlock,
  StagedImport,
  StagedParcel,
  StagedPlanting,
  StagedReach,
  StagedSite,
  StagedSoil,
  StagedTurnout,
} from '../files/reading.ts';

/** First piece: everything but the long lists. */
export interface StagedHead {
  readonly kind: ImportKind;
  /** name of the weather source, for weather */
  readonly source: string | null;
  readonly cropMappings: Readonly<Record<string, string | null>>;
  /** length of each list over all pieces */
  readonly counts: Readonly<Partial<Record<StagedPart['part'], number>>>;
  readonly pieces: number;
}

export type StagedPart =
  | { readonly part: 'sites'; readonly items: readonly StagedSite[] }
  | { readonly part: 'blocks'; readonly items: readonly StagedBlock[] }
  | { readonly part: 'turnouts'; readonly items: readonly StagedTurnout[] }
  | { readonly part: 'parcels'; readonly items: readonly StagedParcel[] }
  | { readonly part: 'plantings'; readonly items: readonly StagedPlanting[] }
  | { readonly part: 'reaches'; readonly items: readonly StagedReach[] }
  | { readonly part: 'soils'; readonly items: readonly StagedSoil[] };

const ITEMS_IN_PIECE = 1000;
const BLOCKS_IN_PIECE = 24;
const pack = promisify(gzip);
const unpack = promisify(gunzip);

/** Pieces of a staged import, the head first. */
export async function stagedPieces(staged: StagedImport): Promise<Uint8Array[]> {
  const parts = partsOf(staged).filter((part) => part.items.length > 0);
  const cut = parts.flatMap(cutPart);
  const head: StagedHead = {
    kind: staged.kind,
    source: staged.kind === 'weather' ? staged.source : null,
    cropMappings: staged.kind === 'parcels' ? staged.cropMappings : {},
    counts: Object.fromEntries(parts.map((part) => [part.part, part.items.length])),
    pieces: cut.length,
  };
  const pieces: Uint8Array[] = [];
  for (const piece of [head, ...cut]) pieces.push(await pack(JSON.stringify(piece), { level: 1 }));
  return pieces;
}

function partsOf(staged: StagedImport): StagedPart[] {
  switch (staged.kind) {
    case 'stations':
      return [{ part: 'sites', items: staged.sites }];
    case 'weather':
      return [{ part: 'blocks', items: staged.blocks }];
    case 'parcels':
      return [
        { part: 'turnouts', items: staged.turnouts },
        { part: 'parcels', items: staged.parcels },
        { part: 'plantings', items: staged.plantings },
      ];
    case 'canals':
      return [{ part: 'reaches', items: staged.reaches }];
    case 'plantings':
      return [{ part: 'plantings', items: staged.plantings }];
    case 'soils':
      return [{ part: 'soils', items: staged.soils }];
  }
}

function cutPart(part: StagedPart): StagedPart[] {
  if (part.part === 'plantings') return plantingPieces(part.items);
  const size = part.part === 'blocks' ? BLOCKS_IN_PIECE : ITEMS_IN_PIECE;
  const pieces: StagedPart[] = [];
  for (let from = 0; from < part.items.length; from += size) {
    pieces.push({ part: part.part, items: part.items.slice(from, from + size) } as StagedPart);
  }
  return pieces;
}

/** Plantings of one parcel and season are replaced together, so they must never be cut apart. */
function plantingPieces(items: readonly StagedPlanting[]): StagedPart[] {
  const groups = new Map<string, StagedPlanting[]>();
  for (const item of items) {
    const key = `${item.seasonCode}\n${item.parcelCode}`;
    groups.set(key, [...(groups.get(key) ?? []), item]);
  }
  const pieces: StagedPlanting[][] = [];
  let last: StagedPlanting[] = [];
  for (const group of groups.values()) {
    if (last.length === 0 || last.length + group.length > ITEMS_IN_PIECE) {
      last = [];
      pieces.push(last);
    }
    last.push(...group);
  }
  return pieces.map((piece) => ({ part: 'plantings', items: piece }));
}

export async function findStagedHead(tx: Tx, districtId: string, importId: string): Promise<StagedHead | null> {
  const bytes = await findStagedPiece(tx, districtId, importId, 0);
  return bytes ? (JSON.parse((await unpack(bytes)).toString('utf8')) as StagedHead) : null;
}

/** The pieces after the head, in order, one in memory at a time. */
export async function* stagedParts(tx: Tx, districtId: string, importId: string): AsyncGenerator<StagedPart> {
  for (let ordinal = 1; ; ordinal++) {
    const bytes = await findStagedPiece(tx, districtId, importId, ordinal);
    if (!bytes) return;
    yield JSON.parse((await unpack(bytes)).toString('utf8')) as StagedPart;
  }
}
