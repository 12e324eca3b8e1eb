import { describe, expect, it } from 'vitest';
import { valueAt, type StateVariable } from '../fields';
import type { Role } from '../layout';
import type { Model } from '../model';
import { stepModel } from '../stepper';
import { randomModel, type RandomOptions } from './testing';

/**
 * One step of numerics.md §4 written out with the formulas of §3 and §6, cell by cell: slow and separate from the
 * stepper, to compare with.
 */
function plainStep(model: Model): Record<StateVariable, number[][]> {
  const { grid, dt, reducedGravity: g, restThickness: H, density, entrainment, minimumThickness: hmin } = model;
  const { nx, ny, dxC, dxV, dy, f, periodic } = grid;
  const wrap = (i: number) => (periodic ? (i + nx) % nx : i);
  const wet = (i: number, j: number) => {
    const k = wrap(i);
    return j >= 0 && j < ny && k >= 0 && k < nx ? grid.mask[j * nx + k] : 0;
  };
  const read = (variable: StateVariable, role: Role) => (i: number, j: number) => {
    const k = wrap(i);
    return k < 0 || k > nx || j < 0 || j > ny ? 0 : valueAt(model, variable, k, j, role);
  };
  const mix = (variable: StateVariable) => {
    const [a, b, c] = (['now', 'previous', 'before'] as const).map((role) => read(variable, role));
    return (i: number, j: number) => 1.781105 * a(i, j) - 1.06221 * b(i, j) + 0.281105 * c(i, j);
  };
  const fixed = (plane: number, i: number, j: number) =>
    plane < 0 ? 0 : model.data[plane + j * model.layout.pitch + 2 + wrap(i)];
  const { statics } = model;
  const [ut, vt, raw] = [mix('u'), mix('v'), mix('h')];
  const ht = (i: number, j: number) => (wet(i, j) ? Math.max(raw(i, j), hmin || -Infinity) : 0);
  const Ac = (j: number) => dxC[Math.min(Math.max(j, 0), ny - 1)] * dy;
  const Av = (j: number) => dxV[j] * dy;
  const hu = (i: number, j: number) => (ht(i - 1, j) + ht(i, j)) / 2;
  const hv = (i: number, j: number) => (Ac(j - 1) * ht(i, j - 1) + Ac(j) * ht(i, j)) / (2 * Av(j));
  // Volume fluxes, m³/s.
  const Uraw = (i: number, j: number) => ut(i, j) * hu(i, j) * dy;
  const Vraw = (i: number, j: number) => vt(i, j) * hv(i, j) * dxV[j];
  const R = (i: number, j: number) => {
    if (!wet(i, j) || hmin === 0) return 1;
    const out =
      Math.max(Uraw(i + 1, j), 0) + Math.max(-Uraw(i, j), 0) + Math.max(Vraw(i, j + 1), 0) + Math.max(-Vraw(i, j), 0);
    return out === 0 ? 1 : Math.min(1, (Ac(j) * Math.max(read('h', 'now')(i, j) - hmin, 0)) / dt / out);
  };
  const U = (i: number, j: number) => (j < 0 || j >= ny ? 0 : Uraw(i, j) * (Uraw(i, j) > 0 ? R(i - 1, j) : R(i, j)));
  const V = (i: number, j: number) => (j <= 0 || j >= ny ? 0 : Vraw(i, j) * (Vraw(i, j) > 0 ? R(i, j - 1) : R(i, j)));
  const we = (i: number, j: number) =>
    wet(i, j) && entrainment && ht(i, j) < entrainment.onsetThickness
      ? (entrainment.onsetThickness - ht(i, j)) ** 2 / (entrainment.timescale * entrainment.onsetThickness)
      : 0;
  let [taken, area] = [0, 0];
  for (let j = 0; j < ny; j++)
    for (let i = 0; i < nx; i++)
      if (wet(i, j)) {
        taken += Ac(j) * we(i, j);
        area += Ac(j);
      }
  const wd = entrainment?.detrainment === 'uniform' ? taken / area : 0;
  const hNow = read('h', 'now');
  const hN = (i: number, j: number) => {
    if (!wet(i, j)) return 0;
    const k = model.damping + fixed(statics.spongeCell, i, j);
    const div = (U(i + 1, j) - U(i, j) + V(i, j + 1) - V(i, j)) / Ac(j);
    return ((1 - (k * dt) / 2) * hNow(i, j) + dt * (k * H + we(i, j) - wd - div)) / (1 + (k * dt) / 2);
  };
  const p = (i: number, j: number) =>
    0.614 * hN(i, j) + 0.285 * hNow(i, j) + 0.088 * read('h', 'previous')(i, j) + 0.013 * read('h', 'before')(i, j);
  const K = (i: number, j: number) => (ut(i, j) ** 2 + ut(i + 1, j) ** 2 + vt(i, j) ** 2 + vt(i, j + 1) ** 2) / 4;
  const D = (i: number, j: number) =>
    ((ut(i + 1, j) - ut(i, j)) * dy + vt(i, j + 1) * dxV[j + 1] - vt(i, j) * dxV[j]) / Ac(j);
  const count = (i: number, j: number) => wet(i - 1, j - 1) + wet(i, j - 1) + wet(i - 1, j) + wet(i, j);
  const zeta = (i: number, j: number) => {
    const s = count(i, j) === 4 ? 1 : model.slip === 'free' ? 0 : 2;
    const north = j < ny ? (ut(i, j) * Ac(j)) / dy : 0;
    const south = j > 0 ? (ut(i, j - 1) * Ac(j - 1)) / dy : 0;
    return (s * ((vt(i, j) - vt(i - 1, j)) * dy - north + south)) / Av(j);
  };
  const hq = (i: number, j: number) =>
    (Ac(j - 1) * (ht(i - 1, j - 1) + ht(i, j - 1)) + Ac(j) * (ht(i - 1, j) + ht(i, j))) / (count(i, j) * Av(j));
  const q = (i: number, j: number) => (f[j] + zeta(i, j)) / hq(i, j);
  // Turning takes the fluxes before they are limited.
  const a = (i: number, j: number) => q(i, j) * 0.5 * (Vraw(i - 1, j) + Vraw(i, j));
  const b = (i: number, j: number) => q(i, j) * 0.5 * (Uraw(i, j - 1) + Uraw(i, j));
  const AD = (i: number, j: number) =>
    (statics.viscosityCell < 0 ? model.viscosity : fixed(statics.viscosityCell, i, j)) * D(i, j);
  const Azeta = (i: number, j: number) => {
    // A corner on the seam of a periodic grid has a value of its own at column nx.
    const at = statics.viscosityCorner + j * model.layout.pitch + 2 + i;
    return (statics.viscosityCorner < 0 ? model.viscosity : model.data[at]) * zeta(i, j);
  };
  const tau = model.forcing.bases[0];
  const factor = 1 + 0.1 * (model.step % 3);
  const crank = (r: number, old: number, G: number) => ((1 - (r * dt) / 2) * old + dt * G) / (1 + (r * dt) / 2);
  const rows = (n: number, at: (i: number, j: number) => number) =>
    Array.from({ length: n }, (_, j) => Array.from({ length: nx }, (__, i) => at(i, j)));
  return {
    h: rows(ny, hN),
    u: rows(ny, (i, j) => {
      if (!wet(i - 1, j) || !wet(i, j)) return 0;
      const S = (factor * tau.tauxField![j * (nx + 1) + i]) / (density * Math.max(hu(i, j), model.stressFloor));
      const G =
        (0.5 * (a(i, j) + a(i, j + 1))) / dxC[j] -
        (g * (p(i, j) - p(i - 1, j)) + K(i, j) - K(i - 1, j)) / dxC[j] +
        (AD(i, j) - AD(i - 1, j)) / dxC[j] -
        (Azeta(i, j + 1) - Azeta(i, j)) / dy;
      const r = model.rayleigh + fixed(statics.spongeU, i, j) + (we(i - 1, j) + we(i, j)) / 2 / hu(i, j);
      return crank(r, read('u', 'now')(i, j), G + S);
    }),
    v: rows(ny + 1, (i, j) => {
      if (!wet(i, j - 1) || !wet(i, j)) return 0;
      const S = (factor * tau.tauyField![j * nx + i]) / (density * Math.max(hv(i, j), model.stressFloor));
      const G =
        (-0.5 * (b(i, j) + b(i + 1, j))) / dy -
        (g * (p(i, j) - p(i, j - 1)) + K(i, j) - K(i, j - 1)) / dy +
        (AD(i, j) - AD(i, j - 1)) / dy +
        (Azeta(i + 1, j) - Azeta(i, j)) / dxV[j];
      const mean = (Ac(j - 1) * we(i, j - 1) + Ac(j) * we(i, j)) / (2 * Av(j));
      const r = model.rayleigh + fixed(statics.spongeV, i, j) + mean / hv(i, j);
      return crank(r, read('v', 'now')(i, j), G + S);
    }),
  };
}

const thin: RandomOptions = { thickness: 30, departure: 29, minimumThickness: 12, speed: 1.5 };
const entrainment = { onsetThickness: 60, timescale: 2e5, detrainment: 'none' } as const;
const CASES: [string, RandomOptions][] = [
  ['plain', {}],
  ['periodic, no slip', { periodic: true, slip: 'none', viscosity: 2000 }],
  ['a latitude band', { band: true, periodic: true, viscosity: 2000, rayleigh: 1e-6, damping: 1e-6 }],
  ['limited and clipped', { ...thin, periodic: true }],
  ['with entrainment', { ...thin, entrainment, stressFloor: 40, rayleigh: 1e-6, band: true }],
  ['with detrainment', { ...thin, entrainment: { ...entrainment, detrainment: 'uniform' }, damping: 1e-7 }],
  ['everything', { ...thin, entrainment, varies: true, periodic: true, band: true, slip: 'none', damping: 1e-6 }],
];

describe('the nonlinear step', () => {
  it.each(CASES)('is the formulas of the specification, cell by cell: %s', (_name, options) => {
    for (const seed of [1, 2, 3]) {
      const model = randomModel(seed, options);
      const expected = plainStep(model);
      stepModel(model);
      for (const variable of ['h', 'u', 'v'] as const) {
        const size = Math.max(...expected[variable].flat().map(Math.abs));
        expect(size).toBeGreaterThan(0);
        expected[variable].forEach((row, j) =>
          row.forEach((value, i) =>
            expect(
              Math.abs(valueAt(model, variable, i, j) - value),
              `${variable}[${j}][${i}], seed ${seed}`,
            ).toBeLessThan(3e-14 * size),
          ),
        );
      }
    }
  });

  it('keeps the layer at hmin or above, and says how many cells it limited and clipped', () => {
    const model = randomModel(4, { ...thin, periodic: true });
    const { terms } = model.sums;
    let [limited, clipped] = [0, 0];
    for (let n = 0; n < 5; n++) {
      stepModel(model, true);
      limited += terms['limited'].reduce((sum, cells) => sum + cells, 0);
      clipped += terms['clipped'].reduce((sum, cells) => sum + cells, 0);
      if (n === 0) continue; // the start itself lies below
      const { grid } = model;
      for (let j = 0; j < grid.ny; j++)
        for (let i = 0; i < grid.nx; i++)
          if (grid.mask[j * grid.nx + i] && valueAt(model, 'h', i, j, 'previous') >= 12)
            expect(valueAt(model, 'h', i, j)).toBeGreaterThanOrEqual(12 * (1 - 1e-14));
    }
    expect(limited).toBeGreaterThan(0);
    expect(clipped).toBeGreaterThan(0);
  });

  it('has the same bits with and without row sums, and keeps land exactly 0', () => {
    const [, , , , , , [, options]] = CASES;
    const calm = { ...options, dt: 500, speed: 0.3, thickness: 80 };
    const [plain, summed] = [randomModel(5, calm), randomModel(5, calm)];
    for (let n = 0; n < 100; n++) {
      stepModel(plain);
      stepModel(summed, true);
    }
    const { length } = plain.layout;
    expect(plain.data.subarray(0, length).every((value) => Number.isFinite(value))).toBe(true);
    expect(summed.data.subarray(0, length)).toEqual(plain.data.subarray(0, length));
    const { grid } = plain;
    for (let j = 0; j < grid.ny; j++)
      for (let i = 0; i < grid.nx; i++) {
        if (grid.mask[j * grid.nx + i]) continue;
        const around = [
          valueAt(plain, 'h', i, j),
          valueAt(plain, 'u', i, j),
          valueAt(plain, 'u', i + 1, j),
          valueAt(plain, 'v', i, j),
          valueAt(plain, 'v', i, j + 1),
        ];
        expect(around.every((value) => value === 0)).toBe(true);
      }
  });
});
