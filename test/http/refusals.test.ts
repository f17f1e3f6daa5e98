/** Every documented refusal, and how far roles and tokens reach. Statuses: RFC 9110; problem details: RFC 9457; Retry-After: RFC 6585 section 4. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as crops } from '../../app/api/v1/crops/route.ts';
import { PATCH as changeDistrict, GET as district } from '../../app/api/v1/district/route.ts';
import { POST as createDistrict } from '../../app/api/v1/districts/route.ts';
import { DELETE as removeMember } from '../../app/api/v1/members/[user]/route.ts';
import { GET as members, POST as saveMember } from '../../app/api/v1/members/route.ts';
import { GET as parcel } from '../../app/api/v1/parcels/[code]/route.ts';
import { GET as parcels } from '../../app/api/v1/parcels/route.ts';
import { POST as preferences } from '../../app/api/v1/preferences/route.ts';
import { POST as cancel } from '../../app/api/v1/runs/[id]/cancel/route.ts';
import { GET as runParcels } from '../../app/api/v1/runs/[id]/parcels/route.ts';
import { GET as readRun } from '../../app/api/v1/runs/[id]/route.ts';
import { GET as summary } from '../../app/api/v1/runs/[id]/summary/route.ts';
import { POST as createRun } from '../../app/api/v1/runs/route.ts';
import { POST as createSeason, GET as seasons } from '../../app/api/v1/seasons/route.ts';
import { POST as signInRoute } from '../../app/api/v1/sign-in/route.ts';
import { POST as signOutRoute } from '../../app/api/v1/sign-out/route.ts';
import { DELETE as withdrawToken } from '../../app/api/v1/tokens/[id]/route.ts';
import { POST as createTokenRoute, GET as tokens } from '../../app/api/v1/tokens/route.ts';
import { createSetupToken } from '../../lib/access/tokens.ts';
import { problem } from '../../lib/http/contract/common.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { cookieOf, type Fixture, HOST, makeFixture, PASSWORD, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
});
afterAll(() => fresh.close());

async function refusal(response: Response, status: number) {
  expect(response.status).toBe(status);
  expect(response.headers.get('content-type')).toBe('application/problem+json');
  const body = problem.parse(await response.json());
  expect(body.status).toBe(status);
  expect(JSON.stringify(body)).not.toMatch(/node_modules|\.ts:\d/);
  return body;
}

describe('who asks', () => {
  it('401 without token or cookie, and says how to authenticate', async () => {
    const response = await district(request('/api/v1/district'));
    expect(response.headers.get('www-authenticate')).toBe('Bearer');
    await refusal(response, 401);
  });

  it('401 for a token that is not known, has expired or was withdrawn', async () => {
    await refusal(await district(request('/api/v1/district', { token: `tw_${'x'.repeat(43)}` })), 401);
    expect((await refusal(await district(request('/api/v1/district', { token: made.tokens.expired })), 401)).detail).toMatch(/expired/);
    const response = await createTokenRoute(
      request('/api/v1/tokens', { token: made.tokens.administer, body: { name: 'short-lived', scope: 'read' } }),
    );
    const { id, token } = await response.json();
    expect(token).toMatch(/^tw_[\w-]{43}$/);
    expect((await district(request('/api/v1/district', { token }))).status).toBe(200);
    expect((await withdrawToken(request(`/api/v1/tokens/${id}`, { token: made.tokens.administer, method: 'DELETE' }))).status).toBe(204);
    await refusal(await district(request('/api/v1/district', { token })), 401);
  });

  it('401 for another scheme than Bearer', async () => {
    await refusal(await district(request('/api/v1/district', { headers: { authorization: 'Basic YTpi' } })), 401);
  });

  it('never shows a token or its hash in the list', async () => {
    const text = await (await tokens(request('/api/v1/tokens', { token: made.tokens.administer }))).text();
    expect(text).toContain('"prefix":"tw_');
    for (const token of Object.values(made.tokens)) expect(text).not.toContain(token);
    expect(text).not.toMatch(/[0-9a-f]{64}/);
  });

  it('signs in with the right password, keeps the cookie from scripts, and signs out', async () => {
    const body = { email: 'olga@example.org', password: PASSWORD };
    const response = await signInRoute(request('/api/v1/sign-in', { body }));
    expect(response.status).toBe(204);
    const [set] = response.headers.getSetCookie();
    expect(set).toMatch(/HttpOnly/i);
    expect(set).toMatch(/SameSite=Lax/i);
    expect(set).not.toMatch(/Secure/i);
    const cookie = set.split(';')[0];
    expect((await district(request('/api/v1/district', { cookie }))).status).toBe(200);
    expect((await signOutRoute(request('/api/v1/sign-out', { cookie, method: 'POST' }))).status).toBe(204);
    await refusal(await district(request('/api/v1/district', { cookie })), 401);
  });

  it('has no second way in, and no sign-up', async () => {
    const { POST } = await import('../../app/api/auth/[...all]/route.ts');
    const headers = { origin: `http://${HOST}` };
    const body = { name: 'X', email: 'olga@example.org', password: PASSWORD };
    for (const path of ['sign-in/email', 'sign-up/email']) {
      const response = await POST(request(`/api/auth/${path}`, { body, headers }));
      expect(response.status, path).toBe(404);
      expect(response.headers.getSetCookie()).toEqual([]);
    }
  });

  it('marks the cookie Secure under https', async () => {
    const headers = { 'x-forwarded-proto': 'https' };
    const response = await signInRoute(request('/api/v1/sign-in', { body: { email: 'reg@example.org', password: PASSWORD }, headers }));
    expect(response.headers.getSetCookie()[0]).toMatch(/; Secure/i);
  });

  it('401 for a wrong password and for an unknown address alike, then 429 with Retry-After', async () => {
    const attempt = (email: string) => signInRoute(request('/api/v1/sign-in', { body: { email, password: 'not the password' } }));
    const known = await refusal(await attempt('bo@example.org'), 401);
    const unknown = await refusal(await attempt('nobody@example.org'), 401);
    expect(unknown.detail).toBe(known.detail);
    for (let i = 0; i < 9; i++) await refusal(await attempt('bo@example.org'), 401);
    const response = await attempt('bo@example.org');
    const wait = Number(response.headers.get('retry-after'));
    expect(wait).toBeGreaterThan(0);
    expect(wait).toBeLessThanOrEqual(60);
    await refusal(response, 429);
  });
});

describe('how far a caller reaches', () => {
  const newSeason = (code: string) => ({ code, start_date: '2025-04-01', end_date: '2025-09-30' });

  it('403 for a read token that writes, and for a write token that administers', async () => {
    await refusal(await createSeason(request('/api/v1/seasons', { token: made.tokens.read, body: newSeason('r') })), 403);
    expect((await createSeason(request('/api/v1/seasons', { token: made.tokens.write, body: newSeason('w') }))).status).toBe(201);
    await refusal(await members(request('/api/v1/members', { token: made.tokens.write })), 403);
    expect((await members(request('/api/v1/members', { token: made.tokens.administer }))).status).toBe(200);
  });

  it('403 for a regulator who writes and an operator who administers', async () => {
    await refusal(await createSeason(request('/api/v1/seasons', { cookie: await cookieOf('reg'), body: newSeason('x') })), 403);
    const cookie = await cookieOf('olga');
    expect((await createSeason(request('/api/v1/seasons', { cookie, body: newSeason('o') }))).status).toBe(201);
    await refusal(await changeDistrict(request('/api/v1/district', { cookie, method: 'PATCH', body: { name: 'Other' } })), 403);
  });

  it('shows a grower the own parcel and 404 for any other', async () => {
    const cookie = await cookieOf('gus');
    const list = await (await parcels(request('/api/v1/parcels', { cookie }))).json();
    expect(list.items.map((item: { code: string }) => item.code)).toEqual(['P-2']);
    expect(list.total).toBe(1);
    await refusal(await parcel(request('/api/v1/parcels/P-1', { cookie })), 404);
    const rows = await (await runParcels(request(`/api/v1/runs/${made.runId}/parcels`, { cookie }))).json();
    expect(rows.items.map((item: { parcel: string }) => item.parcel)).toEqual(['P-2']);
    const totals = await (await summary(request(`/api/v1/runs/${made.runId}/summary`, { cookie }))).json();
    expect(totals.district.parcel_count).toBe(1);
    expect(totals.district.headworks_inflow_m3).toBeNull();
  });

  it('403 for a cookie that another site’s page sends', async () => {
    const cookie = await cookieOf('ana');
    const send = (headers: Record<string, string>) =>
      createSeason(request('/api/v1/seasons', { cookie, body: newSeason(`c${Math.abs(headers.origin?.length ?? 1)}`), headers }));
    await refusal(await send({ 'sec-fetch-site': 'cross-site' }), 403);
    await refusal(await send({ 'sec-fetch-site': 'same-site' }), 403);
    await refusal(await send({ 'sec-fetch-site': '', origin: 'https://elsewhere.example' }), 403);
    await refusal(await send({ 'sec-fetch-site': '', origin: 'null' }), 403);
    await refusal(await send({ 'sec-fetch-site': '' }), 403);
    expect((await send({ 'sec-fetch-site': '', origin: `http://${HOST}` })).status).toBe(201);
  });
});

describe('another district', () => {
  it('404 for its runs and parcels, as for what is not there at all', async () => {
    const { token } = { token: made.tokens.administer };
    const theirs = await refusal(await readRun(request(`/api/v1/runs/${made.otherRunId}`, { token })), 404);
    const nobodys = await refusal(await readRun(request('/api/v1/runs/00000000-0000-4000-8000-000000000000', { token })), 404);
    expect(theirs.detail.replace(/[0-9a-f-]{36}/, '')).toBe(nobodys.detail.replace(/[0-9a-f-]{36}/, ''));
    await refusal(await runParcels(request(`/api/v1/runs/${made.otherRunId}/parcels`, { token })), 404);
    await refusal(await cancel(request(`/api/v1/runs/${made.otherRunId}/cancel`, { token, method: 'POST' })), 404);
    await refusal(await readRun(request('/api/v1/runs/not-an-id', { token })), 404);
  });

  it('never tells of its members or tokens', async () => {
    for (const answer of [
      await members(request('/api/v1/members', { token: made.tokens.administer })),
      await tokens(request('/api/v1/tokens', { token: made.tokens.administer })),
    ]) {
      const text = await answer.text();
      expect(text).not.toContain('bo@example.org');
      expect(text).not.toContain(made.tokens.other.slice(0, 7));
    }
  });

  it('404 for preferring a district one does not belong to', async () => {
    const cookie = await cookieOf('ana');
    await refusal(await preferences(request('/api/v1/preferences', { cookie, body: { district: 'birch' } })), 404);
    const response = await preferences(request('/api/v1/preferences', { cookie, body: { district: 'alder', units: 'us', theme: 'dark' } }));
    expect(response.headers.getSetCookie().map((set) => set.split(';')[0])).toEqual([
      'tillwater_units=us',
      'tillwater_theme=dark',
      'tillwater_district=alder',
    ]);
  });
});

describe('what is sent', () => {
  it('400 for a query that cannot be read, with the parameter at fault', async () => {
    const { token } = { token: made.tokens.read };
    const wrong = await refusal(await runParcels(request(`/api/v1/runs/${made.runId}/parcels?period=fortnight`, { token })), 400);
    expect(wrong.findings?.[0].column).toBe('period');
    await refusal(await runParcels(request(`/api/v1/runs/${made.runId}/parcels?peroid=week`, { token })), 400);
    await refusal(await runParcels(request(`/api/v1/runs/${made.runId}/parcels?limit=0`, { token })), 400);
    await refusal(await runParcels(request(`/api/v1/runs/${made.runId}/parcels?from=2024-02-30`, { token })), 400);
    await refusal(await runParcels(request(`/api/v1/runs/${made.runId}/parcels?cursor=nonsense`, { token })), 400);
    await refusal(await runParcels(request(`/api/v1/runs/${made.runId}/parcels?limit=1&limit=2`, { token })), 400);
    await refusal(await crops(request('/api/v1/crops?units=us', { token })), 400);
  });

  it('400 for a body that is not JSON or lacks a member', async () => {
    const { token } = { token: made.tokens.write };
    await refusal(await createSeason(request('/api/v1/seasons', { token, body: '{"code":' })), 400);
    const lacking = await refusal(await createSeason(request('/api/v1/seasons', { token, body: { code: 'z' } })), 400);
    expect(lacking.findings?.map((finding) => finding.column)).toEqual(['start_date', 'end_date']);
  });

  it('409 for a season that exists, a run without results, and the last manager', async () => {
    const { administer, write } = made.tokens;
    const body = { code: '2024', start_date: '2024-04-01', end_date: '2024-09-30' };
    await refusal(await createSeason(request('/api/v1/seasons', { token: write, body })), 409);
    await refusal(await runParcels(request(`/api/v1/runs/${made.waitingRunId}/parcels`, { token: write })), 409);
    await refusal(await cancel(request(`/api/v1/runs/${made.runId}/cancel`, { token: write, method: 'POST' })), 409);
    const { items } = await (await members(request('/api/v1/members', { token: administer }))).json();
    const ana = items.find((item: { email: string }) => item.email === 'ana@example.org');
    await refusal(await removeMember(request(`/api/v1/members/${ana.user_id}`, { token: administer, method: 'DELETE' })), 409);
    await refusal(
      await saveMember(request('/api/v1/members', { token: administer, body: { email: 'ana@example.org', role: 'operator' } })),
      409,
    );
  });

  it('413 for a body above the limit, whether or not its length is told', async () => {
    const { token } = { token: made.tokens.write };
    const text = JSON.stringify({ code: 'z', start_date: '2024-04-01', end_date: '2024-04-02', name: 'x'.repeat(300 * 1024) });
    await refusal(await createSeason(request('/api/v1/seasons', { token, body: text })), 413);
    await refusal(
      await createSeason(request('/api/v1/seasons', { token, body: text, headers: { 'content-length': String(text.length) } })),
      413,
    );
  });

  it('415 for a body that is not JSON by its type', async () => {
    const response = await createSeason(
      request('/api/v1/seasons', {
        token: made.tokens.write,
        body: 'code=z',
        headers: { 'content-type': 'application/x-www-form-urlencoded' },
      }),
    );
    await refusal(response, 415);
  });

  it('422 for what is understood but cannot be', async () => {
    const { administer, write } = made.tokens;
    const backwards = { code: 'z', start_date: '2024-05-01', end_date: '2024-04-01' };
    await refusal(await createSeason(request('/api/v1/seasons', { token: write, body: backwards })), 422);
    await refusal(await createSeason(request('/api/v1/seasons', { token: write, body: { ...backwards, start_date: '2023-02-29' } })), 422);
    const change = (body: object) => changeDistrict(request('/api/v1/district', { token: administer, method: 'PATCH', body }));
    await refusal(await change({ time_zone: 'Mars/Olympus' }), 422);
    await refusal(await change({ boundary: { type: 'Point', coordinates: [0, 0] } }), 422);
    await refusal(
      await saveMember(request('/api/v1/members', { token: administer, body: { email: 'new@example.org', role: 'grower' } })),
      422,
    );
  });

  it('404 for a run of a season that is not there', async () => {
    await refusal(await createRun(request('/api/v1/runs', { token: made.tokens.write, body: { season: '1999' } })), 404);
  });
});

describe('setting up', () => {
  const body = {
    name: 'Río Claro No. 1',
    time_zone: 'America/Denver',
    manager: { name: 'Cy', email: 'cy@example.org', password: 'long enough for cy' },
  };

  it('makes a district with its libraries and manager from the set-up token, once', async () => {
    const token = await createSetupToken();
    await refusal(await createDistrict(request('/api/v1/districts', { token, body: { ...body, manager: undefined } })), 422);
    await refusal(await createDistrict(request('/api/v1/districts', { token, body: { ...body, code: 'alder' } })), 409);
    const response = await createDistrict(request('/api/v1/districts', { token, body }));
    expect(response.status).toBe(201);
    expect((await response.json()).code).toBe('rio-claro-no-1');
    await refusal(await createDistrict(request('/api/v1/districts', { token, body })), 401);
    const cookies = (
      await signInRoute(request('/api/v1/sign-in', { body: { email: body.manager.email, password: body.manager.password } }))
    ).headers.getSetCookie();
    const cookie = cookies[0].split(';')[0];
    const { items } = await (await crops(request('/api/v1/crops', { cookie }))).json();
    expect(items.length).toBeGreaterThan(20);
    expect(items.every((item: { calendars: unknown[] }) => Array.isArray(item.calendars))).toBe(true);
    expect((await (await seasons(request('/api/v1/seasons', { cookie }))).json()).items).toEqual([]);
  });

  it('403 for an operator, 401 for nobody', async () => {
    await refusal(await createDistrict(request('/api/v1/districts', { token: made.tokens.write, body })), 403);
    await refusal(await createDistrict(request('/api/v1/districts', { body })), 401);
  });
});
