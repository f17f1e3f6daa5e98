/** Feeds as the API and the pages show them. */
import { type FeedRow, type FetchRow, findFeed, listFeeds, listFetches } from '../../../db/queries/feeds.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { Forbidden, NotFound } from '../../base/errors.ts';
import { changeFeed, fetchNow, makeFeed, removeFeed } from '../../jobs/feeds/feeds.ts';
import type { FeedAnswer, FeedPatch, FeedRequest, FetchAnswer } from '../contract/feeds.ts';
import { importOptions } from '../operations/imports.ts';
import { malformedFrom } from '../problem.ts';

const LISTED = 200;

export async function answerFeeds(caller: Caller): Promise<FeedAnswer[]> {
  refuseGrower(caller);
  return database().inDistrict(caller.districtId, async (tx) => {
    const answers: FeedAnswer[] = [];
    for (const row of await listFeeds(tx, caller.districtId)) {
      const [last] = await listFetches(tx, caller.districtId, row.feedId, 1);
      answers.push(feedMembers(row, last));
    }
    return answers;
  });
}

/** @throws NotFound */
export async function answerFeed(caller: Caller, id: string): Promise<FeedAnswer> {
  const feed = (await answerFeeds(caller)).find((each) => each.id === id);
  if (!feed) throw new NotFound(`There is no feed ${id} in this district.`);
  return feed;
}

export async function createFeed(caller: Caller, wanted: FeedRequest): Promise<FeedAnswer> {
  const { look_back_days: lookBack, apply_automatically: applyAutomatically, ...rest } = wanted;
  checkOptions(wanted.options);
  const row = await makeFeed(actor(caller), { ...rest, lookBack, applyAutomatically });
  return answerFeed(caller, row.feedId);
}

export async function patchFeed(caller: Caller, id: string, wanted: FeedPatch): Promise<FeedAnswer> {
  const { look_back_days: lookBack, apply_automatically: applyAutomatically, ...rest } = wanted;
  if (wanted.options) checkOptions(wanted.options);
  await changeFeed(actor(caller), id, {
    ...rest,
    ...(lookBack === undefined ? {} : { lookBack }),
    ...(applyAutomatically === undefined ? {} : { applyAutomatically }),
  });
  return answerFeed(caller, id);
}

export async function deleteFeedOf(caller: Caller, id: string): Promise<{ removed: true }> {
  await removeFeed(actor(caller), id);
  return { removed: true };
}

export async function fetchFeedNow(caller: Caller, id: string): Promise<FeedAnswer> {
  await fetchNow(actor(caller), id);
  return answerFeed(caller, id);
}

/** @throws NotFound */
export async function answerFetches(caller: Caller, id: string): Promise<FetchAnswer[]> {
  refuseGrower(caller);
  return database().inDistrict(caller.districtId, async (tx) => {
    if (!(await findFeed(tx, caller.districtId, id))) throw new NotFound(`There is no feed ${id} in this district.`);
    return (await listFetches(tx, caller.districtId, id, LISTED)).map(fetchMembers);
  });
}

function actor(caller: Caller) {
  return { districtId: caller.districtId, name: caller.name };
}

function refuseGrower(caller: Caller): void {
  if (caller.parcels !== null) throw new Forbidden('Feeds belong to the whole district: the role "grower" may not see them.');
}

function checkOptions(options: unknown): void {
  const checked = importOptions.safeParse(options);
  if (!checked.success) throw malformedFrom(checked.error, 'member "options"');
}

function feedMembers(row: FeedRow, last: FetchRow | undefined): FeedAnswer {
  return {
    id: row.feedId,
    name: row.name,
    kind: row.kind,
    from: row.from,
    template: row.template,
    options: row.options as Record<string, unknown>,
    schedule: row.schedule,
    look_back_days: row.lookBack,
    enabled: row.enabled,
    apply_automatically: row.applyAutomatically,
    next_at: row.nextAt?.toISOString() ?? null,
    failures: row.failures,
    last_at: last?.at.toISOString() ?? null,
    last_outcome: last?.outcome ?? null,
    last_error: last?.error ?? null,
    created_by: row.createdBy,
  };
}

function fetchMembers(row: FetchRow & { importState: string | null }): FetchAnswer {
  return {
    id: row.fetchId,
    address: row.address,
    at: row.at.toISOString(),
    outcome: row.outcome,
    status: row.status,
    size_bytes: row.sizeBytes,
    sha256: row.sha256,
    import_id: row.importId,
    import_state: row.importState,
    error: row.error,
  };
}
