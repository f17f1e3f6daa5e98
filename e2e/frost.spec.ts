/** Frost nights: a night of the record, its plantings at risk as the API has them, and the working of one. */
import type { FrostAnswer, FrozenNights } from '../lib/http/contract/frost.ts';
import { expect, expectText, test, textOf } from './support.ts';

test('a night on record: risk, stage of one’s own, working', async ({ page, api }) => {
  const nights = await api.get<FrozenNights>('/api/v1/frost/nights');
  const night = nights.items.find((each) => each.in_bud && each.minimum_c <= -2.2);
  expect(night, 'the record has a night that hurts open buds').toBeDefined();
  await page.goto(`/frost?date=${night?.date}`);
  await expect(page.getByText('An estimate, no warning service.')).toBeVisible();
  const found = await api.get<FrostAnswer>(`/api/v1/frost?date=${night?.date}&risk=any`);
  const table = page.getByRole('table', { name: 'Plantings at risk' });
  await expect(table.locator('tbody tr')).toHaveCount(Math.min(200, found.total));

  await page.getByLabel('Apple: stage of the buds').selectOption('silver-tip');
  await page.getByRole('button', { name: 'Show the night' }).click();
  await expect(page).toHaveURL(/stage\.apple=silver-tip/);
  const chosen = await api.get<FrostAnswer>(`/api/v1/frost?date=${night?.date}&risk=any&stages=apple:silver-tip`);
  await expect(table.locator('tbody tr')).toHaveCount(Math.min(200, chosen.total));

  await page.goto(`/frost?date=${night?.date}`);
  const first = table.locator('tbody tr').first();
  const parcel = await textOf(first.getByRole('rowheader'));
  const row = found.items.find((item) => item.parcel === parcel);
  // crop, risk, stage, air, then bud or leaf
  expectText(await textOf(first.locator('td').nth(4)), row?.leaf_minimum_c ?? null, `leaf of ${parcel}`);
  await first.getByRole('link').click();
  await expect(page.getByRole('heading', { level: 1 })).toContainText(parcel);
  await expect(page.getByText('temperature of a dry leaf or bud open to the sky', { exact: false }).first()).toBeVisible();
});
