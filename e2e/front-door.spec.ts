/** The front door: files of other kinds through the form, and weather that is looked at, corrected, and put back. */
import { readFileSync } from 'node:fs';
import type { Page } from '@playwright/test';
import type { FlagAnswer } from '../lib/http/contract/quality.ts';
import type { ImportAnswer, SiteAnswer, SiteDaysAnswer } from '../lib/http/contract/rest.ts';
import type { RunAnswer } from '../lib/http/contract/run.ts';
import { type Api, expect, test } from './support.ts';

const fileOf = (path: string, name = path.split('/').at(-1) ?? path) => ({
  name,
  mimeType: 'application/octet-stream',
  buffer: readFileSync(`test/data/${path}`),
});

/** Uploads through the form and waits until it has been read. */
async function read(page: Page, api: Api, kind: string, path: string): Promise<ImportAnswer> {
  await page.goto('/imports');
  const form = page.locator('form').filter({ has: page.locator('input[type=file]') });
  await form.locator(`input[name=kind][value=${kind}]`).check();
  await form.locator('input[type=file]').setInputFiles(fileOf(path));
  await form.locator('button[type=submit]').click();
  await page.waitForURL(/\/imports\/[0-9a-f-]{36}$/, { timeout: 30_000 });
  const id = page.url().split('/').at(-1) ?? '';
  const look = () => api.get<ImportAnswer>(`/api/v1/imports/${id}?preview=0`);
  await expect.poll(async () => (await look()).state, { timeout: 60_000 }).not.toBe('reading');
  return look();
}

async function cancel(api: Api, { id }: ImportAnswer): Promise<void> {
  expect((await api.request.post(`/api/v1/imports/${id}/cancel`)).ok()).toBe(true);
}

test.describe('shapes in other formats and coordinate systems', () => {
  for (const [path, format, crs] of [
    ['vector/nl-parcels.gpkg', 'GeoPackage', 'EPSG:28992'],
    ['vector/nz-irrigated.zip', 'Shapefile', 'New_Zealand_Transverse_Mercator'],
    ['vector/br-fields.fgb', 'FlatGeobuf', 'EPSG:4326'],
    ['vector/it-parcels.parquet', 'GeoParquet', 'EPSG:3035'],
  ] as const) {
    test(`${format}: what was understood is said`, async ({ page, api }) => {
      const answer = await read(page, api, 'parcels', path);
      expect(answer.state, answer.error ?? '').toBe('ready');
      expect((answer.understood as { usableRows: number }).usableRows).toBeGreaterThan(0);
      await expect(page.locator('dl').first()).toContainText(format);
      await expect(page.locator('dl').first()).toContainText(crs);
      await cancel(api, answer);
    });
  }
});

test('a grid that does not reach the district is refused with both places', async ({ page, api }) => {
  const answer = await read(page, api, 'weather', 'arrays/classic.nc');
  expect(answer.finding_counts.error, JSON.stringify(answer.findings)).toBeGreaterThan(0);
  await expect(page.getByRole('table', { name: 'Findings' })).toBeVisible();
  expect((await api.request.post(`/api/v1/imports/${answer.id}/apply`)).status(), 'nothing of it can be applied').toBe(422);
  await cancel(api, answer);
});

test('a damaged file costs an import and nothing else', async ({ page, api }) => {
  await page.goto('/imports');
  const form = page.locator('form').filter({ has: page.locator('input[type=file]') });
  await form.locator('input[name=kind][value=parcels]').check();
  const buffer = readFileSync('test/data/vector/nl-parcels.gpkg').subarray(0, 20_000);
  await form.locator('input[type=file]').setInputFiles({ name: 'cut.gpkg', mimeType: 'application/octet-stream', buffer });
  await form.locator('button[type=submit]').click();
  await page.waitForURL(/\/imports\/[0-9a-f-]{36}$/, { timeout: 30_000 });
  const id = page.url().split('/').at(-1) ?? '';
  const look = () => api.get<ImportAnswer>(`/api/v1/imports/${id}`);
  await expect.poll(async () => (await look()).state, { timeout: 60_000 }).not.toBe('reading');
  const answer = await look();
  expect(answer.state === 'failed' || answer.finding_counts.error > 0, JSON.stringify(answer)).toBe(true);
  expect((await api.request.get('/readyz')).ok(), 'the service goes on serving').toBe(true);
  await cancel(api, answer);
});

test('a correction is seen before it is saved, makes the run stale, and is undone to the last digit', async ({ page, api }) => {
  test.setTimeout(180_000);
  const run = await api.standing();
  const { items: sites } = await api.get<{ items: SiteAnswer[] }>('/api/v1/weather/sites');
  const site = sites[0];
  const day = `${run.end_date.slice(0, 4)}-06-10`;
  const dayOf = async () => (await api.get<SiteDaysAnswer>(`/api/v1/weather/sites/${site.code}/daily?from=${day}&to=${day}`)).items[0];
  const before = await dayOf();
  await page.goto('/weather/desk/quality');
  await page.getByRole('link', { name: 'Correct a period' }).click();
  await expect(page.getByRole('heading', { level: 1 })).toBeVisible();
  await page.goto(
    `/weather/desk/quality/correct?${new URLSearchParams({ source: site.source, site: site.code, variable: 'solar_radiation_mj_m2_d', from: day, to: day })}`,
  );
  const form = page.locator('form').filter({ has: page.getByRole('button', { name: 'Save the decision' }) });
  await form.getByLabel('Decision').selectOption({ value: 'factor' });
  await form.getByLabel('Factor', { exact: true }).fill('0.5');
  await form.getByLabel('First day').fill(day);
  await form.getByLabel('Last day').fill(day);
  await form.getByLabel('Reason').fill('test of the desk: half the light');
  await page.getByRole('button', { name: 'Preview' }).click();
  const save = page.getByRole('button', { name: 'Save the decision' });
  await expect(save).toBeEnabled({ timeout: 20_000 });
  expect(await dayOf(), 'a preview changes nothing').toEqual(before);
  await save.click();
  await page.waitForURL(/\/weather\/desk\/quality(#.*)?$/);
  await expect(page.getByText('half the light')).toBeVisible();
  const after = await dayOf();
  expect(after.completed.solar_radiation_mj_m2_d).toBeCloseTo(0.5 * (before.completed.solar_radiation_mj_m2_d ?? Number.NaN), 3);
  expect(after.reference_et_fao56_short_mm ?? 99).toBeLessThan(before.reference_et_fao56_short_mm ?? 0);
  const { items: corrections } = await api.get<{ items: { id: string; reason: string }[] }>('/api/v1/weather/corrections');
  const own = corrections.find(({ reason }) => reason.includes('half the light'));
  expect(own).toBeDefined();
  await settledRuns(api, run.season, run.id);
  expect((await api.request.post(`/api/v1/weather/corrections/${own?.id}/undo`)).ok()).toBe(true);
  expect({ ...(await dayOf()), quality: {} }, 'as it was').toEqual({ ...before, quality: {} });
  // the flags follow with the next check
  await expect.poll(async () => (await dayOf()).quality, { timeout: 60_000 }).toEqual(before.quality);
  await settledRuns(api, run.season);
  expect((await api.standing(run.season)).stale_since).toBeNull();
});

/** Waits until a season has a standing run that is not stale, and not the one named. */
async function settledRuns(api: Api, season: string, not?: string): Promise<void> {
  const standing = async () => {
    const { items } = await api.get<{ items: RunAnswer[] }>('/api/v1/runs');
    const going = items.some((each) => each.state === 'queued' || each.state === 'running');
    const own = items.find((each) => each.standing && each.season === season);
    return !going && own !== undefined && own.stale_since === null && own.id !== not;
  };
  await expect.poll(standing, { timeout: 90_000, message: 'the season computed anew' }).toBe(true);
}

test('every flag leads to its page with rule, value and limit', async ({ page, api }) => {
  await expect
    .poll(async () => (await api.get<{ total: number }>('/api/v1/weather/flags?limit=1')).total, { timeout: 60_000 })
    .toBeGreaterThan(0);
  const [flag] = (await api.get<{ items: FlagAnswer[] }>('/api/v1/weather/flags?limit=1')).items;
  const { source, site, variable, rule, first_day } = flag;
  await page.goto(`/weather/desk/quality/flag?${new URLSearchParams({ source, site, variable, rule, first_day })}`);
  await expect(page.getByRole('main')).toContainText(flag.rule_name);
  await expect(page.getByRole('main')).toContainText(flag.detail);
});

test('a feed inside the network is refused where it is asked for; another is made, rests, and goes', async ({ page, watch }) => {
  watch.allow(/answer: 422 POST .*\/api\/v1\/weather\/feeds/);
  await page.goto('/weather/desk/feeds');
  await page.getByRole('button', { name: 'New feed' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.locator('input[name=name]').fill('Valley feed (invented)');
  await dialog.locator('input[name=template]').fill('http://127.0.0.1:1/{YYYY}.csv');
  await dialog.getByRole('button', { name: 'Make the feed' }).click();
  await expect(dialog.getByRole('alert')).toContainText('not a public address');
  await dialog.locator('input[name=template]').fill('https://weather.example/daily_{YYYY}{MM}{DD}.csv');
  await dialog.getByRole('button', { name: 'Make the feed' }).click();
  const row = page.getByRole('table', { name: 'Weather feeds' }).locator('tbody tr').filter({ hasText: 'Valley feed' });
  await expect(row).toContainText('every day at 06:30');
  await row.getByRole('button', { name: 'Rest' }).click();
  await expect(row).toContainText('resting');
  await row.getByRole('button', { name: 'Remove' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Remove' }).click();
  await expect(page.getByText('No feed yet')).toBeVisible();
});
