/**
 * Runs that rest on the district's records: deliveries, measurements, soil water carried over or spun up. Volumes are the recorded ones; depletions are by hand,
 * 1000 (θFC − θ) Δz (FAO-56 Eq. 87); days are counted on the calendar.
 */
import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as daily } from '../../app/api/v1/runs/[id]/parcels/[code]/daily/route.ts';
import { GET as working } from '../../app/api/v1/runs/[id]/parcels/[code]/working/route.ts';
import { GET as runParcels } from '../../app/api/v1/runs/[id]/parcels/route.ts';
import { GET as readRun } from '../../app/api/v1/runs/[id]/route.ts';
import { POST as createRun } from '../../app/api/v1/runs/route.ts';
import { applicationMethod, delivery, fieldMeasurement, planting, season, soil } from '../../db/schema/land.ts';
import { run, runParcel } from '../../db/schema/run.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { loadFrozenSeason } from '../../lib/jobs/frozen-season.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { finishRun } from '../../lib/jobs/run-finish.ts';
import type { RunSettings } from '../../lib/jobs/run-settings.ts';
import { computeSlice } from '../../lib/jobs/run-slice.ts';
import { startRun } from '../../lib/jobs/run-start.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import { DAILY_VARIABLES, type DailyVariable, type SeasonInput } from '../../lib/season/types.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { type Fixture, makeFixture, PARCELS, RUN, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let token: string;

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.write;
  await makeWeather();
  const districtId = made.a.id;
  await fresh.db.inDistrict(districtId, async (tx) => {
    // the fixture's own run holds no soil water; the runs made here are those that stand
    await tx.update(run).set({ standing: false });
    await tx.insert(season).values({ districtId, code: 'spring', name: 'Spring', startDate: '2024-03-01', endDate: '2024-03-25' });
    await tx.insert(planting).values({
      ...{ districtId, parcelCode: 'P-1', seasonCode: 'spring', sequence: 1, cropCode: 'maize-grain', calendarCode: 'maize-grain-idaho' },
      plantingDate: '2024-03-05',
    });
  });
});
afterAll(async () => {
  await stopQueue();
  await fresh.close();
});

/** A dry, warm March and April at one site. */
async function makeWeather() {
  const districtId = made.a.id;
  const weather = {
    air_temperature_max_c: 30,
    air_temperature_min_c: 12,
    dew_point_c: 5,
    wind_speed_m_s: 3,
    solar_radiation_mj_m2_d: 24,
    precipitation_mm: 0,
  };
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values({ districtId, sourceId: 1, name: 'stations' });
    const place = { longitude: -116, latitude: 43.6, elevation: 700, windHeight: 2 };
    await tx.insert(site).values({ districtId, sourceId: 1, ordinal: 0, code: 'S1', name: 'One', ...place });
    for (const [month, days] of [
      ['2024-03-01', 31],
      ['2024-04-01', 30],
    ] as const) {
      for (const [variable, value] of Object.entries(weather)) {
        const values = new Uint8Array(new Float32Array(days).fill(value).buffer);
        const block = { districtId, sourceId: 1, variable, month, siteCount: 1, dayCount: days, values };
        await tx.insert(weatherBlock).values({ ...block, quality: new Uint8Array(days).fill(1) });
      }
    }
  });
}

interface Ran {
  readonly id: string;
  readonly answer: {
    state: string;
    error: string | null;
    warnings: string[];
    manifest: { records: Record<string, Record<string, unknown>> };
  };
  /** as its slices read it */
  readonly input: () => Promise<SeasonInput>;
}

async function ran(settings: Partial<RunSettings>, code = '2024'): Promise<Ran> {
  const response = await createRun(request('/api/v1/runs', { token, body: { season: code, settings } }));
  const { id } = await response.json();
  const job = { districtId: made.a.id, runId: id };
  await startRun(job);
  await computeSlice({ ...job, slice: 0 });
  await finishRun(job);
  const answer = await (await readRun(request(`/api/v1/runs/${id}`, { token }))).json();
  const positions = PARCELS.map((_, position) => position);
  return { id, answer, input: () => fresh.db.inDistrict(made.a.id, (tx) => loadFrozenSeason(tx, made.a.id, id, positions)) };
}

async function record(deliveries: readonly [string, string, number][], measured: readonly [string, Measured, number, number][] = []) {
  const districtId = made.a.id;
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.delete(delivery);
    await tx.delete(fieldMeasurement);
    for (const [parcelCode, date, volume] of deliveries) await tx.insert(delivery).values({ districtId, parcelCode, date, volume });
    for (const [date, quantity, depth, value] of measured)
      await tx.insert(fieldMeasurement).values({ districtId, parcelCode: 'P-1', date, quantity, depth, value });
  });
}
type Measured = typeof fieldMeasurement.$inferInsert.quantity;

/** Days of one variable of the first parcel, before rounding, as its frozen input gives them. */
function rowOf(input: SeasonInput, variable: DailyVariable): Float64Array {
  const one = { ...input, parcels: input.parcels.slice(0, 1) };
  const days = input.dayCount - (input.leadDays ?? 0);
  const at = DAILY_VARIABLES.findIndex(({ id }) => id === variable) * days;
  return (runSeason(one, { keep: 'double' }).dailyExact as Float64Array).slice(at, at + days);
}

const sum = (row: Float64Array) => row.reduce((total, value) => total + value, 0);

async function seasonVolume({ id }: Ran, parcel: string): Promise<number> {
  const { items } = await (await runParcels(request(`/api/v1/runs/${id}/parcels?period=season`, { token }))).json();
  return items.find((row: { parcel: string }) => row.parcel === parcel).gross_volume_m3;
}

async function grossDays({ id }: Ran): Promise<{ date: string; gross: number }[]> {
  const { days } = await (await daily(request(`/api/v1/runs/${id}/parcels/P-1/daily`, { token }))).json();
  return days.map((day: { date: string; gross_requirement_mm: number }) => ({ date: day.date, gross: day.gross_requirement_mm }));
}

describe('a season as recorded', () => {
  it('puts on what was delivered, no more and no less; what the soil cannot hold is lost below', async () => {
    // P-1 has 1 ha: 300 m³ are 30 mm, 4,000 m³ are 400 mm
    await record([
      ['P-1', '2024-04-06', 300],
      ['P-1', '2024-04-10', 4000],
      ['P-2', '2024-04-08', 700],
    ]);
    const recorded = await ran({ water: 'recorded', initial_depletion: 0.3 });
    expect(recorded.answer).toMatchObject({ state: 'done', error: null });
    expect(await seasonVolume(recorded, 'P-1')).toBeCloseTo(4300, 0);
    expect(await seasonVolume(recorded, 'P-2')).toBeCloseTo(700, 0);
    const days = await grossDays(recorded);
    expect(days.filter(({ gross }) => gross > 0)).toEqual([
      { date: '2024-04-06', gross: 30 },
      { date: '2024-04-10', gross: 400 },
    ]);
    const input = await recorded.input();
    expect(input.parcels[0].deliveries).toEqual({ days: [5, 9], values: [30, 400] });
    expect(sum(rowOf(input, 'gross_requirement'))).toBeCloseTo(430, 9);
    const lost = rowOf(input, 'irrigation_percolation');
    expect(lost[9]).toBeGreaterThan(50);
    expect(sum(lost)).toBeCloseTo(lost[5] + lost[9], 9);
    expect(recorded.answer.manifest.records.deliveries).toEqual({
      ...{
        days: 3,
        parcels: 2,
        volume_m3: 5000,
        first_day: '2024-04-06',
        last_day: '2024-04-10',
        days_before: 0,
        rule_from: null,
        thin: null,
      },
    });
  });

  it('goes by the rule from the day after the district’s last delivery', async () => {
    await record([
      ['P-1', '2024-04-05', 50],
      ['P-2', '2024-04-07', 700],
      // beyond the season
      ['P-2', '2024-05-07', 700],
    ]);
    const mixed = await ran({ water: 'recorded-then-rule', initial_depletion: 0.95 });
    expect(mixed.answer.manifest.records.deliveries).toMatchObject({ days: 2, last_day: '2024-04-07', rule_from: '2024-04-08' });
    const input = await mixed.input();
    expect(input.settings).toMatchObject({ water: 'recorded-then-rule', recordedUntil: 7 });
    const days = await grossDays(mixed);
    // maize is planted on dry ground on 5 April: the rule would have called at once
    expect(days.filter(({ gross, date }) => gross > 0 && date < '2024-04-08')).toEqual([{ date: '2024-04-05', gross: 5 }]);
    expect(days.find(({ gross, date }) => gross > 0 && date >= '2024-04-08')?.date).toBe('2024-04-08');
  });

  it('without any delivery is refused; with none so far the rule holds from the first day', async () => {
    await record([]);
    const refused = await ran({ water: 'recorded' });
    expect(refused.answer.state).toBe('failed');
    expect(refused.answer.error).toContain('no delivery of it is');
    const open = await ran({ water: 'recorded-then-rule', initial_depletion: 0.9 });
    expect(open.answer.manifest.records.deliveries).toMatchObject({ days: 0, last_day: null, rule_from: RUN.start });
    const byRule = await ran({ water: 'rule', initial_depletion: 0.9 });
    expect(await grossDays(open)).toEqual(await grossDays(byRule));
    expect(byRule.answer.manifest.records.deliveries).toBeNull();
  });
});

describe('measurements', () => {
  it('tell the first morning when made within 14 days before it; else the fraction does, and it is counted', async () => {
    await record(
      [],
      [
        ['2024-03-20', 'water_content_m3_m3', 0.3, 0.15],
        ['2024-03-30', 'water_content_m3_m3', 0.3, 0.2],
        ['2024-03-30', 'water_content_m3_m3', 0.9, 0.24],
      ],
    );
    const measured = await ran({ initial_state: 'measured' });
    // loam of the library: θFC 0.25: (0.25 − 0.20) 300, (0.25 − 0.24) 600
    const profile = (await measured.input()).parcels[0].initialWater?.profile ?? [];
    expect(profile.map(({ bottom }) => bottom)).toEqual([0.3, 0.9]);
    expect(profile[0].depletion).toBeCloseTo(15, 9);
    expect(profile[1].depletion).toBeCloseTo(6, 9);
    expect(measured.answer.manifest.records.initial_state).toMatchObject({ rule: 'measured', parcels_with_own: 1, parcels_by_fraction: 2 });
    await record([], [['2024-03-10', 'water_content_m3_m3', 0.3, 0.15]]);
    const old = await ran({ initial_state: 'measured' });
    expect((await old.input()).parcels[0].initialWater).toBeUndefined();
    expect(old.answer.manifest.records.initial_state).toMatchObject({ parcels_with_own: 0, parcels_by_fraction: 3 });
  });

  it('of salinity, water table and efficiency reach the season where its settings take them', async () => {
    await record(
      [],
      [
        ['2024-03-01', 'soil_salinity_ds_m', 0, 2.4],
        ['2024-03-22', 'water_table_depth_m', 0, 1.8],
        ['2024-04-11', 'water_table_depth_m', 0, 1.5],
        ['2024-02-01', 'efficiency', 0, 0.72],
      ],
    );
    const taken = await ran({ salinity: 'stress', capillary_rise: true, water_salinity_ds_m: 0.9, initial_depletion: 0.9 });
    const [first, second] = (await taken.input()).parcels;
    expect(first).toMatchObject({
      efficiency: 0.72,
      salinity: { soil: 2.4, water: 0.9 },
      waterTable: { days: [-10, 10], values: [1.8, 1.5] },
    });
    // FAO-56 Eq. 93 with LF 0.15: 1.15 / 0.15 × 0.9 / 5
    expect(second.salinity?.soil).toBeCloseTo(1.38, 9);
    expect(second.waterTable).toBeUndefined();
    expect(taken.answer.manifest.records.measured).toEqual({ efficiency: 1, water_table: 1, soil_salinity: 1, images: 0 });
    const left = (await (await ran({ initial_depletion: 0.9 })).input()).parcels[0];
    expect(left.efficiency).toBe(0.72);
    expect(left.salinity).toBeUndefined();
    expect(left.waterTable).toBeUndefined();
  });
});

describe('days before the season', () => {
  it('are spun up over the weather there is, and nothing of them is kept', async () => {
    await record([]);
    const spun = await ran({ initial_state: 'spin-up', spin_up_days: 60, initial_depletion: 0.5 });
    expect(spun.answer).toMatchObject({ state: 'done' });
    // weather begins on 1 March: 31 days
    expect(spun.answer.manifest.records.initial_state).toMatchObject({ lead_days: 31, lead_days_asked: 60, earlier_plantings: 1 });
    expect(spun.answer.warnings).toContain('The soil was spun up over 31 instead of 60 days: there is no weather before them.');
    const input = await spun.input();
    expect(input).toMatchObject({ startDate: '2024-03-01', leadDays: 31, dayCount: 45 });
    // the crop of the season before ends where this season begins
    expect(input.parcels[0].plantings.map(({ plantingDate, harvestDate }) => [plantingDate, harvestDate])).toEqual([
      ['2024-04-05', null],
      ['2024-03-05', '2024-04-01'],
    ]);
    const parcel = await (await daily(request(`/api/v1/runs/${spun.id}/parcels/P-1/daily`, { token }))).json();
    expect(parcel.plantings.map(({ planting_date }: { planting_date: string }) => planting_date)).toEqual(['2024-04-05']);
    expect(parcel.plantings[0].stages[0]).toMatchObject({ stage: 'initial', start: '2024-04-05' });
    const days = await grossDays(spun);
    expect(days.map(({ date }) => date)).toEqual(Array.from({ length: 14 }, (_, i) => `2024-04-${String(i + 1).padStart(2, '0')}`));
    const answer = await (await working(request(`/api/v1/runs/${spun.id}/parcels/P-1/working?date=2024-04-10`, { token }))).json();
    for (const [name, stored] of Object.entries(answer.stored as Record<string, number>))
      expect(Math.abs(answer.results[name] - stored), name).toBeLessThanOrEqual(name.endsWith('_mm') ? 0.00501 : 0.0000501);
  });

  it('carry over what the season before left, watered by nothing in between', async () => {
    await record([]);
    const none = await ran({ initial_state: 'carry-over' });
    expect(none.answer).toMatchObject({ state: 'failed' });
    expect(none.answer.error).toContain('no season that ends before 2024-04-01 has a run');
    const before = await ran({ initial_depletion: 0.7 }, 'spring');
    expect(before.answer).toMatchObject({ state: 'done', error: null });
    const carried = await ran({ initial_state: 'carry-over', initial_depletion: 0.1 });
    expect(carried.answer).toMatchObject({ state: 'done', error: null });
    expect(carried.answer.manifest.records.initial_state).toMatchObject({
      parcels_with_own: 3,
      parcels_by_fraction: 0,
      // 26 to 31 March; the crop of spring was not harvested and still stands
      lead_days: 6,
      earlier_plantings: 1,
      carried_from: { run: before.id, season: 'spring', end_date: '2024-03-25', stale: false },
    });
    const input = await carried.input();
    expect(input).toMatchObject({ startDate: '2024-03-26', leadDays: 6, settings: { water: 'recorded-then-rule', recordedUntil: 6 } });
    const [left] = await fresh.db.inDistrict(made.a.id, (tx) =>
      tx
        .select({ closing: runParcel.closing })
        .from(runParcel)
        .where(and(eq(runParcel.runId, before.id), eq(runParcel.parcelCode, 'P-1'))),
    );
    expect(input.parcels[0].initialWater).toEqual(left.closing);
    expect(input.parcels[0].initialWater?.profile.length).toBeGreaterThan(0);
    // the season before run again: what was carried over from the old run is out of date
    await ran({ initial_depletion: 0.2 }, 'spring');
    const later = await (await readRun(request(`/api/v1/runs/${carried.id}`, { token }))).json();
    expect(later.stale_reason).toBe('season spring, whose soil water it carries over, was run again');
  });
});

it('layers of a soil and limits of a system reach the season', async () => {
  await record([]);
  const layers = [
    { top: 0, bottom: 0.4, fieldCapacity: 0.25, wiltingPoint: 0.12 },
    { top: 0.4, bottom: 1.2, fieldCapacity: 0.12, wiltingPoint: 0.05 },
  ];
  await fresh.db.inDistrict(made.a.id, (tx) =>
    tx
      .update(soil)
      .set({ profile: { layers, saturation: 0.46 } })
      .where(eq(soil.code, 'loam')),
  );
  const system = { minimumDepth: 15, flow: 2, efficiencyByDepth: [{ depth: 20, efficiency: 0.6 }] };
  await fresh.db.inDistrict(made.a.id, (tx) => tx.update(applicationMethod).set({ system }).where(eq(applicationMethod.code, 'furrow')));
  const [parcel] = (await (await ran({})).input()).parcels;
  expect(parcel.soil).toMatchObject({ layers, saturation: 0.46 });
  expect(parcel.method).toMatchObject(system);
  expect(Object.keys(parcel.soil)).not.toContain('districtId');
});
