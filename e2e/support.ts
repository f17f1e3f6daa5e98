/** What every browser test shares: people signed in, a watch on the console, the API as the second opinion, screens kept, accessibility. */
import AxeBuilder from '@axe-core/playwright';
import {
  type APIRequestContext,
  test as base,
  type ConsoleMessage,
  expect,
  type Locator,
  type Page,
  type Response,
} from '@playwright/test';
import type { RunAnswer } from '../lib/http/contract/run.ts';

export { expect };

export type Role = 'manager' | 'operator' | 'regulator' | 'grower';
type StorageState = Awaited<ReturnType<APIRequestContext['storageState']>>;

export const DESKTOP = { width: 1440, height: 900 } as const;
export const PHONE = { width: 390, height: 844 } as const;

function fromEnvironment(name: string): string {
  const value = process.env[name];
  if (!value) throw new Error(`${name} is not set: "npm run test:e2e" starts a service and sets it`);
  return value;
}

export const demoPassword = (): string => fromEnvironment('TILLWATER_DEMO_PASSWORD');
export const emailOf = (role: Role): string => `${role}@arrowmere.example`;

/** Everything a page says went wrong. */
export interface ConsoleWatch {
  /** Lets one kind of refusal through: a test that provokes it names it. */
  allow(pattern: RegExp): void;
  faults(): string[];
}

/** Collects console errors, uncaught errors, failed requests and answers from 400 on. */
export function watchConsole(page: Page): ConsoleWatch {
  const seen: string[] = [];
  const allowed: RegExp[] = [];
  page.on('console', (message: ConsoleMessage) => {
    // the browser's own line about a refused request says no more than the answer below
    if (message.type() === 'error' && !message.text().startsWith('Failed to load resource')) seen.push(`console: ${message.text()}`);
  });
  page.on('pageerror', (error) => seen.push(`uncaught: ${error.message}`));
  page.on('requestfailed', (request) => {
    const why = request.failure()?.errorText ?? '';
    // leaving a page ends its requests, and a download ends its navigation
    if (why !== 'net::ERR_ABORTED') seen.push(`request: ${request.method()} ${request.url()} ${why}`);
  });
  page.on('response', (response: Response) => {
    if (response.status() >= 400) seen.push(`answer: ${response.status()} ${response.request().method()} ${response.url()}`);
  });
  return {
    allow: (pattern) => void allowed.push(pattern),
    faults: () => seen.filter((fault) => !allowed.some((pattern) => pattern.test(fault))),
  };
}

/** The HTTP interface with the demo's write token: the numbers that screens are held against. */
export interface Api {
  readonly request: APIRequestContext;
  get<Answer>(path: string): Promise<Answer>;
  /** the run that the screens show without being asked: of the newest season, or of the one named */
  standing(season?: string): Promise<RunAnswer>;
  /** starts a run and waits until it is over */
  compute(season: string, settings?: Readonly<Record<string, unknown>>): Promise<RunAnswer>;
  /** waits until a run is over */
  finished(id: string): Promise<RunAnswer>;
}

function apiOver(request: APIRequestContext): Api {
  const get = async <Answer>(path: string): Promise<Answer> => {
    // a kept connection may be closed by the other end just as it is used again; reading is safe to repeat
    const response = await request.get(path, { maxRetries: 2 });
    expect(response.status(), `GET ${path}: ${response.ok() ? '' : await response.text()}`).toBe(200);
    return (await response.json()) as Answer;
  };
  const finished = async (id: string) => {
    const over = ['done', 'failed', 'cancelled'];
    await expect.poll(async () => over.includes((await get<RunAnswer>(`/api/v1/runs/${id}`)).state), { timeout: 90_000 }).toBe(true);
    return get<RunAnswer>(`/api/v1/runs/${id}`);
  };
  return {
    request,
    get,
    finished,
    standing: async (season) => {
      const { items } = await get<{ items: RunAnswer[] }>('/api/v1/runs');
      const standing = items.filter((run) => run.standing && (season === undefined || run.season === season));
      expect(standing.length, 'a standing run').toBeGreaterThan(0);
      return standing.reduce((a, b) => (b.start_date > a.start_date ? b : a));
    },
    compute: async (season, settings = {}) => {
      const response = await request.post('/api/v1/runs', { data: { season, settings } });
      expect(response.ok(), await response.text()).toBe(true);
      return finished(((await response.json()) as RunAnswer).id);
    },
  };
}

interface TestFixtures {
  /** whose session the page has; null: nobody's */
  signedInAs: Role | null;
  watch: ConsoleWatch;
}
interface WorkerFixtures {
  sessions: (role: Role) => Promise<StorageState>;
  api: Api;
}

/** Playwright's test with a signed-in page (the manager unless the test says otherwise) that must stay free of faults. */
export const test = base.extend<TestFixtures, WorkerFixtures>({
  actionTimeout: 20_000,
  signedInAs: ['manager', { option: true }],
  sessions: [
    async ({ playwright }, provide, { project }) => {
      const made = new Map<Role, StorageState>();
      await provide(async (role) => {
        const known = made.get(role);
        if (known) return known;
        const request = await playwright.request.newContext({ baseURL: project.use.baseURL });
        const response = await request.post('/api/v1/sign-in', { data: { email: emailOf(role), password: demoPassword() } });
        expect(response.ok(), `sign-in of the ${role}: ${await response.text()}`).toBe(true);
        const state = await request.storageState();
        await request.dispose();
        made.set(role, state);
        return state;
      });
    },
    { scope: 'worker' },
  ],
  api: [
    async ({ playwright }, provide, { project }) => {
      const token = fromEnvironment('TILLWATER_DEMO_TOKEN');
      const request = await playwright.request.newContext({
        baseURL: project.use.baseURL,
        extraHTTPHeaders: { authorization: `Bearer ${token}` },
      });
      await provide(apiOver(request));
      await request.dispose();
    },
    { scope: 'worker' },
  ],
  storageState: async ({ signedInAs, sessions }, provide) => {
    await provide(signedInAs ? await sessions(signedInAs) : undefined);
  },
  watch: [
    async ({ page }, provide) => {
      const watch = watchConsole(page);
      await provide(watch);
      expect(watch.faults(), 'the page reported no fault').toEqual([]);
    },
    { auto: true },
  ],
});

/** The tallest picture that is kept whole [px]. */
const TALLEST = 6000;

/** Keeps a picture of the page for people to look at; nothing is compared with it. */
export async function screen(page: Page, name: string): Promise<void> {
  const height = await page.evaluate(() => document.documentElement.scrollHeight);
  await page.screenshot({ path: `e2e/output/screens/${name}.png`, fullPage: height <= TALLEST });
}

/** Serious and critical findings of axe on the page, in words. */
export async function accessibilityFaults(page: Page): Promise<string[]> {
  const { violations } = await new AxeBuilder({ page }).analyze();
  return violations
    .filter((violation) => violation.impact === 'serious' || violation.impact === 'critical')
    .flatMap((violation) =>
      violation.nodes.map((node) => `${violation.id}: ${node.target.join(' ')}: ${node.failureSummary?.split('\n').slice(1).join(' ')}`),
    );
}

/** The demand map once its parcels are drawn. */
export async function mapDrawn(page: Page): Promise<Locator> {
  const map = page.getByTestId('demand-map');
  await expect(map).toHaveAttribute('data-ready', /^\d+$/, { timeout: 60_000 });
  return map;
}

/** The number a reader reads: digits grouped by spaces or commas, a true minus sign, whatever stands around it. NaN when there is none. */
export function numberIn(text: string): number {
  const found = /[-−]?\d[\d\s\u00a0\u202f\u2009,]*(\.\d+)?/.exec(text);
  return found ? Number(found[0].replaceAll(/[\s\u00a0\u202f\u2009,]/g, '').replace('−', '-')) : Number.NaN;
}

/** True when the number in `text` is `value` rounded to the digits that are shown. */
export function shows(text: string, value: number): boolean {
  const digits = /\.(\d+)/.exec(text)?.[1].length ?? 0;
  return Math.abs(numberIn(text) - value) <= 0.5 * 10 ** -digits + 1e-6 * Math.abs(value) + 1e-9;
}

export async function textOf(element: Locator): Promise<string> {
  return (await element.textContent()) ?? '';
}

/** Fails unless `text` is `value`, rounded to the digits it writes; a dash for missing. */
export function expectText(text: string, value: number | null, what: string): void {
  if (value === null) expect(text.trim(), what).toBe('–');
  else expect(shows(text, value), `${what}: the screen shows "${text.trim()}", the API says ${value}`).toBe(true);
}

/** The same for an element, once it is there. */
export async function expectFigure(element: Locator, value: number | null, what: string): Promise<void> {
  expectText(await textOf(element), value, what);
}

/** Sum of what is there. */
export function total<Row>(rows: readonly Row[], pick: (row: Row) => number | null): number {
  return rows.reduce((sum, row) => sum + (pick(row) ?? 0), 0);
}
