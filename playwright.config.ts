import { defineConfig } from '@playwright/test';
import { findChromium } from './libs/workspace/chromium.mjs';

const port = Number(process.env['HALFDEEP_E2E_PORT'] ?? 4390);

/** A fresh database, the real server, its real queue and workers; the tests go through it as a person would. */
export default defineConfig({
  testDir: 'tests/e2e',
  fullyParallel: false,
  workers: 1,
  timeout: 180_000,
  expect: { timeout: 20_000 },
  forbidOnly: !!process.env['CI'],
  use: {
    baseURL: `http://127.0.0.1:${port}`,
    viewport: { width: 1440, height: 900 },
    locale: 'en-GB',
    timezoneId: 'UTC',
    reducedMotion: 'reduce',
    trace: 'retain-on-failure',
    launchOptions: {
      executablePath: findChromium(),
      args: [
        '--no-sandbox',
        '--disable-gpu',
        '--disable-background-networking',
        '--disable-component-update',
        '--disable-sync',
      ],
    },
  },
  webServer: {
    command: 'node tests/e2e/serve.mjs',
    url: `http://127.0.0.1:${port}/api/health`,
    timeout: 60_000,
    gracefulShutdown: { signal: 'SIGTERM', timeout: 20_000 },
    env: {
      PORT: String(port),
      HALFDEEP_DEMO_PASSWORD: 'brackish-lantern-27',
    },
  },
});
