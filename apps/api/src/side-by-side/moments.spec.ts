import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { joinMoments, measuresOf, noMoments, pairMoments } from './moments';

/** Straight from the definitions: Pearson's r with weights, RMS, over the points where both are finite. */
function naive(a: number[], b: number[], w: number[]) {
  const kept = a.map((_, k) => k).filter((k) => Number.isFinite(a[k]) && Number.isFinite(b[k]));
  const sum = (f: (k: number) => number) => kept.reduce((total, k) => total + w[k] * f(k), 0);
  const W = sum(() => 1);
  const meanA = sum((k) => a[k]) / W;
  const meanB = sum((k) => b[k]) / W;
  const covariance = sum((k) => (a[k] - meanA) * (b[k] - meanB));
  return {
    rmsDifference: Math.sqrt(sum((k) => (a[k] - b[k]) ** 2) / W),
    correlation: covariance / Math.sqrt(sum((k) => (a[k] - meanA) ** 2) * sum((k) => (b[k] - meanB) ** 2)),
    rmsA: Math.sqrt(sum((k) => a[k] ** 2) / W),
    rmsB: Math.sqrt(sum((k) => b[k] ** 2) / W),
  };
}

describe('measures of two fields', () => {
  it('equal the definitions however the points are split into frames', () => {
    const value = fc.oneof(
      { weight: 9, arbitrary: fc.double({ min: -50, max: 50, noNaN: true }) },
      { weight: 1, arbitrary: fc.constant(NaN) },
    );
    const point = fc.tuple(value, value, fc.double({ min: 0.1, max: 4, noNaN: true }));
    fc.assert(
      fc.property(fc.array(point, { minLength: 6, maxLength: 80 }), fc.integer({ min: 1, max: 7 }), (points, size) => {
        let joined = noMoments();
        for (let k = 0; k < points.length; k += size) {
          const frame = points.slice(k, k + size);
          joined = joinMoments(
            joined,
            pairMoments(
              frame.map((p) => p[0]),
              frame.map((p) => p[1]),
              frame.map((p) => p[2]),
            ),
          );
        }
        const measured = measuresOf(joined);
        const kept = points.filter((p) => Number.isFinite(p[0]) && Number.isFinite(p[1]));
        if (kept.length === 0) return measured.rmsDifference === null;
        const expected = naive(
          points.map((p) => p[0]),
          points.map((p) => p[1]),
          points.map((p) => p[2]),
        );
        expect(measured.rmsDifference!).toBeCloseTo(expected.rmsDifference, 9);
        expect(measured.rmsA!).toBeCloseTo(expected.rmsA, 9);
        expect(measured.rmsB!).toBeCloseTo(expected.rmsB, 9);
        const spread = Math.min(joined.squareA, joined.squareB) / joined.weight;
        if (spread > 1e-6) expect(measured.correlation!).toBeCloseTo(expected.correlation, 7);
        return true;
      }),
    );
  });

  const ones = [1, 1, 1, 1];
  it('are 0 and 1 for a field beside itself', () => {
    const m = measuresOf(pairMoments([1, 2, 3, 5], [1, 2, 3, 5], ones));
    expect(m.rmsDifference).toBe(0);
    expect(m.correlation).toBeCloseTo(1, 15);
  });
  it('are −1 for a mirrored field and do not see a factor or an offset in the correlation', () => {
    expect(measuresOf(pairMoments([1, 2, 3, 5], [-1, -2, -3, -5], ones)).correlation).toBeCloseTo(-1, 15);
    const shifted = measuresOf(pairMoments([1, 2, 3, 5], [103, 106, 109, 115], ones));
    expect(shifted.correlation).toBeCloseTo(1, 14);
  });
  it('give no correlation for a constant field, not NaN', () => {
    const m = measuresOf(pairMoments([0.1, 0.1, 0.1, 0.1], [1, 2, 3, 4], ones));
    expect(m.correlation).toBeNull();
    expect(m.rmsA).toBeCloseTo(0.1, 15);
    expect(measuresOf(pairMoments([0, 0], [0, 0], ones)).correlation).toBeNull();
  });
  it('leave out land and weigh by area', () => {
    const m = measuresOf(pairMoments([1, NaN, 4], [0, 7, 0], [3, 100, 1]));
    expect(m.rmsDifference).toBeCloseTo(Math.sqrt((3 * 1 + 1 * 16) / 4), 14);
  });
  it('are all null without a common point', () =>
    expect(measuresOf(pairMoments([NaN], [1], [1]))).toEqual({
      rmsDifference: null,
      correlation: null,
      rmsA: null,
      rmsB: null,
    }));
});
