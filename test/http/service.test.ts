/** The service's own pages: alive, ready, measured, documented. */

import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as district } from '../../app/api/v1/district/route.ts';
import { GET as openApi } from '../../app/api/v1/openapi.json/route.ts';
import { GET as alive } from '../../app/healthz/route.ts';
import { GET as metrics } from '../../app/metrics/route.ts';
import { GET as ready } from '../../app/readyz/route.ts';
import { rereadEnvironment } from '../../lib/access/environment.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
});
afterAll(() => fresh.close());

function listenOn(host: string): void {
  process.env.HOST = host;
  rereadEnvironment();
}

describe('healthz, readyz', () => {
  it('say alive and ready on a migrated database', async () => {
    expect(alive().status).toBe(200);
    const response = await ready();
    expect(response.status).toBe(200);
    expect(await response.json()).toEqual({ ready: true, database: 'answers', schema: 'newest' });
  });
});

describe('metrics', () => {
  it('are Prometheus text for this machine', async () => {
    await district(request('/api/v1/district', { token: made.tokens.read }));
    const response = await metrics(request('/metrics', { headers: { 'x-forwarded-for': '127.0.0.1' } }));
    expect(response.status).toBe(200);
    const text = await response.text();
    expect(text).toMatch(/^tillwater_answers_total\{method="GET",path="\/api\/v1\/district",status="200"\} \d+$/m);
    expect(text).toMatch(/^process_cpu_seconds_total /m);
  });

  it('are refused to a caller elsewhere, also one who claims to be here, without a token that administers', async () => {
    expect((await metrics(request('/metrics', { headers: { 'x-forwarded-for': '203.0.113.9' } }))).status).toBe(401);
    expect((await metrics(request('/metrics', { headers: { 'x-forwarded-for': '127.0.0.1, 203.0.113.9' } }))).status).toBe(401);
    expect((await metrics(request('/metrics', { token: made.tokens.write }))).status).toBe(403);
    listenOn('0.0.0.0');
    expect((await metrics(request('/metrics', { headers: { 'x-forwarded-for': '127.0.0.1' } }))).status).toBe(401);
    expect((await metrics(request('/metrics', { token: made.tokens.administer }))).status).toBe(200);
    listenOn('');
  });
});

describe('openapi.json', () => {
  it('is open to everybody', async () => {
    const response = await openApi(request('/api/v1/openapi.json'));
    expect(response.status).toBe(200);
    expect((await response.json()).openapi).toBe('3.1.0');
  });
});
