/** Deliveries and measurements: recorded by import and by hand, listed, undone, and what they do to standing runs. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { DELETE as removeDelivery } from '../../app/api/v1/deliveries/[parcel]/[date]/route.ts';
import { GET as deliveries, POST as putDelivery } from '../../app/api/v1/deliveries/route.ts';
import { DELETE as removeMeasurement } from '../../app/api/v1/measurements/[parcel]/[date]/[quantity]/route.ts';
import { GET as measurements, POST as putMeasurement } from '../../app/api/v1/measurements/route.ts';
import { PATCH as patchMethod } from '../../app/api/v1/methods/[code]/route.ts';
import { GET as methods } from '../../app/api/v1/methods/route.ts';
import { GET as soils } from '../../app/api/v1/soils/route.ts';
import { run } from '../../db/schema/run.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import type { StagedImport } from '../../lib/files/reading.ts';
import { performApply } from '../../lib/jobs/import-apply.ts';
import { performUndo } from '../../lib/jobs/import-undo.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { DEFAULT_RUN_SETTINGS } from '../../lib/jobs/run-settings.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { inState, rowsOf, stage, parcel as stagedParcel, stateOf } from '../support/import-district.ts';
import { cookieOf, type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let token: string;

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.write;
  const districtId = made.a.id;
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values({ districtId, sourceId: 1, name: 'stations' });
    await tx.insert(site).values({ districtId, sourceId: 1, ordinal: 0, code: 'S1', name: 'One', longitude: -116, latitude: 43.6 });
    const values = new Uint8Array(new Float32Array(30).fill(20).buffer);
    const block = { districtId, sourceId: 1, variable: 'air_temperature_max_c', month: '2024-04-01', siteCount: 1, dayCount: 30, values };
    await tx.insert(weatherBlock).values({ ...block, quality: new Uint8Array(30).fill(1) });
  });
});
afterAll(async () => {
  await stopQueue();
  await fresh.close();
});

/** The fixture's standing run takes records as these settings say, and stands fresh. */
async function standingTakes(settings: Partial<typeof DEFAULT_RUN_SETTINGS>) {
  await fresh.db.inDistrict(made.a.id, (tx) =>
    tx.update(run).set({ settings: { ...DEFAULT_RUN_SETTINGS, ...settings }, staleSince: null, staleReason: null }),
  );
}

async function staleReason(): Promise<string | null> {
  const [row] = await rowsOf<{ stale_reason: string | null }>(made.a.id, 'select stale_reason from run where standing');
  return row.stale_reason;
}

async function apply(staged: StagedImport, options: Record<string, unknown> = {}) {
  const own = await stage(made.a.id, staged, options);
  await inState(own, 'ready', 'applying');
  await performApply(own);
  const { state, error, understood } = await stateOf(own);
  expect([state, error]).toEqual(['applied', null]);
  return { own, applied: understood.applied };
}

async function undo(own: { districtId: string; importId: string }) {
  await inState(own, 'applied', 'undoing');
  await performUndo(own);
  expect(await stateOf(own)).toMatchObject({ state: 'undone' });
}

const stored = (table: string) => rowsOf(made.a.id, `select * from ${table} order by 2, 3, 4`);

describe('an import of deliveries', () => {
  const staged = (volume: number): StagedImport => ({
    kind: 'deliveries',
    deliveries: [
      { parcelCode: 'P-1', date: '2024-04-03', volume },
      { parcelCode: 'P-2', date: '2024-04-03', volume: 500.25 },
    ],
  });

  it('replaces the day, changes nothing when done again, and is undone to what was', async () => {
    await standingTakes({});
    const first = await apply(staged(100));
    expect(first.applied).toMatchObject({ deliveries_added: 2, deliveries_changed: 0, seasons: [] });
    const before = await stored('delivery');
    const second = await apply(staged(140));
    expect(second.applied).toMatchObject({ deliveries_added: 0, deliveries_changed: 1 });
    const third = await apply(staged(140));
    expect(third.applied).toMatchObject({ deliveries_added: 0, deliveries_changed: 0 });
    expect(await stored('delivery')).toMatchObject([{ volume_m3: 140 }, { volume_m3: 500.25 }]);
    await undo(second.own);
    expect(await stored('delivery')).toEqual(before);
    await undo(first.own);
    expect(await stored('delivery')).toEqual([]);
    expect(await staleReason()).toBeNull();
  });

  it('makes stale only a run that takes deliveries, in its season; so does undoing it', async () => {
    await standingTakes({ water: 'recorded-then-rule' });
    const { own, applied } = await apply(staged(100));
    expect(applied).toMatchObject({ seasons: ['2024'] });
    expect(await staleReason()).toBe('import of deliveries applied');
    await standingTakes({ water: 'recorded' });
    await undo(own);
    expect(await staleReason()).toBe('import of deliveries undone');
    await standingTakes({ water: 'recorded' });
    const outside = await apply({ kind: 'deliveries', deliveries: [{ parcelCode: 'P-1', date: '2023-04-03', volume: 1 }] });
    expect(outside.applied).toMatchObject({ deliveries_added: 1, seasons: [] });
    expect(await staleReason()).toBeNull();
    await undo(outside.own);
  });

  it('undone after a run has come to rest on it makes that run stale', async () => {
    await standingTakes({});
    const { own, applied } = await apply(staged(100));
    expect(applied).toMatchObject({ seasons: [] });
    await standingTakes({ water: 'recorded' });
    await undo(own);
    expect(await staleReason()).toBe('import of deliveries undone');
  });
});

it('an import that removes parcels takes their records along, and its undoing brings them back', async () => {
  await standingTakes({});
  const kept = await apply({
    kind: 'deliveries',
    deliveries: [
      { parcelCode: 'P-1', date: '2024-04-03', volume: 10 },
      { parcelCode: 'P-2', date: '2024-04-03', volume: 20 },
    ],
  });
  const measured = await apply({
    kind: 'measurements',
    measurements: [{ parcelCode: 'P-2', date: '2024-04-03', quantity: 'efficiency', depth: 0, value: 0.7 }],
  });
  const before = [await stored('delivery'), await stored('field_measurement')];
  const staged: StagedImport = {
    ...{ kind: 'parcels', turnouts: [], plantings: [], cropMappings: {} },
    parcels: [stagedParcel('P-1', { attributes: {}, turnoutCode: null, reachCode: null, soilCode: null, methodCode: null })],
  };
  const replaced = await apply(staged, { replace: true });
  expect(replaced.applied).toMatchObject({ parcels_removed: 2 });
  expect(await stored('delivery')).toMatchObject([{ parcel_code: 'P-1' }]);
  expect(await stored('field_measurement')).toEqual([]);
  await undo(replaced.own);
  expect([await stored('delivery'), await stored('field_measurement')]).toEqual(before);
  await undo(measured.own);
  await undo(kept.own);
});

describe('an import of measurements', () => {
  const profile = (depths: readonly number[]): StagedImport => ({
    kind: 'measurements',
    measurements: depths.map((depth) => ({
      parcelCode: 'P-1',
      date: '2024-03-28',
      quantity: 'water_content_m3_m3' as const,
      depth,
      value: 0.2,
    })),
  });

  it('replaces all depths of a day, and is undone', async () => {
    await standingTakes({ initial_state: 'measured' });
    const first = await apply(profile([0.3, 0.6]));
    expect(first.applied).toMatchObject({ measurements_added: 1, seasons: ['2024'] });
    expect(await staleReason()).toBe('import of measurements applied');
    const before = await stored('field_measurement');
    const second = await apply(profile([0.25, 0.5, 0.75]));
    expect((await stored('field_measurement')).map(({ depth_m }) => depth_m)).toEqual([0.25, 0.5, 0.75]);
    await undo(second.own);
    expect(await stored('field_measurement')).toEqual(before);
    await undo(first.own);
    expect(await stored('field_measurement')).toEqual([]);
  });

  it.each([
    ['water_table_depth_m', '2024-04-10', { capillary_rise: true }, { capillary_rise: false }],
    ['soil_salinity_ds_m', '2024-03-01', { salinity: 'stress' }, { salinity: 'off' }],
    ['root_zone_depletion_mm', '2024-04-01', { initial_state: 'measured' }, { initial_state: 'fraction' }],
  ] as const)('of %s touches only runs that take it', async (quantity, date, takes, leaves) => {
    const staged: StagedImport = { kind: 'measurements', measurements: [{ parcelCode: 'P-1', date, quantity, depth: 0, value: 3 }] };
    await standingTakes(leaves);
    const one = await apply(staged);
    expect(await staleReason()).toBeNull();
    await undo(one.own);
    await standingTakes(takes);
    const two = await apply(staged);
    expect(await staleReason()).toBe('import of measurements applied');
    await undo(two.own);
  });
});

describe('the record by hand', () => {
  const post = (handler: typeof putDelivery, path: string, body: object, by = token) =>
    handler(request(path, { token: by, method: 'POST', body }));

  it('takes a delivery by depth, lists it in both systems of units, and removes it', async () => {
    await standingTakes({ water: 'recorded' });
    const answer = await post(putDelivery, '/api/v1/deliveries', { parcel: 'P-2', date: '2024-04-05', gross_depth_mm: 25.4 });
    expect(answer.status).toBe(200);
    // 25.4 mm over 2 ha
    expect(await answer.json()).toEqual({ parcel: 'P-2', date: '2024-04-05', volume_m3: 508, gross_depth_mm: 25.4 });
    expect(await staleReason()).toBe('delivery recorded');
    const us = await (await deliveries(request('/api/v1/deliveries?units=us', { token }))).json();
    expect(us.items[0].gross_depth_in).toBeCloseTo(1, 9);
    expect(us.items[0].volume_acft).toBeCloseTo(508 / 1233.48183754752, 9);
    const csv = await (await deliveries(request('/api/v1/deliveries.csv', { token }))).text();
    expect(csv.trim().split('\r\n')).toEqual(['parcel,date,volume_m3,gross_depth_mm', 'P-2,2024-04-05,508,25.4']);
    await standingTakes({ water: 'recorded' });
    const path = '/api/v1/deliveries/P-2/2024-04-05';
    expect((await removeDelivery(request(path, { token, method: 'DELETE' }))).status).toBe(200);
    expect(await staleReason()).toBe('delivery removed');
    expect((await removeDelivery(request(path, { token, method: 'DELETE' }))).status).toBe(404);
  });

  it('pages without losing a row', async () => {
    for (const day of ['01', '02', '03'])
      await post(putDelivery, '/api/v1/deliveries', { parcel: 'P-1', date: `2024-04-${day}`, volume_m3: 10 });
    const seen: string[] = [];
    for (let cursor = ''; ; ) {
      const page = await (await deliveries(request(`/api/v1/deliveries?limit=2${cursor}`, { token }))).json();
      seen.push(...page.items.map(({ date }: { date: string }) => date));
      if (page.next_cursor === null) break;
      cursor = `&cursor=${page.next_cursor}`;
    }
    expect(seen).toEqual(['2024-04-01', '2024-04-02', '2024-04-03']);
  });

  it('refuses in words what cannot be', async () => {
    const refusal = async (body: object): Promise<{ status: number; detail: string }> => {
      const response = await post(putDelivery, '/api/v1/deliveries', { parcel: 'P-1', date: '2024-04-05', ...body });
      return { status: response.status, detail: (await response.json()).detail };
    };
    expect(await refusal({ volume_m3: -1 })).toMatchObject({ status: 400 });
    expect(await refusal({ volume_m3: 1e12 })).toMatchObject({ status: 400 });
    expect(await refusal({ volume_m3: 5, gross_depth_mm: 5 })).toMatchObject({ status: 400 });
    expect(await refusal({})).toMatchObject({ status: 400 });
    expect(await refusal({ parcel: 'P-9', volume_m3: 5 })).toMatchObject({ status: 404 });
    expect(await refusal({ date: '2024-02-30', volume_m3: 5 })).toEqual({
      status: 422,
      detail: '"2024-02-30" is not a day of the calendar',
    });
    // 7,000 m³ over 1 ha are 700 mm
    const deep = await refusal({ volume_m3: 7000 });
    expect(deep.status).toBe(422);
    expect(deep.detail).toContain('700 mm on parcel P-1 in a day; at most 600 mm (6000 m³)');
    expect(
      (await post(putDelivery, '/api/v1/deliveries', { parcel: 'P-1', date: '2024-04-05', volume_m3: 5 }, made.tokens.read)).status,
    ).toBe(403);
  });

  it('takes a measurement, needs the depth where it matters, and shows a grower only the own parcels', async () => {
    const send = (body: object) => post(putMeasurement, '/api/v1/measurements', { parcel: 'P-2', date: '2024-03-30', ...body });
    expect((await send({ quantity: 'water_content_m3_m3', value: 0.2 })).status).toBe(422);
    expect((await send({ quantity: 'water_content_m3_m3', value: 22, soil_depth_m: 0.3 })).status).toBe(422);
    expect((await send({ quantity: 'mood', value: 1 })).status).toBe(400);
    expect((await send({ quantity: 'water_content_m3_m3', value: 0.2, soil_depth_m: 0.3 })).status).toBe(200);
    expect((await send({ parcel: 'P-1', quantity: 'efficiency', value: 0.8 })).status).toBe(200);
    const all = await (await measurements(request('/api/v1/measurements', { token }))).json();
    expect(all.items.map(({ parcel }: { parcel: string }) => parcel)).toEqual(['P-1', 'P-2']);
    const grower = await (await measurements(request('/api/v1/measurements', { cookie: await cookieOf('gus') }))).json();
    expect(grower.items).toEqual([{ parcel: 'P-2', date: '2024-03-30', quantity: 'water_content_m3_m3', soil_depth_m: 0.3, value: 0.2 }]);
    const path = '/api/v1/measurements/P-2/2024-03-30/water_content_m3_m3';
    expect((await removeMeasurement(request(path, { token, method: 'DELETE' }))).status).toBe(404);
    expect((await removeMeasurement(request(`${path}?soil_depth_m=0.3`, { token, method: 'DELETE' }))).status).toBe(200);
  });
});

describe('methods and soils', () => {
  const patch = (body: object, code = 'pivot', by = made.tokens.administer) =>
    patchMethod(request(`/api/v1/methods/${code}`, { token: by, method: 'PATCH', body }));

  it('a manager sets the limits of a system; runs become stale', async () => {
    await standingTakes({});
    const response = await patch({
      minimum_depth_mm: 8,
      flow_l_s_ha: 1.1,
      efficiency_by_depth: [
        { depth_mm: 5, efficiency: 0.7 },
        { depth_mm: 20, efficiency: 0.85 },
      ],
    });
    expect(response.status).toBe(200);
    expect(await staleReason()).toBe('application method changed');
    const { items } = await (await methods(request('/api/v1/methods?units=us', { token }))).json();
    const pivot = items.find(({ code }: { code: string }) => code === 'pivot');
    expect(pivot.minimum_depth_in).toBeCloseTo(8 / 25.4, 9);
    expect(pivot.flow_l_s_ha).toBe(1.1);
    expect(pivot.efficiency_by_depth[1].depth_in).toBeCloseTo(20 / 25.4, 9);
    const back = await (await patch({ minimum_depth_mm: null, efficiency_by_depth: [] })).json();
    expect(back).toMatchObject({ minimum_depth_mm: null, flow_l_s_ha: 1.1, efficiency_by_depth: [] });
  });

  it('refuses limits that leave no water, and who may not', async () => {
    expect((await patch({ minimum_depth_mm: 50, maximum_daily_depth_mm: 12 })).status).toBe(422);
    expect(
      (
        await patch({
          efficiency_by_depth: [
            { depth_mm: 20, efficiency: 0.8 },
            { depth_mm: 5, efficiency: 0.7 },
          ],
        })
      ).status,
    ).toBe(422);
    expect((await patch({ efficiency: 1.2 })).status).toBe(400);
    expect((await patch({ efficiency: 0.8 }, 'hose')).status).toBe(404);
    expect((await patch({ efficiency: 0.8 }, 'pivot', token)).status).toBe(403);
  });

  it('a soil brings its layers through the API', async () => {
    const layer = { top: 0, bottom: 0.4, fieldCapacity: 0.3, wiltingPoint: 0.14 };
    const below = { top: 0.4, bottom: 1.5, fieldCapacity: 0.12, wiltingPoint: 0.05 };
    const staged: StagedImport = {
      kind: 'soils',
      soils: [
        {
          ...{ code: 'two', name: 'Two', fieldCapacity: 0.3, wiltingPoint: 0.14, evaporationDepth: 0.1, readilyEvaporableWater: 9 },
          ...{ totalEvaporableWater: 22, curveNumber: null, rootLimit: null, source: 'test' },
          ...{ layers: [layer, below], saturation: 0.46, capillaryClass: 'loam' },
        },
      ],
    };
    await apply(staged);
    const { items } = await (await soils(request('/api/v1/soils', { token }))).json();
    expect(items.find(({ code }: { code: string }) => code === 'two')).toMatchObject({
      saturation_m3_m3: 0.46,
      texture: 'medium',
      capillary: { conductivity_mm_d: 316.8, bubbling_head_m: 0.1115 },
      layers: [
        { top_m: 0, bottom_m: 0.4, field_capacity_m3_m3: 0.3, wilting_point_m3_m3: 0.14 },
        { top_m: 0.4, bottom_m: 1.5, field_capacity_m3_m3: 0.12, wilting_point_m3_m3: 0.05 },
      ],
    });
    expect(items.find(({ code }: { code: string }) => code === 'clay')).toMatchObject({ texture: 'fine', layers: [] });
  });
});
