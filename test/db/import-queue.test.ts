/** The queue and the reading job where things go wrong: failing handlers, dead processes, readers that break, plans that change. */

import postgres from 'postgres';
import { afterEach, beforeEach, expect, it } from 'vitest';
import { changeImport, findImport, insertImport } from '../../db/queries/import-row.ts';
import { QUEUES } from '../../db/queues.ts';
import { database } from '../../lib/access/database.ts';
import { type ImportReading, NOTHING_UNDERSTOOD } from '../../lib/files/reading.ts';
import { performRead, type Reader } from '../../lib/jobs/import-read.ts';
import { settleGivenUp } from '../../lib/jobs/import-work.ts';
import { createImport, patchImport, uploadOf } from '../../lib/jobs/imports.ts';
import { enqueue, queue, releaseOrphans, stopQueue, workOn } from '../../lib/jobs/queue.ts';
import { stopStandby } from '../../lib/jobs/reader-child.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { makeDistrict, rowsOf } from '../support/import-district.ts';

let test: TestDatabase;
let owner: postgres.Sql;

beforeEach(async () => {
  test = await testDatabase();
  owner = postgres(test.ownerUrl, { max: 1, onnotice: () => {} });
});
afterEach(async () => {
  await stopQueue();
  await owner.end();
  await test.close();
});

const DISTRICT = '00000000-0000-4000-8000-000000000001';
const soon = async (condition: () => boolean | Promise<boolean>, limitMs = 8000) => {
  const until = Date.now() + limitMs;
  while (!(await condition())) {
    if (Date.now() > until) throw new Error('it never happened');
    await new Promise((resolve) => setTimeout(resolve, 25));
  }
};
const jobs = () => owner<{ state: string; retry_count: number }[]>`select state, retry_count from pgboss.job order by created_on`;

it('works a job within a second of its being put in, by one worker only', async () => {
  const seen: unknown[] = [];
  await workOn('run-start', async (data) => seen.push(data), { concurrency: 3 });
  const began = Date.now();
  await enqueue('run-start', { districtId: DISTRICT, runId: 'a "quoted" $1 id' });
  await soon(() => seen.length > 0);
  expect(Date.now() - began).toBeLessThan(1000);
  await soon(async () => (await jobs())[0].state === 'completed');
  expect(seen).toEqual([{ districtId: DISTRICT, runId: 'a "quoted" $1 id' }]);
});

it('puts a job in only when the transaction it belongs to commits', async () => {
  const district = await makeDistrict('committed');
  await expect(
    database().inDistrict(district, async (tx) => {
      await enqueue('run-start', { districtId: district }, { tx });
      throw new Error('rolled back');
    }),
  ).rejects.toThrow('rolled back');
  expect(await jobs()).toHaveLength(0);
});

it('lets one waiting job stand for others of its key', async () => {
  expect(await enqueue('run-start', { districtId: DISTRICT }, { singletonKey: 'k' })).not.toBeNull();
  expect(await enqueue('run-start', { districtId: DISTRICT }, { singletonKey: 'k' })).toBeNull();
  expect(await enqueue('run-start', { districtId: DISTRICT }, { singletonKey: 'other' })).not.toBeNull();
});

it('tries a failing job again, up to the queue’s limit', async () => {
  let tries = 0;
  await workOn('import-read', async () => {
    tries++;
    throw new Error('it breaks');
  });
  await enqueue('import-read', { districtId: DISTRICT });
  await soon(async () => (await jobs())[0]?.state === 'failed', 15_000);
  expect(tries).toBe(1 + QUEUES[0].retryLimit);
});

it('gives a dead process’s job to the next one: at once when told, else when its lease has run out', async () => {
  await enqueue('import-apply', { districtId: DISTRICT, n: 1 });
  const boss = await queue();
  await boss.fetch('import-apply'); // a process took it and died
  const seen: unknown[] = [];
  await workOn('import-apply', async (data) => seen.push(data.n));
  await new Promise((resolve) => setTimeout(resolve, 300));
  expect(seen).toEqual([]);
  expect(await releaseOrphans()).toBe(1);
  await soon(() => seen.length === 1);

  await soon(async () => (await jobs())[0].state === 'completed');
  await stopQueue();
  await enqueue('import-apply', { districtId: DISTRICT, n: 2 });
  await (await queue()).fetch('import-apply');
  await owner`update pgboss.job set started_on = now() - interval '121 seconds' where state = 'active'`;
  await (await queue()).maintain(); // as the application's role
  expect((await jobs()).map((job) => job.state)).toContain('retry');
});

it('puts jobs in hand back when the process stops', async () => {
  await workOn(
    'run-slice',
    (_data, job) => new Promise((_resolve, reject) => job.signal.addEventListener('abort', () => reject(job.signal.reason))),
  );
  await enqueue('run-slice', { districtId: DISTRICT });
  await soon(async () => (await jobs())[0].state === 'active');
  await stopQueue();
  expect((await jobs())[0].state).toBe('retry');
});

const CSV = new TextEncoder().encode('site,latitude,longitude\n1,45,-120\n');
const who = (districtId: string) => ({ districtId, name: 'test' });
const newImport = (districtId: string) =>
  createImport(who(districtId), { kind: 'stations', files: [uploadOf({ name: 'C:\\field\\s.csv', bytes: CSV })], options: {} });
const rowOf = (districtId: string, importId: string) => database().inDistrict(districtId, (tx) => findImport(tx, districtId, importId));
const emptyReading: ImportReading = {
  understood: NOTHING_UNDERSTOOD,
  findings: [],
  findingCounts: { error: 0, warning: 0, note: 0 },
  preview: { kind: 'table', header: [], rows: [] },
  staged: { kind: 'stations', sites: [] },
};

it('leaves an import failed with a reason when its reader breaks', async () => {
  const districtId = await makeDistrict('breaks');
  const importId = await newImport(districtId);
  const breaks: Reader = async () => {
    throw new RangeError('Invalid array length');
  };
  await performRead({ districtId, importId, revision: 1 }, breaks);
  expect(await rowOf(districtId, importId)).toMatchObject({ state: 'failed', error: expect.stringContaining('Invalid array length') });
});

it('drops a reading whose plan was changed meanwhile', async () => {
  const districtId = await makeDistrict('changed');
  const importId = await newImport(districtId);
  const slow: Reader = async (_kind, _files, _options, _context, progress) => {
    await database().inDistrict(districtId, (tx) => changeImport(tx, { districtId, importId, from: ['reading'] }, { state: 'ready' }));
    await patchImport(who(districtId), importId, { windHeight: 3 });
    await progress?.(0.5);
    return { ...emptyReading, findingCounts: { error: 99, warning: 0, note: 0 } };
  };
  await performRead({ districtId, importId, revision: 1 }, slow);
  expect(await rowOf(districtId, importId)).toMatchObject({ state: 'reading', revision: 2, findingCounts: {} });
  let options: unknown;
  await performRead({ districtId, importId, revision: 2 }, async (_kind, files, given) => {
    options = given;
    expect(files[0].name).toBe('s.csv');
    expect(Uint8Array.from(files[0].bytes)).toEqual(CSV);
    return emptyReading;
  });
  expect(options).toEqual({ windHeight: 3 });
  expect(await rowOf(districtId, importId)).toMatchObject({ state: 'ready', revision: 2 });
});

it('settles an import whose reading was given up, and only that one', async () => {
  const districtId = await makeDistrict('given-up');
  const [lost, alive] = [await newImport(districtId), await newImport(districtId)];
  await owner`update pgboss.job set state = 'failed', completed_on = now() where data ->> 'importId' = ${lost}`;
  await settleGivenUp();
  expect(await rowOf(districtId, lost)).toMatchObject({ state: 'failed', error: expect.stringContaining('Split the file') });
  expect(await rowOf(districtId, alive)).toMatchObject({ state: 'reading' });
});

it('stores files of any size whole', async () => {
  const districtId = await makeDistrict('sizes');
  const bytes = Uint8Array.from({ length: 20 * 1024 * 1024 + 13 }, (_, i) => (i * 31) % 251);
  const files = [
    { name: 'same.csv', content: [bytes], sha256: 'x' },
    { name: 'same.csv', content: [bytes.slice(0, 5)], sha256: 'y' },
  ];
  const importId = await database().inDistrict(districtId, (tx) =>
    insertImport(tx, { districtId, kind: 'stations', options: {}, createdBy: null }, files),
  );
  expect(await rowsOf(districtId, 'select count(*)::int as n from import_file')).toEqual([{ n: 4 }]);
  let read: readonly { name: string; bytes: Uint8Array }[] = [];
  await performRead({ districtId, importId, revision: 1 }, async (_kind, given) => {
    read = given;
    return emptyReading;
  });
  expect(read.map((file) => file.bytes.length)).toEqual([bytes.length, 5]);
  expect(Buffer.compare(read[0].bytes, bytes)).toBe(0);
});

it('reads in a process of its own, and says so when that process falls', async () => {
  const districtId = await makeDistrict('apart');
  const importId = await newImport(districtId);
  await performRead({ districtId, importId, revision: 1 });
  expect(await rowOf(districtId, importId)).toMatchObject({ state: 'ready', understood: { usableRows: 1 } });
  expect(await rowsOf(districtId, 'select ordinal from import_staged order by 1')).toEqual([{ ordinal: 0 }, { ordinal: 1 }]);
  stopStandby();
}, 30_000);
