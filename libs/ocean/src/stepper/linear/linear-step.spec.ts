import { describe, expect, it } from 'vitest';
import { forcingFromFunctions } from '../../forcing/forcing';
import { planeGrid, type PlaneOptions } from '../../grid/grid';
import { fieldOf, valueAt, viewOf, type StateVariable } from '../fields';
import type { Role } from '../layout';
import { createModel, setState, type Model } from '../model';
import type { SpongeRates, ViscosityMap } from '../model-options';
import { stepModel } from '../stepper';

const PLANE: PlaneOptions = { nx: 12, ny: 9, dx: 5e4, dy: 4e4, y0: -1.6e5, f: (y) => 2e-5 + 2e-11 * y, beta: 2e-11 };

/** A field that varies everywhere but on its first three rows, where it is `floor`. */
function ramp(rows: number, columns: number, size: number, floor = 0): Float64Array {
  return Float64Array.from({ length: rows * columns }, (_, k) =>
    Math.floor(k / columns) < 3 ? floor : size * (1 + Math.sin(k * k)),
  );
}

interface Varies {
  sponge: SpongeRates;
  map: ViscosityMap;
}

interface Busy extends Partial<PlaneOptions> {
  /** Rows of unequal length. */
  band?: boolean;
  /** Sponges and a viscosity that varies. */
  varies?: boolean;
}

/** Water here and there, rows without any in the middle. */
function patchy(x: number, y: number): boolean {
  return Math.abs(y - 2e4) > 5e4 && Math.sin(x * y) > -0.6;
}

function busyModel({ band = false, varies = false, ...options }: Busy = {}, slip: 'free' | 'none' = 'free'): Model {
  const grid = planeGrid({ ...PLANE, isWater: (x, y) => !(x > 2e5 && x < 3e5 && Math.abs(y) < 5e4), ...options });
  if (band) {
    // Rows that shorten towards one side, as on a latitude band: a metric factor taken from a wrong row shows.
    grid.dxC.forEach((dx, j) => (grid.dxC[j] = dx * (1 - 0.06 * (j + 0.5))));
    grid.dxV.forEach((dx, j) => (grid.dxV[j] = dx * (1 - 0.06 * j)));
  }
  const forcing = forcingFromFunctions(grid, [{ taux: (_x, y) => 0.05 + y * 1e-8, tauy: (x) => x * 1e-8 }]);
  const coefficients: Varies = {
    sponge: { u: ramp(9, 13, 1e-5), v: ramp(10, 12, 2e-5), cell: ramp(9, 12, 3e-5) },
    map: { cell: ramp(9, 12, 3000, 1), corner: ramp(10, 13, 4000, 1) },
  };
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
    sponge: varies ? coefficients.sponge : null,
    viscosityMap: varies ? coefficients.map : null,
  });
  setState(model, {
    eta: (i, j) => Math.sin(i + 2 * j),
    u: (i, j) => 0.1 * Math.cos(i * j),
    v: (i) => 0.05 * Math.sin(i),
  });
  return varies ? Object.assign(model, { varies: coefficients }) : model;
}

/**
 * One step of numerics.md §4 written out with the formulas of §3, cell by cell, on full arrays: slow and separate from
 * the stepper, to compare with.
 */
function plainStep(model: Model): { eta: number[][]; u: number[][]; v: number[][] } {
  const { grid, dt, reducedGravity: g, restThickness: H, density } = model;
  const column = (i: number) => (grid.periodic ? (i + grid.nx) % grid.nx : i);
  // The varying coefficients as `busyModel` gave them.
  const { varies } = model as Model & { varies?: Varies };
  const kappa = (i: number, j: number) => model.damping + (varies ? varies.sponge.cell[j * grid.nx + column(i)] : 0);
  const rU = (i: number, j: number) => model.rayleigh + (varies ? varies.sponge.u[j * (grid.nx + 1) + i] : 0);
  const rV = (i: number, j: number) => model.rayleigh + (varies ? varies.sponge.v[j * grid.nx + i] : 0);
  const { nx, ny, dxC, dxV, dy, f, periodic } = grid;
  const wet = (i: number, j: number) => {
    const k = periodic ? (i + nx) % nx : i;
    return j >= 0 && j < ny && k >= 0 && k < nx ? grid.mask[j * nx + k] : 0;
  };
  const read = (variable: StateVariable, role: Role) => (i: number, j: number) => {
    const k = periodic ? (i + nx) % nx : i;
    return k < 0 || k > nx || j < 0 || j > ny ? 0 : valueAt(model, variable, k, j, role);
  };
  const [E0, E1, E2] = [1.781105, -1.06221, 0.281105];
  const mix = (variable: StateVariable) => {
    const [a, b, c] = (['now', 'previous', 'before'] as const).map((role) => read(variable, role));
    return (i: number, j: number) => E0 * a(i, j) + E1 * b(i, j) + E2 * c(i, j);
  };
  const [ut, vt] = [mix('u'), mix('v')];
  const U = (i: number, j: number) => ut(i, j) * H * dy;
  const V = (i: number, j: number) => vt(i, j) * H * dxV[j];
  const D = (i: number, j: number) =>
    ((ut(i + 1, j) - ut(i, j)) * dy + vt(i, j + 1) * dxV[j + 1] - vt(i, j) * dxV[j]) / (dxC[j] * dy);
  const etaNow = read('h', 'now');
  const etaN = (i: number, j: number) =>
    wet(i, j)
      ? ((1 - (kappa(i, j) * dt) / 2) * etaNow(i, j) -
          (dt * (U(i + 1, j) - U(i, j) + V(i, j + 1) - V(i, j))) / (dxC[j] * dy)) /
        (1 + (kappa(i, j) * dt) / 2)
      : 0;
  const p = (i: number, j: number) =>
    0.614 * etaN(i, j) + 0.285 * etaNow(i, j) + 0.088 * read('h', 'previous')(i, j) + 0.013 * read('h', 'before')(i, j);
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
  const crank = (r: number, old: number, G: number) => ((1 - (r * dt) / 2) * old + dt * G) / (1 + (r * dt) / 2);
  const AD = (i: number, j: number) => (varies ? varies.map.cell[j * nx + column(i)] : model.viscosity) * D(i, j);
  const Azeta = (i: number, j: number) => (varies ? varies.map.corner[j * (nx + 1) + i] : model.viscosity) * zeta(i, j);
  const rows = <R>(count: number, at: (j: number) => R) => Array.from({ length: count }, (_, j) => at(j));
  return {
    eta: rows(ny, (j) => rows(nx, (i) => etaN(i, j))),
    u: rows(ny, (j) =>
      rows(nx, (i) => {
        if (!wet(i - 1, j) || !wet(i, j)) return 0;
        const G =
          (0.5 * (a(i, j) + a(i, j + 1))) / dxC[j] -
          (g * (p(i, j) - p(i - 1, j))) / dxC[j] +
          (AD(i, j) - AD(i - 1, j)) / dxC[j] -
          (Azeta(i, j + 1) - Azeta(i, j)) / dy +
          perMass * tau.tauxField![j * (nx + 1) + i];
        return crank(rU(i, j), read('u', 'now')(i, j), G);
      }),
    ),
    v: rows(ny + 1, (j) =>
      rows(nx, (i) => {
        if (!wet(i, j - 1) || !wet(i, j)) return 0;
        const G =
          (-0.5 * (b(i, j) + b(i + 1, j))) / dy -
          (g * (p(i, j) - p(i, j - 1))) / dy +
          (AD(i, j) - AD(i, j - 1)) / dy +
          (Azeta(i + 1, j) - Azeta(i, j)) / dxV[j] +
          perMass * tau.tauyField![j * nx + i];
        return crank(rV(i, j), read('v', 'now')(i, j), G);
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
    ['sponges and a viscosity that varies, periodic', { varies: true, periodic: true, band: true }, 'none'],
    ['sponges and a viscosity that varies, closed', { varies: true }, 'free'],
    ['many small waters', { isWater: patchy, periodic: true }, 'none'],
    ['a little water', { isWater: (x: number, y: number) => x < 1.6e5 && y < -4e4 }, 'free'],
  ] as const)('is the formulas of the specification, cell by cell: %s', (_name, options, slip) => {
    const model = busyModel(options, slip);
    for (let n = 0; n < 5; n++) stepModel(model); // so that the three levels differ
    const expected = plainStep(model);
    stepModel(model);
    for (const variable of ['eta', 'u', 'v'] as const) {
      const size = Math.max(...expected[variable].flat().map(Math.abs));
      expected[variable].forEach((row, j) =>
        row.forEach((value, i) => {
          const found = valueAt(model, variable === 'eta' ? 'h' : variable, i, j);
          expect(Math.abs(found - value), `${variable}[${j}][${i}]`).toBeLessThan(2e-14 * size);
        }),
      );
    }
  });
  it('has the same bits with and without adding up the work', () => {
    const [plain, working] = [busyModel({ periodic: true }, 'none'), busyModel({ periodic: true }, 'none')];
    for (let n = 0; n < 200; n++) {
      stepModel(plain);
      stepModel(working, true);
    }
    const { length } = plain.layout;
    expect(working.data.subarray(0, length)).toEqual(plain.data.subarray(0, length));
  });
  it('keeps land exactly 0', () => {
    const model = busyModel({}, 'none');
    for (let n = 0; n < 200; n++) stepModel(model);
    const { grid } = model;
    for (let j = 0; j < grid.ny; j++)
      for (let i = 0; i < grid.nx; i++) {
        if (grid.mask[j * grid.nx + i]) continue;
        const around = [
          valueAt(model, 'h', i, j),
          valueAt(model, 'u', i, j),
          valueAt(model, 'u', i + 1, j),
          valueAt(model, 'v', i, j),
          valueAt(model, 'v', i, j + 1),
        ];
        expect(around.every((value) => value === 0)).toBe(true);
      }
  });
  it('describes fields by views on the padded data', () => {
    const model = busyModel();
    const { data, offset, rowStride } = fieldOf(model, 'u');
    expect(viewOf(model, 'h').shape).toEqual([9, 12]);
    expect(viewOf(model, 'u').get(3, 11)).toBe(data[offset + 3 * rowStride + 11]);
    expect(viewOf(model, 'u').shape).toEqual([9, 13]);
    expect(viewOf(model, 'v').get(8, 4)).toBe(valueAt(model, 'v', 4, 8));
  });
});
