import { arrowPath, isolinePath, largest, paintField, panelOf, poweredPanelOf, stressArrows } from './wind-panels';

const field = (...values: number[]) => Float32Array.from(values);

describe('panels of the wind', () => {
  it('chooses round ends in the shown unit and leaves NaN out of them', () => {
    expect(largest(field(NaN, -0.023, 0.01))).toBeCloseTo(0.023, 8);
    expect(panelOf('', 'm/d', field(NaN, 4e-6), 86_400)).toMatchObject({ limitText: '0.40' });
    const curl = poweredPanelOf('curl', 'N/m³', field(-2.2e-8, 1e-8));
    expect(curl.unit).toBe('10⁻⁸ N/m³');
    expect(curl.limit).toBeCloseTo(2.4e-8, 15);
  });
  it('paints north at the top, zero in the middle of the scale and nothing where there is no value', () => {
    const table = Float64Array.from({ length: 768 }, (_, k) => Math.floor(k / 3));
    const pixels = paintField({ values: field(-1, 0, NaN, 1), limit: 1 }, 2, 2, table);
    expect([...pixels]).toEqual([0, 0, 0, 0, 255, 255, 255, 255, 0, 0, 0, 255, 128, 128, 128, 255]);
  });
  it('traces zero between its neighbours', () => {
    const panel = { ...panelOf('', '', field(-1, -1, 1, 1)), limit: 1 };
    expect(isolinePath(panel, { day: Float64Array.from([0, 365]), rows: 2 }, 0, 100, 50)).toBe('M0.0 25.0L100.0 25.0');
  });
  it('draws arrows with the wind: eastward to the right, northward up', () => {
    const [east] = stressArrows({ taux: field(1, 1, 1, 1), tauy: field(0, 0, 0, 0) }, 2, 2, 30, 20);
    expect([east.dx, east.dy]).toEqual([18, -0]);
    const [north] = stressArrows({ taux: field(0, 0, 0, 0), tauy: field(1, 1, 1, 1) }, 2, 2, 30, 20);
    expect(north.dy).toBe(-18);
    expect(stressArrows({ taux: field(0, 0, 0, 0), tauy: field(0, 0, 0, 0) }, 2, 2, 30, 20)).toEqual([]);
    expect(arrowPath({ x: 10, y: 10, dx: 10, dy: 0 })).toMatch(/^M5\.0 10\.0L15\.0 10\.0M/);
  });
});
