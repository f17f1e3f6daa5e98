/** Weather and crops: the records, their completeness, the crop library, all as the API has them. */
import type { CropAnswer, SiteAnswer, SiteDay } from '../lib/http/contract/rest.ts';
import { expect, expectFigure, expectText, test, textOf, total } from './support.ts';

test('every station with its record and its completeness', async ({ page, api }) => {
  const { items: sites } = await api.get<{ items: SiteAnswer[] }>('/api/v1/weather/sites');
  await page.goto('/weather');
  const table = page.getByRole('table', { name: 'Weather sites' });
  await expect(table.locator('tbody tr')).toHaveCount(sites.length);
  const heads = await page
    .getByRole('table', { name: /^coverage/i })
    .locator('thead th')
    .allTextContents();
  const rain = heads.findIndex((head) => /rain|precipitation/i.test(head));
  for (const site of sites) {
    const row = table.locator('tbody tr').filter({ has: page.getByRole('rowheader', { name: site.code, exact: true }) });
    await expect(row).toContainText(site.name);
    await expect(row).toContainText(site.first_day ?? '–');
    const coverage = page
      .getByRole('table', { name: /^coverage/i })
      .locator('tbody tr')
      .filter({ has: page.getByRole('rowheader', { name: site.code, exact: true }) });
    const span = (Date.parse(site.last_day ?? '') - Date.parse(site.first_day ?? '')) / 86_400_000 + 1;
    const share = (100 * (site.coverage_days.precipitation_mm ?? 0)) / span;
    await expectFigure(coverage.locator('th, td').nth(rain), share, `rain record of ${site.code} [%]`);
  }
});

test('a station’s days are the API’s, for the days asked', async ({ page, api }) => {
  const run = await api.standing();
  const { items: sites } = await api.get<{ items: SiteAnswer[] }>('/api/v1/weather/sites');
  const [from, to] = [`${run.end_date.slice(0, 4)}-07-01`, `${run.end_date.slice(0, 4)}-07-14`];
  const { items: days } = await api.get<{ items: SiteDay[] }>(`/api/v1/weather/sites/${sites[0].code}/daily?from=${from}&to=${to}`);
  expect(days.length, 'days asked for').toBe(14);
  await page.goto('/weather');
  await page.getByRole('table', { name: 'Weather sites' }).getByRole('link', { name: sites[0].code, exact: true }).click();
  await expect(page.getByRole('heading', { level: 1 })).toContainText(sites[0].name);
  await page.locator('input[name=from]').first().fill(from);
  await page.locator('input[name=to]').first().fill(to);
  await page.locator('input[name=to]').first().press('Enter');
  await expect(page).toHaveURL(new RegExp(`from=${from}`));
  const folded = page.locator('main details').filter({ hasText: 'day by day' });
  await folded.locator('summary').click();
  const table = folded.getByRole('table');
  await expect(table.locator('tbody tr')).toHaveCount(days.length);
  const heads = await table.locator('thead th').allTextContents();
  const column = heads.findIndex((head) => /fao.?56/i.test(head.trim()));
  expect(column, `a column of reference ET among ${heads.join(' | ')}`).toBeGreaterThan(0);
  const cells = await table.locator('tbody tr').evaluateAll((rows, at) => rows.map((row) => row.children[at].textContent ?? ''), column);
  for (const [index, day] of days.entries()) expectText(cells[index], day.reference_et_fao56_short_mm, `reference ET of ${day.date}`);
});

test('the crop library names every crop with its plantings and its sources', async ({ page, api }) => {
  const { items: crops } = await api.get<{ items: CropAnswer[] }>('/api/v1/crops');
  expect(total(crops, (crop) => crop.planting_count)).toBeGreaterThan(0);
  await page.goto('/crops');
  for (const crop of crops) await expect(page.locator(`main a[href="/crops/${encodeURIComponent(crop.code)}"]`)).toHaveCount(1);
  const common = crops.reduce((a, b) => (b.planting_count > a.planting_count ? b : a));
  await page.locator(`main a[href="/crops/${encodeURIComponent(common.code)}"]`).click();
  await expect(page.getByRole('heading', { level: 1 })).toContainText(common.name);
  const said = await textOf(page.getByRole('main'));
  for (const calendar of common.calendars) expect(said, `calendar ${calendar.code}`).toContain(calendar.name);
  expect(said, 'where the coefficients come from').toMatch(/FAO|Table/);
});
