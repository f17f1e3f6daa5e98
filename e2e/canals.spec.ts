/** Canals: the table is the API’s, the week can be changed, what cannot carry its demand is named. */
import { readFileSync } from 'node:fs';
import type { Page } from '@playwright/test';
import { parse } from 'csv-parse/sync';
import type { ReachPeriod, RunAnswer, SummaryAnswer } from '../lib/http/contract/run.ts';
import { type Api, expect, expectText, test, textOf } from './support.ts';

async function busiestWeek(
  api: Api,
): Promise<{ run: RunAnswer; week: SummaryAnswer['weeks'][number]; index: number; weeks: SummaryAnswer['weeks'] }> {
  const run = await api.standing();
  const { weeks } = await api.get<SummaryAnswer>(`/api/v1/runs/${run.id}/summary`);
  const week = weeks.reduce((a, b) => ((b.headworks_inflow_m3 ?? 0) > (a.headworks_inflow_m3 ?? 0) ? b : a));
  return { run, week, weeks, index: weeks.indexOf(week) };
}

async function reachesOf(api: Api, run: RunAnswer, week: { start: string; end: string }): Promise<ReachPeriod[]> {
  const query = `period=week&from=${week.start}&to=${week.end}`;
  return (await api.get<{ items: ReachPeriod[] }>(`/api/v1/runs/${run.id}/reaches?${query}`)).items;
}

const COLUMNS: readonly (readonly [string, (reach: ReachPeriod) => number | null])[] = [
  ['Turnouts', (reach) => reach.turnout_demand_m3],
  ['Lost', (reach) => reach.reach_loss_m3],
  ['Head inflow', (reach) => reach.head_inflow_m3],
  ['Mean', (reach) => reach.mean_inflow_m3_s],
  ['Peak day', (reach) => reach.peak_inflow_m3_s],
  ['Capacity', (reach) => reach.capacity_m3_s],
];

async function expectTable(page: Page, reaches: readonly ReachPeriod[]): Promise<void> {
  const table = page.getByRole('table', { name: /^reaches/i });
  await expect(table.locator('tbody tr')).toHaveCount(reaches.length);
  const heads = (await table.locator('thead th').allTextContents()).map((head) => head.trim());
  const rows = await table
    .locator('tbody tr')
    .evaluateAll((all) =>
      all.map((row) => ({ reach: row.querySelector('[id]')?.id, cells: [...row.children].map((cell) => cell.textContent ?? '') })),
    );
  for (const [head, pick] of COLUMNS) {
    const at = heads.findIndex((one) => one.startsWith(head));
    expect(at, `column "${head}" among ${heads.join(' | ')}`).toBeGreaterThan(0);
    for (const reach of reaches) {
      const cells = rows.find((row) => row.reach === reach.reach)?.cells ?? [];
      expectText(cells[at], pick(reach), `${head} of ${reach.reach}`);
    }
  }
}

test('the busiest week is shown first; its table is the API’s; the week can be changed', async ({ page, api }) => {
  const { run, week, weeks, index } = await busiestWeek(api);
  await page.goto('/canals');
  const chosen = page.locator('select[name=date]');
  await expect(chosen).toHaveValue(week.start);
  await expectTable(page, await reachesOf(api, run, week));
  await page.getByRole('link', { name: 'Later week' }).click();
  await expect(chosen).toHaveValue(weeks[index + 1].start);
  await expectTable(page, await reachesOf(api, run, weeks[index + 1]));
  await page.getByRole('link', { name: 'Earlier week' }).click();
  await expect(chosen).toHaveValue(week.start);
  await chosen.selectOption(weeks[0].start);
  await page.getByRole('button', { name: 'Show' }).click();
  await expect(page).toHaveURL(new RegExp(`date=${weeks[0].start}`));
  await expectTable(page, await reachesOf(api, run, weeks[0]));
});

test('water is neither made nor lost on the way up the tree', async ({ api }) => {
  const { run, week } = await busiestWeek(api);
  const reaches = await reachesOf(api, run, week);
  for (const reach of reaches) {
    const fed = reaches.filter((one) => one.parent === reach.reach).reduce((sum, one) => sum + (one.head_inflow_m3 ?? 0), 0);
    const needed = (reach.turnout_demand_m3 ?? 0) + (reach.reach_loss_m3 ?? 0) + fed;
    expect(Math.abs((reach.head_inflow_m3 ?? 0) - needed), `${reach.reach}: inflow = turnouts + lost + fed`).toBeLessThanOrEqual(0.5);
  }
});

test('reaches that cannot carry the week are named, and no other', async ({ page, api }) => {
  const { run, weeks } = await busiestWeek(api);
  const byWeek = await Promise.all(weeks.map((week) => reachesOf(api, run, week)));
  const over = byWeek.map((reaches) => reaches.filter((reach) => (reach.capacity_share ?? 0) > 1));
  const fullest = over.reduce((best, reaches, index) => (reaches.length > over[best].length ? index : best), 0);
  expect(over[fullest].length, 'the demo has a week in which a canal is too small').toBeGreaterThan(0);
  await page.goto(`/canals?period=week&date=${weeks[fullest].start}`);
  const warning = page.getByRole('main').getByRole('status');
  await expect(warning.locator('li')).toHaveCount(over[fullest].length);
  const said = await textOf(warning);
  for (const reach of over[fullest]) expect(said, `${reach.reach} is named`).toContain(reach.name || reach.reach);
  for (const line of await warning.locator('li').allTextContents()) {
    const [, flow, capacity, share] = /([\d.]+) of ([\d.]+)[^(]*\(([\d.]+)/.exec(line) ?? [];
    // both flows are written to 0.001 m³/s, the share to a whole percent or finer
    expect(Math.abs((100 * Number(flow)) / Number(capacity) - Number(share)), `the numbers agree: ${line}`).toBeLessThan(0.7);
  }
  const calm = over.findIndex((reaches) => reaches.length === 0);
  await page.goto(`/canals?period=week&date=${weeks[calm].start}`);
  await expect(page.getByRole('table', { name: /^reaches/i })).toBeVisible();
  await expect(warning.locator('li')).toHaveCount(0);
});

test('the CSV has every reach of every week, with the numbers of the table', async ({ page, api }) => {
  const { run, week, weeks } = await busiestWeek(api);
  await page.goto('/canals');
  const [download] = await Promise.all([
    page.waitForEvent('download', { timeout: 60_000 }),
    page.locator('a[href*="reports/reaches.csv"]').first().click(),
  ]);
  const rows = parse(readFileSync(await download.path(), 'utf8'), { columns: true, bom: true }) as Record<string, string>[];
  const reaches = await reachesOf(api, run, week);
  expect(rows.length).toBe(reaches.length * weeks.length);
  for (const reach of reaches) {
    const row = rows.find((one) => one.reach === reach.reach && one.start === week.start);
    expect(Number(row?.head_inflow_m3), reach.reach).toBeCloseTo(reach.head_inflow_m3 ?? Number.NaN, 2);
  }
});
