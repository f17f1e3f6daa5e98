/** Parcels of a new file against the parcels that stand: what became of each, shown before applying and kept when it is applied. */
import type { Tx } from '../../db/connect.ts';
import { findWholeDistrict } from '../../db/queries/district-read.ts';
import type { ImportKey } from '../../db/queries/import-before.ts';
import { listParcelGround } from '../../db/queries/land-maps.ts';
import { type EndedParcel, keepParcels } from '../../db/queries/parcel-history.ts';
import { addDays } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import type { Finding } from '../base/errors.ts';
import type { LineageItem, LineageSummary } from '../files/lineage-summary.ts';
import type { ImportOptions, StagedParcel } from '../files/reading.ts';
import { type Descent, type Ground, type GroundChange, type Lineage, lineageOf } from '../geo/lineage.ts';
import { planeShape } from '../geo/plane-shape.ts';

/** Most parcels listed by code. */
const LINEAGE_LISTED = 2000;
const PAGE = 1000;
const NAMED = 8;
/** Digits kept of a share. */
const DIGITS = 1e4;

type Options = Pick<ImportOptions, 'replace' | 'validFrom'>;
type StagedGround = Pick<StagedParcel, 'code' | 'geometry' | 'area'>;

/** Compares staged parcels with the stored ones. Null while the district has no parcels. */
export async function describeLineage(
  tx: Tx,
  districtId: string,
  staged: AsyncIterable<readonly StagedGround[]>,
  options: Options,
): Promise<{ lineage: LineageSummary; findings: Finding[] } | null> {
  const before = await storedGround(tx, districtId);
  if (before.length === 0) return null;
  const after = await gathered(staged);
  if (after.length === 0) return null;
  const compared = compare(before, after, options);
  const items = itemsOf(compared);
  const counts = countsOf(compared, items);
  const listed = items.slice(0, LINEAGE_LISTED);
  return {
    lineage: { counts, items: listed, listed_all: listed.length === items.length, valid_to: lastDayOf(options) },
    findings: findingsOf(compared, items),
  };
}

/**
 * Keeps the rows of the parcels that an import ends, reshapes or recodes, as they stand before it is applied. Must run before the parcels
 * are written.
 *
 * @param staged the parcels of the import, in any pieces
 * @returns rows kept
 */
export async function recordHistory(
  tx: Tx,
  own: ImportKey,
  staged: AsyncIterable<readonly StagedGround[]>,
  options: Options,
): Promise<number> {
  const before = await storedGround(tx, own.districtId);
  if (before.length === 0) return 0;
  const after = await gathered(staged);
  const compared = compare(before, after, options);
  const ended = before
    .map((ground, at) => ({ ground, descent: compared.lineage.descents[at] }))
    .filter(({ ground, descent }) => compared.ends(ground.code) && descent.change !== 'unchanged');
  const version = (await findWholeDistrict(tx, own.districtId))?.geometryVersion ?? 1;
  for (let from = 0; from < ended.length; from += PAGE) {
    const page = ended.slice(from, from + PAGE).map(({ ground, descent }) => ({
      code: ground.code,
      change: keptAs(descent.change),
      successors: successorsOf(descent, after),
    }));
    await keepParcels(tx, own, page, { validTo: lastDayOf(options), version });
  }
  return ended.length;
}

/** The same ground under another code is kept as reshaped; its one successor with all of its area tells. */
function keptAs(change: GroundChange): EndedParcel['change'] {
  return change === 'recoded' || change === 'unchanged' ? 'reshaped' : change;
}

interface Compared {
  readonly before: readonly Ground[];
  readonly after: readonly Ground[];
  readonly lineage: Lineage;
  /** true when the import replaces or removes the stored parcel of a code */
  readonly ends: (code: string) => boolean;
}

function compare(before: readonly Ground[], after: readonly Ground[], options: Options): Compared {
  const codes = new Set(after.map(({ code }) => code));
  const ends = (code: string) => options.replace === true || codes.has(code);
  return { before, after, lineage: lineageOf(before, after), ends };
}

async function storedGround(tx: Tx, districtId: string): Promise<Ground[]> {
  const all: Ground[] = [];
  for (let after: string | null = null; ; ) {
    const page: Awaited<ReturnType<typeof listParcelGround>> = await listParcelGround(tx, districtId, after, PAGE);
    for (const row of page) all.push(groundOf(row));
    if (page.length < PAGE) return all;
    after = page[page.length - 1].code;
  }
}

async function gathered(staged: AsyncIterable<readonly StagedGround[]>): Promise<Ground[]> {
  const all: Ground[] = [];
  for await (const piece of staged) for (const one of piece) all.push(groundOf(one));
  return all;
}

function groundOf({ code, geometry, area }: StagedGround): Ground {
  return { code, area, shape: planeShape(geometry) };
}

const ORDER: readonly LineageItem['change'][] = ['overlaid', 'vanished', 'split', 'merged', 'recoded', 'reshaped', 'new'];

function itemsOf({ before, after, lineage, ends }: Compared): LineageItem[] {
  const items: LineageItem[] = [];
  for (const [at, { code, area }] of before.entries()) {
    const descent = lineage.descents[at];
    if (descent.change === 'unchanged') continue;
    if (!ends(code) && descent.change === 'vanished') continue;
    items.push({
      change: ends(code) ? descent.change : 'overlaid',
      code,
      area_ha: hectares(area),
      successors: successorsOf(descent, after),
    });
  }
  for (const index of lineage.fresh)
    items.push({ change: 'new', code: after[index].code, area_ha: hectares(after[index].area), successors: [] });
  const order = new Map(ORDER.map((change, place) => [change, place]));
  return items.sort((a, b) => (order.get(a.change) ?? 0) - (order.get(b.change) ?? 0));
}

function successorsOf({ successors }: Descent, after: readonly Ground[]): { code: string; share: number }[] {
  return successors.map(({ index, share }) => ({ code: after[index].code, share: Math.round(share * DIGITS) / DIGITS }));
}

function countsOf({ lineage }: Compared, items: readonly LineageItem[]): LineageSummary['counts'] {
  const counts = { unchanged: 0, recoded: 0, reshaped: 0, split: 0, merged: 0, vanished: 0, new: 0, overlaid: 0 };
  for (const { change } of items) counts[change]++;
  counts.unchanged = lineage.descents.filter(({ change }) => change === 'unchanged').length;
  return counts;
}

function lastDayOf({ validFrom }: Options): string | null {
  return validFrom === undefined ? null : addDays(validFrom, -1);
}

function hectares(area: number): number {
  return Math.round(area) / 10_000;
}

function findingsOf(compared: Compared, items: readonly LineageItem[]): Finding[] {
  const findings: Finding[] = [];
  const overlaid = items.filter(({ change }) => change === 'overlaid');
  if (overlaid.length > 0)
    findings.push({
      severity: 'warning',
      code: 'parcels-overlaid',
      message: `${counted(overlaid.length, 'stored parcel stays', 'stored parcels stay')} although parcels of the file lie on the same ground: ${named(overlaid)}. Water would be counted twice there.`,
      advice: 'Import with replacing, so that parcels that are not in the file are removed.',
    });
  const moved = movedCodes(compared);
  if (moved.length > 0)
    findings.push({
      severity: 'warning',
      code: 'parcel-code-moved',
      message: `${counted(moved.length, 'parcel has a code', 'parcels have codes')} that until now stood on other ground: ${named(moved)}. Plantings and codes stored under it would move along.`,
      advice: 'Check that the codes of the file are those of the district.',
    });
  return findings;
}

/** Codes that both generations have, on ground that does not meet. */
function movedCodes({ before, after, lineage }: Compared): { code: string }[] {
  const later = new Map(after.map(({ code }, index) => [code, index]));
  return before.filter(({ code }, at) => {
    const index = later.get(code);
    return index !== undefined && !lineage.descents[at].successors.some((one) => one.index === index);
  });
}

function named(list: readonly { readonly code: string }[]): string {
  const codes = list.slice(0, NAMED).map(({ code }) => code);
  return `${codes.join(', ')}${list.length > NAMED ? ' …' : ''}`;
}
