import { defineConfig } from '@playwright/test';
import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { findChromium } from './libs/workspace/chromium.mjs';

const port = Number(process.env['HALFDEEP_E2E_PORT'] ?? 4390);
// Playwright loads this file in every worker: the folder is made once and handed on through the environment.
process.env['HALFDEEP_E2E_VAR'] ??= mkdtempSync(join(tmpdir(), 'halfdeep-e2e-'));

/** A fresh database, the real server, its real queue and workers; the tests go through it as a person would. */
export default defineConfig({
  testDir: 'tests/e2e',
  fullyParallel: false,
  workers: 1,
  timeout: 120_000,
  expect: { timeout: 15_000 },
  forbidOnly: !!process.env['CI'],
  globalTeardown: './tests/e2e/clean-up.ts',
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
    command: 'node --enable-source-maps dist/api/main.js',
    url: `http://127.0.0.1:${port}/api/health`,
    timeout: 60_000,
    gracefulShutdown: { signal: 'SIGTERM', timeout: 10_000 },
    env: {
      PORT: String(port),
      HALFDEEP_VAR: process.env['HALFDEEP_E2E_VAR'],
      HALFDEEP_DEMO_PASSWORD: 'brackish-lantern-27',
    },
  },
});
