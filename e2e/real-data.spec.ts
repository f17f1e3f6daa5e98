/**
 * Real observations through the front door: uploaded, read, applied, computed and downloaded, and held against what was measured or computed
 * elsewhere. Origin and licence of each file: test/data/ATTRIBUTION.md. Parcels and station tables are invented for the tests.
 */
import { readFileSync } from 'node:fs';
import { expect, test } from '@playwright/test';
import { parse } from 'csv-parse/sync';
import { type Api, csv, featureCollection, newDistrict, signIn, square } from './api.ts';

const BASE = process.env.BASE_URL as string;
const read = (name: string) => readFileSync(`test/data/${name}`, 'utf8');

test.setTimeout(240_000);

async function district(code: string, wanted: Record<string, unknown> = {}): Promise<Api> {
  const manager = await signIn(BASE, 'manager@arrowmere.example', process.env.TILLWATER_DEMO_PASSWORD as string);
  const unique = `${code}-${Date.now().toString(36)}`;
  const made = await newDistrict(BASE, { cookie: manager }, { code: unique, name: `${code} (test)`, time_zone: 'UTC', ...wanted });
  return made.api;
}

/** Rows of a downloaded or stored table by column name. */
function table(text: string): Record<string, string>[] {
  return parse(text, { columns: true, trim: true, bom: true });
}

test.describe('fourteen stations of the western United States, 2020, without wind', () => {
  let api: Api;
  let runId: string;
  const observed = table(read('uscrn-daily-2020.csv'));

  test.beforeAll(async () => {
    api = await district('uscrn', { default_elevation_m: 80 });
    await api.ok('POST', '/api/v1/seasons', { code: '2020', start_date: '2020-01-01', end_date: '2020-12-31' });
    const places = new Map(observed.map((row) => [row.wban, row]));
    // the file has no elevation: Merced's is recalled (about 24 m), the others are left out and must be flagged
    const stations = [...places.values()].map((row) => [row.wban, row.latitude, row.longitude, row.wban === '93243' ? 24 : '']);
    await api.bring('stations', { 'stations.csv': csv(['site', 'latitude', 'longitude', 'elevation'], stations) });
  });

  test('are read with their leading zeros, their gaps and their leap day', async () => {
    const applied = await api.bring('weather', { 'uscrn-daily-2020.csv': read('uscrn-daily-2020.csv') }, { source: 'USCRN' });
    expect(applied.finding_counts.error).toBe(0);
    const sites = (await api.ok('GET', '/api/v1/weather/sites')).items;
    expect(sites).toHaveLength(14);
    expect(sites.map((site: { code: string }) => site.code)).toContain('04127');
    const merced = sites.find((site: { code: string }) => site.code === '93243');
    const withMaximum = observed.filter((row) => row.wban === '93243' && row.t_daily_max !== '').length;
    expect(withMaximum).toBeLessThan(366);
    expect(merced.coverage_days.air_temperature_max_c).toBe(withMaximum);
    const [leapDay] = (await api.ok('GET', '/api/v1/weather/sites/93243/daily?from=2020-02-29&to=2020-02-29')).items;
    const source = observed.find((row) => row.wban === '93243' && row.lst_date === '2020-02-29') as Record<string, string>;
    expect(leapDay.observed.air_temperature_max_c).toBeCloseTo(Number(source.t_daily_max), 4);
    expect(leapDay.observed.solar_radiation_mj_m2_d).toBeCloseTo(Number(source.solarad_daily), 4);
  });

  test('give the reference ET that the printed equations give, worked out here by themselves', async () => {
    const days = (await api.ok('GET', '/api/v1/weather/sites/93243/daily?from=2020-06-01&to=2020-08-31')).items;
    let checked = 0;
    for (const day of days) {
      const row = observed.find((each) => each.wban === '93243' && each.lst_date === day.date) as Record<string, string>;
      const needed = [row.t_daily_max, row.t_daily_min, row.rh_daily_max, row.rh_daily_min, row.solarad_daily];
      if (needed.some((cell) => cell === '')) continue;
      expect(day.reference_et_fao56_short_mm, day.date).toBeCloseTo(penmanMonteith(row, Number(row.latitude), 24, 2), 2);
      expect(day.fallbacks).toContain('windAssumed');
      checked++;
    }
    expect(checked).toBeGreaterThan(80);
  });

  test('compute the season of fields with foreign crop codes, and every row says that the wind was assumed', async () => {
    const crops = ['ALF', 'MZ', 'TOM', 'ALM'];
    const parcels = Array.from({ length: 24 }, (_, i) => ({
      geometry: { type: 'Polygon', coordinates: square(-120.6 + 0.02 * (i % 6), 37.2 + 0.02 * Math.floor(i / 6), 700) },
      properties: { code: `0${100 + i}`, crop: crops[i % crops.length], method: i % 2 ? 'drip' : 'furrow', elevation_m: 50 },
    }));
    const mapping = { ALF: 'alfalfa-hay', MZ: 'maize-grain', TOM: 'tomato', ALM: 'almond-no-ground-cover' };
    const read1 = await api.upload('parcels', { 'fields.geojson': featureCollection(parcels) }, { season: '2020' });
    expect(read1.understood.crops.map((crop: { foreignCode: string }) => crop.foreignCode).sort()).toEqual([...crops].sort());
    await api.ok('PATCH', `/api/v1/imports/${read1.id}`, { cropMappings: mapping });
    await api.settled(`/api/v1/imports/${read1.id}`, ['ready']);
    await api.ok('POST', `/api/v1/imports/${read1.id}/apply`);
    await api.settled(`/api/v1/imports/${read1.id}`, ['applied']);
    const run = await api.run('2020');
    expect(run.state, run.error ?? '').toBe('done');
    expect(run.balance.max_residual_mm).toBeLessThan(1e-6);
    runId = run.id;
    const rows = await api.all(`/api/v1/runs/${runId}/parcels?period=month`);
    expect(rows).toHaveLength(24 * 12);
    for (const row of rows) expect(row.fallbacks, `${row.parcel} ${row.start}`).toContain('windAssumed');
    const seasons = await api.all(`/api/v1/runs/${runId}/parcels?period=season`);
    for (const row of seasons) {
      expect(row.parcel).toMatch(/^0\d{3}$/);
      // FAO-56 Table 2, temperate arid: 1–3, 4–7, 6–9 mm/d for cool, moderate and warm days; a year at Merced lies within 2–6 mm/d
      expect(row.reference_et_mm / 366).toBeGreaterThan(2);
      expect(row.reference_et_mm / 366).toBeLessThan(6);
      expect(row.gross_requirement_mm).toBeGreaterThan(row.net_requirement_mm);
    }
  });

  test('leave as CSV and GeoJSON with the same totals', async () => {
    const seasons = await api.all(`/api/v1/runs/${runId}/parcels?period=season`);
    const volume = seasons.reduce((sum: number, row: { gross_volume_m3: number }) => sum + row.gross_volume_m3, 0);
    const sheet = table((await api.get(`/api/v1/runs/${runId}/reports/parcels.csv?period=season`)).body);
    expect(sheet).toHaveLength(24);
    expect(sheet.reduce((sum, row) => sum + Number(row.gross_volume_m3), 0)).toBeCloseTo(volume, 0);
    const shapes = await api.get(`/api/v1/runs/${runId}/reports/parcels.geojson`);
    const collection = typeof shapes.body === 'string' ? JSON.parse(shapes.body) : shapes.body;
    expect(collection.features).toHaveLength(24);
    const summary = await api.ok('GET', `/api/v1/runs/${runId}/summary`);
    expect(summary.district.gross_volume_m3).toBeCloseTo(volume, 0);
  });
});

test('a station of Western Australia agrees with the reference ET its agency computed', async () => {
  const api = await district('silo');
  // place and elevation as the agency's model takes them; it uses a constant wind of 2 m/s, so the missing-wind rule is the same
  await api.bring('stations', { 'stations.csv': csv(['site', 'latitude', 'longitude', 'elevation'], [['8137', -30.9, 116.7, 283]]) });
  await api.bring('weather', { 'silo-8137-daily-2021-06.csv': read('silo-8137-daily-2021-06.csv') });
  const days = (await api.ok('GET', '/api/v1/weather/sites/8137/daily?from=2021-06-01&to=2021-07-01')).items;
  const agency = new Map(table(read('silo-8137-daily-2021-06.csv')).map((row) => [row['YYYY-MM-DD'], row]));
  expect(days).toHaveLength(31);
  let bias = 0;
  for (const day of days) {
    const row = agency.get(day.date) as Record<string, string>;
    // the agency prints one decimal: half a unit of it, and 0.05 for its rounded inputs
    expect(Math.abs(day.reference_et_fao56_short_mm - Number(row.et_short_crop)), day.date).toBeLessThan(0.1);
    expect(Math.abs(day.reference_et_asce2005_tall_mm - Number(row.et_tall_crop)), day.date).toBeLessThan(0.15);
    bias += (day.reference_et_fao56_short_mm - Number(row.et_short_crop)) / days.length;
  }
  expect(Math.abs(bias)).toBeLessThan(0.03);
});

test('maize at Mead, Nebraska, from the tower’s own file: season within the range of its measured evaporation', async () => {
  const api = await district('mead', { default_elevation_m: 361 });
  const season = { code: '2002', start_date: '2002-04-01', end_date: '2002-10-31' };
  await api.ok('POST', '/api/v1/seasons', season);
  await api.bring('stations', {
    'stations.csv': csv(['site', 'latitude', 'longitude', 'elevation', 'wind_height'], [['US-Ne1', 41.1651, -96.4766, 361, 6]]),
  });
  const applied = await api.bring('weather', { 'tower.csv': read('fluxnet-us-ne1-daily-2001-2006.csv') }, { site: 'US-Ne1' });
  expect(applied.finding_counts.error).toBe(0);
  await api.bring('parcels', {
    'field.geojson': featureCollection([
      {
        geometry: { type: 'Polygon', coordinates: square(-96.481, 41.162, 700) },
        properties: { code: 'NE1', soil: 'silt-clay-loam', method: 'pivot', elevation_m: 361 },
      },
    ]),
  });
  // planting and harvest days recalled from the site's reports
  await api.bring('plantings', {
    'plantings.csv': csv(
      ['parcel', 'season', 'crop', 'planting_date', 'harvest_date'],
      [['NE1', '2002', 'maize-grain', '2002-05-09', '2002-10-01']],
    ),
  });
  // the tower's rain holds the pivot's water, so none is added; see test/published/mead-maize.test.ts for the reason and the bars
  const run = await api.run('2002', { irrigate: false, initial_depletion: 0.2, runoff: false });
  expect(run.state, run.error ?? '').toBe('done');
  const { days } = await api.ok('GET', `/api/v1/runs/${run.id}/parcels/NE1/daily`);
  const flux = new Map(table(read('fluxnet-us-ne1-daily-2001-2006.csv')).map((row) => [row.TIMESTAMP, row]));
  const totals = { computed: 0, raw: 0, corrected: 0 };
  for (const day of days) {
    const row = flux.get(day.date.replaceAll('-', ''));
    if (!row || day.date < '2002-05-09' || day.date > '2002-09-30' || Number(row.LE_CORR) < -9000 || Number(row.LE_F_MDS) < -9000) continue;
    totals.computed += day.adjusted_crop_et_mm;
    totals.raw += (Number(row.LE_F_MDS) * 0.0864) / 2.45;
    totals.corrected += (Number(row.LE_CORR) * 0.0864) / 2.45;
    expect(day.fallbacks).toContain('temperatureExtremesFromMean');
  }
  test.info().annotations.push({ type: 'figure', description: JSON.stringify(totals) });
  expect(totals.computed).toBeGreaterThan(totals.raw);
  expect(totals.computed).toBeGreaterThan(0.9 * totals.corrected);
  expect(totals.computed).toBeLessThan(1.1 * totals.corrected);
});

/** FAO-56 Eq. 6 with Eq. 7–39, written out from the paper for this test alone. */
function penmanMonteith(row: Record<string, string>, latitude: number, elevation: number, u2: number): number {
  const [tMax, tMin, rs] = [Number(row.t_daily_max), Number(row.t_daily_min), Number(row.solarad_daily)];
  const e0 = (t: number) => 0.6108 * Math.exp((17.27 * t) / (t + 237.3));
  const ea = (e0(tMin) * Number(row.rh_daily_max) + e0(tMax) * Number(row.rh_daily_min)) / 200;
  const es = (e0(tMax) + e0(tMin)) / 2;
  const t = (tMax + tMin) / 2;
  const delta = (4098 * e0(t)) / (t + 237.3) ** 2;
  const gamma = 0.665e-3 * 101.3 * ((293 - 0.0065 * elevation) / 293) ** 5.26;
  const date = new Date(`${row.lst_date}T00:00:00Z`);
  const j = Math.round((date.getTime() - Date.UTC(date.getUTCFullYear(), 0, 1)) / 86_400_000) + 1;
  const phi = (latitude * Math.PI) / 180;
  const dr = 1 + 0.033 * Math.cos((2 * Math.PI * j) / 365);
  const dec = 0.409 * Math.sin((2 * Math.PI * j) / 365 - 1.39);
  const ws = Math.acos(-Math.tan(phi) * Math.tan(dec));
  const ra = ((24 * 60) / Math.PI) * 0.082 * dr * (ws * Math.sin(phi) * Math.sin(dec) + Math.cos(phi) * Math.cos(dec) * Math.sin(ws));
  const rso = (0.75 + 2e-5 * elevation) * ra;
  const sigma = 4.903e-9 * (((tMax + 273.16) ** 4 + (tMin + 273.16) ** 4) / 2);
  const rnl = sigma * (0.34 - 0.14 * Math.sqrt(ea)) * (1.35 * Math.min(1, rs / rso) - 0.35);
  const rn = 0.77 * rs - rnl;
  return (0.408 * delta * rn + (gamma * 900 * u2 * (es - ea)) / (t + 273)) / (delta + gamma * (1 + 0.34 * u2));
}
