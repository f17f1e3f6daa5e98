/** The acts on feeds: make, change, remove, have one take its turn now. */
import { deleteFeed, type FeedRow, type FeedValues, findFeed, insertFeed, updateFeed } from '../../../db/queries/feeds.ts';
import { findDistrict } from '../../../db/queries/run-inputs.ts';
import { database } from '../../access/database.ts';
import { Conflict, NotFound } from '../../base/errors.ts';
import { enqueue } from '../queue.ts';
import { checkTemplate, filled, nextTime } from './address.ts';
import { type FeedTurn, putTurn } from './feed-turn.ts';
import { checkPattern, districtFolder } from './folder.ts';
import { checkAddress } from './safe-fetch.ts';

interface FeedActor {
  readonly districtId: string;
  readonly name: string;
}

export type FeedWanted = Pick<
  FeedValues,
  'name' | 'kind' | 'from' | 'template' | 'options' | 'schedule' | 'lookBack' | 'enabled' | 'applyAutomatically'
>;

/** @throws Refused for a template, folder or schedule that cannot be used; Conflict when the name is taken */
export async function makeFeed(who: FeedActor, wanted: FeedWanted): Promise<FeedRow> {
  return database().inDistrict(who.districtId, async (tx) => {
    const district = await findDistrict(tx, who.districtId);
    if (!district) throw new NotFound('this district is gone');
    checkFeed(wanted, district.code);
    const due = nextTime(wanted.schedule, district.timeZone, new Date());
    const nextAt = wanted.enabled === false ? null : due;
    const feed = await insertFeed(tx, who.districtId, { ...wanted, nextAt, createdBy: who.name });
    if (!feed) throw new Conflict(`There is a feed named "${wanted.name}" already: give another name, or change that one.`);
    if (nextAt) await putTurn(tx, feed);
    return feed;
  });
}

/** @throws as `makeFeed`, and NotFound */
export async function changeFeed(who: FeedActor, feedId: string, change: Partial<FeedWanted>): Promise<FeedRow> {
  return database().inDistrict(who.districtId, async (tx) => {
    const district = await findDistrict(tx, who.districtId);
    const feed = await findFeed(tx, who.districtId, feedId);
    if (!feed || !district) throw notFound(feedId);
    const merged = { ...feed, ...change };
    checkFeed(merged, district.code);
    const due = nextTime(merged.schedule, district.timeZone, new Date());
    const nextAt = merged.enabled ? due : null;
    const changed = await updateFeed(tx, who.districtId, feedId, { ...change, nextAt, failures: 0 });
    if (!changed) throw notFound(feedId);
    if (nextAt) await putTurn(tx, changed);
    return changed;
  });
}

function checkFeed(feed: Pick<FeedWanted, 'from' | 'template'>, districtCode: string): void {
  checkTemplate(feed.template);
  const example = filled(feed.template, '2024-02-29');
  if (feed.from === 'url') checkAddress(example);
  else {
    districtFolder(districtCode);
    checkPattern(example);
  }
}

/** Removes a feed; what it brought stays. @throws NotFound */
export async function removeFeed(who: FeedActor, feedId: string): Promise<void> {
  const removed = await database().inDistrict(who.districtId, (tx) => deleteFeed(tx, who.districtId, feedId));
  if (!removed) throw notFound(feedId);
}

/** Has a feed take a turn at once, beside its schedule. @throws NotFound */
export async function fetchNow(who: FeedActor, feedId: string): Promise<void> {
  await database().inDistrict(who.districtId, async (tx) => {
    const feed = await findFeed(tx, who.districtId, feedId);
    if (!feed) throw notFound(feedId);
    await enqueue('feed-turn', { districtId: who.districtId, feedId, at: null }, { tx, singletonKey: `${feedId} now` });
  });
}

/** Puts the next turn of a feed in whose last one was given up. */
export async function settleFeed(turn: FeedTurn): Promise<void> {
  await database().inDistrict(turn.districtId, async (tx) => {
    const district = await findDistrict(tx, turn.districtId);
    const feed = await findFeed(tx, turn.districtId, turn.feedId);
    if (!district || !feed?.enabled || feed.nextAt?.toISOString() !== turn.at) return;
    const nextAt = nextTime(feed.schedule, district.timeZone, new Date());
    const changed = await updateFeed(tx, turn.districtId, turn.feedId, { nextAt, failures: feed.failures + 1 });
    if (changed) await putTurn(tx, changed);
  });
}

function notFound(feedId: string): NotFound {
  return new NotFound(`There is no feed ${feedId} in this district.`);
}
