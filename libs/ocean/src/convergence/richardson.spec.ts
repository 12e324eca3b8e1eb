import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ORDER_RANGE, richardson, SAFETY_FACTOR } from './richardson';

/** f(Δ) = exact + c Δ^p on spacings 4, 2, 1 times `finest`. */
const sequence = (exact: number, c: number, p: number, ratio: number, finest = 1) =>
  [ratio * ratio, ratio, 1].map((step) => exact + c * (step * finest) ** p) as [number, number, number];

describe('richardson', () => {
  // The pressure recovery of the tutorial on grid convergence by the NPARC Alliance, quoted from memory: three grids,
  // ratio 2, 0.96178, 0.96854, 0.97050 from coarse to fine; order 1.786, extrapolated 0.97130, index 0.103 % and 0.356 %.
  it('repeats a worked example', () => {
    const { verdict, order, extrapolated, gci, asymptoticRatio } = richardson(0.96178, 0.96854, 0.9705, 2);
    expect(verdict).toBe('asymptotic');
    expect(order).toBeCloseTo(1.78617, 5);
    expect(extrapolated).toBeCloseTo(0.9713, 5);
    expect(gci!.fine.share! * 100).toBeCloseTo(0.103083, 5);
    expect(gci!.medium.share! * 100).toBeCloseTo(0.356249, 5);
    // With the order taken from the three values themselves this is the ratio of the two finer ones.
    expect(asymptoticRatio).toBeCloseTo(0.9705 / 0.96854, 12);
  });

  it.each([0.5, 1, 2, 3])('finds order %f, and the value that was put in', (p) => {
    const f = sequence(5.37, -0.2, p, 2);
    const { verdict, order, extrapolated, gci } = richardson(...f, 2);
    expect(verdict).toBe('asymptotic');
    expect(order).toBeCloseTo(p, 10);
    expect(extrapolated).toBeCloseTo(5.37, 10);
    // Fs times the true error of each grid: Roache (1994), since Richardson's estimate is exact here.
    expect(gci!.fine.amount).toBeCloseTo(SAFETY_FACTOR * Math.abs(f[2] - 5.37), 10);
    expect(gci!.medium.amount).toBeCloseTo(SAFETY_FACTOR * Math.abs(f[1] - 5.37), 10);
  });

  it('is exact for any exact sequence within the range of orders', () => {
    const [least, most] = ORDER_RANGE;
    const numbers = fc.tuple(
      fc.double({ min: -100, max: 100, noNaN: true }),
      fc.double({ min: 0.01, max: 10, noNaN: true }),
      fc.boolean(),
      fc.double({ min: least + 0.01, max: most - 0.01, noNaN: true }),
      fc.constantFrom(1.5, 2, 3),
    );
    fc.assert(
      fc.property(numbers, ([exact, size, down, p, ratio]) => {
        const f = sequence(exact, down ? -size : size, p, ratio);
        const { verdict, order, extrapolated } = richardson(...f, ratio);
        expect(verdict).toBe('asymptotic');
        expect(order).toBeCloseTo(p, 6);
        expect(Math.abs(extrapolated! - exact)).toBeLessThan(1e-6 * (Math.abs(exact) + size));
      }),
    );
  });

  it('turns with the sign, and scales with the unit', () => {
    const values = fc.tuple(...[0, 1, 2].map(() => fc.integer({ min: -50, max: 50 }))) as fc.Arbitrary<
      [number, number, number]
    >;
    fc.assert(
      fc.property(values, ([a, b, c]) => {
        const one = richardson(a, b, c, 2);
        const other = richardson(-8 * a, -8 * b, -8 * c, 2);
        expect(other.verdict).toBe(one.verdict);
        expect(other.order).toBe(one.order);
        expect(other.gci?.fine.amount).toBe(one.gci ? 8 * one.gci.fine.amount : undefined);
        expect(other.gci?.medium.share).toBe(one.gci?.medium.share);
        if (one.extrapolated !== null) expect(other.extrapolated).toBeCloseTo(-8 * one.extrapolated, 9);
      }),
    );
  });

  it('gives numbers in the asymptotic range and nowhere else', () => {
    const value = fc.double({ min: -1e3, max: 1e3, noNaN: true });
    fc.assert(
      fc.property(value, value, value, (a, b, c) => {
        const { verdict, order, extrapolated, gci, sentence } = richardson(a, b, c, 2);
        const inside = verdict === 'asymptotic';
        expect(extrapolated !== null).toBe(inside);
        expect(gci !== null).toBe(inside);
        expect(sentence.startsWith('Not in the asymptotic range')).toBe(!inside && verdict !== 'equal');
        if (inside) expect(order).toSatisfy((p: number) => p > ORDER_RANGE[0] - 1e-6 && p < ORDER_RANGE[1] + 1e-6);
      }),
      { numRuns: 400 },
    );
  });

  it.each([
    [[1, 2, 1.5], 'not monotone', null, /up on one refinement and down on the other/],
    [[4, 2, 1.9], 'order out of range', Math.log2(20), /4\.32, above 3/],
    [[1, 2, 2.9], 'order out of range', Math.log2(1 / 0.9), /0\.15, below 0\.5/],
    [[1, 2, 4], 'order out of range', -1, /changes the value more than the first \(observed order −1\.00\)/],
    [[1, 2, 2], 'order out of range', null, /changes nothing that the first one changed/],
    [[2, 2, 3], 'order out of range', null, /changes what the first one left alone/],
    [[2, 2, 2], 'equal', null, /three grids agree/],
  ] as const)('%j: %s', (values, verdict, order, words) => {
    const found = richardson(...(values as unknown as [number, number, number]), 2);
    expect(found.verdict).toBe(verdict);
    if (order === null) expect(found.order).toBeNull();
    else expect(found.order).toBeCloseTo(order, 10);
    expect(found.sentence).toMatch(words);
    expect(found.gci).toBeNull();
  });

  it('takes what is negligible for equal', () => {
    expect(richardson(1e-9, -2e-9, 3e-9, 2).verdict).toBe('not monotone');
    expect(richardson(1e-9, -2e-9, 3e-9, 2, 1e-6).verdict).toBe('equal');
    expect(richardson(0.1 + 0.2, 0.3, 0.3, 2).verdict).toBe('equal');
  });

  it('has no share beside a value of nothing', () => {
    const { verdict, gci, asymptoticRatio } = richardson(5, 1, 0, 2);
    expect(verdict).toBe('asymptotic');
    expect(gci!.fine).toEqual({ amount: SAFETY_FACTOR / 3, share: null });
    expect(gci!.medium.share).toBeCloseTo((SAFETY_FACTOR * 4) / 3, 12);
    expect(asymptoticRatio).toBeNull();
  });

  it.each([
    [[NaN, 1, 2], 2],
    [[1, Infinity, 2], 2],
    [[1, 2, 3], 1],
    [[1, 2, 3], NaN],
  ] as const)('refuses %j with ratio %d', (values, ratio) => {
    expect(() => richardson(...(values as unknown as [number, number, number]), ratio)).toThrow(RangeError);
  });
});
