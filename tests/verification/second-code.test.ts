/**
 * A second code: the C and the NumPy reference of the bench step the same scheme, written apart from the TypeScript
 * stepper and compiled by gcc with and without the machine's own vectors. All of them must leave the same bits.
 */
import { forcingFromFunctions, planeGrid, createModel, setState, stepModel, type Model } from '@halfdeep/ocean';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { compileReference, differenceFrom, NativeStepper, numpyCommand, type NativePrograms } from '../bench/native';

const STEPS = 40;
let programs: NativePrograms | null = null;
beforeAll(async () => {
  programs = await compileReference();
}, 120_000);
afterAll(() => programs?.remove());

/** Land with narrows and islands, a layer that runs to hmin in places, wind that varies in space and time. */
function model(
  equations: 'linear' | 'nonlinear',
  periodic: boolean,
  slip: 'free' | 'none',
  detrainment: 'none' | 'uniform' | null,
): Model {
  const grid = planeGrid({
    nx: 40,
    ny: 31,
    dx: 5e4,
    dy: 4e4,
    y0: -6e5,
    periodic,
    f: (y) => 2e-5 + 2e-11 * y,
    beta: 2e-11,
    isWater: (x, y) => Math.sin(x * 1e-5) * Math.sin(y * 7e-6) < 0.6,
  });
  const made = createModel({
    grid,
    equations,
    dt: 3000,
    reducedGravity: 0.03,
    restThickness: 62,
    rayleigh: 1e-6,
    viscosity: 3000,
    damping: 1e-7,
    slip,
    forcing: forcingFromFunctions(grid, [
      { taux: (_x, y) => 0.05 + y * 1e-8, tauy: (x) => x * 1e-8, factor: (step) => 1 / (1 + (step % 5)) },
    ]),
    minimumThickness: equations === 'nonlinear' ? 20 : 0,
    entrainment: detrainment ? { onsetThickness: 60, timescale: 864_000, detrainment } : null,
    stressFloor: equations === 'nonlinear' ? 50 : 0,
  });
  setState(made, {
    eta: (i, j) => 41 * Math.sin(i * i + 3 * j),
    u: (i, j) => 0.1 * Math.cos(i * j),
    v: (i) => 0.05 * Math.sin(i),
  });
  return made;
}

const CASES = [
  ['linear, closed, free slip', 'linear', false, 'free', null],
  ['linear, periodic, no slip', 'linear', true, 'none', null],
  ['nonlinear, closed, no slip', 'nonlinear', false, 'none', null],
  ['nonlinear, periodic, free slip, entrainment', 'nonlinear', true, 'free', 'none'],
  ['nonlinear, closed, free slip, entrainment given back', 'nonlinear', false, 'free', 'uniform'],
] as const;

describe('the C and the NumPy reference', () => {
  it.each(CASES)('leave the same bits as the stepper: %s', async (_name, equations, periodic, slip, detrainment) => {
    const commands: [string, readonly string[] | null][] = [
      ['C with the machine’s vectors', programs && [programs.native]],
      ['C with SSE2', programs && [programs.sse2]],
      // NumPy sums the water that is given back in an order of its own.
      ['NumPy with out=', detrainment === 'uniform' ? null : numpyCommand('out')],
      ['NumPy', detrainment === 'uniform' ? null : numpyCommand('plain')],
    ];
    const start = model(equations, periodic, slip, detrainment);
    const children: [string, NativeStepper][] = [];
    try {
      for (const [name, command] of commands)
        if (command) children.push([name, await NativeStepper.start(command, start)]);
      let limited = 0;
      for (let n = 0; n < STEPS; n++) {
        stepModel(start, true);
        limited += start.sums.terms['limited']?.reduce((sum, cells) => sum + cells, 0) ?? 0;
      }
      if (equations === 'nonlinear') expect(limited, 'cells that the limiter touched').toBeGreaterThan(0);
      for (const [name, child] of children) {
        await child.run(STEPS);
        expect(await differenceFrom(start, child, name.startsWith('NumPy') ? 'alike' : 'exact'), name).toBeNull();
      }
    } finally {
      for (const [, child] of children) await child.close();
    }
  });
  it('are there, or there is no compiler', (context) => {
    if (!programs) context.skip('No gcc here: the C reference is left out.');
    expect(programs!.compiler).toContain('gcc');
  });
});
