/** Feeds and what they fetched. */
import { and, asc, desc, eq, getTableColumns, inArray, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { type ImportState, importJob } from '../schema/import.ts';
import { feedFetch, weatherFeed } from '../schema/weather.ts';
import { storable, storableText } from './json-text.ts';

export type FeedRow = typeof weatherFeed.$inferSelect;
export type FetchRow = typeof feedFetch.$inferSelect;
export type FeedValues = Omit<typeof weatherFeed.$inferInsert, 'districtId' | 'feedId'>;

const one = (districtId: string, feedId: string) => and(eq(weatherFeed.districtId, districtId), eq(weatherFeed.feedId, feedId));
const isUuid = (text: string) => /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i.test(text);

export function listFeeds(tx: Tx, districtId: string): Promise<FeedRow[]> {
  return tx.select().from(weatherFeed).where(eq(weatherFeed.districtId, districtId)).orderBy(asc(weatherFeed.name));
}

export async function findFeed(tx: Tx, districtId: string, feedId: string): Promise<FeedRow | null> {
  if (!isUuid(feedId)) return null;
  const [row] = await tx.select().from(weatherFeed).where(one(districtId, feedId));
  return row ?? null;
}

/** Answers the new feed, or null when the name is taken. */
export async function insertFeed(tx: Tx, districtId: string, values: FeedValues): Promise<FeedRow | null> {
  const [row] = await tx
    .insert(weatherFeed)
    .values({ districtId, ...values, options: storable(values.options ?? {}) })
    .onConflictDoNothing({ target: [weatherFeed.districtId, weatherFeed.name] })
    .returning();
  return row ?? null;
}

export async function updateFeed(tx: Tx, districtId: string, feedId: string, values: Partial<FeedValues>): Promise<FeedRow | null> {
  const [row] = await tx.update(weatherFeed).set(values).where(one(districtId, feedId)).returning();
  return row ?? null;
}

export async function deleteFeed(tx: Tx, districtId: string, feedId: string): Promise<boolean> {
  if (!isUuid(feedId)) return false;
  const rows = await tx.delete(weatherFeed).where(one(districtId, feedId)).returning({ feedId: weatherFeed.feedId });
  return rows.length > 0;
}

export async function insertFetch(tx: Tx, values: typeof feedFetch.$inferInsert): Promise<string> {
  const error = typeof values.error === 'string' ? storableText(values.error) : values.error;
  const [row] = await tx
    .insert(feedFetch)
    .values({ ...values, address: storableText(values.address), error })
    .returning({ fetchId: feedFetch.fetchId });
  return row.fetchId;
}

/** The last time that an address answered with a file or said that it had not changed. */
export async function findLastAnswer(tx: Tx, districtId: string, feedId: string, address: string): Promise<FetchRow | null> {
  const [row] = await tx
    .select()
    .from(feedFetch)
    .where(
      and(
        eq(feedFetch.districtId, districtId),
        eq(feedFetch.feedId, feedId),
        eq(feedFetch.address, address),
        inArray(feedFetch.outcome, ['new', 'changed', 'unchanged']),
      ),
    )
    .orderBy(desc(feedFetch.at))
    .limit(1);
  return row ?? null;
}

/** Newest first, each with the state of the import it made. */
export function listFetches(
  tx: Tx,
  districtId: string,
  feedId: string,
  limit: number,
): Promise<(FetchRow & { importState: ImportState | null })[]> {
  return tx
    .select({ ...getTableColumns(feedFetch), importState: importJob.state })
    .from(feedFetch)
    .leftJoin(importJob, and(eq(importJob.districtId, feedFetch.districtId), eq(importJob.importId, feedFetch.importId)))
    .where(and(eq(feedFetch.districtId, districtId), eq(feedFetch.feedId, feedId)))
    .orderBy(desc(feedFetch.at))
    .limit(limit);
}

/** Keeps the newest answers of a feed: old ones of addresses that are no more asked for go. */
export async function trimFetches(tx: Tx, districtId: string, feedId: string, keep: number): Promise<void> {
  await tx.execute(sql`delete from feed_fetch where district_id = ${districtId}::uuid and feed_id = ${feedId}::uuid
    and fetch_id not in (select fetch_id from feed_fetch where district_id = ${districtId}::uuid and feed_id = ${feedId}::uuid
      order by at desc limit ${keep})`);
}
