// One setup has one fingerprint, in Node and in Chromium, by the readable stepper and by the compiled one (numerics.md §7):
// only + − × ÷ √ reach the state, and IEEE 754 leaves them no freedom. The page stands under the product's own headers.
import { createServer, type Server } from 'node:http';
import { type AddressInfo } from 'node:net';
import { fileURLToPath } from 'node:url';
import { corvaneSetup, PRESETS, sketchSetup, type Setup } from '@halfdeep/ocean';
import { build } from 'esbuild';
import express from 'express';
import { chromium, type Browser, type Page } from 'playwright';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { securityHeaders } from '../../../apps/api/src/http/security-headers';
import { smallSetup } from '../../../libs/ocean/src/testing/setups';
import { findChromium } from '../../../libs/workspace/chromium.mjs';
import { fingerprint, type Answer, type Question } from './fingerprints.worker';

const executablePath = findChromium();
const short = (setup: Setup, days: number): Setup => ({ ...setup, length: { days } });
const small = smallSetup({ length: { days: 10 } });
const nonlinear: Setup = {
  ...small,
  layer: { ...small.layer, entrainment: { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' } },
  numerics: { ...small.numerics, equations: 'nonlinear', stepsPerDay: 16 },
};
const spherical: Setup = {
  ...small,
  basin: { ...small.basin, geometry: 'spherical', sponges: [{ edge: 'east', widthDeg: 3, peakRatePerS: null, tapersWind: true }] }, // prettier-ignore
};

const SETUPS: readonly [name: string, setup: Setup][] = [
  ['a small linear basin', small],
  ['a small nonlinear basin with entrainment', nonlinear],
  ['a spherical basin with a sponge', spherical],
  ['a zonally periodic channel', short(PRESETS.find(({ id }) => id === 'kelvin-channel')!.setup, 5)],
  ['the sketch of the Corvane control', short(sketchSetup(corvaneSetup()).setup, 30)],
];

describe.skipIf(!executablePath)('fingerprints in Node and in Chromium', () => {
  let server: Server;
  let browser: Browser;
  let page: Page;
  const complaints: string[] = [];

  beforeAll(async () => {
    const root = fileURLToPath(new URL('../../../', import.meta.url));
    const bundle = await build({
      absWorkingDir: root,
      entryPoints: ['tests/verification/browser/fingerprints.worker.ts'],
      bundle: true,
      write: false,
      format: 'esm',
      platform: 'browser',
      target: 'es2022',
      tsconfig: 'tsconfig.base.json',
    });
    const app = express();
    app.use(securityHeaders(false));
    app.get('/worker.js', (_req, res) => void res.type('js').send(bundle.outputFiles[0].text));
    app.get('/favicon.ico', (_req, res) => void res.status(204).end());
    app.get('/', (_req, res) => void res.type('html').send('<!doctype html><title>Fingerprints</title>'));
    server = createServer(app);
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    browser = await chromium.launch({ executablePath, args: ['--no-sandbox'] });
    page = await browser.newPage();
    page.on('console', (message) => complaints.push(message.text()));
    page.on('pageerror', (error) => complaints.push(error.message));
    await page.goto(`http://127.0.0.1:${(server.address() as AddressInfo).port}/`);
  }, 120_000);
  afterAll(async () => {
    await browser?.close();
    await new Promise((resolve) => server.close(resolve));
  });

  /** Asked of a worker of the page's own origin, as the sketch is. */
  const inChromium = (question: Question): Promise<Answer> =>
    page.evaluate(
      (asked) =>
        new Promise<Answer>((resolve) => {
          const worker = new Worker('/worker.js', { type: 'module' });
          const end = (answer: Answer) => {
            worker.terminate();
            resolve(answer);
          };
          worker.onmessage = ({ data }: MessageEvent<Answer>) => end(data);
          worker.onerror = ({ message }) => end({ failure: message || 'the worker did not start' });
          worker.postMessage(asked);
        }),
      question,
    );

  it.each(SETUPS)('are one for %s', async (_name, setup) => {
    const sha256 = fingerprint({ setup, kernel: 'reference' });
    expect(sha256).toMatch(/^[0-9a-f]{64}$/);
    expect(fingerprint({ setup, kernel: 'simd' })).toBe(sha256);
    expect(await inChromium({ setup, kernel: 'reference' })).toEqual({ sha256 });
    expect(await inChromium({ setup, kernel: 'simd' })).toEqual({ sha256 });
    expect(complaints).toEqual([]);
  });

  it('change with the setup', async () => {
    const other = { ...small, layer: { ...small.layer, restThicknessM: 201 } };
    const [one, two] = [await inChromium({ setup: small, kernel: 'simd' }), await inChromium({ setup: other, kernel: 'simd' })]; // prettier-ignore
    expect(one).not.toEqual(two);
  });
});
