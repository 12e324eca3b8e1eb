import { describe, expect, it } from 'vitest';
import { applyRegridding, bilinear, type CellCentres } from './regrid';

const centres = (n: number, from: number, step: number) => Array.from({ length: n }, (_, k) => from + (k + 0.5) * step);
const grid = (nx: number, ny: number, step: number, periodDeg: number | null = null): CellCentres => ({
  lonDeg: centres(nx, 0, step),
  latDeg: centres(ny, -5, step),
  periodDeg,
});
const sample = (g: CellCentres, f: (lon: number, lat: number) => number) =>
  Array.from(g.latDeg).flatMap((lat) => Array.from(g.lonDeg).map((lon) => f(lon, lat)));

describe('bilinear', () => {
  const fine = grid(40, 40, 0.25);
  const coarse = grid(10, 10, 1);
  const apply = (from: CellCentres, to: CellCentres, field: number[]) => {
    const plan = bilinear(from, to);
    return Array.from(applyRegridding(plan, field, new Float64Array(plan.points)));
  };

  it('is exact for a + b λ + c φ + d λφ', () => {
    const f = (lon: number, lat: number) => 2 - 0.3 * lon + 0.7 * lat + 0.05 * lon * lat;
    const expected = sample(coarse, f);
    apply(fine, coarse, sample(fine, f)).forEach((value, k) => expect(value).toBeCloseTo(expected[k], 12));
  });
  it('returns the field itself on its own grid, land included', () => {
    const field = sample(fine, (lon, lat) => Math.sin(lon) * lat);
    field[85] = NaN;
    const same = apply(fine, fine, field);
    same.forEach((value, k) => expect(value).toBe(field[k]));
  });
  it('makes a point land when one of its sources is', () => {
    const field = sample(fine, () => 1);
    field[1 * 40 + 2] = NaN; // 0.625° E, 4.625° S takes part in the first coarse centre, 0.5° E, 4.5° S
    const values = apply(fine, coarse, field);
    expect(values[0]).toBeNaN();
    expect(values[1]).toBe(1);
  });
  it('has no source outside a closed basin', () => {
    const far: CellCentres = { lonDeg: [-1, 5, 11], latDeg: [0], periodDeg: null };
    const values = apply(
      fine,
      far,
      sample(fine, () => 3),
    );
    expect(values[0]).toBeNaN();
    expect(values[1]).toBeCloseTo(3, 12);
    expect(values[2]).toBeNaN();
  });
  it('joins the ends of a periodic basin', () => {
    const around = grid(36, 4, 10, 360);
    const field = sample(around, (lon) => Math.cos((lon * Math.PI) / 180));
    const to: CellCentres = { lonDeg: [0, 180, 360], latDeg: [around.latDeg[1]], periodDeg: 360 };
    const values = apply(around, to, field);
    const chord = Math.cos((5 * Math.PI) / 180); // linear between ±5° and between 175° and 185°
    expect(values[0]).toBeCloseTo(chord, 12);
    expect(values[1]).toBeCloseTo(-chord, 12);
    expect(values[2]).toBeCloseTo(chord, 12);
  });
});
