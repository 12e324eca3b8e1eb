import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { expect, type TestContext } from 'vitest';
import type { VerificationCheck, VerificationPlate, VerificationReport } from '@halfdeep/contracts';
import type { CaseId } from './catalogue';
import { ENGINE } from './engine';

declare module 'vitest' {
  interface TaskMeta {
    /** What a test proved, for the report of `npm run verify`. */
    proofs?: { caseId: CaseId; check: VerificationCheck }[];
  }
}

/** One number to be proven. */
export interface Proof {
  /** Name within the case, unique there. */
  id: string;
  /** What is compared, with its unit behind a comma. */
  quantity: string;
  expected: number;
  obtained: number;
  /** How `obtained` is held against `expected`; default relative. */
  kind?: 'relative' | 'absolute' | 'L2' | 'atMost' | 'atLeast';
  /** Largest error that passes. Left out for bounds, which allow none. */
  tolerance?: number;
  /** Observed order, and the range in which it must lie. */
  order?: number;
  orderRange?: [number, number];
  resolution: string;
  plate?: VerificationPlate;
}

const REPORT = fileURLToPath(new URL('../../data/verification/report.json', import.meta.url));

/**
 * Asserts a proof and attaches it to the running test, from where the report takes it. Unless the report is just being
 * written, it must also be what the committed report says: to the last digit on the same engine, else to 1e-6.
 */
export function proveCase({ task }: Pick<TestContext, 'task'>, caseId: CaseId, proof: Proof): void {
  const check = checkOf(proof);
  (task.meta.proofs ??= []).push({ caseId, check });
  const { quantity, expected, obtained, error, tolerance, order, orderRange } = check;
  const where = `${caseId}/${check.id}, ${quantity}:`;
  expect.soft(error ?? Infinity, `${where} ${obtained} against ${expected}`).toBeLessThanOrEqual(tolerance);
  if (orderRange) {
    expect.soft(order ?? NaN, `${where} observed order`).toBeGreaterThanOrEqual(orderRange[0]);
    expect.soft(order ?? NaN, `${where} observed order`).toBeLessThanOrEqual(orderRange[1]);
  }
  if (process.env['HALFDEEP_VERIFY'] !== 'write') expectAsCommitted(caseId, check);
}

/** A proof as the report keeps it: numbers to twelve digits. */
export function checkOf(proof: Proof): VerificationCheck {
  const { id, quantity, kind = 'relative', resolution, orderRange = null, plate = null } = proof;
  const tolerance = kind === 'atMost' || kind === 'atLeast' ? 0 : proof.tolerance;
  if (tolerance === undefined || !(tolerance >= 0)) throw new RangeError(`Proof ${id} needs a tolerance.`);
  if ((proof.order === undefined) !== (orderRange === null))
    throw new RangeError(`Proof ${id} needs an order and its range, or neither.`);
  const error = errorOf(kind, proof.expected, proof.obtained);
  const order = proof.order ?? null;
  const inRange = orderRange === null || (order !== null && order >= orderRange[0] && order <= orderRange[1]);
  return {
    id,
    quantity,
    expected: rounded(proof.expected) ?? NaN,
    obtained: rounded(proof.obtained),
    error: rounded(error),
    errorKind: kind === 'atMost' || kind === 'atLeast' ? 'bound' : kind,
    tolerance,
    order: order === null ? null : rounded(order, 5),
    orderRange,
    resolution,
    passed: error <= tolerance && inRange,
    plate,
  };
}

function errorOf(kind: NonNullable<Proof['kind']>, expected: number, obtained: number): number {
  switch (kind) {
    case 'relative':
      return Math.abs(obtained / expected - 1);
    case 'absolute':
      return Math.abs(obtained - expected);
    case 'L2':
      return obtained;
    case 'atMost':
      return obtained <= expected ? 0 : obtained - expected;
    case 'atLeast':
      return obtained >= expected ? 0 : expected - obtained;
  }
}

function rounded(value: number, digits = 12): number | null {
  return Number.isFinite(value) ? Number(value.toPrecision(digits)) + 0 : null;
}

let committed: VerificationReport | undefined;

function expectAsCommitted(caseId: CaseId, check: VerificationCheck): void {
  if (!existsSync(REPORT))
    throw new Error('data/verification/report.json is missing: `npm run verify` writes it from these tests.');
  committed ??= JSON.parse(readFileSync(REPORT, 'utf8')) as VerificationReport;
  const old = committed.cases.find(({ id }) => id === caseId)?.checks.find(({ id }) => id === check.id);
  const stale = `the committed report lacks or differs from ${caseId}/${check.id}: run \`npm run verify\` and commit it when the change is meant`;
  expect.soft(old, stale).toBeDefined();
  if (!old) return;
  const numbers = ({ expected, obtained, error, tolerance, order }: VerificationCheck) => [
    expected,
    obtained,
    error,
    tolerance,
    order,
  ];
  if (committed.engine === ENGINE) {
    expect.soft(numbers(old), stale).toEqual(numbers(check));
    expect.soft(old.quantity, stale).toBe(check.quantity);
    return;
  }
  const [before, after] = [old.obtained ?? NaN, check.obtained ?? NaN];
  const scale = Math.max(Math.abs(before), check.errorKind === 'absolute' ? check.tolerance : 0);
  expect.soft(Math.abs(after - before), stale).toBeLessThanOrEqual(1e-6 * scale);
}
