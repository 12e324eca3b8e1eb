import type { VerificationPlate } from '@halfdeep/contracts';
import { drawPlate, PLOT } from './verification-plot';

const plate = (points: [number, number][], log: boolean): VerificationPlate => ({
  caption: '',
  x: { label: 'spacing, km', log },
  y: { label: 'error', log },
  series: [{ name: 'found', role: 'found', points }],
});

describe('a plate of the verification report', () => {
  it('draws second order as a straight line on logarithmic axes', () => {
    const { series } = drawPlate(
      plate(
        [100, 50, 25, 12.5].map((dx) => [dx, dx * dx]),
        true,
      ),
    );
    const marks = series[0]?.marks ?? [];
    expect(marks).toHaveLength(4);
    const slopes = marks.slice(1).map((mark, k) => (mark.y - (marks[k]?.y ?? 0)) / (mark.x - (marks[k]?.x ?? 0)));
    for (const slope of slopes) expect(slope).toBeCloseTo(slopes[0] ?? NaN, 6);
  });

  it('keeps points and ticks inside the frame', () => {
    for (const log of [true, false]) {
      const drawn = drawPlate(plate([[1, 3], [7, 900], [70, 0.2]], log)); // prettier-ignore
      for (const { x, y } of drawn.series[0]?.marks ?? []) {
        expect(x).toBeGreaterThan(PLOT.left);
        expect(x).toBeLessThan(PLOT.width - PLOT.right);
        expect(y).toBeGreaterThan(PLOT.top);
        expect(y).toBeLessThan(PLOT.height - PLOT.bottom);
      }
      expect(drawn.xTicks.length).toBeGreaterThan(1);
      for (const { at } of drawn.yTicks) expect(at).toBeLessThanOrEqual(PLOT.height - PLOT.bottom);
    }
  });

  it('leaves out what a logarithmic axis cannot show, and draws a frame when nothing is left', () => {
    expect(drawPlate(plate([[1, 0], [2, 4], [4, NaN]], true)).series[0]?.marks).toHaveLength(1); // prettier-ignore
    const empty = drawPlate(plate([], false));
    expect(empty.series[0]?.path).toBe('');
    expect(empty.xTicks.every(({ at }) => Number.isFinite(at))).toBe(true);
  });
});
