/** Feeds against a server and a folder of the test's own: what is new comes in, what is not is left, and nothing inside the network is asked. */
import { mkdirSync, mkdtempSync, rmSync, symlinkSync, utimesSync, writeFileSync } from 'node:fs';
import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { listFetches } from '../../db/queries/feeds.ts';
import { database } from '../../lib/access/database.ts';
import { rereadEnvironment } from '../../lib/access/environment.ts';
import { readImport } from '../../lib/files/read-import.ts';
import { performFeedTurn } from '../../lib/jobs/feeds/feed-turn.ts';
import { changeFeed, type FeedWanted, makeFeed } from '../../lib/jobs/feeds/feeds.ts';
import { guardedLookup } from '../../lib/jobs/feeds/safe-fetch.ts';
import { performApply } from '../../lib/jobs/import-apply.ts';
import { performRead } from '../../lib/jobs/import-read.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { makeDistrict, rowsOf } from '../support/import-district.ts';

const CSV = 'site,latitude,longitude,elevation_m\nS1,45.1,-120.1,200\n';

let test: TestDatabase;
let server: Server;
let base: string;
let folder: string;
let answer: (request: IncomingMessage, response: ServerResponse) => void;
let asked: { url: string; headers: IncomingMessage['headers'] }[] = [];
let counter = 0;

beforeAll(async () => {
  test = await testDatabase();
  folder = mkdtempSync(join(tmpdir(), 'tillwater-feeds-'));
  server = createServer((request, response) => {
    asked.push({ url: request.url ?? '', headers: request.headers });
    answer(request, response);
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  base = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  process.env.TILLWATER_FEED_HOSTS = '127.0.0.1';
  process.env.TILLWATER_FEED_FOLDER = folder;
  process.env.TILLWATER_DATA = join(folder, 'data');
  rereadEnvironment();
});
afterAll(async () => {
  delete process.env.TILLWATER_FEED_HOSTS;
  delete process.env.TILLWATER_FEED_FOLDER;
  delete process.env.TILLWATER_DATA;
  rereadEnvironment();
  server.close();
  rmSync(folder, { recursive: true, force: true });
  await stopQueue();
  await test.close();
});
beforeEach(() => {
  asked = [];
});

const who = (districtId: string) => ({ districtId, name: 'test' });
const stop = { signal: new AbortController().signal };

async function feedOf(over: Partial<FeedWanted>) {
  const districtId = await makeDistrict(`feeds-${++counter}`);
  const feed = await makeFeed(who(districtId), {
    name: 'North',
    kind: 'stations',
    from: 'url',
    template: `${base}/stations.csv`,
    schedule: '30 6 * * *',
    options: {},
    ...over,
  });
  return { districtId, feedId: feed.feedId };
}

async function turn(feed: { districtId: string; feedId: string }) {
  await performFeedTurn({ ...feed, at: null }, stop);
  return fetchesOf(feed);
}

function fetchesOf(feed: { districtId: string; feedId: string }) {
  return database().inDistrict(feed.districtId, (tx) => listFetches(tx, feed.districtId, feed.feedId, 50));
}

describe('an address', () => {
  it('brings a file once: afterwards it is asked with what it said of itself', async () => {
    answer = (request, response) => {
      if (request.headers['if-none-match'] === '"a1"') response.writeHead(304).end();
      else response.writeHead(200, { etag: '"a1"', 'last-modified': 'Mon, 03 Apr 2023 06:00:00 GMT' }).end(CSV);
    };
    const feed = await feedOf({});
    expect((await turn(feed))[0]).toMatchObject({ outcome: 'new', status: 200, sizeBytes: CSV.length });
    expect((await turn(feed))[0]).toMatchObject({ outcome: 'unchanged', status: 304 });
    expect(asked[1].headers).toMatchObject({ 'if-none-match': '"a1"', 'if-modified-since': 'Mon, 03 Apr 2023 06:00:00 GMT' });
    expect(await rowsOf(feed.districtId, 'select count(*)::int as n from import')).toEqual([{ n: 1 }]);
  });

  it('knows the same content again from a server that says nothing of it, and takes a same-day correction', async () => {
    let body = CSV;
    answer = (_request, response) => response.writeHead(200).end(body);
    const feed = await feedOf({});
    await turn(feed);
    expect((await turn(feed))[0].outcome).toBe('unchanged');
    body = CSV.replace('200', '201');
    expect((await turn(feed))[0].outcome).toBe('changed');
    expect(await rowsOf(feed.districtId, 'select count(*)::int as n from import')).toEqual([{ n: 2 }]);
  });

  it('is applied without a hand when it is clean, and left to a person when it is not', async () => {
    answer = (request, response) =>
      response.writeHead(200).end(request.url === '/bad.csv' ? 'site,latitude,longitude\nS2,999,5\nS3,45,5\n' : CSV);
    const clean = await feedOf({});
    const [{ importId }] = await turn(clean);
    await performRead({ districtId: clean.districtId, importId: importId as string, revision: 1 }, readImport);
    await performApply({ districtId: clean.districtId, importId: importId as string });
    expect(await rowsOf(clean.districtId, 'select code, elevation_m from site')).toEqual([{ code: 'S1', elevation_m: 200 }]);
    const faulty = await feedOf({ template: `${base}/bad.csv` });
    const [{ importId: second }] = await turn(faulty);
    await performRead({ districtId: faulty.districtId, importId: second as string, revision: 1 }, readImport);
    expect(await rowsOf(faulty.districtId, 'select state from import')).toEqual([{ state: 'ready' }]);
  });

  it('tries a server’s fault again, as it asks, and then waits longer', async () => {
    answer = (_request, response) => response.writeHead(503, { 'retry-after': '0' }).end();
    const feed = await feedOf({});
    expect((await turn(feed))[0]).toMatchObject({ outcome: 'failed', status: 503 });
    expect(asked).toHaveLength(3);
    expect(await rowsOf(feed.districtId, 'select failures, next_at > now() as later from weather_feed')).toEqual([
      { failures: 1, later: true },
    ]);
  });

  it('asks for each day of its look-back; a day that is not there yet is no failure', async () => {
    answer = (request, response) => response.writeHead(request.url?.endsWith('.csv') ? 404 : 500).end();
    const feed = await feedOf({ template: `${base}/{YYYY}-{MM}-{DD}.csv`, lookBack: 2 });
    expect((await turn(feed)).map((row) => row.outcome)).toEqual(['absent', 'absent', 'absent']);
    expect(new Set(asked.map(({ url }) => url)).size).toBe(3);
    expect(await rowsOf(feed.districtId, 'select failures from weather_feed')).toEqual([{ failures: 0 }]);
  });

  it('is not followed into the network', async () => {
    answer = (_request, response) => response.writeHead(302, { location: 'http://169.254.169.254/latest/meta-data' }).end();
    const feed = await feedOf({});
    expect((await turn(feed))[0]).toMatchObject({ outcome: 'refused', error: expect.stringContaining('169.254.169.254') });
  });

  it('is not asked where a name leads inside the network', async () => {
    await expect(feedOf({ template: `http://localhost:${new URL(base).port}/x.csv` })).rejects.toThrow('localhost is not a public address');
    process.env.TILLWATER_FEED_HOSTS = '';
    rereadEnvironment();
    const found = await new Promise<Error | null>((resolve) => guardedLookup('localhost', { all: true }, (error) => resolve(error)));
    expect(found?.message, 'resolved to the loopback, and handed out to nobody').toContain('localhost is not a public address');
    process.env.TILLWATER_FEED_HOSTS = '127.0.0.1';
    rereadEnvironment();
  });

  it('is not taken beyond the limit of an upload, however its length is stated', async () => {
    process.env.TILLWATER_UPLOAD_LIMIT_MB = '1';
    rereadEnvironment();
    answer = (_request, response) => {
      response.writeHead(200, { 'transfer-encoding': 'chunked' });
      response.write('x'.repeat(900_000));
      response.end('x'.repeat(900_000));
    };
    const feed = await feedOf({});
    expect((await turn(feed))[0]).toMatchObject({ outcome: 'refused', error: expect.stringContaining('larger than 1 MB') });
    delete process.env.TILLWATER_UPLOAD_LIMIT_MB;
    rereadEnvironment();
  });
});

describe('the schedule', () => {
  it('drops a turn that the feed has moved on from, and one of a resting feed', async () => {
    answer = (_request, response) => response.writeHead(200).end(CSV);
    const feed = await feedOf({});
    await performFeedTurn({ ...feed, at: '2020-01-01T00:00:00.000Z' }, stop);
    await changeFeed(who(feed.districtId), feed.feedId, { enabled: false });
    await performFeedTurn({ ...feed, at: null }, stop);
    expect(asked.length).toBeLessThanOrEqual(1);
    expect(await rowsOf(feed.districtId, 'select next_at from weather_feed')).toEqual([{ next_at: null }]);
  });

  it('refuses a second feed of one name', async () => {
    const feed = await feedOf({});
    const again = { name: 'North', from: 'url', template: `${base}/y.csv`, schedule: '0 7 * * *' } as const;
    await expect(makeFeed(who(feed.districtId), again)).rejects.toThrow('already');
  });
});

describe('a watched folder', () => {
  const old = new Date(Date.now() - 60_000);
  const put = (path: string, text: string) => {
    writeFileSync(path, text);
    utimesSync(path, old, old);
  };

  it('brings files that have come to rest, once each, and none from beyond the folder', async () => {
    const feed = await feedOf({ from: 'folder', template: 'st*.csv' });
    const [{ code }] = await rowsOf<{ code: string }>(feed.districtId, 'select code from district');
    const own = join(folder, code);
    mkdirSync(own);
    put(join(own, 'st1.csv'), CSV);
    put(join(folder, 'secret.csv'), 'secret');
    symlinkSync(join(folder, 'secret.csv'), join(own, 'st-link.csv'));
    expect((await turn(feed)).map(({ address, outcome }) => [address, outcome])).toEqual([['st1.csv', 'new']]);
    writeFileSync(join(own, 'st2.csv'), CSV);
    const before = Date.now();
    expect((await turn(feed)).find(({ address }) => address === 'st2.csv')?.outcome, 'waited for').toBe('new');
    expect(Date.now() - before, 'a file just written is left to rest').toBeGreaterThan(4000);
    rmSync(join(own, 'st2.csv'));
    expect((await turn(feed))[0].outcome).toBe('unchanged');
    put(join(own, 'st1.csv'), CSV.replace('200', '222'));
    expect((await turn(feed))[0].outcome).toBe('changed');
  }, 40_000);
});
