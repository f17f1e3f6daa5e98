/**
 * Answers of a run whose stored days were written by hand: the expected values are sums done on paper (see `district-fixture.ts`).
 * US units: 1 in = 25.4 mm, 1 ac-ft = 1233.48183754752 m³, 1 cfs = 0.028316846592 m³/s, 1 ac = 4046.8564224 m² (NIST SP 811, Appendix B).
 */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as runEvents } from '../../app/api/v1/runs/[id]/events/route.ts';
import { GET as runMap } from '../../app/api/v1/runs/[id]/map/route.ts';
import { GET as runParcels } from '../../app/api/v1/runs/[id]/parcels/route.ts';
import { GET as reachValues } from '../../app/api/v1/runs/[id]/reach-values/[period]/route.ts';
import { GET as reaches } from '../../app/api/v1/runs/[id]/reaches/route.ts';
import { GET as report } from '../../app/api/v1/runs/[id]/reports/[file]/route.ts';
import { GET as summary } from '../../app/api/v1/runs/[id]/summary/route.ts';
import { GET as values } from '../../app/api/v1/runs/[id]/values/[variable]/[period]/route.ts';
import { GET as runs } from '../../app/api/v1/runs/route.ts';
import { closeStreams, openStreamCount } from '../../lib/http/streams.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { cookieOf, type Fixture, makeFixture, PARCELS, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let base: string;
let token: string;
beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  base = `/api/v1/runs/${made.runId}`;
  token = made.tokens.read;
});
afterAll(() => fresh.close());

async function json(response: Response) {
  expect(response.status).toBe(200);
  return response.json();
}

describe('parcels of a run', () => {
  it('sums the season of a parcel and weighs it with its area', async () => {
    const { items, total } = await json(await runParcels(request(`${base}/parcels?parcel=P-1`, { token })));
    expect(total).toBe(1);
    expect(items[0]).toMatchObject({ parcel: 'P-1', start: '2024-04-01', end: '2024-04-14', turnout: 'T-1', reach: 'M', area_ha: 1 });
    expect(items[0].gross_requirement_mm).toBe(35.56);
    expect(items[0].gross_volume_m3).toBe(355.6);
    expect(items[0].net_volume_m3).toBe(177.8);
    expect(items[0].root_zone_depletion_mm).toBe(23);
    expect(items[0].stress_coefficient).toBe(0.75);
    expect(items[0].fallbacks).toEqual(['windAssumed']);
  });

  it('cuts delivery weeks, and a week with a missing day is missing', async () => {
    const { items } = await json(await runParcels(request(`${base}/parcels?period=week&parcel=P-2`, { token })));
    expect(items.map((item: { start: string }) => item.start)).toEqual(['2024-04-01', '2024-04-08']);
    expect(items.map((item: { gross_requirement_mm: number }) => item.gross_requirement_mm)).toEqual([null, 17.78]);
    expect(items.map((item: { gross_volume_m3: number }) => item.gross_volume_m3)).toEqual([null, 355.6]);
  });

  it('keeps to the days asked for', async () => {
    const { items } = await json(
      await runParcels(request(`${base}/parcels?period=week&parcel=P-1&from=2024-04-06&to=2024-04-09`, { token })),
    );
    expect(items.map(({ start, end, precipitation_mm }: Record<string, unknown>) => [start, end, precipitation_mm])).toEqual([
      ['2024-04-06', '2024-04-07', 0.2],
      ['2024-04-08', '2024-04-09', 0.2],
    ]);
  });

  it('pages by parcel, then by period, without losing or repeating a row', async () => {
    const seen: string[] = [];
    let cursor: string | null = '';
    while (cursor !== null) {
      const page: { items: { parcel: string; start: string }[]; next_cursor: string | null; total: number } = await json(
        await runParcels(request(`${base}/parcels?period=day&limit=9${cursor && `&cursor=${cursor}`}`, { token })),
      );
      expect(page.total).toBe(42);
      seen.push(...page.items.map((item) => `${item.parcel} ${item.start}`));
      cursor = page.next_cursor;
    }
    expect(seen).toHaveLength(42);
    expect(new Set(seen).size).toBe(42);
    expect([seen[0], seen[13], seen[14], seen[41]]).toEqual(['P-1 2024-04-01', 'P-1 2024-04-14', 'P-2 2024-04-01', '=P-3 2024-04-14']);
  });

  it('filters by reach and crop', async () => {
    const codes = async (query: string) =>
      (await json(await runParcels(request(`${base}/parcels?${query}`, { token })))).items.map((item: { parcel: string }) => item.parcel);
    expect(await codes('reach=L')).toEqual(['P-2', '=P-3']);
    expect(await codes('crop=maize-grain')).toEqual(['P-1', 'P-2']);
    expect(await codes('reach=L&crop=maize-grain')).toEqual(['P-2']);
  });

  it('changes names and values together in US units', async () => {
    const { items } = await json(await runParcels(request(`${base}/parcels?parcel=P-1&units=us`, { token })));
    expect(items[0].gross_requirement_in).toBeCloseTo(1.4, 12);
    expect(items[0].gross_volume_acft).toBeCloseTo(355.6 / 1233.48183754752, 10);
    expect(items[0].area_ac).toBeCloseTo(10_000 / 4046.8564224, 10);
    expect(Object.keys(items[0]).filter((name) => /_(mm|m3|ha)$/.test(name))).toEqual([]);
  });

  it('leaves as CSV by suffix and by Accept, whole, with the formula defused', async () => {
    const text = await (await runParcels(request(`${base}/parcels.csv?period=week`, { token }))).text();
    const lines = text.split('\r\n');
    expect(lines[0].split(',').slice(0, 7)).toEqual(['parcel', 'start', 'end', 'crops', 'turnout', 'reach', 'area_ha']);
    expect(lines).toHaveLength(1 + 6 + 1);
    expect(lines[5].startsWith("'=P-3,2024-04-01,2024-04-07,")).toBe(true);
    expect(lines.at(-1)).toBe('');
    const accepted = await runParcels(request(`${base}/parcels?period=week`, { token, headers: { accept: 'text/csv' } }));
    expect(accepted.headers.get('content-type')).toMatch(/^text\/csv; charset=utf-8/);
    expect(await accepted.text()).toBe(text);
  });

  it('writes a header for a table without rows, and a refusal instead of a broken table', async () => {
    const empty = await (await runParcels(request(`${base}/parcels.csv?reach=none&units=us`, { token }))).text();
    expect(empty.split('\r\n')).toHaveLength(2);
    expect(empty).toContain('gross_requirement_in');
    expect((await runParcels(request(`/api/v1/runs/${made.waitingRunId}/parcels.csv`, { token }))).status).toBe(409);
  });
});

describe('canals of a run', () => {
  it('carries demand and loss up to the headworks', async () => {
    const { items } = await json(await reaches(request(`${base}/reaches?period=season`, { token })));
    expect(items.map((item: { reach: string; level: number }) => [item.reach, item.level])).toEqual([
      ['M', 0],
      ['L', 1],
    ]);
    expect(items[0]).toMatchObject({
      turnout_demand_m3: 164 * 14,
      demand_below_m3: 564 * 14,
      reach_loss_m3: 200 * 14,
      loss_below_m3: 300 * 14,
      head_inflow_m3: 864 * 14,
      mean_inflow_m3_s: 0.01,
      capacity_share: 1,
      parcel_count: 1,
    });
    expect(items[1]).toMatchObject({
      demand_below_m3: 400 * 14,
      loss_below_m3: 100 * 14,
      capacity_m3_s: null,
      capacity_share: null,
      area_ha: 6,
    });
    const inflow = items[0].head_inflow_m3;
    expect(items[0].demand_below_m3 + items[0].loss_below_m3).toBe(inflow);
  });

  it('speaks cfs', async () => {
    const { items } = await json(await reaches(request(`${base}/reaches?period=season&units=us`, { token })));
    expect(items[0].mean_inflow_cfs).toBeCloseTo(0.01 / 0.028316846592, 10);
    expect(items[0].head_inflow_acft).toBeCloseTo((864 * 14) / 1233.48183754752, 10);
  });

  it('gives the map its arrays by period and reach', async () => {
    const answer = await json(await reachValues(request(`${base}/reach-values/weeks`, { token })));
    expect(answer.reaches).toEqual(['M', 'L']);
    expect(answer.periods).toHaveLength(2);
    expect(answer.mean_inflow_m3_s[1]).toEqual([0.01, 0.005787]);
    expect(answer.capacity_share[0]).toEqual([1, null]);
  });

  it('gives a grower no rows', async () => {
    const cookie = await cookieOf('gus');
    expect((await json(await reaches(request(`${base}/reaches`, { cookie })))).items).toEqual([]);
  });
});

describe('summary', () => {
  it('weighs depths with area and adds up to the district', async () => {
    const answer = await json(await summary(request(`${base}/summary`, { token })));
    // season arrays hold 0.5, 1.5, 2.5 mm on 1, 2 and 4 ha: (5 + 30 + 100) m³ on 70 000 m²
    expect(answer.district).toMatchObject({
      parcel_count: 3,
      area_ha: 7,
      gross_volume_m3: 135,
      crop_et_mm: 1.929,
      headworks_inflow_m3: 12096,
      conveyance_loss_m3: 4200,
    });
    expect(answer.by_canal.map((row: { code: string; gross_volume_m3: number }) => [row.code, row.gross_volume_m3])).toEqual([
      ['L', 130],
      ['M', 5],
    ]);
    expect(answer.by_crop.map((row: { code: string; parcel_count: number }) => [row.code, row.parcel_count])).toEqual([
      ['', 1],
      ['maize-grain', 2],
    ]);
    // the second week holds 100.5, 101.5, 102.5 mm
    expect(answer.weeks[1]).toMatchObject({ start: '2024-04-08', gross_volume_m3: 7135, headworks_inflow_m3: 6048 });
  });

  it('leaves as CSV with one row a total', async () => {
    const lines = (await (await summary(request(`${base}/summary.csv`, { token }))).text()).trim().split('\r\n');
    expect(lines.map((line) => line.split(',')[0])).toEqual(['total_of', 'district', 'canal', 'canal', 'crop', 'crop', 'method']);
  });
});

describe('map of a run', () => {
  async function numbers(path: string, cookie?: string) {
    const response = await values(request(`${base}/values/gross_requirement/${path}`, cookie ? { cookie } : { token }));
    expect(response.status).toBe(200);
    return [...new Float32Array(await response.arrayBuffer())];
  }

  it('sends one period, or all, as Float32 in map order', async () => {
    expect(await numbers('season')).toEqual([0.5, 1.5, 2.5]);
    expect(await numbers('week-1')).toEqual([100.5, 101.5, 102.5]);
    expect(await numbers('weeks')).toEqual([0.5, 1.5, 2.5, 100.5, 101.5, 102.5]);
    expect(await numbers('months')).toEqual([0.5, 1.5, 2.5]);
  });

  it('blanks what a grower may not see, under a tag of its own', async () => {
    const cookie = await cookieOf('gus');
    expect(await numbers('week-0', cookie)).toEqual([Number.NaN, 1.5, Number.NaN]);
    const answer = await json(await runMap(request(`${base}/map`, { cookie })));
    expect(answer.parcels.code).toEqual(['', 'P-2', '']);
    expect(answer.parcels.ordinal).toEqual([-1, 1, -1]);
    const tag = async (sent: object) => (await values(request(`${base}/values/crop_et/season`, sent))).headers.get('etag');
    expect(await tag({ cookie })).not.toBe(await tag({ token }));
  });

  it('answers 304 to a caller who has it, and 404 to a period or variable that is not there', async () => {
    const first = await values(request(`${base}/values/crop_et/season`, { token }));
    const etag = first.headers.get('etag') as string;
    expect(etag).toMatch(/^"[^"]+"$/);
    const again = await values(request(`${base}/values/crop_et/season`, { token, headers: { 'if-none-match': `"other", W/${etag}` } }));
    expect(again.status).toBe(304);
    expect(await again.text()).toBe('');
    expect((await values(request(`${base}/values/crop_et/week-2`, { token }))).status).toBe(404);
    expect((await values(request(`${base}/values/yield/season`, { token }))).status).toBe(404);
    expect((await values(request(`${base}/values/crop_et/fortnight`, { token }))).status).toBe(404);
  });

  it('maps positions to tile ordinals', async () => {
    const answer = await json(await runMap(request(`${base}/map`, { token })));
    expect(answer.parcels.code).toEqual(PARCELS.map((parcel) => parcel.code));
    expect(answer.parcels.ordinal).toEqual([0, 1, 2]);
    expect(answer.reaches.map((reach: { code: string; ordinal: number }) => [reach.code, reach.ordinal])).toEqual([
      ['M', 1],
      ['L', 0],
    ]);
    expect(answer.bounds.map((degrees: number) => Math.round(degrees * 1e6) / 1e6)).toEqual([-116, 43.6, -115.989, 43.603]);
    expect(answer.tiles.parcels).toBe('/api/v1/tiles/parcels/1/{z}/{x}/{y}.mvt');
    expect(answer.periods.week).toEqual([
      { start: '2024-04-01', end: '2024-04-07' },
      { start: '2024-04-08', end: '2024-04-14' },
    ]);
  });
});

describe('reports', () => {
  it('writes parcels as GeoJSON with shapes and numbers', async () => {
    const response = await report(request(`${base}/reports/parcels.geojson`, { token }));
    expect(response.headers.get('content-type')).toBe('application/geo+json');
    const collection = JSON.parse(await response.text());
    expect(collection.features.map((feature: { id: string }) => feature.id)).toEqual(PARCELS.map((parcel) => parcel.code));
    expect(collection.features[0].geometry.type).toBe('Polygon');
    expect(collection.features[0].properties.gross_volume_m3).toBe(355.6);
  });

  it('writes tables under a name that says what they are', async () => {
    const response = await report(request(`${base}/reports/reaches.csv?period=month`, { token }));
    expect(response.headers.get('content-disposition')).toBe('attachment; filename="alder-2024-reaches.csv"');
    expect((await response.text()).trim().split('\r\n')).toHaveLength(3);
  });

  it('writes the district report as PDF', async () => {
    const response = await report(request(`${base}/reports/district.pdf`, { token }));
    expect(response.headers.get('content-type')).toBe('application/pdf');
    const bytes = new Uint8Array(await response.arrayBuffer());
    expect(new TextDecoder().decode(bytes.subarray(0, 5))).toBe('%PDF-');
  });

  it('404 for a document that is none, 409 before the run is finished', async () => {
    expect((await report(request(`${base}/reports/parcels.exe`, { token }))).status).toBe(404);
    expect((await report(request(`/api/v1/runs/${made.waitingRunId}/reports/parcels.geojson`, { token }))).status).toBe(409);
  });
});

describe('progress', () => {
  it('sends a finished run once and ends', async () => {
    const response = await runEvents(request(`${base}/events`, { token }));
    expect(response.headers.get('content-type')).toBe('text/event-stream');
    const text = await response.text();
    expect(text.match(/^event: run$/gm)).toHaveLength(1);
    expect(JSON.parse(text.split('data: ')[1]).state).toBe('done');
  });

  it('tells of a change when it happens, and shutdown ends what is open', async () => {
    const response = await runEvents(request(`/api/v1/runs/${made.waitingRunId}/events`, { token }));
    const reader = (response.body as ReadableStream<Uint8Array>).getReader();
    const next = async () => new TextDecoder().decode((await reader.read()).value);
    expect(await next()).toContain('"state":"queued"');
    await fresh.db.inDistrict(made.a.id, async (tx) => {
      const { run } = await import('../../db/schema/run.ts');
      const { eq, sql } = await import('drizzle-orm');
      await tx.update(run).set({ state: 'running', progress: 0.5 }).where(eq(run.runId, made.waitingRunId));
      await tx.execute(sql`select pg_notify('run_progress', ${JSON.stringify({ district: made.a.id, run: made.waitingRunId })})`);
    });
    expect(await next()).toContain('"progress":0.5');
    expect(openStreamCount()).toBe(1);
    closeStreams();
    expect((await reader.read()).done).toBe(true);
    expect(openStreamCount()).toBe(0);
  });

  it('lists runs as a table too', async () => {
    const text = await (await runs(request('/api/v1/runs.csv', { token }))).text();
    expect(text.split('\r\n')[0]).toBe(
      'id,season,state,stage,progress,standing,stale_since,stale_reason,start_date,end_date,parcel_count,error,created_at,started_at,finished_at',
    );
  });
});
