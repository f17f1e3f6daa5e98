/** Two districts side by side on one service: nothing of one is ever shown to the other, by any call, page, tile, array or download. */
import { expect, test } from '@playwright/test';
import { type Api, csv, featureCollection, newDistrict, signIn, square } from './api.ts';

const BASE = process.env.BASE_URL as string;
/** A word that stands in every name of the other district and nowhere else. */
const MARK = 'Zebra';
const SEASON = { code: '2023', name: `${MARK} season`, start_date: '2023-05-01', end_date: '2023-07-31' };

interface Side {
  readonly api: Api;
  readonly cookie: string;
  readonly run: string;
  readonly importId: string;
  readonly token: string;
  readonly member: string;
}

let own: Side;
let other: Side;

test.describe.configure({ mode: 'serial' });

test.beforeAll(async () => {
  const manager = await signIn(BASE, 'manager@arrowmere.example', process.env.TILLWATER_DEMO_PASSWORD as string);
  own = await makeSide(manager, 'own', 'Ownfield');
  other = await makeSide(manager, 'other', MARK);
});

test('the other district’s own calls do show its names: the check below can fail', async () => {
  for (const path of ['/api/v1/district', '/api/v1/parcels', '/api/v1/weather/sites', '/api/v1/canals', '/api/v1/seasons']) {
    expect(JSON.stringify((await other.api.get(path)).body), path).toContain(MARK);
  }
});

test('every reading call of the interface, with the other district’s ids', async () => {
  const document = await own.api.ok('GET', '/api/v1/openapi.json');
  const paths = Object.entries(document.paths as Record<string, Record<string, unknown>>).filter(([, methods]) => 'get' in methods);
  expect(paths.length).toBeGreaterThan(40);
  for (const [template] of paths) {
    const path = filled(template, other);
    const credentialsOfBoth: Record<string, string>[] = [{ authorization: `Bearer ${own.api.token}` }, { cookie: own.cookie }];
    for (const credentials of credentialsOfBoth) {
      const controller = new AbortController();
      const response = await fetch(`${BASE}${path}`, { headers: credentials, signal: controller.signal });
      const streamed = response.headers.get('content-type')?.includes('event-stream');
      const text = streamed ? '' : await response.text();
      controller.abort();
      expect(text, `${path} answered ${response.status}`).not.toContain(MARK);
      if (/\{(id|file|variable|version)\}/.test(template)) expect(response.status, path).toBeGreaterThanOrEqual(400);
    }
  }
});

test('every changing call of the interface, with the other district’s ids', async () => {
  const before = await snapshot(other.api);
  const calls: [string, string, unknown?][] = [
    ['POST', `/api/v1/runs/${other.run}/cancel`],
    ['POST', `/api/v1/imports/${other.importId}/apply`],
    ['POST', `/api/v1/imports/${other.importId}/undo`],
    ['POST', `/api/v1/imports/${other.importId}/cancel`],
    ['PATCH', `/api/v1/imports/${other.importId}`, { recompute: false }],
    ['DELETE', `/api/v1/tokens/${other.token}`],
    ['DELETE', `/api/v1/members/${other.member}`],
  ];
  for (const [method, path, body] of calls) {
    const answer = await own.api.call(method, path, body);
    expect(answer.status, `${method} ${path}`).toBe(404);
    expect(JSON.stringify(answer.body)).not.toContain(MARK);
  }
  expect(await snapshot(other.api)).toEqual(before);
});

test('tiles show no shape of the other district', async () => {
  const place = { z: 12, x: Math.floor(((-2.1 + 180) / 360) * 4096), y: tileRow(41.05, 12) };
  for (const layer of ['parcels', 'canals']) {
    const version = (await other.api.ok('GET', '/api/v1/district')).geometry_version;
    const path = `/api/v1/tiles/${layer}/${version}/${place.z}/${place.x}/${place.y}.mvt`;
    const theirs = await fetch(`${BASE}${path}`, { headers: { authorization: `Bearer ${other.api.token}` } });
    expect((await theirs.arrayBuffer()).byteLength, `${path} with the right token`).toBeGreaterThan(20);
    const mine = await fetch(`${BASE}${path}`, { headers: { authorization: `Bearer ${own.api.token}` } });
    expect((await mine.arrayBuffer()).byteLength === 0 || mine.status === 404, `${path} with the wrong token: ${mine.status}`).toBe(true);
  }
});

test('every page, with the other district’s codes in its address', async () => {
  const pages = [
    '/',
    '/parcels',
    '/parcels/P-77',
    '/parcels/P-77/working/2023-06-01',
    '/canals',
    '/weather',
    '/weather/S-77',
    '/crops',
    '/imports',
    `/imports/${other.importId}`,
    '/runs',
    `/runs/${other.run}`,
    '/methods',
    '/reports',
    '/settings',
    `/parcels?run=${other.run}`,
    `/canals?run=${other.run}`,
  ];
  for (const path of pages) {
    const response = await fetch(`${BASE}${path}`, { headers: { cookie: own.cookie, accept: 'text/html' } });
    expect(await response.text(), `${path} answered ${response.status}`).not.toContain(MARK);
  }
});

test('nobody signed in sees anything', async () => {
  for (const path of [
    '/api/v1/parcels',
    `/api/v1/runs/${other.run}/summary`,
    '/api/v1/district',
    `/api/v1/runs/${other.run}/reports/parcels.csv`,
  ]) {
    const response = await fetch(`${BASE}${path}`);
    expect(response.status, path).toBe(401);
    expect(await response.text()).not.toContain(MARK);
  }
});

async function makeSide(manager: string, code: string, word: string): Promise<Side> {
  const unique = `${code}-${Date.now().toString(36)}`;
  const place = word === MARK ? { longitude: -2.1, latitude: 41.05 } : { longitude: -6.3, latitude: 38.4 };
  const { api, cookie } = await newDistrict(
    BASE,
    { cookie: manager },
    { code: unique, name: `${word} Water (invented)`, time_zone: 'UTC' },
  );
  await api.ok('POST', '/api/v1/seasons', { ...SEASON, name: `${word} season` });
  const codes = word === MARK ? '77' : '11';
  const { longitude, latitude } = place;
  await api.bring('stations', {
    'stations.csv': csv(
      ['site', 'name', 'latitude', 'longitude', 'elevation', 'wind_height'],
      [[`S-${codes}`, `${word} mast`, latitude, longitude, 300, 2]],
    ),
  });
  await api.bring('weather', { 'weather.csv': weatherCsv(`S-${codes}`) }, { source: `${word} source` });
  const line = {
    type: 'LineString',
    coordinates: [
      [longitude, latitude],
      [longitude + 0.02, latitude],
    ],
  };
  await api.bring('canals', {
    'canals.geojson': featureCollection([
      { geometry: line, properties: { reach: `R-${codes}`, name: `${word} main`, kind: 'main', capacity_m3_s: 2 } },
    ]),
  });
  const applied = await api.bring(
    'parcels',
    {
      'parcels.geojson': featureCollection([
        {
          geometry: { type: 'Polygon', coordinates: square(longitude + 0.002, latitude + 0.001, 400) },
          properties: { code: `P-${codes}`, name: `${word} meadow`, reach: `R-${codes}`, crop: 'potato' },
        },
      ]),
    },
    { season: SEASON.code },
  );
  const run = await api.run(SEASON.code);
  expect(run.state, run.error ?? '').toBe('done');
  const [token] = (await api.ok('GET', '/api/v1/tokens')).items;
  const [member] = (await api.ok('GET', '/api/v1/members')).items;
  return { api, cookie, run: run.id, importId: applied.id, token: token.id, member: member.user_id };
}

function filled(template: string, side: Side): string {
  const id = template.includes('/imports/') ? side.importId : side.run;
  const values: Record<string, string> = {
    id,
    code: template.includes('/sites/') ? 'S-77' : template.includes('/crops/') ? 'potato' : 'P-77',
    variable: 'gross_requirement',
    period: template.includes('reach-values') ? 'weeks' : 'season',
    file: 'parcels.csv',
    layer: 'parcels',
    version: '999',
    z: '1',
    x: '0',
    y: '0',
  };
  const path = template.replace(/\{(\w+)\}/g, (_, name: string) => values[name]);
  return path.endsWith('/working') ? `${path}?date=2023-06-01` : path;
}

function tileRow(latitude: number, zoom: number): number {
  const radians = (latitude * Math.PI) / 180;
  return Math.floor(((1 - Math.asinh(Math.tan(radians)) / Math.PI) / 2) * 2 ** zoom);
}

async function snapshot(api: Api) {
  const [district, runs, imports, tokens, members] = await Promise.all(
    ['district', 'runs', 'imports', 'tokens', 'members'].map((name) => api.ok('GET', `/api/v1/${name}`)),
  );
  const withoutUse = tokens.items.map((token: Record<string, unknown>) => ({ ...token, last_used_at: null }));
  return { district, runs, imports, tokens: withoutUse, members };
}

function weatherCsv(site: string): string {
  const rows = Array.from({ length: 92 }, (_, day) => [
    site,
    new Date(Date.UTC(2023, 4, 1 + day)).toISOString().slice(0, 10),
    28,
    13,
    50,
    24,
    2,
    day % 10 === 0 ? 5 : 0,
  ]);
  return csv(['site', 'date', 'tmax_c', 'tmin_c', 'rh_mean_pct', 'solar_mj', 'wind_m_s', 'rain_mm'], rows);
}
