/** Every screen in two sizes and two themes: it opens, says nothing went wrong, fits its window, has one heading; a picture is kept. */
import type { Page } from '@playwright/test';
import type { RunAnswer } from '../lib/http/contract/run.ts';
import { type Api, accessibilityFaults, DESKTOP, expect, mapDrawn, PHONE, type Role, screen, test } from './support.ts';

const SIZES = { desktop: DESKTOP, phone: PHONE } as const;
const THEMES = ['light', 'dark'] as const;

interface Known {
  readonly run: RunAnswer;
  readonly parcel: string;
  readonly site: string;
  readonly crop: string;
  /** a day three quarters into the run */
  readonly date: string;
}

interface Screen {
  readonly name: string;
  readonly path: (known: Known) => string;
  readonly axe?: boolean;
  readonly signedOut?: boolean;
}

const SCREENS: readonly Screen[] = [
  { name: 'sign-in', path: () => '/sign-in', axe: true, signedOut: true },
  { name: 'map', path: () => '/', axe: true },
  { name: 'parcels', path: () => '/parcels' },
  { name: 'parcel', path: ({ parcel }) => `/parcels/${parcel}`, axe: true },
  { name: 'working', path: ({ parcel, date }) => `/parcels/${parcel}/working/${date}`, axe: true },
  { name: 'canals', path: () => '/canals', axe: true },
  { name: 'weather', path: () => '/weather' },
  { name: 'site', path: ({ site }) => `/weather/${site}` },
  { name: 'quality', path: () => '/weather/desk/quality', axe: true },
  { name: 'gaps', path: () => '/weather/desk/gaps', axe: true },
  { name: 'interpolation', path: () => '/weather/desk/interpolation', axe: true },
  { name: 'feeds', path: () => '/weather/desk/feeds', axe: true },
  { name: 'frost', path: () => '/frost', axe: true },
  { name: 'crops', path: () => '/crops' },
  { name: 'crop', path: ({ crop }) => `/crops/${crop}` },
  { name: 'imports', path: () => '/imports', axe: true },
  { name: 'runs', path: () => '/runs' },
  { name: 'run', path: ({ run }) => `/runs/${run.id}` },
  { name: 'methods', path: () => '/methods' },
  { name: 'validation', path: () => '/methods/validation', axe: true },
  { name: 'reports', path: () => '/reports' },
  { name: 'settings', path: () => '/settings' },
  { name: 'api-docs', path: () => '/api/docs' },
];

async function knownOf(api: Api): Promise<Known> {
  const [run, parcels, sites, crops] = await Promise.all([
    api.standing(),
    api.get<{ items: { code: string; crops: string[] }[] }>('/api/v1/parcels?limit=50'),
    api.get<{ items: { code: string }[] }>('/api/v1/weather/sites'),
    api.get<{ items: { code: string; planting_count: number }[] }>('/api/v1/crops'),
  ]);
  return {
    run,
    // the parcel with most crops has most to show
    parcel: parcels.items.reduce((a, b) => (b.crops.length > a.crops.length ? b : a)).code,
    site: sites.items[0].code,
    crop: crops.items.reduce((a, b) => (b.planting_count > a.planting_count ? b : a)).code,
    date: new Date(Date.parse(run.start_date) + 0.75 * (Date.parse(run.end_date) - Date.parse(run.start_date))).toISOString().slice(0, 10),
  };
}

async function open(page: Page, path: string, theme: 'light' | 'dark'): Promise<void> {
  await page.emulateMedia({ colorScheme: theme });
  await page.context().addCookies([{ name: 'tillwater_theme', value: theme, url: new URL(test.info().project.use.baseURL ?? '').origin }]);
  const response = await page.goto(path);
  expect(response?.status(), `status of ${path}`).toBe(200);
  if (path === '/') await mapDrawn(page);
  await expect(page.locator('html')).toHaveAttribute('data-theme', theme);
}

/** How far the page is wider than its window, and what sticks out. */
async function overflowOf(page: Page): Promise<string | null> {
  return page.evaluate(() => {
    const { scrollWidth, clientWidth } = document.documentElement;
    if (scrollWidth <= clientWidth) return null;
    const widest = [...document.body.querySelectorAll('*')].reduce((a, b) =>
      b.getBoundingClientRect().right > a.getBoundingClientRect().right ? b : a,
    );
    return `${scrollWidth} px in ${clientWidth} px: <${widest.tagName.toLowerCase()} class="${widest.className}">`;
  });
}

for (const shown of SCREENS) {
  test.describe(shown.name, () => {
    const signedInAs: Role | null = shown.signedOut ? null : 'manager';
    test.use({ signedInAs });

    test(`${shown.name}: desktop and phone, light and dark`, async ({ page, api }) => {
      test.setTimeout(240_000);
      const path = shown.path(await knownOf(api));
      for (const theme of THEMES) {
        await page.setViewportSize(DESKTOP);
        await open(page, path, theme);
        for (const [size, viewport] of Object.entries(SIZES)) {
          const name = `${shown.name}-${size}-${theme}`;
          await page.setViewportSize(viewport);
          await expect(page.getByRole('heading', { level: 1 }), `${name}: one first heading`).toHaveCount(1);
          expect.soft(await overflowOf(page), `${name}: nothing wider than the window`).toBeNull();
          await screen(page, name);
          if (shown.axe && size === 'desktop') expect.soft(await accessibilityFaults(page), `${name}: axe`).toEqual([]);
        }
      }
    });
  });
}

for (const shown of SCREENS.filter(({ name }) => ['parcel', 'working', 'canals'].includes(name))) {
  test(`${shown.name} on paper`, async ({ page, api }) => {
    await open(page, shown.path(await knownOf(api)), 'dark');
    await page.emulateMedia({ media: 'print', colorScheme: 'dark' });
    for (const navigation of await page.getByRole('navigation', { name: /^main/i, includeHidden: true }).all()) {
      await expect(navigation).toBeHidden();
    }
    await expect(page.getByRole('heading', { level: 1 })).toBeVisible();
    const ground = await page.evaluate(() => getComputedStyle(document.body).backgroundColor);
    expect(ground, 'paper is white, whatever the theme').toMatch(/^(rgb\(255, 255, 255\)|rgba\(0, 0, 0, 0\))$/);
    await screen(page, `${shown.name}-print`);
  });
}
