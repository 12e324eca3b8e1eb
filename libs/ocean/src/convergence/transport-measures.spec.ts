import { describe, expect, it } from 'vitest';
import { transportMeasures } from './transport-measures';

const year = (mean: number, amplitude: number, days: number, interval: number) =>
  Array.from(
    { length: days / interval },
    (_, k) => mean + amplitude * Math.cos((2 * Math.PI * (k + 0.5) * interval) / 365),
  );

describe('transportMeasures', () => {
  it('finds mean and seasonal amplitude of the last year, whatever went before', () => {
    const spinUp = Array.from({ length: 73 }, () => 99);
    const found = transportMeasures([...spinUp, ...year(1.5, 4, 365, 5)], 5, 730)!;
    expect(found.mean).toBeCloseTo(1.5, 12);
    // The largest interval mean lies half an interval beside the peak, the smallest on the trough.
    expect(found.amplitude).toBeCloseTo(2 * (1 + Math.cos((2 * Math.PI * 2.5) / 365)), 12);
    expect(found.largest).toBeCloseTo(5.5, 1);
    expect(found.window).toEqual({ fromDay: 365, toDay: 730, records: 73, wholeYear: true });
  });
  it('takes the whole of a shorter run, and says that it is no year', () => {
    const found = transportMeasures([1, 3, -2], 1, 3)!;
    expect(found).toMatchObject({ mean: 2 / 3, amplitude: 2.5, largest: 3 });
    expect(found.window).toEqual({ fromDay: 0, toDay: 3, records: 3, wholeYear: false });
  });
  it('takes as many whole intervals as fit into a year', () => {
    const { window } = transportMeasures(new Float64Array(100), 30, 3000)!;
    expect(window).toEqual({ fromDay: 2640, toDay: 3000, records: 12, wholeYear: false });
  });
  it('has nothing to say of no records, and takes one that is longer than a year', () => {
    expect(transportMeasures([], 5, 0)).toBeNull();
    expect(transportMeasures([2, 7], 500, 1000)).toMatchObject({ mean: 7, amplitude: 0, window: { records: 1 } });
  });
});
