import { beforeEach, describe, expect, it } from 'vitest';
import { type TooManyError } from '../http/errors';
import { SignInGuard, type SignInAttempt } from './sign-in-guard';

let clock: number;
let slept: number[];
let guard: SignInGuard;
beforeEach(() => {
  clock = 1e6;
  slept = [];
  guard = new SignInGuard(
    () => clock,
    (ms) => {
      slept.push(ms);
      return Promise.resolve();
    },
  );
});
const from = (address: string, email = 'owner@halfdeep.example', device: string | null = null): SignInAttempt => ({
  address,
  email,
  device,
});
const waitOf = (attempt: SignInAttempt) =>
  guard.admit(attempt).then(
    () => 0,
    (error: TooManyError) => error.retryAfterS,
  );

describe('the guard of the sign-in', () => {
  it('lets five failures pass, then asks for waits that double up to a minute', async () => {
    for (let k = 0; k < 5; k++) expect(await waitOf(from('a'))).toBe(0);
    const waits: number[] = [];
    for (let k = 0; k < 9; k++) {
      await guard.admit(from('a'));
      const wait = await waitOf(from('a'));
      waits.push(wait);
      clock += wait * 1000;
    }
    expect(waits).toEqual([1, 2, 4, 8, 16, 32, 60, 60, 60]);
  });

  it('does not count an attempt that it refused', async () => {
    for (let k = 0; k < 6; k++) await guard.admit(from('a'));
    expect(await waitOf(from('a'))).toBe(1);
    expect(await waitOf(from('a'))).toBe(1);
    clock += 1000;
    expect(await waitOf(from('a'))).toBe(0);
  });

  it('refuses an address that tries many accounts', async () => {
    for (let k = 0; k < 21; k++) await guard.admit(from('a', `person${k}@halfdeep.example`));
    expect(await waitOf(from('a', 'one-more@halfdeep.example'))).toBeGreaterThan(0);
    expect(await waitOf(from('b', 'one-more@halfdeep.example'))).toBe(0);
  });

  it('never refuses an owner elsewhere because of a stranger: the answer comes late, by four seconds at most', async () => {
    for (let k = 0; k < 200; k++) await guard.admit(from(`stranger ${k}`));
    slept = [];
    expect(await waitOf(from('home'))).toBe(0);
    expect(slept).toEqual([4000]);
  });

  it('judges a browser that is known by its own failures alone, even at the address of the stranger', async () => {
    for (let k = 0; k < 6; k++) await guard.admit(from('shared'));
    expect(await waitOf(from('shared'))).toBeGreaterThan(0);
    slept = [];
    expect(await waitOf(from('shared', 'owner@halfdeep.example', 'known'))).toBe(0);
    expect(slept).toEqual([]);
    for (let k = 0; k < 5; k++) await guard.admit(from('shared', 'owner@halfdeep.example', 'known'));
    expect(await waitOf(from('shared', 'owner@halfdeep.example', 'known'))).toBe(1);
  });

  it('counts attempts that are sent all at once', async () => {
    const all = await Promise.all(Array.from({ length: 30 }, () => waitOf(from('a'))));
    expect(all.filter((wait) => wait === 0)).toHaveLength(6);
  });

  it('starts afresh after a success, and after half an hour of quiet', async () => {
    for (let k = 0; k < 5; k++) await guard.admit(from('a'));
    guard.succeeded(from('a'));
    for (let k = 0; k < 5; k++) expect(await waitOf(from('a'))).toBe(0);
    await guard.admit(from('a'));
    expect(await waitOf(from('a'))).toBe(1);
    clock += 31 * 60_000;
    for (let k = 0; k < 5; k++) expect(await waitOf(from('a'))).toBe(0);
  });
});
