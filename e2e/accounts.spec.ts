/** Who may come in, and what each may do. */
import { demoPassword, emailOf, expect, test } from './support.ts';

test.describe('nobody', () => {
  test.use({ signedInAs: null });

  test('a wrong password is refused in words and leaves the form as it was', async ({ page, watch }) => {
    watch.allow(/answer: 401 POST .*\/api\/v1\/sign-in$/);
    await page.goto('/sign-in');
    await page.getByLabel('E-mail address').fill(emailOf('operator'));
    await page.getByLabel('Password').fill(`${demoPassword()} not`);
    await page.getByLabel('Password').press('Enter');
    await expect(page.getByRole('main').getByRole('alert')).toContainText(/password/i);
    await expect(page.getByLabel('E-mail address')).toHaveValue(emailOf('operator'));
    await expect(page).toHaveURL(/\/sign-in$/);
  });

  test('the API refuses who does not say who asks', async ({ page }) => {
    const answer = await page.request.get('/api/v1/parcels');
    expect(answer.status()).toBe(401);
    expect(answer.headers()['content-type']).toContain('application/problem+json');
  });
});

test.describe('a regulator', () => {
  test.use({ signedInAs: 'regulator' });

  test('reads everything and changes nothing', async ({ page, api, baseURL }) => {
    await page.goto('/runs');
    await expect(page.getByRole('table').first()).toBeVisible();
    await expect(page.locator('form select[name=season]')).toHaveCount(0);
    await page.goto('/imports');
    await expect(page.locator('input[type=file]')).toHaveCount(0);
    await page.goto('/settings');
    await expect(page.locator('#tokens, #members')).toHaveCount(0);
    const { season } = await api.standing();
    const run = await page.request.post('/api/v1/runs', { data: { season }, headers: { origin: baseURL ?? '' } });
    expect(run.status(), 'starting a run').toBe(403);
    const token = await page.request.post('/api/v1/tokens', { data: { name: 'mine', scope: 'read' }, headers: { origin: baseURL ?? '' } });
    expect(token.status(), 'making a token').toBe(403);
  });
});

test.describe('a grower', () => {
  test.use({ signedInAs: 'grower' });

  test('does not see what tells of neighbours', async ({ page }) => {
    await page.goto('/imports');
    await expect(page.locator('input[type=file]')).toHaveCount(0);
    await expect(page.getByRole('table')).toHaveCount(0);
    await page.goto('/canals');
    await expect(page.getByRole('table', { name: /^reaches/i })).toHaveCount(0);
    expect((await page.request.get('/api/v1/imports')).status()).toBe(403);
    expect((await page.request.get('/api/v1/members')).status()).toBe(403);
  });
});

test('a token is shown once, works, and is refused once it is withdrawn', async ({ page, playwright, baseURL }) => {
  const name = `browser test ${Date.now()}`;
  await page.goto('/settings');
  const tokens = page.locator('#tokens');
  await tokens.locator('input[name=name]').fill(name);
  await tokens.locator('form button[type=submit]').click();
  const token = (await tokens.getByRole('status').locator('code').textContent()) ?? '';
  expect(token).toMatch(/^tw_[\w-]{20,}$/);
  const script = await playwright.request.newContext({ baseURL, extraHTTPHeaders: { authorization: `Bearer ${token}` } });
  expect((await script.get('/api/v1/district')).status(), 'reading with the token').toBe(200);
  expect((await script.post('/api/v1/runs', { data: { season: 'none' } })).status(), 'a read token starts no run').toBe(403);
  await page.reload();
  await expect(page.getByRole('main'), 'shown once').not.toContainText(token);
  const row = tokens.locator('tbody tr').filter({ hasText: name });
  await expect(row).toHaveCount(1);
  await row.getByRole('button').first().click();
  const question = page.getByRole('dialog');
  await expect(question).toBeVisible();
  expect((await script.get('/api/v1/district')).status(), 'the first press only asks').toBe(200);
  await question.locator('button.danger').click();
  await expect(row).toHaveCount(0);
  expect((await script.get('/api/v1/district')).status(), 'a withdrawn token').toBe(401);
  await script.dispose();
});
