/** One parcel: its season, the working of a day, its download; and that a grower sees no other. */
import { readFileSync } from 'node:fs';
import type { Locator } from '@playwright/test';
import { parse } from 'csv-parse/sync';
import type { ParcelDay, ParcelSeason, RunAnswer, SummaryAnswer, WorkingAnswer } from '../lib/http/contract/run.ts';
import { type Api, expect, expectFigure, numberIn, PHONE, shows, test, textOf, total } from './support.ts';

/** The parcel that asks for most water, its days, and the day on which it asks for most. */
async function thirstiest(api: Api): Promise<{ run: RunAnswer; season: ParcelSeason; date: string }> {
  const run = await api.standing();
  const { items } = await api.get<{ items: { parcel: string; gross_requirement_mm: number | null }[] }>(
    `/api/v1/runs/${run.id}/parcels?period=season&limit=200`,
  );
  const { parcel } = items.reduce((a, b) => ((b.gross_requirement_mm ?? 0) > (a.gross_requirement_mm ?? 0) ? b : a));
  const season = await api.get<ParcelSeason>(`/api/v1/runs/${run.id}/parcels/${parcel}/daily`);
  const day = season.days.reduce((a, b) => ((b.gross_requirement_mm ?? 0) > (a.gross_requirement_mm ?? 0) ? b : a));
  return { run, season, date: day.date };
}

function shifted(date: string, days: number): string {
  return new Date(Date.parse(date) + days * 86_400_000).toISOString().slice(0, 10);
}

const CHAIN: readonly (readonly [string, (day: ParcelDay) => number | null])[] = [
  ['Reference ET', (day) => day.reference_et_mm],
  ['Crop ET', (day) => day.crop_et_mm],
  ['Crop ET, adjusted', (day) => day.adjusted_crop_et_mm],
  ['Rain', (day) => day.precipitation_mm],
  ['Effective rain', (day) => day.effective_precipitation_mm],
  ['Net requirement', (day) => day.net_requirement_mm],
  ['Gross requirement', (day) => day.gross_requirement_mm],
];

/** Row of the water chain that bears this name. */
const chainRow = (chain: Locator, name: string): Locator =>
  chain.getByRole('row').filter({ has: chain.page().locator('.chain-name').getByText(name, { exact: true }) });

test('the parcel’s chain and its table of days are the API’s numbers', async ({ page, api }) => {
  const { season, date } = await thirstiest(api);
  await page.goto(`/parcels/${season.parcel}?date=${date}`);
  const chain = page.getByRole('region', { name: 'The water chain of this parcel' });
  const picked = season.days.filter((day) => day.date === date);
  for (const [name, pick] of CHAIN) {
    const cells = chainRow(chain, name).getByRole('cell');
    await expectFigure(cells.first(), total(picked, pick), `${name} of the day`);
    await expectFigure(cells.nth(2), total(season.days, pick), `${name} of the season`);
  }
  await expectFigure(
    chainRow(chain, 'Turnout demand').getByRole('cell').nth(2),
    (total(season.days, (day) => day.gross_requirement_mm) / 1000) * season.area_ha * 1e4,
    'depth × area [m³]',
  );
  const table = page.getByRole('table', { name: new RegExp(`${season.parcel}, day by day`) });
  await page
    .locator('details')
    .filter({ hasText: `${season.parcel}, day by day` })
    .locator('summary')
    .click();
  await expect(table.locator('tbody tr')).toHaveCount(season.days.length);
  const foot = table.locator('tfoot td');
  await expectFigure(
    foot.nth(1), // after the kind of the day
    total(season.days, (day) => day.reference_et_mm),
    'reference ET in the foot',
  );
});

test('the working derives what the run stored, for every variable, and steps by days', async ({ page, api }) => {
  const { run, season, date } = await thirstiest(api);
  const path = `/parcels/${season.parcel}/working`;
  await page.goto(`${path}/${date}`);
  const working = await api.get<WorkingAnswer>(`/api/v1/runs/${run.id}/parcels/${season.parcel}/working?date=${date}`);
  const stored = Object.values(working.stored);
  const rows = page.locator('#results tbody tr');
  await expect(rows).toHaveCount(stored.length);
  for (const [index, row] of (await rows.all()).entries()) {
    const term = await textOf(row.getByRole('rowheader'));
    const cells = row.getByRole('cell');
    const [derived, kept] = [numberIn(await textOf(cells.nth(0))), numberIn(await textOf(cells.nth(1)))];
    expect(kept, `${term}: stored, on the screen and from the API`).toBeCloseTo(stored[index] ?? Number.NaN, 4);
    // depths are stored to 0.01 mm, coefficients to 0.0001
    expect(Math.abs(derived - kept), `${term}: ${derived} derived, ${kept} stored`).toBeLessThanOrEqual(0.0051);
    await expect(cells.last(), term).toContainText('agrees');
  }
  const day = season.days.find((one) => one.date === date);
  expect(working.stored.gross_requirement_mm).toBe(day?.gross_requirement_mm);
  const heading = page.getByRole('heading', { level: 1 });
  const before = await textOf(heading);
  await page.getByRole('link', { name: 'Day before' }).click();
  await expect(page).toHaveURL(new RegExp(`${path}/${shifted(date, -1)}`));
  await expect(heading).not.toHaveText(before);
  await page.getByRole('link', { name: 'Day after' }).click();
  await expect(page).toHaveURL(new RegExp(`${path}/${date}`));
  await expect(heading).toHaveText(before);
});

test('a day outside the run is refused in words', async ({ page, api }) => {
  const { run, season } = await thirstiest(api);
  await page.goto(`/parcels/${season.parcel}/working/${shifted(run.end_date, 1)}`);
  await expect(page.getByRole('main')).toContainText('not a day of this run');
});

test('the daily CSV is RFC 4180 and adds up to the season on the screen', async ({ page, api }) => {
  const { season } = await thirstiest(api);
  await page.goto(`/parcels/${season.parcel}`);
  const [download] = await Promise.all([
    page.waitForEvent('download', { timeout: 60_000 }),
    page.getByRole('link', { name: /csv/i }).first().click(),
  ]);
  const text = readFileSync(await download.path(), 'utf8');
  const rows = parse(text, { columns: true, bom: true, relax_column_count: false }) as Record<string, string>[];
  expect(rows.map((row) => row.date)).toEqual(season.days.map((day) => day.date));
  const chain = page.getByRole('region', { name: 'The water chain of this parcel' });
  for (const [name, column] of [
    ['Gross requirement', 'gross_requirement_mm'],
    ['Crop ET', 'crop_et_mm'],
    ['Rain', 'precipitation_mm'],
  ]) {
    const shown = await textOf(chainRow(chain, name).getByRole('cell').nth(2));
    const sum = rows.reduce((all, row) => all + Number(row[column]), 0);
    expect(shows(shown, sum), `${name}: ${shown} on the screen, ${sum} in the CSV`).toBe(true);
  }
});

test('the list of parcels sorts, searches and totals', async ({ page, api }) => {
  const { run, season } = await thirstiest(api);
  const { items } = await api.get<{ items: { parcel: string; gross_volume_m3: number | null }[] }>(
    `/api/v1/runs/${run.id}/parcels?period=season&parcel=${season.parcel}`,
  );
  const { district } = await api.get<SummaryAnswer>(`/api/v1/runs/${run.id}/summary`);
  await page.goto('/parcels');
  const rows = page.getByRole('table').locator('tbody tr');
  const volume = numberIn(await textOf(page.locator('tfoot td:nth-last-child(3)')));
  expect(Math.abs(volume / (district.gross_volume_m3 ?? Number.NaN) - 1), 'the foot is the whole district').toBeLessThan(1e-4);
  await page
    .getByRole('columnheader', { name: /^volume/i })
    .getByRole('link')
    .click();
  await expect(page).toHaveURL(/sort=volume/);
  await expect(page.getByRole('columnheader', { name: /^volume/i })).toHaveAttribute('aria-sort', 'descending');
  const volumes = await page.locator('tbody tr td:nth-last-child(3)').allTextContents();
  const numbers = volumes.map(numberIn);
  expect(numbers).toEqual([...numbers].sort((a, b) => b - a));
  await page.getByRole('searchbox').fill(season.parcel);
  await page.getByRole('searchbox').press('Enter');
  await expect(rows).toHaveCount(1);
  await expectFigure(rows.locator('td:nth-last-child(3)'), items[0].gross_volume_m3, 'volume of the parcel found');
});

test.describe('a grower on a phone', () => {
  test.use({ signedInAs: 'grower', viewport: PHONE, hasTouch: true });

  test('sees the own parcels and no other', async ({ page, api, watch }) => {
    const { items: all } = await api.get<{ items: { code: string }[] }>('/api/v1/parcels?limit=200');
    const answer = await page.request.get('/api/v1/parcels?limit=200');
    const own = ((await answer.json()) as { items: { code: string }[] }).items.map(({ code }) => code);
    expect(own.length, 'parcels of the grower').toBeGreaterThan(0);
    expect(own.length).toBeLessThan(all.length);
    await page.goto('/parcels');
    await expect(page.getByRole('table').locator('tbody th')).toHaveText(own);
    await page.getByRole('table').getByRole('link', { name: own[0] }).tap();
    await expect(page.getByRole('heading', { level: 1 })).toContainText(own[0]);
    await expect(page.getByRole('region', { name: 'The water chain of this parcel' })).toBeVisible();
    const foreign = all.find(({ code }) => !own.includes(code))?.code;
    watch.allow(new RegExp(`answer: 404 GET .*/parcels/${foreign}`));
    const response = await page.goto(`/parcels/${foreign}`);
    expect(response?.status(), 'another’s parcel').toBe(404);
    const run = await api.standing();
    const refused = await page.request.get(`/api/v1/runs/${run.id}/parcels/${foreign}/daily`);
    expect(refused.status(), 'another’s parcel through the API').toBe(404);
  });
});
