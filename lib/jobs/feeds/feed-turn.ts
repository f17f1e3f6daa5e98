/** One turn of a feed: every address or file that it names is looked at, what is new becomes an import, and the next turn is put in. */
import { createReadStream } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { type FeedRow, type FetchRow, findFeed, findLastAnswer, insertFetch, trimFetches, updateFeed } from '../../../db/queries/feeds.ts';
import { findDistrict } from '../../../db/queries/run-inputs.ts';
import { database } from '../../access/database.ts';
import { environment } from '../../access/environment.ts';
import { log } from '../../access/log.ts';
import { TillwaterError } from '../../base/errors.ts';
import type { ImportOptions } from '../../files/reading.ts';
import { createImport } from '../imports.ts';
import { enqueue, type JobData } from '../queue.ts';
import { makeReadingFolder, removeReadingFolder } from '../reading-folder.ts';
import { addressesOf, backOff, nextTime } from './address.ts';
import { districtFolder, listFolder, takeAside } from './folder.ts';
import { fetchTo } from './safe-fetch.ts';

export interface FeedTurn extends JobData {
  readonly feedId: string;
  /** the time the turn was put in for; a turn that the feed has moved on from is dropped. Null: asked for by hand */
  readonly at: string | null;
}

interface District {
  readonly code: string;
  readonly timeZone: string;
}

/** What came of one address. */
interface Taken {
  readonly outcome: FetchRow['outcome'];
  readonly status?: number | null;
  readonly etag?: string | null;
  readonly lastModified?: string | null;
  readonly sizeBytes?: number | null;
  readonly sha256?: string | null;
  readonly importId?: string | null;
  readonly error?: string | null;
}

const KEPT_FETCHES = 2000;
const TRIES = 3;
const FIRST_PAUSE_MS = 1000;
const LONGEST_PAUSE_S = 30;
const MEGABYTE = 1024 * 1024;

/** The job. */
export async function performFeedTurn(data: FeedTurn, job: { signal: AbortSignal }): Promise<void> {
  const found = await database().inDistrict(data.districtId, async (tx) => {
    const feed = await findFeed(tx, data.districtId, data.feedId);
    const district = await findDistrict(tx, data.districtId);
    return feed && district ? { feed, district } : null;
  });
  if (!found) return;
  const { feed, district } = found;
  if (data.at !== null && (!feed.enabled || feed.nextAt?.toISOString() !== data.at)) return;
  const failures = await takeAll(feed, district, job.signal);
  await settleTurn(feed, district, failures);
}

async function takeAll(feed: FeedRow, district: District, signal: AbortSignal): Promise<number> {
  const folder = makeReadingFolder();
  let failures = 0;
  try {
    const today = new Intl.DateTimeFormat('en-CA', { timeZone: district.timeZone }).format(new Date());
    const wanted = feed.from === 'url' ? addressesOf(feed.template, today, feed.lookBack) : await folderAddresses(feed, district, today);
    for (const [index, address] of wanted.entries()) {
      const last = await database().inDistrict(feed.districtId, (tx) => findLastAnswer(tx, feed.districtId, feed.feedId, address));
      const taken = await takeOne({ feed, district, address, last, path: join(folder, `${index}`), signal });
      if (taken.outcome === 'failed' || taken.outcome === 'refused') failures++;
      await database().inDistrict(feed.districtId, (tx) =>
        insertFetch(tx, { districtId: feed.districtId, feedId: feed.feedId, address, ...taken }),
      );
    }
  } catch (error) {
    if (!(error instanceof TillwaterError)) throw error;
    failures++;
    await database().inDistrict(feed.districtId, (tx) =>
      insertFetch(tx, {
        districtId: feed.districtId,
        feedId: feed.feedId,
        address: feed.template,
        outcome: 'refused',
        error: error.message,
      }),
    );
  } finally {
    removeReadingFolder(folder);
  }
  return failures;
}

/** Files of a folder feed, as paths within the district's folder. */
async function folderAddresses(feed: FeedRow, district: District, today: string): Promise<string[]> {
  const root = districtFolder(district.code);
  const patterns = addressesOf(feed.template, today, feed.lookBack);
  const found = await Promise.all(patterns.map((pattern) => listFolder(root, pattern)));
  return [...new Set(found.flat().map((file) => file.path.slice(root.length + 1)))];
}

interface Taking {
  readonly feed: FeedRow;
  readonly district: District;
  readonly address: string;
  readonly last: FetchRow | null;
  readonly path: string;
  readonly signal: AbortSignal;
}

async function takeOne(taking: Taking): Promise<Taken> {
  try {
    return taking.feed.from === 'url' ? await takeAddress(taking) : await takeFile(taking);
  } catch (error) {
    if (taking.signal.aborted) throw error;
    const known = error instanceof TillwaterError;
    if (!known) log().warn({ err: error, feed: taking.feed.feedId, address: taking.address }, 'feed address not fetched');
    return { outcome: known ? 'refused' : 'failed', error: error instanceof Error ? error.message : String(error) };
  }
}

async function takeAddress({ feed, address, last, path, signal }: Taking): Promise<Taken> {
  const limit = environment().TILLWATER_UPLOAD_LIMIT_MB * MEGABYTE;
  const fetched = await withTries(
    () => fetchTo(address, { path, limit, etag: last?.etag ?? null, lastModified: last?.lastModified ?? null, signal }),
    signal,
  );
  const { status, etag, lastModified, file } = fetched;
  const told = { status, etag: etag ?? last?.etag ?? null, lastModified: lastModified ?? last?.lastModified ?? null };
  if (status === 304) return { ...told, outcome: 'unchanged', sha256: last?.sha256 ?? null, sizeBytes: last?.sizeBytes ?? null };
  if (status === 404 || status === 410) return { status, outcome: 'absent' };
  if (!file) return { status, outcome: 'failed', error: `the server answered ${status}` };
  return { ...told, ...(await takeIn(feed, last, { ...file, name: nameOf(address) })) };
}

/** Server faults and the network's own are tried again, as the server asks or after growing pauses. */
async function withTries(act: () => Promise<Awaited<ReturnType<typeof fetchTo>>>, signal: AbortSignal) {
  for (let attempt = 1; ; attempt++) {
    try {
      const answer = await act();
      const again = answer.status >= 500 || answer.status === 429;
      if (!again || attempt === TRIES) return answer;
      await pause(attempt, answer.retryAfter, signal);
    } catch (error) {
      if (error instanceof TillwaterError || attempt === TRIES || signal.aborted) throw error;
      await pause(attempt, null, signal);
    }
  }
}

function pause(attempt: number, asked: number | null, signal: AbortSignal): Promise<void> {
  const wait = asked === null ? FIRST_PAUSE_MS * 2 ** (attempt - 1) : Math.min(LONGEST_PAUSE_S, asked) * 1000;
  return sleep(wait, undefined, { signal });
}

async function takeFile({ feed, district, address, last, path }: Taking): Promise<Taken> {
  const root = districtFolder(district.code);
  const [file] = await listFolder(root, address.replaceAll('*', ''));
  if (!file) return { outcome: 'absent' };
  const told = { etag: file.mark };
  if (last?.etag === file.mark) return { ...told, outcome: 'unchanged', sha256: last.sha256, sizeBytes: last.sizeBytes };
  const aside = await takeAside(file.path, path, environment().TILLWATER_UPLOAD_LIMIT_MB * MEGABYTE);
  return { ...told, ...(await takeIn(feed, last, { ...aside, name: file.name })) };
}

interface FileTaken {
  readonly path: string;
  readonly name: string;
  readonly size: number;
  readonly sha256: string;
  readonly head: Uint8Array;
}

/** Makes an import of a file, unless its content came before. */
async function takeIn(feed: FeedRow, last: FetchRow | null, file: FileTaken): Promise<Taken> {
  const told = { sizeBytes: file.size, sha256: file.sha256 };
  if (last?.sha256 === file.sha256) return { ...told, outcome: 'unchanged' };
  const content = { [Symbol.asyncIterator]: () => createReadStream(file.path)[Symbol.asyncIterator]() };
  const options = {
    source: feed.name,
    ...(feed.options as ImportOptions),
    ...(feed.applyAutomatically ? { apply: 'when-clean' as const } : {}),
  };
  const importId = await createImport(
    { districtId: feed.districtId, name: `feed ${feed.name}` },
    { kind: feed.kind, files: [{ ...file, content }], options },
  );
  return { ...told, importId, outcome: last ? 'changed' : 'new' };
}

function nameOf(address: string): string {
  const last = new URL(address).pathname.split('/').filter(Boolean).at(-1);
  return last ? decodeURIComponent(last) : 'feed';
}

/** Puts the next turn in: when the schedule says, or later while the feed fails. */
async function settleTurn(feed: FeedRow, district: District, failures: number): Promise<void> {
  await database().inDistrict(feed.districtId, async (tx) => {
    await trimFetches(tx, feed.districtId, feed.feedId, KEPT_FETCHES);
    const now = await findFeed(tx, feed.districtId, feed.feedId);
    if (!now) return;
    const row = failures > 0 ? now.failures + 1 : 0;
    const due = nextTime(now.schedule, district.timeZone, new Date());
    const next = row > 0 ? new Date(Math.max(due.getTime(), Date.now() + backOff(row))) : due;
    await updateFeed(tx, feed.districtId, feed.feedId, { failures: row, nextAt: now.enabled ? next : null });
    if (now.enabled) await putTurn(tx, { ...now, nextAt: next });
  });
}

/** Puts a turn into the queue for the feed's next time. */
export async function putTurn(tx: Parameters<typeof findFeed>[0], feed: Pick<FeedRow, 'districtId' | 'feedId' | 'nextAt'>): Promise<void> {
  const at = feed.nextAt?.toISOString() ?? null;
  const turn: FeedTurn = { districtId: feed.districtId, feedId: feed.feedId, at };
  await enqueue('feed-turn', turn, { tx, startAfter: feed.nextAt ?? undefined, singletonKey: `${feed.feedId} ${at ?? 'now'}` });
}
