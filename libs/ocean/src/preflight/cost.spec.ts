import { expect, it } from 'vitest';
import { gridLayout } from '../grid/build-grid';
import { Integration } from '../integration/integration';
import { PRESETS } from '../presets/presets';
import { costOf } from './cost';
import { changed, preset } from './testing';

const cost = (setup: (typeof PRESETS)[number]['setup']) => {
  const layout = gridLayout(setup);
  return costOf(setup, layout, {});
};

it.each([0, 1e-7])('counts the very bytes that a run hands over, with interface damping %f', (dampingPerS) => {
  const setup = changed((one) => {
    one.layer.dampingPerS = dampingPerS;
    one.length.days = 5;
    one.output.sections.push({ name: 'Along', along: 'longitude', atDeg: 20 });
  }, preset('first-look'));
  const run = Integration.start(setup);
  let bytes = 0;
  const frame = () => {
    const { eta, u, v } = run.frame();
    bytes += eta.byteLength + u.byteLength + v.byteLength;
  };
  frame();
  const n = setup.numerics.stepsPerDay;
  for (let step = n / 2; step <= 5 * n; step += n / 2) {
    run.advance(n / 2);
    bytes += run.takeMoorings().byteLength; // every half day
    if (step % n === 0) bytes += run.takeSections().byteLength + run.takeBudget().byteLength; // every day
    if (step % (5 * n) === 0) frame();
  }
  const { steps, frames, diskBytes } = cost(setup);
  expect(steps).toBe(run.totalSteps);
  expect(frames).toBe(2);
  // Two checkpoints, each with a head and sums beside its nine arrays; the run file with its overhead of 5 %.
  const checkpoints = 2 * run.checkpoint().byteLength;
  expect(Math.abs(diskBytes / (1.05 * bytes + checkpoints) - 1)).toBeLessThan(0.02);
});

it('counts the columns of sponges, entrainment and of the nonlinear equations', () => {
  const setup = changed((one) => {
    one.numerics.equations = 'nonlinear';
    one.numerics.stepsPerDay = 20;
    one.layer.entrainment = { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'uniform' };
    one.basin.sponges = [{ edge: 'north', widthDeg: 3, peakRatePerS: null, tapersWind: true }];
    one.length.days = 5;
  }, preset('first-look'));
  const run = Integration.start(setup);
  const points = run.grid.nx * run.grid.ny + (run.grid.nx + 1) * run.grid.ny + run.grid.nx * (run.grid.ny + 1);
  const { length, output } = setup;
  const series =
    (length.days / output.sectionIntervalDays) * (run.sectionColumns().length + run.budgetColumns().length) +
    (length.days / output.mooringIntervalDays) * run.mooringColumns().length;
  const { diskBytes } = cost(setup);
  expect(diskBytes).toBe(Math.ceil(1.05 * (2 * points * 4 + series * 8) + 2 * 3 * points * 8));
});

it('counts one frame more than intervals, for the initial state', () => {
  for (const { setup } of PRESETS)
    expect(cost(setup).frames).toBe(setup.length.days / setup.output.frameIntervalDays + 1);
});
