import { describe, expect, it } from 'vitest';
import { forcingFromFunctions } from '../forcing/forcing';
import { padded, planeGrid, type PlaneOptions } from '../grid/grid';
import { createModel, setState, viewOf, type Model } from './model';
import { createWork, stepModel } from './step';

const PLANE: PlaneOptions = { nx: 12, ny: 9, dx: 5e4, dy: 4e4, y0: -1.6e5, f: (y) => 2e-5 + 2e-11 * y, beta: 2e-11 };

function busyModel(
  { band = false, ...options }: Partial<PlaneOptions> & { band?: boolean } = {},
  slip: 'free' | 'none' = 'free',
): Model {
  const grid = planeGrid({ ...PLANE, isWater: (x, y) => !(x > 2e5 && x < 3e5 && Math.abs(y) < 5e4), ...options });
  if (band) {
    // Rows that shorten towards one side, as on a latitude band: a metric factor taken from a wrong row shows.
    grid.dxC.forEach((dx, j) => (grid.dxC[j] = dx * (1 - 0.06 * (j + 0.5))));
    grid.dxV.forEach((dx, j) => (grid.dxV[j] = dx * (1 - 0.06 * j)));
  }
  const forcing = forcingFromFunctions(grid, [{ taux: (_x, y) => 0.05 + y * 1e-8, tauy: (x) => x * 1e-8 }]);
  const model = createModel({
    grid,
    dt: 4000,
    reducedGravity: 0.03,
    restThickness: 200,
    rayleigh: 1e-6,
    viscosity: 3000,
    damping: 1e-7,
    slip,
    forcing,
  });
  setState(model, {
    eta: (i, j) => Math.sin(i + 2 * j),
    u: (i, j) => 0.1 * Math.cos(i * j),
    v: (i) => 0.05 * Math.sin(i),
  });
  return model;
}

/**
 * One step of numerics.md §4 written out with the formulas of §3, cell by cell, on full arrays: slow and separate from
 * the stepper, to compare with.
 */
function plainStep(model: Model): { eta: number[][]; u: number[][]; v: number[][] } {
  const { grid, dt, reducedGravity: g, restThickness: H, viscosity: A, rayleigh: r, damping: kappa, density } = model;
  const { nx, ny, dxC, dxV, dy, f, periodic } = grid;
  const wet = (i: number, j: number) => {
    const k = periodic ? (i + nx) % nx : i;
    return j >= 0 && j < ny && k >= 0 && k < nx ? grid.mask[j * nx + k] : 0;
  };
  const read = (data: Float64Array) => (i: number, j: number) => {
    const k = periodic ? (i + nx) % nx : i;
    return k < 0 || k > nx || j < 0 || j > ny ? 0 : data[padded(grid, k, j)];
  };
  const [E0, E1, E2] = [1.781105, -1.06221, 0.281105];
  const mix = ({ now, previous, before }: Model['u']) => {
    const [a, b, c] = [now, previous, before].map(read);
    return (i: number, j: number) => E0 * a(i, j) + E1 * b(i, j) + E2 * c(i, j);
  };
  const [ut, vt] = [mix(model.u), mix(model.v)];
  const U = (i: number, j: number) => ut(i, j) * H * dy;
  const V = (i: number, j: number) => vt(i, j) * H * dxV[j];
  const D = (i: number, j: number) =>
    ((ut(i + 1, j) - ut(i, j)) * dy + vt(i, j + 1) * dxV[j + 1] - vt(i, j) * dxV[j]) / (dxC[j] * dy);
  const etaNow = read(model.eta.now);
  const etaN = (i: number, j: number) =>
    wet(i, j)
      ? ((1 - (kappa * dt) / 2) * etaNow(i, j) -
          (dt * (U(i + 1, j) - U(i, j) + V(i, j + 1) - V(i, j))) / (dxC[j] * dy)) /
        (1 + (kappa * dt) / 2)
      : 0;
  const p = (i: number, j: number) =>
    0.614 * etaN(i, j) +
    0.285 * etaNow(i, j) +
    0.088 * read(model.eta.previous)(i, j) +
    0.013 * read(model.eta.before)(i, j);
  const zeta = (i: number, j: number) => {
    const water = wet(i - 1, j - 1) + wet(i, j - 1) + wet(i - 1, j) + wet(i, j);
    const s = water === 4 ? 1 : model.slip === 'free' ? 0 : 2;
    const row = (k: number) => dxC[Math.min(Math.max(k, 0), ny - 1)];
    return (s * ((vt(i, j) - vt(i - 1, j)) * dy - ut(i, j) * row(j) + ut(i, j - 1) * row(j - 1))) / (dxV[j] * dy);
  };
  const a = (i: number, j: number) => (f[j] / H) * 0.5 * (V(i - 1, j) + V(i, j));
  const b = (i: number, j: number) => (f[j] / H) * 0.5 * (U(i, j - 1) + U(i, j));
  const perMass = 1 / (density * H);
  const tau = model.forcing.bases[0];
  const crank = (old: number, G: number) => ((1 - (r * dt) / 2) * old + dt * G) / (1 + (r * dt) / 2);
  const rows = <R>(count: number, at: (j: number) => R) => Array.from({ length: count }, (_, j) => at(j));
  return {
    eta: rows(ny, (j) => rows(nx, (i) => etaN(i, j))),
    u: rows(ny, (j) =>
      rows(nx, (i) => {
        if (!wet(i - 1, j) || !wet(i, j)) return 0;
        const G =
          (0.5 * (a(i, j) + a(i, j + 1))) / dxC[j] -
          (g * (p(i, j) - p(i - 1, j))) / dxC[j] +
          A * ((D(i, j) - D(i - 1, j)) / dxC[j] - (zeta(i, j + 1) - zeta(i, j)) / dy) +
          perMass * tau.tauxField![padded(grid, i, j)];
        return crank(read(model.u.now)(i, j), G);
      }),
    ),
    v: rows(ny + 1, (j) =>
      rows(nx, (i) => {
        if (!wet(i, j - 1) || !wet(i, j)) return 0;
        const G =
          (-0.5 * (b(i, j) + b(i + 1, j))) / dy -
          (g * (p(i, j) - p(i, j - 1))) / dy +
          A * ((D(i, j) - D(i, j - 1)) / dy + (zeta(i + 1, j) - zeta(i, j)) / dxV[j]) +
          perMass * tau.tauyField![padded(grid, i, j)];
        return crank(read(model.v.now)(i, j), G);
      }),
    ),
  };
}

describe('the step', () => {
  it.each([
    ['closed, free slip', {}, 'free'],
    ['closed, no slip', {}, 'none'],
    ['periodic, free slip', { periodic: true }, 'free'],
    ['periodic, no slip', { periodic: true }, 'none'],
    ['rows of unequal length, free slip', { band: true, periodic: true }, 'free'],
    ['rows of unequal length, no slip', { band: true }, 'none'],
  ] as const)('is the formulas of the specification, cell by cell: %s', (_name, options, slip) => {
    const model = busyModel(options, slip);
    for (let n = 0; n < 5; n++) stepModel(model); // so that the three levels differ
    const expected = plainStep(model);
    stepModel(model);
    for (const variable of ['eta', 'u', 'v'] as const) {
      const size = Math.max(...expected[variable].flat().map(Math.abs));
      expected[variable].forEach((row, j) =>
        row.forEach((value, i) => {
          const found = model[variable].now[padded(model.grid, i, j)];
          expect(Math.abs(found - value), `${variable}[${j}][${i}]`).toBeLessThan(2e-14 * size);
        }),
      );
    }
  });
  it('has the same bits with and without adding up the work', () => {
    const [plain, working] = [busyModel({ periodic: true }, 'none'), busyModel({ periodic: true }, 'none')];
    const work = createWork(working.grid.ny);
    for (let n = 0; n < 200; n++) {
      stepModel(plain);
      stepModel(working, work);
    }
    for (const variable of ['eta', 'u', 'v'] as const) expect(working[variable].now).toEqual(plain[variable].now);
  });
  it('keeps land exactly 0', () => {
    const model = busyModel({}, 'none');
    for (let n = 0; n < 200; n++) stepModel(model);
    const { grid } = model;
    for (let j = 0; j < grid.ny; j++)
      for (let i = 0; i < grid.nx; i++) {
        if (grid.mask[j * grid.nx + i]) continue;
        const k = padded(grid, i, j);
        const around = [
          model.eta.now[k],
          model.u.now[k],
          model.u.now[k + 1],
          model.v.now[k],
          model.v.now[k + grid.stride],
        ];
        expect(around.every((value) => value === 0)).toBe(true);
      }
  });
  it('describes fields by views on the padded data', () => {
    const { grid, eta, u, v } = busyModel();
    expect(viewOf(grid, 'eta', eta.now).shape).toEqual([9, 12]);
    expect(viewOf(grid, 'u', u.now).get(3, 12)).toBe(u.now[padded(grid, 12, 3)]);
    expect(viewOf(grid, 'v', v.now).get(9, 4)).toBe(v.now[padded(grid, 4, 9)]);
  });
});
