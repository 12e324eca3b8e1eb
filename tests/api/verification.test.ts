// The verification report that ships with the product, read as people read it.
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { verificationAnswerSchema, type VerificationReport } from '@halfdeep/contracts';
import { CORE_VERSION } from '@halfdeep/ocean';
import request from 'supertest';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { script, somebody, startDeskApi, type DeskApi, type Script } from './desk-harness';

let api: DeskApi;
let folder: string;
let reader: Script;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'halfdeep-verification-'));
  api = await startDeskApi({}, { verificationFolder: folder });
  reader = await script(api, await somebody(api, 'reader', 'reviewer'));
});
afterAll(async () => {
  await api.close();
  await rm(folder, { recursive: true });
});

const get = (path: string) => request(api.server).get(path).set('authorization', `Bearer ${reader.token}`);
const report: VerificationReport = {
  coreVersion: '0',
  engine: 'V8 11.3',
  madeAt: '2026-03-01T10:00:00.000Z',
  counts: { cases: 1, passed: 1, failed: 0, checks: 0, checksFailed: 0 },
  cases: [
    {
      id: 'a',
      title: 'Equatorial Kelvin pulse',
      source: 'Matsuno 1966',
      about: 'It moves at c.',
      quantity: 'speed, m/s',
      expected: 2.5,
      obtained: 2.499,
      error: 4e-4,
      tolerance: 2e-3,
      order: null,
      resolution: '50 km',
      passed: true,
      checks: [],
    },
  ],
  failures: [],
};

it('says in a sentence that there is no report, and which core runs', async () => {
  const { body } = await get('/api/verification').expect(200);
  expect(verificationAnswerSchema.parse(body)).toMatchObject({ coreVersion: CORE_VERSION, report: null });
  expect((body as { why: string }).why).toMatch(/^No verification report .* npm run verify writes one\.$/);
  const page = await get('/api/verification/report').expect(404);
  expect((page.body as { detail: string }).detail).toMatch(/npm run verify/);
});

it.each(['{"coreVersion": "2"', '{"coreVersion": "2"}', 'null'])(
  'tells a damaged report from a missing one: %s',
  async (text) => {
    await writeFile(join(folder, 'report.json'), text);
    const { body } = await get('/api/verification').expect(200);
    expect(body).toMatchObject({ report: null });
    expect((body as { why: string }).why).toMatch(/cannot be read/);
  },
);

it('gives the report as it was written, beside the version of the core that runs', async () => {
  await writeFile(join(folder, 'report.json'), JSON.stringify(report));
  const { body } = await get('/api/verification').expect(200);
  expect(body).toEqual({ coreVersion: CORE_VERSION, report, why: '' });
});

it('gives the page under the same policy of content as everything else', async () => {
  await writeFile(join(folder, 'report.html'), '<!doctype html><title>Verification</title><p>Eighteen cases.</p>');
  const answer = await get('/api/verification/report')
    .expect(200)
    .expect('Content-Type', /^text\/html/);
  expect(answer.text).toContain('Eighteen cases.');
  const policy = answer.headers['content-security-policy'];
  expect(policy).toContain("script-src 'self' 'wasm-unsafe-eval'");
  expect(policy).toContain("worker-src 'self'");
});

it('is for those who are signed in', async () => {
  for (const path of ['/api/verification', '/api/verification/report']) await request(api.server).get(path).expect(401);
});
