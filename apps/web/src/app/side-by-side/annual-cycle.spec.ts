import { annualCycle } from './annual-cycle';

/** Exact means over (day − Δ, day] of 2 + 5 cos(2π(t − 197)/365). */
const intervalMeans = (days: number[], width: number) => {
  const k = (2 * Math.PI) / 365;
  const integral = (t: number) => 2 * t + (5 / k) * Math.sin(k * (t - 197));
  return days.map((day) => (integral(day) - integral(day - width)) / width);
};
const ends = (from: number, to: number, width: number) =>
  Array.from({ length: Math.round((to - from) / width) }, (_, k) => from + (k + 1) * width);

describe('annualCycle', () => {
  it.each([1, 5, 73, 2, 30])('finds mean, amplitude and peak from means over %d d', (width) => {
    const days = ends(0, 3 * 365, width);
    const cycle = annualCycle(days, intervalMeans(days, width), [365, 3 * 365], width);
    expect(cycle?.mean).toBeCloseTo(2, 9);
    expect(cycle?.amplitude).toBeCloseTo(5, 9);
    expect(cycle?.peakDay).toBeCloseTo(197, 6);
  });
  it('leaves out what lies outside the range', () => {
    const days = ends(0, 730, 1);
    const values = intervalMeans(days, 1).map((value, k) => (k < 365 ? value + 100 : value));
    expect(annualCycle(days, values, [365, 730], 1)?.mean).toBeCloseTo(2, 9);
  });
  it('says nothing from too little', () => {
    expect(annualCycle([1, 2, 3], [1, 2, 3], [0, 365], 1)).toBeNull();
    const halves = ends(0, 3650, 182.5);
    expect(annualCycle(halves, halves, [0, 3650], 182.5)).toBeNull();
  });
});
