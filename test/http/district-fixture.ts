/** Two invented districts with people, tokens, land and one finished run, small enough to reckon by hand. */
import type { Database } from '../../db/connect.ts';
import { saveMembership } from '../../db/queries/memberships.ts';
import { parcel, planting, reach, season, turnout } from '../../db/schema/land.ts';
import { run, runParcel, runReach, runValue } from '../../db/schema/run.ts';
import { createPerson, signIn } from '../../lib/access/sessions.ts';
import { createToken } from '../../lib/access/tokens.ts';
import { createDistrict } from '../../lib/http/answers/district.ts';
import { districtRequest } from '../../lib/http/contract/rest.ts';
import { MAP_VARIABLES } from '../../lib/jobs/map-arrays.ts';
import { DAILY_VARIABLES, type DailyVariable, MISSING_STORED } from '../../lib/season/types.ts';

export const PASSWORD = 'a password of the tests';
export const HOST = 'localhost:3000';

/** The run: 14 days from a Monday, in two delivery weeks. */
export const RUN = { start: '2024-04-01', end: '2024-04-14', days: 14 } as const;

export interface Fixture {
  readonly a: { id: string; code: string };
  readonly b: { id: string; code: string };
  readonly tokens: { read: string; write: string; administer: string; other: string; expired: string };
  readonly runId: string;
  readonly otherRunId: string;
  readonly waitingRunId: string;
}

export async function makeFixture(db: Database): Promise<Fixture> {
  const manager = await createPerson({ name: 'Ana Manager', email: 'ana@example.org', password: PASSWORD });
  const other = await createPerson({ name: 'Bo Manager', email: 'bo@example.org', password: PASSWORD });
  const a = await createDistrict(districtRequest.parse({ code: 'alder', name: 'Alder', time_zone: 'America/Boise' }), manager);
  const b = await createDistrict(districtRequest.parse({ code: 'birch', name: 'Birch', time_zone: 'America/Boise' }), other);
  for (const [name, role, parcels] of [
    ['olga', 'operator', []],
    ['reg', 'regulator', []],
    ['gus', 'grower', ['P-2']],
  ] as const) {
    const userId = await createPerson({ name, email: `${name}@example.org`, password: PASSWORD });
    await db.inDistrict(a.id, (tx) => saveMembership(tx, a.id, { userId, role, parcels: [...parcels] }));
  }
  const token = async (districtId: string, scope: 'read' | 'write' | 'administer', expiresInDays = 30) =>
    (await createToken(districtId, { name: `${scope} of tests`, scope, expiresInDays })).token;
  const tokens = {
    read: await token(a.id, 'read'),
    write: await token(a.id, 'write'),
    administer: await token(a.id, 'administer'),
    other: await token(b.id, 'administer'),
    expired: await token(a.id, 'administer', -1),
  };
  await makeLand(db, a.id);
  await makeLand(db, b.id);
  const runId = await makeRun(db, a.id);
  const otherRunId = await makeRun(db, b.id);
  const waitingRunId = await db.inDistrict(a.id, async (tx) => {
    const values = { districtId: a.id, seasonCode: '2024', startDate: RUN.start, endDate: RUN.end, dayCount: RUN.days, settings: {} };
    const [row] = await tx.insert(run).values(values).returning();
    return row.runId;
  });
  return { a, b, tokens, runId, otherRunId, waitingRunId };
}

/** Three square parcels side by side; the code of the third would run as a formula in a spreadsheet. */
export const PARCELS = [
  { code: 'P-1', area: 10_000, reachCode: 'M', cropCodes: ['maize-grain'] },
  { code: 'P-2', area: 20_000, reachCode: 'L', cropCodes: ['maize-grain'] },
  { code: '=P-3', area: 40_000, reachCode: 'L', cropCodes: [] },
];

async function makeLand(db: Database, districtId: string): Promise<void> {
  await db.inDistrict(districtId, async (tx) => {
    await tx.insert(season).values({ districtId, code: '2024', name: 'Season 2024', startDate: RUN.start, endDate: RUN.end });
    const line = (from: number) => ({
      type: 'LineString',
      coordinates: [
        [-116 + from, 43.6],
        [-116 + from + 0.01, 43.6],
      ],
    });
    const common = { districtId, lossRule: { kind: 'none' }, length: 1000 };
    await tx.insert(reach).values([
      { ...common, code: 'M', name: 'Main', parentCode: null, kind: 'main', capacity: 0.01, geometry: line(0) },
      { ...common, code: 'L', name: 'Lateral', parentCode: 'M', kind: 'lateral', capacity: null, geometry: line(0.01) },
    ]);
    await tx.insert(turnout).values({ districtId, code: 'T-1', reachCode: 'M' });
    for (const [ordinal, given] of PARCELS.entries()) await tx.insert(parcel).values(parcelRow(districtId, ordinal, given));
    await tx.insert(planting).values({
      districtId,
      parcelCode: 'P-1',
      seasonCode: '2024',
      sequence: 1,
      cropCode: 'maize-grain',
      calendarCode: 'maize-grain-idaho',
      plantingDate: '2024-04-05',
    });
  });
}

function parcelRow(districtId: string, ordinal: number, given: (typeof PARCELS)[number]) {
  const [west, south] = [-116 + ordinal * 0.004, 43.6];
  const [east, north] = [west + 0.003, south + 0.003];
  const ring = [
    [west, south],
    [east, south],
    [east, north],
    [west, north],
    [west, south],
  ];
  const box = { west, south, east, north, longitude: west + 0.0015, latitude: south + 0.0015 };
  const { code, area, reachCode } = given;
  return {
    districtId,
    code,
    ordinal,
    area,
    reachCode,
    turnoutCode: code === 'P-1' ? 'T-1' : null,
    ...box,
    geometry: { type: 'Polygon', coordinates: [ring] },
  };
}

/**
 * P-1: gross 2.54 mm and net 1.27 mm each day, rain 0.1 mm each day, depletion 10 mm on day 0 and 1 mm more each day. P-2: as P-1, with the
 * third day missing. =P-3: nothing but zeros.
 */
function storedDays(code: string): Uint8Array {
  const stored = new Uint16Array(DAILY_VARIABLES.length * RUN.days);
  const put = (id: DailyVariable, value: (day: number) => number) => {
    const index = DAILY_VARIABLES.findIndex((variable) => variable.id === id);
    for (let day = 0; day < RUN.days; day++) stored[index * RUN.days + day] = Math.round(value(day) * DAILY_VARIABLES[index].scale);
  };
  if (code !== '=P-3') {
    put('gross_requirement', () => 2.54);
    put('net_requirement', () => 1.27);
    put('precipitation', () => 0.1);
    put('root_zone_depletion', (day) => 10 + day);
    put('stress_coefficient', (day) => (day < 7 ? 1 : 0.5));
  }
  if (code === 'P-2')
    for (let variable = 0; variable < DAILY_VARIABLES.length; variable++) stored[variable * RUN.days + 2] = MISSING_STORED;
  return new Uint8Array(stored.buffer);
}

/** Wind assumed (bit 6) on the last day of P-1; dew point (bit 0), which counts as measured, on the first. */
function storedFlags(code: string): Uint8Array {
  const flags = new Uint16Array(RUN.days);
  if (code === 'P-1') [flags[0], flags[RUN.days - 1]] = [1 << 0, 1 << 6];
  return new Uint8Array(flags.buffer);
}

async function makeRun(db: Database, districtId: string): Promise<string> {
  return db.inDistrict(districtId, async (tx) => {
    const [{ runId }] = await tx
      .insert(run)
      .values({
        districtId,
        seasonCode: '2024',
        state: 'done',
        standing: true,
        progress: 1,
        startDate: RUN.start,
        endDate: RUN.end,
        dayCount: RUN.days,
        parcelCount: PARCELS.length,
        settings: {},
        finishedAt: new Date('2024-05-01T00:00:00Z'),
      })
      .returning();
    await tx.insert(runParcel).values(
      PARCELS.map(({ code, area, reachCode, cropCodes }, position) => ({
        ...{ districtId, runId, position, slice: 0, parcelCode: code, reachCode, cropCodes, area },
        turnoutCode: code === 'P-1' ? 'T-1' : null,
        methodCode: 'furrow',
        soilCode: 'loam',
        input: {},
        daily: storedDays(code),
        flags: storedFlags(code),
      })),
    );
    for (const { id } of MAP_VARIABLES) {
      for (const [period, periodCount] of [
        ['week', 2],
        ['month', 1],
        ['season', 1],
      ] as const) {
        const values = new Uint8Array(mapNumbers(periodCount).buffer);
        await tx.insert(runValue).values({ districtId, runId, variable: id, period, periodCount, parcelCount: PARCELS.length, values });
      }
    }
    await tx.insert(runReach).values([reachRow(districtId, runId, 0), reachRow(districtId, runId, 1)]);
    return runId;
  });
}

/** 100 × period + position + 0.5, whatever the variable. */
function mapNumbers(periodCount: number): Float32Array {
  return Float32Array.from(
    { length: periodCount * PARCELS.length },
    (_, i) => 100 * Math.floor(i / PARCELS.length) + (i % PARCELS.length) + 0.5,
  );
}

/** Lateral: 400 m³ of turnouts and 100 m³ lost each day. Main: 164 m³ of turnouts, 200 m³ lost, so that 864 m³ enter: 0.01 m³/s, its capacity. */
function reachRow(districtId: string, runId: string, ordinal: number) {
  const [demand, loss, inflow] = ordinal === 0 ? [164, 200, 864] : [400, 100, 500];
  const daily = new Float64Array(3 * RUN.days);
  daily
    .fill(demand, 0, RUN.days)
    .fill(loss, RUN.days, 2 * RUN.days)
    .fill(inflow, 2 * RUN.days);
  return {
    ...{ districtId, runId, ordinal, length: 1000, lossRule: { kind: 'none' }, daily: new Uint8Array(daily.buffer) },
    ...(ordinal === 0
      ? { reachCode: 'M', parentCode: null, name: 'Main', kind: 'main', capacity: 0.01 }
      : { reachCode: 'L', parentCode: 'M', name: 'Lateral', kind: 'lateral', capacity: null }),
  };
}

/** Session cookie of a person of the fixture. */
export async function cookieOf(name: string): Promise<string> {
  const cookies = await signIn(new Headers({ host: HOST }), { email: `${name}@example.org`, password: PASSWORD });
  if (!cookies) throw new Error(`${name} cannot sign in`);
  return cookies.map((cookie) => cookie.split(';')[0]).join('; ');
}

export interface Sent {
  readonly token?: string;
  readonly cookie?: string;
  readonly method?: string;
  readonly body?: unknown;
  readonly headers?: Record<string, string>;
}

/** A request as a route gets it; JSON when there is a body, from our own page when there is a cookie. */
export function request(path: string, sent: Sent = {}): Request {
  const headers = new Headers({ host: HOST });
  if (sent.token) headers.set('authorization', `Bearer ${sent.token}`);
  if (sent.cookie) {
    headers.set('cookie', sent.cookie);
    headers.set('sec-fetch-site', 'same-origin');
  }
  if (sent.body !== undefined) headers.set('content-type', 'application/json');
  for (const [name, value] of Object.entries(sent.headers ?? {})) headers.set(name, value);
  const body = sent.body === undefined ? undefined : typeof sent.body === 'string' ? sent.body : JSON.stringify(sent.body);
  return new Request(`http://${HOST}${path}`, { method: sent.method ?? (body === undefined ? 'GET' : 'POST'), headers, body });
}
