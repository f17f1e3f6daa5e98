import { defineConfig } from '@playwright/test';
import { findBrowser } from './browser.ts';

const browser = await findBrowser();

export default defineConfig({
  testDir: '.',
  testMatch: '*.spec.ts',
  outputDir: 'output/results',
  fullyParallel: false,
  workers: 1,
  forbidOnly: true,
  retries: 0,
  timeout: 120_000,
  expect: { timeout: 20_000 },
  reporter: [['list']],
  use: {
    baseURL: process.env.BASE_URL,
    viewport: { width: 1440, height: 900 },
    trace: 'retain-on-failure',
    launchOptions: { executablePath: browser.executablePath, env: browser.env, args: [...browser.args] },
  },
});
