import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { verificationReportSchema, type VerificationReport } from '@halfdeep/contracts';
import { CORE_VERSION } from '@halfdeep/ocean';
import { CATALOGUE } from './catalogue';
import { convergencePlate, profilePlate } from './plates';
import { checkOf, type Proof } from './record';
import { reportHtml } from './report/html';
import { shown } from './report/numbers';
import { plateSvg } from './report/plate-svg';
import { ProofReporter } from './report/proof-reporter';

const read = (name: string) => readFileSync(new URL(`../../data/verification/${name}`, import.meta.url), 'utf8');
const proof: Proof = {
  id: 'one',
  quantity: 'speed, m/s',
  expected: 2,
  obtained: 2.01,
  tolerance: 0.01,
  resolution: 'dx = 1 km',
};

describe('a proof', () => {
  it.each<[string, Partial<Proof>, number | null, boolean]>([
    ['relative, within', {}, 0.005, true],
    ['relative, beyond', { obtained: 2.03 }, 0.015, false],
    ['absolute, beyond', { kind: 'absolute', tolerance: 0.005 }, 0.01, false],
    ['L2, within', { kind: 'L2', expected: 0, obtained: 0.009 }, 0.009, true],
    ['at most, kept', { kind: 'atMost', obtained: 1.9 }, 0, true],
    ['at most, passed by', { kind: 'atMost' }, 0.01, false],
    ['at least, kept', { kind: 'atLeast' }, 0, true],
    ['at least, missed', { kind: 'atLeast', obtained: 1.5 }, 0.5, false],
    ['order within its range', { order: 2, orderRange: [1.9, 2.1] }, 0.005, true],
    ['order out of its range', { order: 1, orderRange: [1.9, 2.1] }, 0.005, false],
    ['not a number', { obtained: NaN }, null, false],
  ])('%s', (_name, change, error, passed) => {
    const check = checkOf({ ...proof, ...change });
    if (error === null) expect(check.error).toBeNull();
    else expect(check.error).toBeCloseTo(error, 9);
    expect(check.passed).toBe(passed);
  });
  it('needs a tolerance, and an order with its range', () => {
    expect(() => checkOf({ ...proof, tolerance: undefined })).toThrow(/tolerance/);
    expect(() => checkOf({ ...proof, order: 2 })).toThrow(/range/);
  });
});

describe('the report', () => {
  it('fails a case that no test reached', () => {
    const report = new ProofReporter('V8 1.0', () => undefined).report();
    expect(verificationReportSchema.parse(report)).toEqual(report);
    expect(report.counts).toEqual({
      cases: Object.keys(CATALOGUE).length,
      passed: 0,
      failed: Object.keys(CATALOGUE).length,
      checks: 0,
      checksFailed: 0,
    });
    expect(reportHtml(report)).toContain('no check was reached');
  });
  it('shows what failed, and escapes what it shows', () => {
    const report = new ProofReporter('V8 1.0', () => undefined).report();
    const page = reportHtml({ ...report, failures: ['a < b & "c"'] });
    expect(page).toContain('a &#60; b &#38; &#34;c&#34;');
    expect(page).toMatch(/25 of 25 cases fail/);
  });
  it.each([
    [0, '0'],
    [-0.00123456789, '−0.00123457'],
    [4.187e-5, '4.187 × 10⁻⁵'],
    [1e-11, '10⁻¹¹'],
    [1095, '1095'],
    [-2.5e7, '−2.5 × 10⁷'],
    [null, 'not a number'],
  ])('writes %s as %s', (value, text) => {
    expect(shown(value)).toBe(text);
  });
  it('draws plates in place: logarithmic and linear, inside their frame', () => {
    const plates = [
      convergencePlate('Errors.', 'spacing, km', [100, 50], [{ name: 'η', values: [4e-3, 1e-3] }]),
      profilePlate('Profile.', ['x, km', 'η, m'], [{ name: 'found', role: 'found', x: [0, 1, 2], y: [0, 5, 0] }]),
      profilePlate('Flat.', ['x, km', 'η, m'], [{ name: 'found', role: 'found', x: [0, 1], y: [3, 3] }]),
    ];
    for (const plate of plates) {
      const svg = plateSvg(plate);
      expect(svg).not.toContain('NaN');
      const [, line] = /<polyline[^>]* points="([^"]*)"/.exec(svg)!;
      for (const point of line.split(' ')) {
        const [x, y] = point.split(',').map(Number);
        expect(x).toBeGreaterThan(60);
        expect(x).toBeLessThan(370);
        expect(y).toBeGreaterThan(10);
        expect(y).toBeLessThan(240);
      }
    }
    expect(plates[0].series[1].points).toEqual([
      [50, 1e-3],
      [100, 4e-3],
    ]);
  });
});

// While `npm run verify` writes the report anew, the old one is of no account.
describe.skipIf(process.env['HALFDEEP_VERIFY'] === 'write')('the committed report', () => {
  const report = (): VerificationReport => verificationReportSchema.parse(JSON.parse(read('report.json')));

  it('is of this core, holds every case, and every case passes', () => {
    const { coreVersion, cases, failures, counts } = report();
    expect(coreVersion).toBe(CORE_VERSION);
    expect(cases.map(({ id }) => id)).toEqual(Object.keys(CATALOGUE));
    expect(cases.filter(({ passed }) => !passed)).toEqual([]);
    expect(failures).toEqual([]);
    expect(counts.failed + counts.checksFailed).toBe(0);
  });
  it('has its page made from the same numbers', () => {
    expect(read('report.html')).toBe(reportHtml(report()));
  });
  it('names no place or moment of the machine', () => {
    for (const name of ['report.json', 'report.html'])
      expect(read(name)).not.toMatch(/\/work\/|\/tmp\/|\d{4}-\d\d-\d\d/);
  });
});
