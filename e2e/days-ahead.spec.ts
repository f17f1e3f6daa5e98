/**
 * A season told ahead, as a reader sees it: three years of an invented station, a fourth that breaks off, a forecast of some days. In a district of its own, so
 * that no other journey finds another season in view.
 */
import { type Browser, expect, type Page, test } from '@playwright/test';
import { type Api, csv, featureCollection, newDistrict, signIn, square } from './api.ts';
import { watchConsole } from './support.ts';

const BASE = process.env.BASE_URL as string;
const DESKTOP = { width: 1440, height: 900 };
const PHONE = { width: 390, height: 844 };

test.describe.configure({ mode: 'serial' });
test.setTimeout(240_000);

let api: Api;
let cookie: string;

const HEAD = ['site', 'date', 'tmax_c', 'tmin_c', 'dewpoint_c', 'solar_radiation_mj_m2_d', 'wind_speed_m_s', 'precipitation_mm'];

/** Days of invented weather from one date to another, both included. */
function weather(from: string, to: string, maximum: number, rain: (date: string) => number): (string | number)[][] {
  const rows: (string | number)[][] = [];
  for (let at = Date.parse(from); at <= Date.parse(to); at += 86_400_000) {
    const date = new Date(at).toISOString().slice(0, 10);
    rows.push(['A1', date, maximum, maximum - 14, 8, 24, 2, rain(date)]);
  }
  return rows;
}

test.beforeAll(async () => {
  const manager = await signIn(BASE, 'manager@arrowmere.example', process.env.TILLWATER_DEMO_PASSWORD as string);
  const code = `ahead-${Date.now().toString(36)}`;
  const made = await newDistrict(BASE, { cookie: manager }, { code, name: 'Ahead (test)', time_zone: 'UTC', default_elevation_m: 200 });
  ({ api, cookie } = made);
  await api.ok('POST', '/api/v1/seasons', { code: '2024', start_date: '2024-04-01', end_date: '2024-07-31' });
  await api.bring('stations', {
    'stations.csv': csv(['site', 'latitude', 'longitude', 'elevation', 'wind_height_m'], [['A1', 40, -100, 200, 2]]),
  });
  const past = [
    ...weather('2021-04-01', '2021-07-31', 27, (date) => (date.endsWith('-10') ? 30 : 0)),
    ...weather('2022-04-01', '2022-07-31', 29, () => 0),
    ...weather('2023-04-01', '2023-07-31', 31, (date) => (date.endsWith('-20') ? 60 : 0)),
    ...weather('2024-04-01', '2024-06-09', 30, () => 0),
  ];
  await api.bring('weather', { 'record.csv': csv(HEAD, past) });
  await api.bring(
    'weather',
    {
      'issue.csv': csv(
        HEAD,
        weather('2024-06-08', '2024-06-16', 33, () => 0),
      ),
    },
    { role: 'forecast' },
  );
  const field = (number: number) => ({
    geometry: { type: 'Polygon', coordinates: square(-100 + 0.01 * number, 40, 500) },
    properties: { code: `F${number}`, crop: 'maize-grain', method: 'pivot' },
  });
  await api.bring('parcels', { 'fields.geojson': featureCollection([1, 2, 3].map(field)) }, { season: '2024' });
  const run = await api.run('2024');
  expect(run.state, run.error ?? '').toBe('done');
});

async function opened(browser: Browser, path: string, viewport: { width: number; height: number }, colorScheme: 'light' | 'dark') {
  const context = await browser.newContext({ baseURL: BASE, viewport, colorScheme });
  await context.addCookies(
    cookie.split('; ').map((pair) => {
      const [name, ...value] = pair.split('=');
      return { name, value: value.join('='), url: BASE };
    }),
  );
  const page = await context.newPage();
  const watch = watchConsole(page);
  await page.goto(path);
  return { page, watch, close: () => context.close() };
}

const fits = (page: Page) => page.evaluate(() => document.documentElement.scrollWidth <= document.documentElement.clientWidth);

test('the run says from when its days are told, by what, and how many', async () => {
  const { items } = await api.ok('GET', '/api/v1/runs');
  const [run] = items;
  expect(run.days_ahead).toMatchObject({
    ...{ last_observed: '2024-06-09', first_ahead: '2024-06-10', first_beyond_forecast: '2024-06-17' },
    ...{ observed_days: 70, forecast_days: 7, normal_days: 45, analogue_days: 0 },
    // 30 mm on 10 July 2021; none in 2022; 60 mm on 20 June and 20 July 2023, of which June's is within the days of normals
    normals: { years: 3, of: '2021–2023', rain_year: 2021 },
  });
  const { days } = await api.ok('GET', `/api/v1/runs/${run.id}/parcels/F1/daily`);
  const rain = days.filter((day: { precipitation_mm: number }) => day.precipitation_mm > 0).map((day: { date: string }) => day.date);
  expect(rain).toEqual(['2024-07-10']);
});

for (const [size, viewport] of Object.entries({ desktop: DESKTOP, phone: PHONE })) {
  for (const theme of ['light', 'dark'] as const) {
    test(`the parcel’s season is hatched from the last observation on: ${size}, ${theme}`, async ({ browser }) => {
      const { page, watch, close } = await opened(browser, '/parcels/F1', viewport, theme);
      const figure = page.getByRole('figure').filter({ hasText: 'The season day by day' });
      await expect(figure.getByRole('listitem').filter({ hasText: /^Forecast$/ })).toBeVisible();
      await expect(figure.getByRole('listitem').filter({ hasText: /^Normal of the day$/ })).toBeVisible();
      await expect(figure.getByText(/From 10 June 2024 not observed: 7 days forecast, 45 days normal of the day/).last()).toBeVisible();
      await figure.screenshot({ path: `e2e/output/screens/days-ahead-parcel-${size}-${theme}.png` });
      expect(await fits(page)).toBe(true);
      expect(watch.faults()).toEqual([]);
      await close();
    });
  }
}

test('the map says what its weeks rest on, and hatches them', async ({ browser }) => {
  const { page, watch, close } = await opened(browser, '/', DESKTOP, 'light');
  await expect(page.getByTestId('demand-map')).toHaveAttribute('data-ready', /^\d+$/, { timeout: 60_000 });
  const strip = page.getByRole('region', { name: 'Season strip' });
  await expect(strip.getByText('Forecast from 10 Jun, normal of the day from 17 Jun')).toBeVisible();
  expect(await strip.locator('[data-kind="forecast"]').count()).toBeGreaterThan(0);
  expect(await strip.locator('[data-kind="beyond"]').count()).toBeGreaterThan(4);
  await strip.getByRole('slider').focus();
  await page.keyboard.press('Home');
  await expect(strip.getByText(/forecast from|normal of the day from/i)).toHaveCount(0);
  await page.screenshot({ path: 'e2e/output/screens/days-ahead-map.png' });
  expect(watch.faults()).toEqual([]);
  await close();
});

test('the weather screen keeps the forecast apart', async ({ browser }) => {
  const { page, close } = await opened(browser, '/weather', DESKTOP, 'light');
  await expect(page.getByRole('table', { name: 'Forecasts' }).getByRole('rowheader', { name: 'Forecast' })).toBeVisible();
  await expect(page.getByRole('table', { name: 'Weather sites' }).getByRole('row')).toHaveCount(2);
  await close();
});

test('observations take the place of the days told ahead', async () => {
  await api.bring('weather', {
    'june.csv': csv(
      HEAD,
      weather('2024-06-10', '2024-06-30', 28, () => 1),
    ),
  });
  const { items } = await api.ok('GET', '/api/v1/runs');
  expect(items.find((run: { standing: boolean }) => run.standing).stale_since).not.toBeNull();
  const run = await api.run('2024');
  expect(run.days_ahead).toMatchObject({ last_observed: '2024-06-30', forecast_days: 0, normal_days: 31, first_ahead: '2024-07-01' });
});
