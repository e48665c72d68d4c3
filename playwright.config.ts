import { defineConfig } from '@playwright/test';

/**
 * Browser tests on the built application with a throw-away database. `E2E_URL` points them at a server that runs
 * already. Files named *.realtime.e2e.ts and the whole path measure onsets: they run last, one at a time.
 */
// Workers inherit the number, so that all of one run agree; two runs side by side get different ones.
const port = Number((process.env.E2E_PORT ??= String(20_000 + (process.pid % 20_000))));
const url = process.env.E2E_URL ?? `http://127.0.0.1:${port}`;
const realtime = /(whole-path|\.realtime)\.e2e\.ts$/;

export default defineConfig({
  testDir: 'tests/e2e',
  testMatch: '**/*.e2e.ts',
  outputDir: 'test-results/browser',
  fullyParallel: true,
  forbidOnly: true,
  workers: 2,
  timeout: 60_000,
  reporter: [['list']],
  projects: [
    { name: 'app', testIgnore: realtime },
    { name: 'realtime', testMatch: realtime, workers: 1, fullyParallel: false, timeout: 300_000 }
  ],
  use: {
    baseURL: url,
    viewport: { width: 1440, height: 900 },
    locale: 'en-GB',
    // Traces cost a test a large part of its time: ask for one with --trace on.
    screenshot: 'only-on-failure',
    launchOptions: {
      executablePath: process.env.CHROMIUM || '/usr/bin/chromium',
      args: [
        '--no-sandbox',
        '--disable-gpu',
        '--disable-quic',
        '--no-first-run',
        '--disable-background-networking',
        '--disable-component-update',
        '--disable-sync'
      ]
    }
  },
  ...(process.env.E2E_URL
    ? {}
    : {
        webServer: {
          command: `exec node scripts/serve-test.mjs ${port}`,
          url: `${url}/sign-in`,
          gracefulShutdown: { signal: 'SIGTERM' as const, timeout: 10_000 },
          reuseExistingServer: false,
          timeout: 60_000
        }
      })
});
