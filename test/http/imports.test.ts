/** The import pipeline through its routes, with a worker on the queues: upload, read, change the plan, apply, undo, and every refusal. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IMPORT_KINDS } from '../../app/_components/import-kinds.ts';
import { POST as apply } from '../../app/api/v1/imports/[id]/apply/route.ts';
import { POST as cancel } from '../../app/api/v1/imports/[id]/cancel/route.ts';
import { GET as findings } from '../../app/api/v1/imports/[id]/findings/route.ts';
import * as item from '../../app/api/v1/imports/[id]/route.ts';
import { POST as undo } from '../../app/api/v1/imports/[id]/undo/route.ts';
import { POST as create, GET as list } from '../../app/api/v1/imports/route.ts';
import { createToken } from '../../lib/access/tokens.ts';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { importAnswer } from '../../lib/http/contract/rest.ts';
import { workOnImports } from '../../lib/jobs/import-work.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { dumpTables, makeDistrict, rowsOf } from '../support/import-district.ts';

const HOST = 'http://127.0.0.1';
let test: TestDatabase;
let here: { districtId: string; write: string; read: string };
let there: { districtId: string; write: string };

beforeAll(async () => {
  test = await testDatabase();
  process.env.TILLWATER_UPLOAD_LIMIT_MB = '1';
  here = await districtWithTokens('here');
  there = await districtWithTokens('there');
  await workOnImports();
});
afterAll(async () => {
  await stopQueue();
  await test.close();
});

async function districtWithTokens(code: string) {
  const districtId = await makeDistrict(code);
  const token = async (scope: 'read' | 'write') => (await createToken(districtId, { name: scope, scope, expiresInDays: 1 })).token;
  return { districtId, write: await token('write'), read: await token('read') };
}

function call(handler: (request: Request) => Promise<Response>, path: string, token: string, init: RequestInit = {}) {
  return handler(new Request(`${HOST}${path}`, { ...init, headers: { authorization: `Bearer ${token}`, ...init.headers } }));
}

function upload(kind: string, files: Record<string, string | Uint8Array>, options: object = {}, token = here.write): Promise<Response> {
  const body = new FormData();
  body.set('kind', kind);
  body.set('options', JSON.stringify({ recompute: false, ...options }));
  for (const [name, content] of Object.entries(files)) body.append('file', new File([content as BlobPart], name), name);
  return call(create, '/api/v1/imports', token, { method: 'POST', body });
}

async function settled(id: string, token = here.write): Promise<ImportAnswer> {
  for (let i = 0; i < 1200; i++) {
    const response = await call(item.GET, `/api/v1/imports/${id}`, token);
    const answer = (await response.json()) as ImportAnswer;
    if (!['reading', 'applying', 'undoing'].includes(answer.state)) return answer;
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  throw new Error('the import never came to rest');
}

async function read(kind: string, files: Record<string, string>, options: object = {}): Promise<ImportAnswer> {
  const response = await upload(kind, files, options);
  expect(response.status).toBe(202);
  return settled(((await response.json()) as ImportAnswer).id);
}

const act = (handler: typeof apply, id: string, name: string, token = here.write) =>
  call(handler, `/api/v1/imports/${id}/${name}`, token, { method: 'POST' });

async function applied(kind: string, files: Record<string, string>, options: object = {}): Promise<ImportAnswer> {
  const ready = await read(kind, files, options);
  expect(ready).toMatchObject({ state: 'ready' });
  expect((await act(apply, ready.id, 'apply')).status).toBe(202);
  return settled(ready.id);
}

const STATIONS = 'site,name,latitude,longitude,elevation_m\r\n007,Invented,45.1,-120.1,210\r\n';
const WEATHER = 'date,site,rain_mm,tmax_c,tmin_c\n2023-05-03,007,1.5,20,5\n2023-05-01,007,0,21,6\n2023-05-02,007,3.25,19,77\n';

describe('the whole way', () => {
  it('takes stations and weather from upload to undo', async () => {
    const stations = await applied('stations', { 'stations.csv': STATIONS });
    expect(stations.state).toBe('applied');
    expect(stations.understood?.applied).toMatchObject({ sites_added: 1, seasons: [] });
    const before = await dumpTables(here.districtId);

    const ready = await read('weather', { 'may.csv': WEATHER });
    expect(() => importAnswer.parse(ready)).not.toThrow();
    expect(ready.files[0]).toMatchObject({ name: 'may.csv', size_bytes: WEATHER.length });
    // SHA-256 of the file by Node's own digest, as any other tool would give it
    expect(ready.files[0].sha256).toBe(
      Buffer.from(await crypto.subtle.digest('SHA-256', new TextEncoder().encode(WEATHER))).toString('hex'),
    );
    expect(ready.finding_counts.error).toBeGreaterThan(0);
    expect(ready.findings.find((finding) => finding.value === '77')).toMatchObject({ severity: 'error', row: 4, column: 'tmin_c' });
    expect(ready.preview).toMatchObject({ kind: 'table' });
    expect(await dumpTables(here.districtId)).toEqual(before);

    expect((await act(apply, ready.id, 'apply')).status).toBe(202);
    const done = await settled(ready.id);
    expect(done.state).toBe('applied');
    const again = await act(apply, ready.id, 'apply');
    expect([again.status, ((await again.json()) as ImportAnswer).state]).toEqual([200, 'applied']);
    const [rain] = await rowsOf<{ values: Buffer }>(
      here.districtId,
      "select values from weather_block where variable = 'precipitation_mm'",
    );
    expect([...new Float32Array(new Uint8Array(rain.values).buffer).slice(0, 4)]).toEqual([0, 3.25, 1.5, Number.NaN]);

    expect((await act(undo, ready.id, 'undo')).status).toBe(202);
    expect((await settled(ready.id)).state).toBe('undone');
    expect((await act(undo, ready.id, 'undo')).status).toBe(200);
    expect(await dumpTables(here.districtId)).toEqual(before);
  });

  it('reads again with a changed plan', async () => {
    const text = 'site,when,a\n007,2023-06-01,68\n';
    const first = await read('weather', { 'plain.csv': text });
    const plan = { columns: { when: { role: 'date' }, a: { role: 'air_temperature_max_c', unit: '°F' } } };
    const patched = await call(item.PATCH, `/api/v1/imports/${first.id}`, here.write, {
      method: 'PATCH',
      headers: { 'content-type': 'application/json' },
      body: JSON.stringify({ plan }),
    });
    expect(patched.status).toBe(202);
    expect((await settled(first.id)).options).toMatchObject({ plan });
    await act(apply, first.id, 'apply');
    expect((await settled(first.id)).state).toBe('applied');
    const [row] = await rowsOf<{ values: Buffer }>(
      here.districtId,
      "select values from weather_block where variable = 'air_temperature_max_c' and month = '2023-06-01'",
    );
    // 68 °F is 20 °C by the definition of the scales
    expect(new Float32Array(new Uint8Array(row.values).buffer)[0]).toBeCloseTo(20, 5);
  });

  it.each(IMPORT_KINDS.flatMap(({ kind, template }) => (template ? [[kind, template] as const] : [])))(
    'reads the template of %s without an error',
    async (kind, template) => {
      const token = there.write;
      const response = await upload(kind, { [template.name]: template.text }, {}, token);
      const ready = await settled(((await response.json()) as ImportAnswer).id, token);
      expect(ready.state).toBe('ready');
      const faults = ready.findings.filter((finding) => finding.severity === 'error' && !/^(unknown|unmapped)-/.test(finding.code));
      expect(faults).toEqual([]);
    },
  );

  it('gives the findings as CSV', async () => {
    const ready = await read('weather', { 'bad.csv': `${WEATHER}2023-05-04,007,-4,20,5\n` });
    const response = await call(findings, `/api/v1/imports/${ready.id}/findings.csv`, here.read);
    expect(response.headers.get('content-type')).toContain('text/csv');
    const lines = (await response.text()).trim().split(/\r?\n/);
    expect(lines[0]).toContain('severity,code,message');
    expect(lines).toHaveLength(1 + ready.findings.length);
  });

  it('tells before replacing what it would remove: parcels with their plantings, reaches that parcels still name', async () => {
    const geojson = (type: string, features: [object, unknown][]) =>
      JSON.stringify({
        type: 'FeatureCollection',
        features: features.map(([properties, coordinates]) => ({ type: 'Feature', properties, geometry: { type, coordinates } })),
      });
    const square = (x: number) => [
      [
        [x, 45],
        [x + 0.01, 45],
        [x + 0.01, 45.01],
        [x, 45.01],
        [x, 45],
      ],
    ];
    const line = (code: string, parent: string | null, x: number): [object, unknown] => [
      { reach: code, parent },
      [
        [x, 45],
        [x + 0.01, 45],
      ],
    ];
    const parcel = (code: string, x: number): [object, unknown] => [{ parcel: code, crop: 'maize', reach: 'L1' }, square(x)];
    const canals = { 'c.geojson': geojson('LineString', [line('main', null, -120), line('L1', 'main', -119.99)]) };
    expect((await applied('canals', canals)).state).toBe('applied');
    const land = { 'p.geojson': geojson('Polygon', [parcel('a', -120), parcel('b', -119.9), parcel('c', -119.8)]) };
    expect((await applied('parcels', land, { season: '2023' })).state).toBe('applied');

    const parcels = await read('parcels', { 'p.geojson': geojson('Polygon', [parcel('a', -120)]) }, { season: '2023', replace: true });
    expect(parcels.findings.find(({ code }) => code === 'parcels-removed')).toMatchObject({
      severity: 'warning',
      message: 'Replacing the parcels removes 2 parcels and 2 plantings: b, c.',
    });
    const one = await read('canals', { 'c.geojson': geojson('LineString', [line('main', null, -120)]) }, { replace: true });
    expect(one.findings.filter(({ severity }) => severity === 'error')).toMatchObject([
      { code: 'removed-reach-in-use', message: 'Parcels name reaches that would be removed: 3 parcels on L1.' },
    ]);
    const second = await read('canals', { 'c.geojson': geojson('LineString', [line('other', null, -120)]) });
    expect(second.findings.filter(({ severity }) => severity === 'error')).toMatchObject([{ code: 'several-heads' }]);
  });

  it('survives characters that the database cannot hold', async () => {
    const ready = await read('stations', { 'odd\ud800name.csv': `${STATIONS}"0\u000b8",Name \ud800,95,-120,1\n` });
    expect(ready.state).toBe('ready');
    expect(ready.finding_counts.error).toBeGreaterThan(0);
    expect((await upload('stations', { 'odd\u0000name.csv': STATIONS })).status).toBe(400);
  });
});

/** First bytes of an archive with one stored, empty member. */
function zipOf(name: string): Uint8Array {
  const header = Buffer.alloc(30);
  header.writeUInt32LE(0x04034b50, 0);
  header.writeUInt16LE(name.length, 26);
  return Buffer.concat([header, Buffer.from(name)]);
}

describe('refusals', () => {
  const problem = async (response: Response) => ({
    status: response.status,
    ...((await response.json()) as { detail: string; type: string }),
  });

  it('refuses kinds of content no reader takes, naming what is accepted', async () => {
    const zip = zipOf('[Content_Types].xml');
    expect(await problem(await upload('weather', { 'w.xlsx': zip }))).toMatchObject({
      status: 415,
      detail: expect.stringMatching(/w\.xlsx.*spreadsheet or office document; weather is read from.*CSV/),
    });
    expect(await problem(await upload('parcels', { 'p.csv': 'a,b\n1,2\n' }))).toMatchObject({
      status: 415,
      detail: expect.stringContaining('GeoJSON'),
    });
    expect(await problem(await upload('soils', { 's.csv': new Uint8Array() }))).toMatchObject({
      status: 415,
      detail: expect.stringContaining('empty file'),
    });
  });

  it('refuses more than the limit of bytes or files', async () => {
    const large = new Uint8Array(1024 * 1024 + 1).fill(0x31);
    expect(await problem(await upload('weather', { 'l.csv': large }))).toMatchObject({
      status: 413,
      detail: expect.stringContaining('1 MB'),
    });
    const larger = new Uint8Array(4 * 1024 * 1024).fill(0x31);
    expect(await problem(await upload('weather', { 'l.csv': larger }))).toMatchObject({
      status: 413,
      detail: expect.stringContaining('TILLWATER_UPLOAD_LIMIT_MB'),
    });
    const many = Object.fromEntries(Array.from({ length: 401 }, (_, i) => [`${i}.csv`, WEATHER]));
    expect(await problem(await upload('weather', many))).toMatchObject({ status: 413, detail: expect.stringContaining('at most 400') });
  });

  it('refuses what cannot be read as an upload', async () => {
    expect(await problem(await upload('gossip', { 'a.csv': WEATHER }))).toMatchObject({
      status: 400,
      detail: expect.stringContaining('weather'),
    });
    expect(await problem(await upload('weather', {}))).toMatchObject({ status: 400, detail: expect.stringContaining('No file') });
    const json = { method: 'POST', body: '{}', headers: { 'content-type': 'application/json' } };
    expect((await call(create, '/api/v1/imports', here.write, json)).status).toBe(415);
    const cut = {
      method: 'POST',
      body: '--x\r\nContent-Disposition: form-data; name="kind"\r\n\r\nwea',
      headers: { 'content-type': 'multipart/form-data; boundary=x' },
    };
    expect((await call(create, '/api/v1/imports', here.write, cut)).status).toBe(400);
  });

  it('refuses to write without the scope, and hides what another district owns', async () => {
    expect((await upload('weather', { 'w.csv': WEATHER }, {}, here.read)).status).toBe(403);
    const ready = await read('stations', { 's.csv': STATIONS });
    expect((await call(item.GET, `/api/v1/imports/${ready.id}`, there.write)).status).toBe(404);
    expect((await act(apply, ready.id, 'apply', there.write)).status).toBe(404);
    expect((await act(cancel, ready.id, 'cancel', there.write)).status).toBe(404);
    const listed = (await (await call(list, '/api/v1/imports', there.write)).json()) as { items: ImportAnswer[] };
    expect(listed.items.map((one) => one.id)).not.toContain(ready.id);
  });

  it('refuses acts that the state does not allow', async () => {
    const ready = await read('stations', { 's.csv': STATIONS });
    expect(await problem(await act(undo, ready.id, 'undo'))).toMatchObject({ status: 409, detail: expect.stringContaining('ready') });
    expect((await act(cancel, ready.id, 'cancel')).status).toBe(200);
    expect((await act(cancel, ready.id, 'cancel')).status).toBe(200);
    expect((await act(apply, ready.id, 'apply')).status).toBe(409);
  });

  it('refuses to apply a file of which nothing is usable, with its findings', async () => {
    const ready = await read('stations', { 's.csv': 'site,latitude,longitude\n1,95,200\n' });
    const refusal = await problem(await act(apply, ready.id, 'apply'));
    expect(refusal).toMatchObject({
      status: 422,
      findings: expect.arrayContaining([expect.objectContaining({ row: 2, severity: 'error' })]),
    });
  });
});
