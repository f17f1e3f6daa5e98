/** What stood on a parcel's ground before imports changed it. */
import type { Tx } from '../../../db/connect.ts';
import { findParcel } from '../../../db/queries/land-read.ts';
import { listHistory } from '../../../db/queries/parcel-history.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { NotFound } from '../../base/errors.ts';
import { roundOrNull } from '../../base/missing.ts';
import { SAME_GROUND } from '../../geo/lineage.ts';
import type { HistoryItem, ParcelHistoryAnswer } from '../contract/land-places.ts';
import { isStorable } from '../storable-text.ts';

/** Most generations followed back. */
const GENERATIONS = 20;

type Row = Awaited<ReturnType<typeof listHistory>>[number];

/** @throws {NotFound} for a code that no parcel has or had, and for a parcel that the caller may not see. */
export async function answerParcelHistory(caller: Caller, code: string): Promise<ParcelHistoryAnswer> {
  const refused = new NotFound(`no parcel "${code}" in this district, now or before`);
  if (!isStorable(code) || (caller.parcels && !caller.parcels.includes(code))) throw refused;
  return database().inDistrict(caller.districtId, async (tx) => {
    const stands = (await findParcel(tx, caller.districtId, code)) !== null;
    const rows = await readLine(tx, caller.districtId, code);
    if (!stands && !rows.some((row) => row.parcelCode === code)) throw refused;
    return { parcel: code, stands, items: rows.map((row) => itemOf(row, caller.parcels)) };
  });
}

/** The rows of a code, and step by step those of the parcels whose ground came to it; the newest first. */
async function readLine(tx: Tx, districtId: string, code: string): Promise<Row[]> {
  const found = new Map<string, Row>();
  /** code → versions of the map before which its rows belong to this line */
  let wanted = new Map([[code, Number.POSITIVE_INFINITY]]);
  for (let generation = 0; generation < GENERATIONS && wanted.size > 0; generation++) {
    const next = new Map<string, number>();
    for (const row of await listHistory(tx, districtId, [...wanted.keys()])) {
      const heirs = [row.parcelCode, ...row.successors.map((one) => one.code)];
      const belongs = heirs.some((heir) => row.geometryVersion < (wanted.get(heir) ?? 0));
      if (!belongs || found.has(row.historyId)) continue;
      found.set(row.historyId, row);
      next.set(row.parcelCode, Math.max(next.get(row.parcelCode) ?? 0, row.geometryVersion));
    }
    wanted = next;
  }
  return [...found.values()].sort((a, b) => b.geometryVersion - a.geometryVersion || (a.parcelCode < b.parcelCode ? -1 : 1));
}

/** A grower sees no codes of others that stand there now. */
function itemOf(row: Row, own: readonly string[] | null): HistoryItem {
  const [heir] = row.successors;
  const recoded = row.change === 'reshaped' && heir && heir.code !== row.parcelCode && heir.share >= SAME_GROUND;
  return {
    parcel: row.parcelCode,
    change: recoded ? 'recoded' : row.change,
    area_ha: roundOrNull(row.area / 1e4, 6) ?? 0,
    valid_to: row.validTo,
    recorded_at: row.createdAt.toISOString(),
    geometry_version: row.geometryVersion,
    successors: row.successors.filter(({ code }) => own === null || own.includes(code)).map(({ code, share }) => ({ parcel: code, share })),
  };
}
