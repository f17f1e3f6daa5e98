/** Runs whose inputs have changed under them. */
import { and, eq, gte, inArray, lte, or, type SQL, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import type { FieldQuantity } from '../schema/land.ts';
import { run } from '../schema/run.ts';

/**
 * Marks the standing runs of some seasons, and those that are being computed from what was, as stale. Called in the transaction of the change, so that
 * readers are never shown old numbers as new. The first reason stays.
 *
 * @param reason in a few words, as a reader is told: "import of weather applied"
 */
export async function markRunsStale(tx: Tx, districtId: string, seasons: readonly string[], reason: string): Promise<void> {
  if (seasons.length === 0) return;
  await tx
    .update(run)
    .set({ staleSince: sql`coalesce(${run.staleSince}, now())`, staleReason: sql`coalesce(${run.staleReason}, ${reason})` })
    .where(
      and(eq(run.districtId, districtId), inArray(run.seasonCode, [...seasons]), or(eq(run.standing, true), eq(run.state, 'running'))),
    );
}

/** Seasons whose standing run has days to come: any new weather may replace them, or move their normals. */
export async function listSeasonsAhead(tx: Tx, districtId: string): Promise<string[]> {
  const rows = await tx
    .select({ code: run.seasonCode })
    .from(run)
    .where(
      and(
        eq(run.districtId, districtId),
        or(eq(run.standing, true), eq(run.state, 'running')),
        sql`${run.manifest} -> 'days_ahead' ->> 'first_ahead' is not null`,
      ),
    );
  return [...new Set(rows.map(({ code }) => code))];
}

/** Records that were changed, with their first and last day. */
interface ChangedRecords {
  /** deliveries, or quantities that were measured */
  readonly what: 'deliveries' | readonly FieldQuantity[];
  readonly from: string;
  readonly to: string;
}

/** Days before a season whose water contents can tell its first morning, and before its first day stepped whose water tables count; see `lib/jobs`. */
const [MORNING, TABLE] = [14, 366];

/** Seasons whose standing run, or the one being computed, takes some changed records. */
export async function listSeasonsOnRecords(tx: Tx, districtId: string, changed: ChangedRecords): Promise<string[]> {
  const takes =
    changed.what === 'deliveries' ? takesDeliveries(changed) : or(...changed.what.map((quantity) => takesMeasured(quantity, changed)));
  const rows = await tx
    .select({ code: run.seasonCode })
    .from(run)
    .where(and(eq(run.districtId, districtId), or(eq(run.standing, true), eq(run.state, 'running')), takes));
  return [...new Set(rows.map(({ code }) => code))];
}

/** First day stepped. */
const steppedFrom = sql`(${run.startDate} - coalesce((${run.manifest} -> 'records' -> 'initial_state' ->> 'lead_days')::int, 0))`;

function takesDeliveries({ from, to }: ChangedRecords): SQL | undefined {
  return and(sql`coalesce(${run.settings} ->> 'water', 'rule') <> 'rule'`, gte(run.endDate, from), sql`${steppedFrom} <= ${to}::date`);
}

function takesMeasured(quantity: FieldQuantity, { from, to }: ChangedRecords): SQL | undefined {
  if (quantity === 'efficiency') return gte(run.endDate, from);
  if (quantity === 'soil_salinity_ds_m' || quantity === 'water_salinity_ds_m')
    return and(sql`coalesce(${run.settings} ->> 'salinity', 'off') <> 'off'`, gte(run.startDate, from));
  if (quantity === 'water_table_depth_m')
    return and(
      sql`coalesce((${run.settings} ->> 'capillary_rise')::boolean, false)`,
      gte(run.endDate, from),
      sql`${steppedFrom} - ${TABLE}::int <= ${to}::date`,
    );
  return and(
    sql`${run.settings} ->> 'initial_state' = 'measured'`,
    gte(run.startDate, from),
    lte(sql`${run.startDate} - ${MORNING}::int`, sql`${to}::date`),
  );
}

/**
 * Seasons whose standing run carried its soil water over from a season that has a newer run now.
 *
 * @param runId the newer run
 */
export async function listSeasonsCarriedFrom(tx: Tx, districtId: string, seasonCode: string, runId: string): Promise<string[]> {
  const from = sql`${run.manifest} -> 'records' -> 'initial_state' -> 'carried_from'`;
  const rows = await tx
    .select({ code: run.seasonCode })
    .from(run)
    .where(
      and(
        eq(run.districtId, districtId),
        or(eq(run.standing, true), eq(run.state, 'running')),
        sql`${from} ->> 'season' = ${seasonCode}`,
        sql`${from} ->> 'run' <> ${runId}`,
      ),
    );
  return [...new Set(rows.map(({ code }) => code))];
}
