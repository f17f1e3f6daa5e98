/**
 * The strips of a parcel: pieces of land with one crop history each. A planting that covers a share of the parcel lies on strips
 * of that share; land no planting ever covers is a bare strip. The shares of the strips of a parcel sum to 1.
 */

/** Shares closer than this are the same, and a sum may exceed 1 by as much. */
export const SHARE_TOLERANCE = 1e-9;

/** A planting on the time axis of the run: days `start … end − 1`, on a share of the parcel. */
export interface PlantingSpan {
  readonly planting: number;
  readonly start: number;
  readonly end: number;
  readonly share: number;
}

/** A piece of land and the plantings it carries, in order of time. */
interface Strip {
  readonly share: number;
  readonly plantings: readonly number[];
}

/**
 * First day on which the shares of the plantings together exceed the parcel, with their sum; null when they never do.
 *
 * @param spans plantings of one parcel
 * @example findOverfullDay([{ planting: 0, start: 0, end: 9, share: 0.6 }, { planting: 1, start: 9, end: 20, share: 0.6 }]) // null
 */
export function findOverfullDay(spans: readonly PlantingSpan[]): { day: number; sum: number } | null {
  for (const { start: day } of [...spans].sort((a, b) => a.start - b.start)) {
    let sum = 0;
    for (const span of spans) if (span.start <= day && day < span.end) sum += span.share;
    if (sum > 1 + SHARE_TOLERANCE) return { day, sum };
  }
  return null;
}

interface Piece {
  share: number;
  freeFrom: number;
  plantings: number[];
}

/**
 * Lays the plantings of a parcel on strips, so that every planting has exactly its share at any time.
 *
 * In order of planting date: a strip of the same share that has become free is used again (double cropping); else land that has carried nothing yet;
 * else free strips are taken, the last of them split where only a part is needed.
 *
 * @param spans plantings of one parcel; their simultaneous shares must not exceed 1 (`findOverfullDay`)
 * @returns strips whose shares sum to 1; the bare remainder, if any, comes last and has no plantings
 * @example planStrips([{ planting: 0, start: 0, end: 9, share: 1 }]) // [{ share: 1, plantings: [0] }]
 */
export function planStrips(spans: readonly PlantingSpan[]): Strip[] {
  if (spans.length === 1 && spans[0].share === 1) return [{ share: 1, plantings: [spans[0].planting] }];
  const pieces: Piece[] = [];
  let untouched = 1;
  for (const span of [...spans].sort((a, b) => a.start - b.start || a.planting - b.planting)) {
    const same = pieces.find((piece) => piece.freeFrom <= span.start && Math.abs(piece.share - span.share) <= SHARE_TOLERANCE);
    if (same) {
      occupy(same, span);
      continue;
    }
    const fresh = Math.min(untouched, span.share);
    if (fresh > SHARE_TOLERANCE) {
      pieces.push({ share: fresh, freeFrom: span.end, plantings: [span.planting] });
      untouched -= fresh;
    }
    occupyFreePieces(pieces, span, span.share - (fresh > SHARE_TOLERANCE ? fresh : 0));
  }
  const strips = pieces.map(({ share, plantings }) => ({ share, plantings }));
  return untouched > SHARE_TOLERANCE ? [...strips, { share: untouched, plantings: [] }] : strips;
}

function occupyFreePieces(pieces: Piece[], span: PlantingSpan, needed: number): void {
  let left = needed;
  for (const piece of [...pieces]) {
    if (left <= SHARE_TOLERANCE) return;
    if (piece.freeFrom > span.start) continue;
    if (piece.share > left + SHARE_TOLERANCE) pieces.push(splitOff(piece, piece.share - left));
    left -= piece.share;
    occupy(piece, span);
  }
}

function splitOff(piece: Piece, share: number): Piece {
  piece.share -= share;
  return { share, freeFrom: piece.freeFrom, plantings: [...piece.plantings] };
}

function occupy(piece: Piece, span: PlantingSpan): void {
  piece.freeFrom = span.end;
  piece.plantings.push(span.planting);
}
