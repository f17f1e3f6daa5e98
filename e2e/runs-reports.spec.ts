/** A run from its form to its checks, and the documents made of it. */
import { readFileSync } from 'node:fs';
import type { Page } from '@playwright/test';
import { parse } from 'csv-parse/sync';
import type { FeatureCollection, MultiPolygon, Polygon, Position } from 'geojson';
import type { RunAnswer, SummaryAnswer } from '../lib/http/contract/run.ts';
import { expect, test } from './support.ts';

/** The bytes that the form of a document downloads. */
async function downloaded(page: Page, file: string): Promise<Buffer> {
  const form = page.locator(`form[action$="/reports/${file}"]`);
  const [download] = await Promise.all([page.waitForEvent('download', { timeout: 60_000 }), form.locator('button').click()]);
  return readFileSync(await download.path());
}

test('a season is computed with another method, watched, checked; then with the usual one again', async ({ page, api }) => {
  const { items } = await api.get<{ items: RunAnswer[] }>('/api/v1/runs');
  const usual = items.filter((run) => run.standing).reduce((a, b) => (b.start_date < a.start_date ? b : a));
  expect(usual.settings.method).toBe('fao56');
  try {
    await page.goto('/runs');
    const form = page.locator('form').filter({ has: page.locator('select[name=season]') });
    await form.locator('select[name=season]').selectOption(usual.season);
    await form.locator('summary').click();
    await form.locator('select[name=method]').selectOption('asce2005');
    const [asked] = await Promise.all([
      page.waitForResponse((response) => response.request().method() === 'POST' && response.url().endsWith('/api/v1/runs')),
      form.locator('button[type=submit]').click(),
    ]);
    const { id } = (await asked.json()) as RunAnswer;
    const progress = page.getByRole('main').getByRole('progressbar');
    await expect(progress, 'a run under way is shown').toBeVisible();
    await expect(progress, 'the page notices by itself that it is over').toHaveCount(0, { timeout: 90_000 });
    const run = await api.get<RunAnswer>(`/api/v1/runs/${id}`);
    expect(run).toMatchObject({ state: 'done', standing: true, parcel_count: usual.parcel_count });
    // rain + irrigation = ET + runoff + percolation + change in the soil, to the precision of the arithmetic
    expect(run.balance.max_residual_mm).toBeLessThan(1e-6);
    await page.locator(`a[href="/runs/${id}"]`).first().click();
    await expect(page.locator('#checks')).toBeVisible();
    await expect(page.locator('#checks dl dt')).toHaveCount(4);
    await expect(page.locator('#settings')).toContainText('ASCE 2005');
    const season = async (one: string) => (await api.get<SummaryAnswer>(`/api/v1/runs/${one}/summary`)).district.reference_et_mm ?? 0;
    const [other, first] = [await season(id), await season(usual.id)];
    expect(other, 'the other method gives another reference ET').not.toBe(first);
    // for daily steps and the short surface the two equations differ in the latent heat and the psychrometric constant alone
    expect(Math.abs(other / first - 1)).toBeLessThan(0.05);
  } finally {
    const again = await api.compute(usual.season, usual.settings);
    expect(again).toMatchObject({ state: 'done', standing: true });
  }
});

test('the district report is a PDF', async ({ page }) => {
  await page.goto('/reports');
  const pdf = await downloaded(page, 'district.pdf');
  expect(pdf.subarray(0, 5).toString('latin1')).toBe('%PDF-');
  expect(pdf.subarray(-1024).toString('latin1')).toContain('%%EOF');
  expect(pdf.length).toBeGreaterThan(20_000);
});

test('the summary CSV is the summary, and its parts add up to the district', async ({ page, api }) => {
  const run = await api.standing();
  const summary = await api.get<SummaryAnswer>(`/api/v1/runs/${run.id}/summary`);
  await page.goto('/reports');
  const text = (await downloaded(page, 'summary.csv')).toString('utf8');
  const rows = parse(text, { columns: true, bom: true }) as Record<string, string>[];
  const district = rows.find((row) => row.total_of === 'district');
  for (const [name, value] of Object.entries(summary.district)) {
    if (typeof value === 'number') expect(Number(district?.[name]), name).toBe(value);
  }
  for (const part of ['crop', 'method']) {
    const parts = rows.filter((row) => row.total_of === part);
    expect(parts.length, `rows by ${part}`).toBeGreaterThan(1);
    const volume = parts.reduce((sum, row) => sum + Number(row.gross_volume_m3), 0);
    expect(Math.abs(volume / (summary.district.gross_volume_m3 ?? Number.NaN) - 1), `volumes by ${part}`).toBeLessThan(1e-4);
  }
});

/** Signed area of a ring on the plane of its degrees: positive when it runs counter-clockwise. */
function turning(ring: readonly Position[]): number {
  return ring.slice(1).reduce((sum, [x, y], index) => sum + (ring[index][0] * y - x * ring[index][1]) / 2, 0);
}

test('the parcels are GeoJSON as RFC 7946 wants it', async ({ page, api }) => {
  const run = await api.standing();
  const district = await api.get<SummaryAnswer>(`/api/v1/runs/${run.id}/summary`);
  await page.goto('/reports');
  const collection = JSON.parse((await downloaded(page, 'parcels.geojson')).toString('utf8')) as FeatureCollection<Polygon | MultiPolygon>;
  expect(collection.type).toBe('FeatureCollection');
  expect(collection).not.toHaveProperty('crs');
  expect(collection.features).toHaveLength(run.parcel_count);
  let volume = 0;
  for (const { type, id, geometry, properties } of collection.features) {
    expect(type).toBe('Feature');
    volume += properties?.gross_volume_m3 ?? 0;
    const polygons = geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates;
    for (const ring of polygons.flat()) {
      expect(ring.length, `${id}: a ring has four positions or more`).toBeGreaterThanOrEqual(4);
      expect(ring.at(-1), `${id}: a ring is closed`).toEqual(ring[0]);
      const inside = ring.every(([longitude, latitude]) => Math.abs(longitude) <= 180 && Math.abs(latitude) <= 90);
      expect(inside, `${id}: longitude, then latitude`).toBe(true);
    }
    for (const [outer, ...holes] of polygons) {
      expect(turning(outer), `${id}: the outline runs counter-clockwise`).toBeGreaterThan(0);
      for (const hole of holes) expect(turning(hole), `${id}: a hole runs clockwise`).toBeLessThan(0);
    }
  }
  expect(Math.abs(volume / (district.district.gross_volume_m3 ?? Number.NaN) - 1), 'volumes add up to the district’s').toBeLessThan(1e-4);
});
