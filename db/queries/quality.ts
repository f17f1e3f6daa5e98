/** Flags of the quality desk, the decisions laid over the record, and what the last check of each source found. */
import { and, asc, desc, eq, gte, inArray, isNotNull, isNull, lte, type SQL, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { site, weatherCheck, weatherCorrection, weatherFlag, weatherSource } from '../schema/weather.ts';

export type FlagRow = typeof weatherFlag.$inferSelect;
export type NewFlagRow = typeof weatherFlag.$inferInsert;
export type CorrectionRow = typeof weatherCorrection.$inferSelect;

const INSERT_ROWS = 500;

/** Flags of a source, all of them. */
export function listSourceFlags(tx: Tx, districtId: string, sourceId: number): Promise<FlagRow[]> {
  return tx
    .select()
    .from(weatherFlag)
    .where(and(eq(weatherFlag.districtId, districtId), eq(weatherFlag.sourceId, sourceId)));
}

/** Puts the flags of a source in the place of those it had. */
export async function replaceFlags(tx: Tx, districtId: string, sourceId: number, rows: readonly NewFlagRow[]): Promise<void> {
  await tx.delete(weatherFlag).where(and(eq(weatherFlag.districtId, districtId), eq(weatherFlag.sourceId, sourceId)));
  for (let at = 0; at < rows.length; at += INSERT_ROWS) await tx.insert(weatherFlag).values(rows.slice(at, at + INSERT_ROWS));
}

/** Open flags of some rules that touch the days, for the quality of values. */
export function listOpenFlags(
  tx: Tx,
  districtId: string,
  wanted: { sourceIds: readonly number[]; rules: readonly string[]; from: string; to: string },
) {
  return tx
    .select({
      sourceId: weatherFlag.sourceId,
      ordinal: weatherFlag.ordinal,
      variable: weatherFlag.variable,
      firstDay: weatherFlag.firstDay,
      lastDay: weatherFlag.lastDay,
    })
    .from(weatherFlag)
    .where(
      and(
        eq(weatherFlag.districtId, districtId),
        inArray(weatherFlag.sourceId, [...wanted.sourceIds]),
        inArray(weatherFlag.rule, [...wanted.rules]),
        inArray(weatherFlag.severity, ['suspect', 'impossible']),
        eq(weatherFlag.state, 'open'),
        lte(weatherFlag.firstDay, wanted.to),
        gte(weatherFlag.lastDay, wanted.from),
      ),
    );
}

/** Marks flags of a site that a decision settles: of its rule, or every one of the rules named, within or across its days. */
export async function settleFlags(
  tx: Tx,
  districtId: string,
  wanted: {
    sourceId: number;
    ordinal: number;
    variables: readonly string[];
    from: string;
    to: string;
    rules: readonly string[];
    state: 'accepted' | 'corrected' | 'rejected';
    correctionId: string;
    /** true: also flags that reach beyond the days of the decision */
    across: boolean;
  },
): Promise<void> {
  const { sourceId, ordinal, from, to, across, state, correctionId } = wanted;
  await tx
    .update(weatherFlag)
    .set({ state, correctionId })
    .where(
      and(
        eq(weatherFlag.districtId, districtId),
        eq(weatherFlag.sourceId, sourceId),
        eq(weatherFlag.ordinal, ordinal),
        inArray(weatherFlag.variable, [...wanted.variables]),
        inArray(weatherFlag.rule, [...wanted.rules]),
        across ? lte(weatherFlag.firstDay, to) : gte(weatherFlag.firstDay, from),
        across ? gte(weatherFlag.lastDay, from) : lte(weatherFlag.lastDay, to),
      ),
    );
}

/** Opens the flags again that a decision had settled. */
export async function reopenFlags(tx: Tx, districtId: string, correctionId: string): Promise<void> {
  await tx
    .update(weatherFlag)
    .set({ state: 'open', correctionId: null })
    .where(and(eq(weatherFlag.districtId, districtId), eq(weatherFlag.correctionId, correctionId)));
}

export interface FlagFilter {
  readonly source?: string;
  readonly site?: string;
  readonly variable?: string;
  readonly rule?: string;
  readonly state?: string;
  readonly severity?: string;
  readonly from?: string;
  readonly to?: string;
}

function flagsWhere(districtId: string, filter: FlagFilter): SQL | undefined {
  const same = (column: Parameters<typeof eq>[0], value: string | undefined) => (value === undefined ? undefined : eq(column, value));
  return and(
    eq(weatherFlag.districtId, districtId),
    same(weatherSource.name, filter.source),
    same(site.code, filter.site),
    same(weatherFlag.variable, filter.variable),
    same(weatherFlag.rule, filter.rule),
    same(weatherFlag.state, filter.state),
    same(weatherFlag.severity, filter.severity),
    filter.to ? lte(weatherFlag.firstDay, filter.to) : undefined,
    filter.from ? gte(weatherFlag.lastDay, filter.from) : undefined,
  );
}

const SEVERITY_RANK = sql<number>`(case ${weatherFlag.severity} when 'impossible' then 0 when 'suspect' then 1 else 2 end)`;

/** Flags with their site and source: the gravest first, then the latest. Skips `offset` of them. */
export function listFlags(tx: Tx, districtId: string, filter: FlagFilter, page: { limit: number; offset: number }) {
  const rows = tx
    .select({ flag: weatherFlag, source: weatherSource.name, site: site.code, siteName: site.name })
    .from(weatherFlag)
    .innerJoin(
      site,
      and(eq(site.districtId, weatherFlag.districtId), eq(site.sourceId, weatherFlag.sourceId), eq(site.ordinal, weatherFlag.ordinal)),
    )
    .innerJoin(weatherSource, and(eq(weatherSource.districtId, weatherFlag.districtId), eq(weatherSource.sourceId, weatherFlag.sourceId)))
    .where(flagsWhere(districtId, filter))
    .orderBy(
      SEVERITY_RANK,
      desc(weatherFlag.lastDay),
      asc(weatherFlag.sourceId),
      asc(weatherFlag.ordinal),
      asc(weatherFlag.variable),
      asc(weatherFlag.rule),
      desc(weatherFlag.firstDay),
    )
    .offset(page.offset);
  return page.limit >= Number.MAX_SAFE_INTEGER ? rows : rows.limit(page.limit);
}

export type ListedFlag = Awaited<ReturnType<typeof listFlags>>[number];

/** How many flags there are by rule, site, severity and state. */
export function countFlags(tx: Tx, districtId: string, filter: FlagFilter = {}) {
  return tx
    .select({
      source: weatherSource.name,
      site: site.code,
      rule: weatherFlag.rule,
      severity: weatherFlag.severity,
      state: weatherFlag.state,
      count: sql<number>`count(*)::int`,
      days: sql<number>`sum(${weatherFlag.lastDay} - ${weatherFlag.firstDay} + 1)::int`,
    })
    .from(weatherFlag)
    .innerJoin(
      site,
      and(eq(site.districtId, weatherFlag.districtId), eq(site.sourceId, weatherFlag.sourceId), eq(site.ordinal, weatherFlag.ordinal)),
    )
    .innerJoin(weatherSource, and(eq(weatherSource.districtId, weatherFlag.districtId), eq(weatherSource.sourceId, weatherFlag.sourceId)))
    .where(flagsWhere(districtId, filter))
    .groupBy(weatherSource.name, site.code, weatherFlag.rule, weatherFlag.severity, weatherFlag.state);
}

/** Standing decisions on sources, in the order in which they were made. */
export function listStandingCorrections(
  tx: Tx,
  districtId: string,
  wanted: { sourceIds: readonly number[]; from?: string; to?: string },
): Promise<CorrectionRow[]> {
  if (wanted.sourceIds.length === 0) return Promise.resolve([]);
  return tx
    .select()
    .from(weatherCorrection)
    .where(
      and(
        eq(weatherCorrection.districtId, districtId),
        inArray(weatherCorrection.sourceId, [...wanted.sourceIds]),
        isNull(weatherCorrection.undoneAt),
        wanted.to ? lte(weatherCorrection.fromDay, wanted.to) : undefined,
        wanted.from ? gte(weatherCorrection.toDay, wanted.from) : undefined,
      ),
    )
    .orderBy(asc(weatherCorrection.sequence));
}

/** Decisions with their site and source, the newest first; undone ones stay in the list. */
export function listCorrections(
  tx: Tx,
  districtId: string,
  filter: { source?: string; site?: string; variable?: string; standing?: boolean },
  page: { limit: number; before?: number },
) {
  const rows = tx
    .select({ correction: weatherCorrection, source: weatherSource.name, site: site.code, siteName: site.name })
    .from(weatherCorrection)
    .innerJoin(
      site,
      and(
        eq(site.districtId, weatherCorrection.districtId),
        eq(site.sourceId, weatherCorrection.sourceId),
        eq(site.ordinal, weatherCorrection.ordinal),
      ),
    )
    .innerJoin(
      weatherSource,
      and(eq(weatherSource.districtId, weatherCorrection.districtId), eq(weatherSource.sourceId, weatherCorrection.sourceId)),
    )
    .where(
      and(
        eq(weatherCorrection.districtId, districtId),
        filter.source === undefined ? undefined : eq(weatherSource.name, filter.source),
        filter.site === undefined ? undefined : eq(site.code, filter.site),
        filter.variable === undefined ? undefined : eq(weatherCorrection.variable, filter.variable),
        filter.standing === undefined
          ? undefined
          : filter.standing
            ? isNull(weatherCorrection.undoneAt)
            : isNotNull(weatherCorrection.undoneAt),
        page.before === undefined ? undefined : sql`${weatherCorrection.sequence} < ${page.before}`,
      ),
    )
    .orderBy(desc(weatherCorrection.sequence));
  return page.limit >= Number.MAX_SAFE_INTEGER ? rows : rows.limit(page.limit);
}

export type ListedCorrection = Awaited<ReturnType<typeof listCorrections>>[number];

export async function findCorrection(tx: Tx, districtId: string, correctionId: string): Promise<CorrectionRow | null> {
  const [row] = await tx
    .select()
    .from(weatherCorrection)
    .where(and(eq(weatherCorrection.districtId, districtId), eq(weatherCorrection.correctionId, correctionId)));
  return row ?? null;
}

/** Takes turns with other decisions of the district, so that each has a place of its own in their order. */
export async function holdCorrections(tx: Tx, districtId: string): Promise<void> {
  await tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${`corrections ${districtId}`}, 7240113))`);
}

/** Adds a decision after all others. Call it while the decisions are held. */
export async function insertCorrection(tx: Tx, values: Omit<typeof weatherCorrection.$inferInsert, 'sequence'>): Promise<CorrectionRow> {
  const [{ next }] = await tx
    .select({ next: sql<number>`(coalesce(max(${weatherCorrection.sequence}), 0) + 1)::int` })
    .from(weatherCorrection)
    .where(eq(weatherCorrection.districtId, values.districtId));
  const [row] = await tx
    .insert(weatherCorrection)
    .values({ ...values, sequence: next })
    .returning();
  return row;
}

/** Marks a decision as undone; false when it already was. */
export async function markUndone(tx: Tx, districtId: string, correctionId: string, who: string): Promise<boolean> {
  const rows = await tx
    .update(weatherCorrection)
    .set({ undoneBy: who, undoneAt: sql`now()` })
    .where(
      and(
        eq(weatherCorrection.districtId, districtId),
        eq(weatherCorrection.correctionId, correctionId),
        isNull(weatherCorrection.undoneAt),
      ),
    )
    .returning({ id: weatherCorrection.correctionId });
  return rows.length > 0;
}

export async function saveCheck(tx: Tx, districtId: string, sourceId: number, summary: unknown): Promise<void> {
  await tx
    .insert(weatherCheck)
    .values({ districtId, sourceId, summary })
    .onConflictDoUpdate({ target: [weatherCheck.districtId, weatherCheck.sourceId], set: { summary, checkedAt: sql`now()` } });
}

/** What the last check of each source found; sources never checked are not listed. */
export function listChecks(tx: Tx, districtId: string) {
  return tx
    .select({ sourceId: weatherCheck.sourceId, checkedAt: weatherCheck.checkedAt, summary: weatherCheck.summary })
    .from(weatherCheck)
    .where(eq(weatherCheck.districtId, districtId))
    .orderBy(asc(weatherCheck.sourceId));
}
