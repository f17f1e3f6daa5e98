/** Imports from the first file to the last undo: what is at fault is said, what is applied shows, what is undone is gone. */
import type { Locator, Page } from '@playwright/test';
import type { ImportAnswer } from '../lib/http/contract/rest.ts';
import type { MapDescription } from '../lib/http/contract/run.ts';
import { type Api, expect, test } from './support.ts';

interface Sent {
  readonly name: string;
  readonly mimeType: string;
  readonly text: string | Buffer;
}

/** Fills the form and sends it. */
async function send(page: Page, kind: string, file: Sent, choose?: (form: Locator) => Promise<unknown>): Promise<void> {
  await page.goto('/imports');
  const form = page.locator('form').filter({ has: page.locator('input[type=file]') });
  await form.locator(`input[name=kind][value=${kind}]`).check();
  await form.locator('input[type=file]').setInputFiles({ name: file.name, mimeType: file.mimeType, buffer: Buffer.from(file.text) });
  await choose?.(form);
  await form.locator('button[type=submit]').click();
}

/** Uploads through the form; answers the import's id once its page is open. */
async function upload(page: Page, kind: string, file: Sent, choose?: (form: Locator) => Promise<unknown>): Promise<string> {
  await send(page, kind, file, choose);
  await page.waitForURL(/\/imports\/[0-9a-f-]{36}$/, { timeout: 30_000 });
  return page.url().split('/').at(-1) ?? '';
}

async function expectState(api: Api, id: string, state: ImportAnswer['state']): Promise<ImportAnswer> {
  await expect
    .poll(async () => (await api.get<ImportAnswer>(`/api/v1/imports/${id}?preview=0`)).state, { timeout: 60_000, message: `import ${id}` })
    .toBe(state);
  return api.get<ImportAnswer>(`/api/v1/imports/${id}`);
}

/** The import once its file has been read, whatever came of it. */
async function expectRest(api: Api, id: string): Promise<ImportAnswer> {
  const read = async () => (await api.get<ImportAnswer>(`/api/v1/imports/${id}?preview=0`)).state;
  await expect.poll(read, { timeout: 60_000 }).not.toBe('reading');
  return api.get<ImportAnswer>(`/api/v1/imports/${id}`);
}

/** Presses one of the actions of the import and says yes to its question. */
async function act(page: Page, verb: string): Promise<void> {
  await page.getByRole('main').locator('header').getByRole('button', { name: verb, exact: true }).click();
  const dialog = page.getByRole('dialog');
  await expect(dialog).toBeVisible();
  await dialog.getByRole('button').first().click();
  await expect(dialog).toBeHidden();
}

/** Undoes or cancels what a test left behind when it failed half-way. */
async function tidy(api: Api, id: string | null): Promise<void> {
  if (!id) return;
  const { state } = await api.get<ImportAnswer>(`/api/v1/imports/${id}?preview=0`);
  if (state === 'applied') {
    await api.request.post(`/api/v1/imports/${id}/undo`);
    await expectState(api, id, 'undone');
  } else if (state === 'ready' || state === 'failed') await api.request.post(`/api/v1/imports/${id}/cancel`);
}

/** Runs that an import asked for, once they are over. */
async function runsOver(api: Api, id: string, outcome: 'applied' | 'undone'): Promise<string[]> {
  const runs = async () => {
    const { understood } = await api.get<ImportAnswer>(`/api/v1/imports/${id}?preview=0`);
    return (understood?.[outcome] as { runs?: string[] | null } | undefined)?.runs ?? null;
  };
  await expect.poll(runs, { timeout: 60_000, message: 'the runs that follow the import' }).not.toBeNull();
  const asked = (await runs()) ?? [];
  for (const run of asked) expect((await api.finished(run)).state).toBe('done');
  return asked;
}

const finding = (page: Page, text: RegExp | string): Locator =>
  page.getByRole('table', { name: 'Findings' }).locator('tbody tr').filter({ hasText: text });

let made: string | null = null;
test.beforeEach(() => {
  made = null;
});
test.afterEach(({ api }) => tidy(api, made));

test('stations with one bad row: read, shown, applied, undone', async ({ page, api }) => {
  const { sites } = await api.get<MapDescription>(`/api/v1/runs/${(await api.standing()).id}/map`);
  const { longitude, latitude } = sites[0];
  const codes = ['00417', '00418'];
  const text = [
    'site,name,latitude,longitude,elevation_m,wind_height_m',
    `${codes[0]},Invented Ford,${latitude},${longitude + 0.01},1480,2`,
    `00419,Invented Pole,95.5,${longitude},1480,2`,
    `${codes[1]},Invented Weir,${latitude + 0.01},${longitude},1490,10`,
    '',
  ].join('\r\n');
  const id = await upload(page, 'stations', { name: 'invented-stations.csv', mimeType: 'text/csv', text }, (form) =>
    form.locator('input[name=recompute]').uncheck(),
  );
  made = id;
  const ready = await expectState(api, id, 'ready');
  expect(ready.finding_counts.error, 'one row is at fault').toBe(1);
  const row = finding(page, '95.5');
  await expect(row).toHaveCount(1);
  // the header is row 1, so the bad station stands in row 3
  await expect(row.getByRole('cell').nth(1)).toHaveText('3');
  await expect(row.getByRole('cell').nth(2)).toHaveText('latitude');
  await expect(row, 'the limit is said').toContainText('90');
  await expect(page.getByRole('main'), 'leading zeros are kept').toContainText(codes[0]);
  await page.goto('/weather');
  await expect(page.getByRole('main'), 'nothing is stored before it is applied').not.toContainText(codes[0]);

  await page.goto(`/imports/${id}`);
  await act(page, 'Apply');
  await expectState(api, id, 'applied');
  await page.goto('/weather');
  const table = page.getByRole('table', { name: 'Weather sites' });
  for (const code of codes) await expect(table.getByRole('rowheader', { name: code, exact: true })).toBeVisible();
  await expect(table.getByRole('rowheader', { name: '00419' }), 'the bad row is left out').toHaveCount(0);

  await page.goto(`/imports/${id}`);
  await act(page, 'Undo');
  await expectState(api, id, 'undone');
  await page.goto('/weather');
  await expect(table.locator('tbody tr')).toHaveCount(sites.length);
  for (const code of codes) await expect(table.getByRole('rowheader', { name: code, exact: true })).toHaveCount(0);
});

/** Corners of a polygon from south-west, in degrees, as GeoJSON. */
function outline(corners: readonly (readonly [number, number])[]): object {
  return { type: 'Polygon', coordinates: [[...corners, corners[0]]] };
}

function parcelsFile(west: number, south: number, reach: string): string {
  const size = 0.003;
  const [east, north] = [west + size, south + size];
  const feature = (properties: object, geometry: object) => ({ type: 'Feature', properties, geometry });
  const square = outline([
    [west, south],
    [east, south],
    [east, north],
    [west, north],
  ]);
  // an hourglass: its sides cross in the middle, so that its inside is not clear
  const hourglass = outline([
    [east, south],
    [east + size, north],
    [east + size, south],
    [east, north],
  ]);
  const common = { reach, soil: 'loam', method: 'furrow' };
  return JSON.stringify({
    type: 'FeatureCollection',
    features: [
      feature({ parcel: '0071', crop: 'TRG-09', ...common }, square),
      feature({ parcel: '0072', crop: 'TRG-09', ...common }, hourglass),
    ],
  });
}

test('parcels with a crossed outline and a foreign crop: mapped, applied, computed, undone', async ({ page, api }) => {
  test.setTimeout(240_000);
  const before = await api.standing();
  const map = await api.get<MapDescription>(`/api/v1/runs/${before.id}/map`);
  const crops = await api.get<{ items: { code: string; name: string; planting_count: number }[] }>('/api/v1/crops');
  const crop = crops.items.reduce((a, b) => (b.planting_count > a.planting_count ? b : a));
  const reach = map.parcels.reach.find((code) => code !== null) ?? '';
  const [west, south] = map.bounds;
  const text = parcelsFile(west - 0.01, south - 0.01, reach);
  const sent = { name: 'invented-parcels.geojson', mimeType: 'application/geo+json', text };
  const id = await upload(page, 'parcels', sent, (form) => form.locator('select[name=season]').selectOption(before.season));
  made = id;
  await expectState(api, id, 'ready');
  await expect(finding(page, '0072').filter({ hasText: 'crosses itself' })).toHaveCount(1);
  await expect(finding(page, 'TRG-09')).toHaveCount(1);

  await page.getByLabel('Crop for TRG-09').selectOption(crop.code);
  const [patched] = await Promise.all([
    page.waitForResponse((response) => response.request().method() === 'PATCH' && response.url().endsWith(id)),
    page.getByRole('button', { name: 'Read again with these crops' }).click(),
  ]);
  expect(patched.ok()).toBe(true);
  const read = await expectState(api, id, 'ready');
  expect((read.understood as { crops: object[] }).crops[0]).toMatchObject({ foreignCode: 'TRG-09', cropCode: crop.code, by: 'option' });
  await expect(finding(page, 'TRG-09'), 'a mapped crop is no finding').toHaveCount(0);

  await act(page, 'Apply');
  await expectState(api, id, 'applied');
  expect(await runsOver(api, id, 'applied'), 'the season is computed anew').not.toHaveLength(0);
  await page.goto('/parcels?search=0071');
  const row = page
    .getByRole('table')
    .locator('tbody tr')
    .filter({ has: page.getByRole('rowheader', { name: '0071', exact: true }) });
  await expect(row).toContainText(crop.name);
  const during = await api.standing();
  expect(during.parcel_count).toBe(before.parcel_count + 1);

  await page.goto(`/imports/${id}`);
  await act(page, 'Undo');
  await expectState(api, id, 'undone');
  await runsOver(api, id, 'undone');
  const after = await api.standing();
  expect(after.parcel_count).toBe(before.parcel_count);
  expect((await api.request.get('/api/v1/parcels/0071')).status(), 'the parcel is gone').toBe(404);
});

test('a picture that calls itself CSV is refused in words, and nothing is kept of it', async ({ page, api, watch }) => {
  watch.allow(/answer: 415 POST .*\/api\/v1\/imports$/);
  const count = async () => (await api.get<{ items: ImportAnswer[] }>('/api/v1/imports')).items.length;
  const before = await count();
  // the signature and header chunk of a PNG (RFC 2083)
  const png = Buffer.from('89504e470d0a1a0a0000000d4948445200000001000000010806000000', 'hex');
  await send(page, 'weather', { name: 'picture.csv', mimeType: 'text/csv', text: png });
  const said = page.getByRole('main').getByRole('alert');
  await expect(said, 'which file').toContainText('picture.csv');
  await expect(said, 'what it is').toContainText(/PNG|image|picture|binary/i);
  await expect(page).toHaveURL(/\/imports$/);
  expect(await count()).toBe(before);
});

test('a text that is no table of weather shows what is missing and cannot be applied', async ({ page, api }) => {
  const text = ['when,how_it_felt', '2025-07-01,hot', '2025-07-02,hotter', ''].join('\n');
  const id = await upload(page, 'weather', { name: 'diary.csv', mimeType: 'text/csv', text });
  made = id;
  const answer = await expectRest(api, id);
  expect(answer.finding_counts.error).toBeGreaterThan(0);
  const [first] = answer.findings.filter(({ severity }) => severity === 'error');
  await expect(page.getByRole('table', { name: 'Findings' })).toContainText(first.message);
  expect(first.advice, 'what to do about it').toBeTruthy();
  await expect(page.getByRole('main').locator('header').getByRole('button', { name: 'Apply', exact: true })).toHaveCount(0);
});
