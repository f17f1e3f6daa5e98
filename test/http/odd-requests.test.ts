/** Requests with members, text or addresses that nothing here knows. Statuses: RFC 9110 section 15.5; NUL in text: PostgreSQL manual, section 8.3. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { DELETE, GET, PATCH, POST, PUT } from '../../app/api/v1/[[...rest]]/route.ts';
import { GET as canals } from '../../app/api/v1/canals/route.ts';
import { POST as createDistrict } from '../../app/api/v1/districts/route.ts';
import { POST as createImport } from '../../app/api/v1/imports/route.ts';
import { GET as members, POST as saveMember } from '../../app/api/v1/members/route.ts';
import { GET as parcel } from '../../app/api/v1/parcels/[code]/route.ts';
import { GET as parcels } from '../../app/api/v1/parcels/route.ts';
import { POST as preferences } from '../../app/api/v1/preferences/route.ts';
import { GET as reaches } from '../../app/api/v1/runs/[id]/reaches/route.ts';
import { GET as readRun } from '../../app/api/v1/runs/[id]/route.ts';
import { POST as createRun, GET as runs } from '../../app/api/v1/runs/route.ts';
import { POST as createSeason } from '../../app/api/v1/seasons/route.ts';
import { POST as signIn } from '../../app/api/v1/sign-in/route.ts';
import { POST as createToken } from '../../app/api/v1/tokens/route.ts';
import { callerOfRequest } from '../../lib/access/caller.ts';
import { NotFound } from '../../lib/base/errors.ts';
import { answerParcel } from '../../lib/http/answers/land.ts';
import { answerParcelSeason } from '../../lib/http/answers/parcel-season.ts';
import { answerRun, standingRun } from '../../lib/http/answers/run.ts';
import { problem } from '../../lib/http/contract/common.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let token: string;
beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.administer;
});
afterAll(() => fresh.close());

async function refusal(response: Response, status: number) {
  expect(response.status).toBe(status);
  expect(response.headers.get('content-type')).toBe('application/problem+json');
  return problem.parse(await response.json());
}

const days = { start_date: '2025-04-01', end_date: '2025-09-30' };
const manager = { name: 'M', email: 'm@example.org', password: 'long enough for m' };

describe('a member that nothing knows', () => {
  it.each([
    ['runs', createRun, { season: '2024', setings: {} }, 'setings'],
    ['runs', createRun, { season: '2024', settings: { powr: 3 } }, 'settings.powr'],
    ['seasons', createSeason, { code: 's', ...days, colour: 'red' }, 'colour'],
    ['members', saveMember, { email: 'x@example.org', role: 'operator', parcel: ['P-1'] }, 'parcel'],
    ['tokens', createToken, { name: 't', scope: 'read', expires: 3 }, 'expires'],
    ['districts', createDistrict, { name: 'New one', time_zone: 'UTC', unit: 'us' }, 'unit'],
    ['districts', createDistrict, { name: 'New one', time_zone: 'UTC', manager: { ...manager, phone: '1' } }, 'manager.phone'],
    ['preferences', preferences, { unit: 'us' }, 'unit'],
    ['sign-in', signIn, { email: 'ana@example.org', password: 'x', remember: true }, 'remember'],
  ])('400 at /%s, by its name', async (path, post, body, column) => {
    const said = await refusal(await post(request(`/api/v1/${path}`, { token, body })), 400);
    expect(said.findings).toEqual([expect.objectContaining({ code: 'unrecognized-keys', column })]);
    expect(said.detail).toContain(column);
  });

  it('starts no run with the wrong settings', async () => {
    const count = async () => (await (await runs(request('/api/v1/runs', { token }))).json()).items.length;
    const before = await count();
    await createRun(request('/api/v1/runs', { token, body: { season: '2024', settings: { irigate: false } } }));
    expect(await count()).toBe(before);
  });

  it('still shows a run whose settings were stored with one', async () => {
    const { run } = await import('../../db/schema/run.ts');
    await fresh.db.inDistrict(made.a.id, (tx) => tx.update(run).set({ settings: { power: 3, former: 1 } }));
    const { settings } = await (await readRun(request(`/api/v1/runs/${made.runId}`, { token }))).json();
    expect(settings.power).toBe(3);
    expect(settings).not.toHaveProperty('former');
  });
});

describe('text that no database holds', () => {
  it('404 for a NUL in a code of the path, 400 in a query', async () => {
    await refusal(await parcel(request('/api/v1/parcels/P%001', { token })), 404);
    const said = await refusal(await parcels(request('/api/v1/parcels?search=%00', { token })), 400);
    expect(said.findings?.[0].column).toBe('search');
  });

  it('has no parcel of such a code, also for a page that asks past the route', async () => {
    const caller = await callerOfRequest(request('/api/v1/parcels', { token }));
    await expect(answerParcelSeason(caller, made.runId, 'P-1\u0000')).rejects.toThrow(NotFound);
    await expect(answerParcel(caller, 'P-1\u0000')).rejects.toThrow(NotFound);
  });

  it.each(['\\u0000', '\\ud800'])('400 for %s in a body, naming the member', async (text) => {
    const season = `{"code":"a${text}","start_date":"2025-04-01","end_date":"2025-09-30"}`;
    const said = await refusal(await createSeason(request('/api/v1/seasons', { token, body: season })), 400);
    expect(said.findings?.[0].column).toBe('code');
    const run = `{"season":"2024","settings":{"source":"${text}"}}`;
    expect((await refusal(await createRun(request('/api/v1/runs', { token, body: run })), 400)).findings?.[0].column).toBe(
      'settings.source',
    );
  });

  it('lets whole surrogate pairs and other scripts through', async () => {
    const response = await createSeason(request('/api/v1/seasons', { token, body: { code: 'été-🌾', ...days } }));
    expect(response.status).toBe(201);
  });

  it('400 for a NUL in the options of an upload', async () => {
    const form = new FormData();
    form.set('kind', 'soils');
    form.set('file', new File(['code\n'], 'soils.csv'));
    form.set('options', '{"source":"\\u0000"}');
    const sent = new Request('http://localhost:3000/api/v1/imports', {
      method: 'POST',
      body: form,
      headers: { authorization: `Bearer ${token}` },
    });
    expect((await refusal(await createImport(sent), 400)).findings?.[0].column).toBe('source');
  });
});

describe('an address where nothing is', () => {
  it.each(Object.entries({ GET, POST, PUT, PATCH, DELETE }))('404 for %s, as problem details', async (method, answer) => {
    const said = await refusal(await answer(request('/api/v1/no/such/call', { method })), 404);
    expect(said.detail).toContain('/api/v1/no/such/call');
  });

  it('has no run of an id that is none', async () => {
    const caller = await callerOfRequest(request('/api/v1/runs', { token }));
    await expect(answerRun(caller, 'abc')).rejects.toThrow(NotFound);
    expect((await answerRun(caller, (await standingRun(caller))?.id ?? '')).season).toBe('2024');
  });
});

describe('days and units', () => {
  it('names the days of the run when one end lies outside', async () => {
    const ask = (query: string) => reaches(request(`/api/v1/runs/${made.runId}/reaches?${query}`, { token }));
    for (const query of ['from=2030-01-01', 'to=2020-01-01']) {
      const { detail } = await refusal(await ask(query), 400);
      expect(detail).toContain(query.split('=')[1]);
      expect(detail).toMatch(/2024-04-01 to 2024-04-14/);
    }
    expect((await refusal(await ask('from=2024-04-09&to=2024-04-02'), 400)).detail).toMatch(/2024-04-09 is after to 2024-04-02/);
  });

  it('gives lengths in miles: 1000 m is 0.621371 mile (NIST SP 811 Appendix B.8)', async () => {
    const { items } = await (await canals(request('/api/v1/canals?units=us', { token }))).json();
    expect(items[0].length_mi).toBeCloseTo(0.621371, 6);
    expect(items[0]).not.toHaveProperty('length_km');
    const reached = await (await reaches(request(`/api/v1/runs/${made.runId}/reaches?units=us`, { token }))).json();
    expect(reached.items[0].length_mi).toBeCloseTo(0.621371, 6);
  });
});

describe('a grower of parcels that are not there', () => {
  it('422 naming each, and nobody is made', async () => {
    const body = {
      email: 'new@example.org',
      name: 'New',
      password: 'long enough for new',
      role: 'grower',
      parcels: ['P-1', 'P-77', 'P-78'],
    };
    const said = await refusal(await saveMember(request('/api/v1/members', { token, body })), 422);
    expect(said.findings?.map(({ code, value }) => [code, value])).toEqual([
      ['unknown-parcel', 'P-77'],
      ['unknown-parcel', 'P-78'],
    ]);
    const { items } = await (await members(request('/api/v1/members', { token }))).json();
    expect(items.map((item: { email: string }) => item.email)).not.toContain('new@example.org');
    await refusal(await saveMember(request('/api/v1/members', { token: made.tokens.other, body: { ...body, parcels: ['P-99'] } })), 422);
    const good = await saveMember(request('/api/v1/members', { token, body: { ...body, parcels: ['P-1', '=P-3', 'P-1'] } }));
    expect(good.status).toBe(201);
    expect((await good.json()).parcels.sort()).toEqual(['=P-3', 'P-1']);
  });
});
