/** Everything a run is a function of, as it stands now. */
import { and, asc, desc, eq, lt, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { district } from '../schema/district.ts';
import { crop, cropCalendar, reach, season, turnout } from '../schema/land.ts';
import { run, runParcel } from '../schema/run.ts';
import { textArray } from './district-read.ts';
import { listMethods, listSoils, REACH_COLUMNS } from './land-read.ts';

export async function findDistrict(tx: Tx, districtId: string) {
  const [row] = await tx.select().from(district).where(eq(district.districtId, districtId));
  return row ?? null;
}

export async function findSeason(tx: Tx, districtId: string, code: string) {
  const [row] = await tx
    .select()
    .from(season)
    .where(and(eq(season.districtId, districtId), eq(season.code, code)));
  return row ?? null;
}

export function listSeasonDates(tx: Tx, districtId: string) {
  return tx
    .select({ code: season.code, startDate: season.startDate, endDate: season.endDate })
    .from(season)
    .where(eq(season.districtId, districtId));
}

/** The standing run of the latest season that ends before a day; null where none stands. */
export async function findRunBefore(tx: Tx, districtId: string, startDate: string) {
  const [row] = await tx
    .select({ runId: run.runId, seasonCode: run.seasonCode, endDate: run.endDate, staleSince: run.staleSince })
    .from(run)
    .where(and(eq(run.districtId, districtId), eq(run.standing, true), lt(run.endDate, startDate)))
    .orderBy(desc(run.endDate))
    .limit(1);
  return row ?? null;
}

/** What a run left in the soil of some parcels; parcels of which it kept nothing are left out. */
export function listClosings(tx: Tx, districtId: string, runId: string, codes: readonly string[]) {
  return tx
    .select({ parcelCode: runParcel.parcelCode, closing: runParcel.closing })
    .from(runParcel)
    .where(
      and(
        eq(runParcel.districtId, districtId),
        eq(runParcel.runId, runId),
        sql`${runParcel.parcelCode} = any(${textArray(codes)})`,
        sql`${runParcel.closing} is not null`,
      ),
    );
}

/** The libraries of the district: soils, methods, crops, calendars. */
export async function listLibraries(tx: Tx, districtId: string) {
  const [soils, methods, crops, calendars] = await Promise.all([
    listSoils(tx, districtId),
    listMethods(tx, districtId),
    tx.select().from(crop).where(eq(crop.districtId, districtId)).orderBy(asc(crop.code)),
    tx.select().from(cropCalendar).where(eq(cropCalendar.districtId, districtId)).orderBy(asc(cropCalendar.code)),
  ]);
  return { soils, methods, crops, calendars };
}

export function listReaches(tx: Tx, districtId: string) {
  return tx.select(REACH_COLUMNS).from(reach).where(eq(reach.districtId, districtId)).orderBy(asc(reach.code));
}

export function listTurnouts(tx: Tx, districtId: string) {
  return tx.select().from(turnout).where(eq(turnout.districtId, districtId)).orderBy(asc(turnout.code));
}
