/** A script's view of a service: JSON over HTTP with a token, and the waiting that imports and runs ask for. */
import { expect } from '@playwright/test';

export interface Answer {
  readonly status: number;
  // biome-ignore lint/suspicious/noExplicitAny: answers of many calls; each test asserts on what it reads
  readonly body: any;
  readonly headers: Headers;
}

export class Api {
  constructor(
    readonly base: string,
    readonly token: string,
  ) {}

  async call(method: string, path: string, body?: unknown): Promise<Answer> {
    const form = body instanceof FormData;
    const response = await fetch(`${this.base}${path}`, {
      method,
      headers: { authorization: `Bearer ${this.token}`, ...(body && !form ? { 'content-type': 'application/json' } : {}) },
      body: form ? body : body === undefined ? undefined : JSON.stringify(body),
    });
    const text = await response.text();
    const json = response.headers.get('content-type')?.includes('json');
    return { status: response.status, body: json ? JSON.parse(text) : text, headers: response.headers };
  }

  get(path: string): Promise<Answer> {
    return this.call('GET', path);
  }

  async ok(method: string, path: string, body?: unknown) {
    const answer = await this.call(method, path, body);
    expect(answer.status, `${method} ${path}: ${JSON.stringify(answer.body).slice(0, 800)}`).toBeLessThan(300);
    return answer.body;
  }

  /** Uploads files of one kind and waits until they are read. */
  async upload(kind: string, files: Record<string, string>, options: Record<string, unknown> = {}) {
    const form = new FormData();
    form.set('kind', kind);
    form.set('options', JSON.stringify({ recompute: false, ...options }));
    for (const [name, text] of Object.entries(files)) form.append('file', new File([text], name));
    const { id } = await this.ok('POST', '/api/v1/imports', form);
    return this.settled(`/api/v1/imports/${id}`, ['ready', 'failed']);
  }

  /** Uploads, checks that nothing was refused, applies, and waits until it is applied. */
  async bring(kind: string, files: Record<string, string>, options: Record<string, unknown> = {}) {
    const read = await this.upload(kind, files, options);
    expect(read.state, JSON.stringify(read.findings?.slice(0, 5) ?? read.error)).toBe('ready');
    await this.ok('POST', `/api/v1/imports/${read.id}/apply`);
    const applied = await this.settled(`/api/v1/imports/${read.id}`, ['applied', 'failed']);
    expect(applied.state, applied.error ?? '').toBe('applied');
    return applied;
  }

  /** Starts a run and waits for its end. */
  async run(season: string, settings: Record<string, unknown> = {}) {
    const { id } = await this.ok('POST', '/api/v1/runs', { season, settings });
    return this.settled(`/api/v1/runs/${id}`, ['done', 'failed', 'cancelled']);
  }

  async settled(path: string, states: readonly string[], timeout = 120_000) {
    let body: Answer['body'];
    await expect
      .poll(
        async () => {
          body = await this.ok('GET', path);
          return body.state;
        },
        { timeout, intervals: [100, 200, 400] },
      )
      .toMatch(new RegExp(`^(${states.join('|')})$`));
    return body;
  }

  /** Every row of a paged list. */
  async all(path: string) {
    const rows: Answer['body'][] = [];
    let cursor: string | null = null;
    do {
      const page: Answer['body'] = await this.ok(
        'GET',
        `${path}${path.includes('?') ? '&' : '?'}limit=500${cursor ? `&cursor=${cursor}` : ''}`,
      );
      rows.push(...page.items);
      cursor = page.next_cursor;
    } while (cursor);
    return rows;
  }
}

/** Makes a district of its own on an installation, as the holder of a set-up token or a manager's session, and a token that administers it. */
export async function newDistrict(base: string, authorisation: { setup: string } | { cookie: string }, wanted: Record<string, unknown>) {
  const manager = { name: 'Test Manager', email: `manager@${wanted.code}.example`, password: 'a password of the tests' };
  const headers: Record<string, string> = { 'content-type': 'application/json', origin: base };
  if ('setup' in authorisation) headers.authorization = `Bearer ${authorisation.setup}`;
  else headers.cookie = authorisation.cookie;
  const made = await fetch(`${base}/api/v1/districts`, { method: 'POST', headers, body: JSON.stringify({ ...wanted, manager }) });
  expect(made.status, await made.clone().text()).toBe(201);
  const cookie = await signIn(base, manager.email, manager.password);
  const token = await fetch(`${base}/api/v1/tokens`, {
    method: 'POST',
    headers: { 'content-type': 'application/json', origin: base, cookie },
    body: JSON.stringify({ name: 'tests', scope: 'administer', expires_in_days: 1 }),
  });
  expect(token.status, await token.clone().text()).toBe(201);
  return { api: new Api(base, (await token.json()).token), cookie, district: await made.json() };
}

/** @returns the cookies of a session, as a request sends them */
export async function signIn(base: string, email: string, password: string): Promise<string> {
  const response = await fetch(`${base}/api/v1/sign-in`, {
    method: 'POST',
    headers: { 'content-type': 'application/json', origin: base },
    body: JSON.stringify({ email, password }),
  });
  expect(response.status, await response.clone().text()).toBeLessThan(300);
  return response.headers
    .getSetCookie()
    .map((cookie) => cookie.split(';')[0])
    .join('; ');
}

/** A square parcel of about `side` metres with its south-west corner at a place. */
export function square(longitude: number, latitude: number, side: number): number[][][] {
  const dLatitude = side / 111_000;
  const dLongitude = side / (111_320 * Math.cos((latitude * Math.PI) / 180));
  const [west, south, east, north] = [longitude, latitude, longitude + dLongitude, latitude + dLatitude];
  return [
    [
      [west, south],
      [east, south],
      [east, north],
      [west, north],
      [west, south],
    ],
  ];
}

export function featureCollection(features: { geometry: unknown; properties: Record<string, unknown> }[]): string {
  return JSON.stringify({ type: 'FeatureCollection', features: features.map((feature) => ({ type: 'Feature', ...feature })) });
}

export function csv(head: readonly string[], rows: readonly (readonly (string | number)[])[]): string {
  return [head, ...rows].map((row) => row.join(',')).join('\n');
}
