import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { forcingFromFunctions, type Forcing } from '../forcing/forcing';
import { planeGrid, type Grid } from '../grid/grid';
import { levelOffset, PITCHES, WEST } from '../stepper/layout';
import { createModel, setState, type Model } from '../stepper/model';
import type { ModelOptions } from '../stepper/model-options';
import { createStepper, steppedBy, type Kernel } from '../stepper/stepper';
import type { StepRecorder } from '../stepper/sums';
import { PRIVATE_MODULES } from './generated/private-modules';
import { SHARED_MODULES } from './generated/shared-modules';
import { bandsOf } from './simd-stepper';

/** Numbers in [0, 1) from an integer, the same everywhere. */
function noise(k: number): number {
  const x = Math.imul(k ^ (k >>> 15), 0x2c1b3c6d);
  return ((x ^ (x >>> 12)) >>> 0) / 2 ** 32;
}

interface Draw {
  nx: number;
  ny: number;
  periodic: boolean;
  slip: 'free' | 'none';
  land: 'none' | 'islands' | 'slanting coasts' | 'dry rows';
  wind: 'none' | 'rows' | 'fields' | 'both';
  damping: number;
  viscosity: number;
  rayleigh: number;
  band: boolean;
  sponge: boolean;
  viscosityMap: boolean;
  equations: 'linear' | 'nonlinear';
  minimumThickness: number;
  stressFloor: number;
  entrainment: 'none' | 'kept' | 'given back';
  seed: number;
}

const draws: fc.Arbitrary<Draw> = fc.record({
  nx: fc.integer({ min: 4, max: 41 }),
  ny: fc.integer({ min: 4, max: 23 }),
  periodic: fc.boolean(),
  slip: fc.constantFrom('free', 'none'),
  land: fc.constantFrom('none', 'islands', 'slanting coasts', 'dry rows'),
  wind: fc.constantFrom('none', 'rows', 'fields', 'both'),
  damping: fc.constantFrom(0, 2e-7),
  viscosity: fc.constantFrom(0, 4000),
  rayleigh: fc.constantFrom(0, 1e-6),
  band: fc.boolean(),
  sponge: fc.boolean(),
  viscosityMap: fc.boolean(),
  equations: fc.constantFrom('linear', 'nonlinear'),
  minimumThickness: fc.constantFrom(0, 20, 195),
  stressFloor: fc.constantFrom(0, 50),
  entrainment: fc.constantFrom('none', 'kept', 'given back'),
  seed: fc.integer({ min: 1, max: 1e6 }),
});

function gridOf({ nx, ny, periodic, land, band, seed }: Draw): Grid {
  const [dx, dy] = [5e4, 4e4];
  const isWater = (x: number, y: number) => {
    const [i, j] = [Math.floor(x / dx), Math.floor(y / dy)];
    if (land === 'islands') return noise(seed + 977 * i + 31 * j) > 0.2;
    if (land === 'slanting coasts') return i >= 0.45 * j && i <= nx - 1 - 0.3 * j;
    if (land === 'dry rows') return j % 9 < 3 && noise(seed + i + 53 * j) > 0.1;
    return true;
  };
  const grid = planeGrid({ nx, ny, dx, dy, periodic, f: (y) => 2e-11 * (y - 5e5), isWater });
  if (band) {
    grid.dxC.forEach((value, j) => (grid.dxC[j] = value * (1 - 0.02 * (j + 0.5))));
    grid.dxV.forEach((value, j) => (grid.dxV[j] = value * (1 - 0.02 * j)));
  }
  return grid;
}

function forcingOf(draw: Draw, grid: Grid): Forcing {
  const { wind, seed } = draw;
  const fields = forcingFromFunctions(grid, [
    { taux: (x, y) => 0.05 * noise(seed + Math.floor(x + 3 * y)), factor: (step) => Math.cos(0.01 * step) },
    { taux: (x) => 1e-8 * x, tauy: (x, y) => 1e-8 * (x - y), factor: (step) => 1 / (1 + step) },
  ]);
  const rows: Forcing = {
    bases: [
      {
        tauxRow: Float64Array.from({ length: grid.ny }, (_, j) => 0.1 * noise(seed + j)),
        tauyRow: Float64Array.from({ length: grid.ny + 1 }, (_, j) => 0.05 * noise(seed - j)),
        tauxField: null,
        tauyField: null,
      },
      {
        tauxRow: Float64Array.from({ length: grid.ny }, (_, j) => 0.1 * noise(seed + 7 * j)),
        tauyRow: null,
        tauxField: null,
        tauyField: null,
      },
    ],
    factors: (step, out) => {
      out[0] = Math.sin(0.02 * step);
      out[1] = 0.3;
    },
  };
  if (wind === 'none') return { bases: [], factors: () => undefined };
  if (wind === 'rows') return rows;
  if (wind === 'fields') return fields;
  const scratch = new Float64Array(2);
  return {
    bases: [...rows.bases, ...fields.bases],
    factors: (step, out) => {
      rows.factors(step, out);
      fields.factors(step, scratch);
      out.set(scratch, 2);
    },
  };
}

function modelOf(draw: Draw, kernel: Kernel, more: Partial<ModelOptions> = {}): Model {
  const grid = gridOf(draw);
  const { nx, ny } = grid;
  const { seed, slip, damping, viscosity, rayleigh } = draw;
  // Half of the rows have no sponge at all.
  const field = (rows: number, columns: number, size: number) =>
    Float64Array.from({ length: rows * columns }, (_, k) =>
      Math.floor(k / columns) < rows / 2 ? 0 : size * noise(seed + k),
    );
  const model = createModel({
    grid,
    equations: draw.equations,
    minimumThickness: draw.minimumThickness,
    stressFloor: draw.stressFloor,
    entrainment:
      draw.entrainment === 'none'
        ? null
        : {
            onsetThickness: 199,
            timescale: 3e5,
            detrainment: draw.entrainment === 'kept' ? 'none' : 'uniform',
          },
    dt: 3000,
    reducedGravity: 0.03,
    restThickness: 200,
    rayleigh,
    viscosity,
    damping,
    slip,
    forcing: forcingOf(draw, grid),
    meridians: [0, Math.floor(nx / 2)],
    sponge: draw.sponge ? { u: field(ny, nx + 1, 1e-5), v: field(ny + 1, nx, 2e-5), cell: field(ny, nx, 3e-5) } : null,
    viscosityMap: draw.viscosityMap ? { cell: field(ny, nx, 4000), corner: field(ny + 1, nx + 1, 4000) } : null,
    ...steppedBy({ kernel }, nx),
    ...more,
  });
  setState(model, {
    eta: (i, j) => 10 * (noise(seed + i + 100 * j) - 0.5),
    u: (i, j) => 0.2 * (noise(seed + 7 * i + 300 * j) - 0.5),
    v: (i, j) => 0.2 * (noise(seed + 11 * i + 500 * j) - 0.5),
  });
  return model;
}

/** Every sum of every step, in order. */
class Log implements StepRecorder {
  readonly values: number[] = [];
  limited = 0;
  clipped = 0;
  add({ terms, northward, eastward }: Parameters<StepRecorder['add']>[0]): void {
    for (const name of Object.keys(terms)) this.values.push(...terms[name]);
    for (const count of terms['limited'] ?? []) this.limited += count;
    for (const count of terms['clipped'] ?? []) this.clipped += count;
    this.values.push(...northward, ...eastward.flatMap((column) => [...column]));
  }
}

function expectSameBits(found: ArrayLike<number>, expected: ArrayLike<number>, what: string): void {
  expect(found.length).toBe(expected.length);
  for (let k = 0; k < found.length; k++)
    if (!Object.is(found[k], expected[k]))
      expect.fail(`${what}[${k}] is ${found[k]}; the reference has ${expected[k]}`);
}

/** All four levels, halos and pads included. */
function levels({ data, layout }: Model): Float64Array {
  return data.slice(0, layout.ring);
}

describe('the compiled stepper', () => {
  it('exists for every pitch', () => {
    expect(Object.keys(PRIVATE_MODULES).map(Number)).toEqual(PITCHES);
    expect(Object.keys(SHARED_MODULES).map(Number)).toEqual(PITCHES);
  });
  it.each(['linear', 'nonlinear'] as const)(
    'is the reference to the last bit on drawn grids: %s',
    (equations) => {
      let [limited, clipped] = [0, 0];
      fc.assert(
        fc.property(draws, (drawn) => {
          const draw = { ...drawn, equations };
          const [reference, simd] = [modelOf(draw, 'reference'), modelOf(draw, 'simd')];
          const [logA, logB] = [new Log(), new Log()];
          const [a, b] = [createStepper(reference, { kernel: 'reference' }), createStepper(simd, { kernel: 'simd' })];
          for (const [steps, recorded] of [
            [1, true],
            [3, false],
            [18, true],
            [7, false],
          ] as const) {
            a.advance(steps, recorded ? logA : undefined);
            b.advance(steps, recorded ? logB : undefined);
          }
          expect(b.kernel).toBe('simd');
          expect([simd.step, simd.phase]).toEqual([reference.step, reference.phase]);
          expectSameBits(levels(simd), levels(reference), 'levels');
          expectSameBits(logB.values, logA.values, 'sums');
          expect(levels(simd).every(Number.isFinite)).toBe(true);
          limited += logB.limited;
          clipped += logB.clipped;
        }),
        { numRuns: 70 },
      );
      // The draws reach what happens rarely: cells that run short, and thicknesses below the least.
      expect([limited > 0, clipped > 0]).toEqual(equations === 'linear' ? [false, false] : [true, true]);
    },
    120_000,
  );
  it('leaves land, halos beyond walls and pads exactly 0', () => {
    fc.assert(
      fc.property(draws, (draw) => {
        const model = modelOf(draw, 'simd');
        createStepper(model).advance(30);
        const { layout, data, phase, grid } = model;
        const { nx, ny, periodic, mask } = grid;
        const wet = (i: number, j: number) => {
          const k = periodic ? (i + nx) % nx : i;
          return j >= 0 && j < ny && k >= 0 && k < nx && mask[j * nx + k] === 1;
        };
        const now = levelOffset(layout, phase, 'now');
        for (let j = -1; j <= ny + 1; j++)
          for (let c = 0; c < layout.pitch; c++) {
            const i = c - WEST;
            const halo = i >= -1 && i <= nx;
            const free = [halo && wet(i, j), halo && wet(i - 1, j) && wet(i, j), halo && wet(i, j - 1) && wet(i, j)];
            for (let plane = 0; plane < 3; plane++) {
              const value = data[now + (j + 1) * layout.record + plane * layout.pitch + c];
              if (!free[plane] && value !== 0) expect.fail(`${value} in plane ${plane}, row ${j}, column ${i}`);
            }
          }
      }),
      { numRuns: 40 },
    );
  });
  it.each(['linear', 'nonlinear'] as const)('is the reference after thousands of steps: %s', (equations) => {
    const draw: Draw = {
      nx: 21,
      ny: 14,
      periodic: false,
      slip: 'none',
      land: 'islands',
      wind: 'both',
      damping: 1e-8,
      viscosity: 3000,
      rayleigh: 1e-7,
      band: true,
      sponge: false,
      viscosityMap: false,
      equations,
      minimumThickness: 20,
      stressFloor: 0,
      entrainment: 'kept',
      seed: 5,
    };
    const [reference, simd] = [modelOf(draw, 'reference'), modelOf(draw, 'simd')];
    createStepper(reference, { kernel: 'reference' }).advance(3000);
    createStepper(simd, { kernel: 'simd' }).advance(3000);
    expectSameBits(levels(simd), levels(reference), 'levels');
    expect(levels(simd).every(Number.isFinite)).toBe(true);
  });
  it('shares rows by their water, and gives every thread at least one', () => {
    expect(bandsOf([1, 1, 1, 1], 2)).toEqual([0, 2, 4]);
    expect(bandsOf([0, 0, 5, 5], 2)).toEqual([0, 3, 4]);
    expect(bandsOf([9, 0, 0], 3)).toEqual([0, 1, 2, 3]);
    expect(bandsOf([0, 0, 9], 3)).toEqual([0, 1, 2, 3]);
  });
});
