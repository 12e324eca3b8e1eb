import { describe, expect, it } from 'vitest';
import { padded, planeGrid, setState, stepModel } from '@halfdeep/ocean';
import { c, commonModel, commonStep, g, H, order, relativeL2, stepsFor } from './common';

// Case d. Geostrophic adjustment of a step: Rossby (1938), J. Mar. Res. 1, 239–263; Gill (1982), § 7.2. From
// η = −sgn(y) to η = −sgn(y)(1 − e^{−|y|/λ}); one third of the potential energy lost is kept as kinetic energy.
const F = 1e-4;
const LAMBDA = c / F;

function run(perLambda: number): { ratio: number; l2: number; jet: number } {
  const dy = LAMBDA / perLambda;
  const ny = 140 * perLambda;
  const grid = planeGrid({ nx: 4, ny, dx: dy, dy, y0: -70 * LAMBDA, periodic: true, f: () => F });
  const { steps, dt } = stepsFor(100 / F, commonStep(grid));
  const model = commonModel({ grid, dt });
  const initial = Array.from(grid.yCentre, (y) => -Math.sign(y));
  setState(model, { eta: (_i, j) => initial[j] });
  // Mean over ft = 30 … 100 with weight sin⁴, which leaves the waves out.
  const eta = new Float64Array(ny);
  const u = new Float64Array(ny);
  let total = 0;
  for (let n = 1; n <= steps; n++) {
    stepModel(model);
    const ft = F * n * dt;
    if (ft < 30) continue;
    const weight = Math.sin((Math.PI * (ft - 30)) / 70) ** 4;
    total += weight;
    for (let j = 0; j < ny; j++) {
      eta[j] += weight * model.eta.now[padded(grid, 1, j)];
      u[j] += weight * model.u.now[padded(grid, 1, j)];
    }
  }
  let kinetic = 0;
  let lost = 0;
  for (let j = 0; j < ny; j++) {
    eta[j] /= total;
    u[j] /= total;
    kinetic += 0.5 * H * u[j] ** 2;
    lost += 0.5 * g * (initial[j] ** 2 - eta[j] ** 2);
  }
  const exact = Array.from(grid.yCentre, (y) => -Math.sign(y) * (1 - Math.exp(-Math.abs(y) / LAMBDA)));
  return { ratio: kinetic / lost, l2: relativeL2(eta, exact), jet: Math.max(...u) };
}

describe('geostrophic adjustment of a step (Rossby 1938)', () => {
  const [two, four, eight] = [2, 4, 8].map(run);

  it('turns one third of the potential energy that is lost into kinetic energy, at every resolution', () => {
    for (const { ratio } of [two, four, eight]) expect(Math.abs(ratio - 1 / 3)).toBeLessThan(1e-4);
  });
  it('ends at 1 − e^{−|y|/λ}: L2 error below 2e-3 at λ/4, second order', () => {
    expect(four.l2).toBeLessThan(2e-3);
    expect(order(two.l2, four.l2)).toBeGreaterThan(1.85);
    expect(order(four.l2, eight.l2)).toBeGreaterThan(1.85);
  });
  it('leaves a jet of g′/(fλ) = 0.016 m/s along the step', () => {
    const nearest = 0.016 * Math.exp(-1 / 16); // the u rows lie λ/16 from the step
    expect(Math.abs(eight.jet / nearest - 1)).toBeLessThan(5e-3);
  });
});
