import { defineConfig } from '@playwright/test';
import { findBrowser } from './tools/browser.mjs';

/** End-to-end tests against the installed product: built server and client, a web and a worker process, PostgreSQL. */
export default defineConfig({
  testDir: 'tests/e2e',
  // The longest first, which is one line of steps; what is left fills both workers.
  projects: [
    { name: 'whole line', testMatch: '**/whole-line.spec.ts' },
    { name: 'pages', testMatch: '**/*.spec.ts', testIgnore: '**/whole-line.spec.ts' },
  ],
  globalSetup: './tests/support/browser-set-up.ts',
  outputDir: 'test-results',
  fullyParallel: false,
  workers: 2,
  retries: 0,
  forbidOnly: true,
  timeout: 90_000,
  expect: { timeout: 20_000 },
  reporter: [['list']],
  use: {
    viewport: { width: 1280, height: 900 },
    locale: 'en-GB',
    timezoneId: 'Europe/London',
    screenshot: 'only-on-failure',
    trace: 'off',
    video: 'off',
    launchOptions: {
      executablePath: findBrowser(),
      args: [
        '--headless',
        '--no-sandbox',
        '--disable-gpu',
        '--disable-quic',
        '--no-first-run',
        '--disable-background-networking',
        '--disable-component-update',
        '--disable-sync',
      ],
    },
  },
});
