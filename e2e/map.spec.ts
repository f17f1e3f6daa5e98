/** The demand map: signed in by keyboard, drawn, stepped through the season, classed, filtered, searched, switched; the numbers are the API's. */
import type { Locator, Page } from '@playwright/test';
import type { MapDescription, ParcelSeason, RunAnswer, SummaryAnswer } from '../lib/http/contract/run.ts';
import { type Api, demoPassword, emailOf, expect, expectFigure, mapDrawn, numberIn, test, textOf, total } from './support.ts';

/** A step of the season must look immediate; the bound leaves room for software rendering on a shared machine [ms]. */
const STEP_BOUND = 500;
const ACRES_PER_HECTARE = 2.471_053_81; // international acre: 4046.8564224 m²

const strip = (page: Page): Locator => page.getByRole('region', { name: 'Season strip' });
const slider = (page: Page): Locator => strip(page).getByRole('slider');
const legend = (page: Page): Locator => page.getByRole('region', { name: /^legend: area/i });

/** Area and number of parcels of every class, as the legend writes them. */
async function classesOf(page: Page): Promise<{ area: number; count: number }[]> {
  const rows = await legend(page)
    .getByRole('listitem')
    .evaluateAll((items) => items.map((item) => [...item.querySelectorAll('button > span')].map((part) => part.textContent ?? '')));
  return rows.map((parts) => ({ area: numberIn(parts[1]), count: numberIn(parts[parts.length - 1].replace(/^, /, '')) }));
}

async function mapOf(api: Api): Promise<{ run: RunAnswer; map: MapDescription }> {
  const run = await api.standing();
  return { run, map: await api.get<MapDescription>(`/api/v1/runs/${run.id}/map`) };
}

interface Step {
  /** as the map says: from the new classes to the picture [ms] */
  readonly drawn: number;
  /** measured here: from the key to the picture [ms] */
  readonly sinceKey: number;
}

/** Moves the season by one week with a key and waits, inside the page, until the map says that it is drawn. */
async function stepOf(page: Page): Promise<Step> {
  return page.evaluate(
    () =>
      new Promise<Step>((resolve, reject) => {
        const map = document.querySelector<HTMLElement>('[data-testid=demand-map]');
        const control = document.querySelector('[role=slider]');
        if (!map || !control) return reject(new Error('no map or no season strip'));
        const pressed = performance.now();
        new MutationObserver((_, observer) => {
          observer.disconnect();
          resolve({ drawn: Number(map.dataset.stepMs), sinceKey: performance.now() - pressed });
        }).observe(map, { attributeFilter: ['data-step-ms'] });
        control.dispatchEvent(new KeyboardEvent('keydown', { key: 'ArrowRight', bubbles: true, cancelable: true }));
      }),
  );
}

function spread(values: readonly number[]): { median: number; most: number } {
  const sorted = [...values].sort((a, b) => a - b);
  return { median: Math.round(sorted[Math.floor(sorted.length / 2)]), most: Math.round(sorted[sorted.length - 1]) };
}

async function openMenu(page: Page): Promise<Locator> {
  const menu = page.getByRole('banner').locator('details.menu');
  if (!(await menu.evaluate((element: HTMLDetailsElement) => element.open))) await menu.locator('summary').click();
  return menu;
}

/** Numbers of the card's water chain by their place in it. */
const chainValue = (card: Locator, name: string): Locator =>
  card
    .getByRole('listitem')
    .filter({ has: card.page().getByText(name, { exact: true }) })
    .locator('.chain-value');

test.describe('a stranger', () => {
  test.use({ signedInAs: null });

  test('signs in with the keyboard alone, sees the map, signs out', async ({ page }) => {
    await page.goto('/');
    await expect(page).toHaveURL(/\/sign-in$/);
    await page.getByLabel('E-mail address').focus();
    await page.keyboard.type(emailOf('manager'));
    await page.keyboard.press('Tab');
    await page.keyboard.type(demoPassword());
    await page.keyboard.press('Enter');
    await mapDrawn(page);
    await page.keyboard.press('Tab');
    await expect(page.locator('a.skip'), 'the first stop of the keyboard skips to the content').toBeFocused();
    const menu = await openMenu(page);
    await menu.getByRole('button', { name: 'Sign out' }).click();
    await expect(page).toHaveURL(/\/sign-in$/);
    await page.goto('/parcels');
    await expect(page).toHaveURL(/\/sign-in$/);
  });
});

test('draws the district; the classes share out its whole area', async ({ page, api }) => {
  const { run, map } = await mapOf(api);
  const { district } = await api.get<SummaryAnswer>(`/api/v1/runs/${run.id}/summary`);
  await page.goto('/');
  const drawn = Number(await (await mapDrawn(page)).getAttribute('data-ready'));
  expect(drawn, 'parcels on the canvas').toBeGreaterThan(500);
  expect(drawn).toBeLessThanOrEqual(map.parcels.code.length);
  const classes = await classesOf(page);
  expect(classes.length, 'classes').toBeGreaterThanOrEqual(3);
  expect(total(classes, ({ count }) => count)).toBe(district.parcel_count);
  expect(Math.abs(total(classes, ({ area }) => area) / district.area_ha - 1), 'areas of the legend beside the district’s').toBeLessThan(
    0.01,
  );
});

test('another quantity has its own classes and stays in the address', async ({ page, api }) => {
  const { map } = await mapOf(api);
  await page.goto('/');
  await mapDrawn(page);
  const depth = await textOf(legend(page));
  await page.getByLabel('Shown on the map').selectOption('crop_et');
  await expect(legend(page)).not.toHaveText(depth);
  await expect(page).toHaveURL(/show=crop_et/);
  await expect.poll(async () => total(await classesOf(page), ({ count }) => count)).toBe(map.parcels.code.length);
  await page.reload();
  await mapDrawn(page);
  await expect(page.getByLabel('Shown on the map')).toHaveValue('crop_et');
});

test('the season strip is moved by keys, at once', async ({ page, api }) => {
  const { run, map } = await mapOf(api);
  const { weeks } = await api.get<SummaryAnswer>(`/api/v1/runs/${run.id}/summary`);
  const last = map.periods.week.length;
  await page.goto('/');
  await mapDrawn(page);
  const heading = strip(page).getByRole('heading');
  const whole = await textOf(heading);
  await slider(page).focus();
  await page.keyboard.press('ArrowRight');
  await expect(slider(page)).toHaveAttribute('aria-valuenow', '1');
  await expect(heading).not.toHaveText(whole);
  await page.keyboard.press('ArrowRight');
  await expect(slider(page)).toHaveAttribute('aria-valuenow', '2');
  await page.keyboard.press('End');
  await expect(slider(page)).toHaveAttribute('aria-valuenow', String(last));
  const busiest = weeks.reduce((a, b) => ((b.gross_volume_m3 ?? 0) > (a.gross_volume_m3 ?? 0) ? b : a));
  const index = map.periods.week.findIndex((week) => week.start === busiest.start);
  await page.keyboard.press('Home');
  const steps: Step[] = [];
  for (let week = 1; week <= index; week++) {
    steps.push(await stepOf(page));
    await expect(slider(page)).toHaveAttribute('aria-valuenow', String(week + 1));
  }
  await expect(page, 'the week is in the address').toHaveURL(new RegExp(`from=${busiest.start}`));
  const drawn = spread(steps.map((step) => step.drawn));
  const sinceKey = spread(steps.map((step) => step.sinceKey));
  const words = `${steps.length} weeks: drawn in ${drawn.median} ms (at most ${drawn.most}), from the key ${sinceKey.median} ms (at most ${sinceKey.most})`;
  test.info().annotations.push({ type: 'step of the season', description: words });
  expect(drawn.median, words).toBeLessThanOrEqual(STEP_BOUND);
  expect(sinceKey.median, words).toBeLessThanOrEqual(STEP_BOUND);
  await page.keyboard.press('Escape');
  await expect(heading).toHaveText(whole);
});

test('a class can be picked out, another way of classing chosen', async ({ page, api }) => {
  const { map } = await mapOf(api);
  await page.goto('/');
  await mapDrawn(page);
  const buttons = legend(page).getByRole('listitem').getByRole('button');
  await buttons.nth(1).click();
  await expect(buttons.nth(1)).toHaveAttribute('aria-pressed', 'true');
  await expect(buttons.nth(1)).toHaveAttribute('data-faint', 'false');
  await expect(buttons.nth(0)).toHaveAttribute('data-faint', 'true');
  await buttons.nth(1).click();
  await expect(buttons.nth(0)).toHaveAttribute('data-faint', 'false');

  const quantiles = await classesOf(page);
  await page
    .locator('summary')
    .filter({ hasText: /^classes/i })
    .click();
  await page.getByLabel('Method').selectOption('equal-interval');
  await page.getByLabel('How many').selectOption('4');
  await expect(buttons).toHaveCount(4);
  const equal = await classesOf(page);
  expect(equal, 'equal intervals beside quantiles').not.toEqual(quantiles);
  expect(total(equal, ({ count }) => count)).toBe(map.parcels.code.length);
});

test('a parcel is found by its code; its card has the API’s numbers and leads to the working', async ({ page, api }) => {
  const { run, map } = await mapOf(api);
  const code = map.parcels.code[Math.floor(map.parcels.code.length / 3)];
  const season = await api.get<ParcelSeason>(`/api/v1/runs/${run.id}/parcels/${code}/daily`);
  await page.goto('/');
  await mapDrawn(page);
  await page.getByLabel('Parcel code').focus();
  await page.keyboard.type(code.toLowerCase());
  await page.keyboard.press('Enter');
  const card = page.getByRole('complementary', { name: new RegExp(code) });
  await expect(card.getByRole('heading', { level: 2 })).toBeFocused();
  const check = async (days: ParcelSeason['days']) => {
    await expectFigure(
      chainValue(card, 'Reference ET'),
      total(days, (day) => day.reference_et_mm),
      'reference ET',
    );
    await expectFigure(
      chainValue(card, 'Crop ET'),
      total(days, (day) => day.crop_et_mm),
      'crop ET',
    );
    await expectFigure(
      chainValue(card, 'Rain'),
      total(days, (day) => day.precipitation_mm),
      'rain',
    );
    await expectFigure(
      chainValue(card, 'Net requirement'),
      total(days, (day) => day.net_requirement_mm),
      'net requirement',
    );
    await expectFigure(
      chainValue(card, 'Gross requirement'),
      total(days, (day) => day.gross_requirement_mm),
      'gross requirement',
    );
    await expectFigure(
      chainValue(card, 'Volume at the turnout'),
      total(days, (day) => day.gross_volume_m3),
      'volume',
    );
  };
  await expect(card.locator('.chain-value').first()).toBeVisible();
  await check(season.days);

  const thirsty = season.days.reduce((a, b) => ((b.gross_requirement_mm ?? 0) > (a.gross_requirement_mm ?? 0) ? b : a));
  const index = map.periods.week.findIndex((week) => week.start <= thirsty.date && thirsty.date <= week.end);
  const week = map.periods.week[index];
  await page.goto(`/?from=${week.start}&parcel=${code}`);
  await mapDrawn(page);
  await expect(slider(page)).toHaveAttribute('aria-valuenow', String(index + 1));
  await expect(card.locator('.chain-value').first()).toBeVisible();
  await check(season.days.filter((day) => week.start <= day.date && day.date <= week.end));

  await card.getByRole('link', { name: /^gross requirement/i }).click();
  await expect(page).toHaveURL(new RegExp(`/parcels/${code}/working/${thirsty.date}`));
  await expect(page.getByRole('heading', { level: 1 })).toContainText(code);
});

test('a code that is not there is said to be missing', async ({ page }) => {
  await page.goto('/');
  await mapDrawn(page);
  await page.getByLabel('Parcel code').fill('no such parcel');
  await page.getByLabel('Parcel code').press('Enter');
  await expect(
    page
      .locator('form')
      .filter({ has: page.getByLabel('Parcel code') })
      .getByRole('alert'),
  ).toContainText('no such parcel');
});

test('canals and stations can be taken off the map', async ({ page, api }) => {
  const { map } = await mapOf(api);
  await page.goto('/');
  const canvas = await mapDrawn(page);
  const layers = page.getByRole('group', { name: 'Layers' });
  const stations = canvas.locator('a.map-station');
  await expect(stations).toHaveCount(map.sites.length);
  await expect(stations.first()).toBeVisible();
  await layers.getByLabel('Weather stations').uncheck();
  await expect(stations.filter({ visible: true })).toHaveCount(0);
  const withCanals = await canvas.screenshot();
  await layers.getByLabel('Canals').uncheck();
  await expect.poll(async () => (await canvas.screenshot()).equals(withCanals), { message: 'the picture without canals' }).toBe(false);
});

test('colours and units are the reader’s choice and are kept', async ({ page, api }) => {
  const { run } = await mapOf(api);
  const { district } = await api.get<SummaryAnswer>(`/api/v1/runs/${run.id}/summary`);
  await page.goto('/');
  await mapDrawn(page);
  const menu = await openMenu(page);
  await menu.getByRole('group', { name: 'Colours' }).getByLabel('Dark').check();
  await expect(page.locator('html')).toHaveAttribute('data-theme', 'dark');
  await menu
    .getByRole('group', { name: 'Units' })
    .getByLabel(/\bac-ft\b/)
    .check();
  await expect(legend(page).getByRole('heading')).toContainText(/\bin$/);
  await page.reload();
  await mapDrawn(page);
  await expect(page.locator('html')).toHaveAttribute('data-theme', 'dark');
  await expect(legend(page).getByRole('heading')).toContainText(/\bin$/);
  const acres = total(await classesOf(page), ({ area }) => area);
  expect(Math.abs(acres / (district.area_ha * ACRES_PER_HECTARE) - 1), 'the area in acres').toBeLessThan(0.01);
  await page.goto('/parcels');
  await expect(page.getByRole('columnheader', { name: /^gross/i })).toContainText('in');
});
