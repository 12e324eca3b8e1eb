import { describe, expect, it } from 'vitest';
import { planeGrid, setState, valueAt } from '@halfdeep/ocean';
import { advance, c, commonModel, commonStep, g, H, order, relativeL2, stepsFor } from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';

// Case d. Geostrophic adjustment of a step: Rossby (1938), J. Mar. Res. 1, 239–263; Gill (1982), § 7.2. From
// η = −sgn(y) to η = −sgn(y)(1 − e^{−|y|/λ}); one third of the potential energy lost is kept as kinetic energy.
const F = 1e-4;
const LAMBDA = c / F;

interface Adjusted {
  ratio: number;
  l2: number;
  jet: number;
  /** Mean η over ±8 λ. */
  profile: { y: number[]; found: number[]; exact: number[] };
}

function run(perLambda: number): Adjusted {
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
    advance(model);
    const ft = F * n * dt;
    if (ft < 30) continue;
    const weight = Math.sin((Math.PI * (ft - 30)) / 70) ** 4;
    total += weight;
    for (let j = 0; j < ny; j++) {
      eta[j] += weight * valueAt(model, 'h', 1, j);
      u[j] += weight * valueAt(model, 'u', 1, j);
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
  const [from, to] = [62 * perLambda, 78 * perLambda];
  return {
    ratio: kinetic / lost,
    l2: relativeL2(eta, exact),
    jet: Math.max(...u),
    profile: {
      y: Array.from(grid.yCentre.subarray(from, to), (y) => y / LAMBDA),
      found: Array.from(eta.subarray(from, to)),
      exact: exact.slice(from, to),
    },
  };
}

describe('geostrophic adjustment of a step (Rossby 1938)', () => {
  const [two, four, eight] = [2, 4, 8].map(run);

  it('turns one third of the potential energy that is lost into kinetic energy, at every resolution', (context) => {
    [two, four, eight].forEach(({ ratio }, k) =>
      proveCase(context, 'd', {
        id: `energy-${2 << k}`,
        quantity: 'ΔKE/ΔPE',
        expected: 1 / 3,
        obtained: ratio,
        kind: 'absolute',
        tolerance: 1e-4,
        resolution: `dy = λ/${2 << k}`,
      }),
    );
  });
  it('ends at 1 − e^{−|y|/λ}: L2 error below 2e-3 at λ/4, second order', (context) => {
    proveCase(context, 'd', {
      id: 'profile',
      quantity: 'adjusted η, L2 error',
      expected: 0,
      obtained: four.l2,
      kind: 'L2',
      tolerance: 2e-3,
      order: order(four.l2, eight.l2),
      orderRange: [1.9, 2.1],
      resolution: 'dy = λ/4; order from λ/4 and λ/8',
      plate: convergencePlate(
        'L2 error of the adjusted interface against the spacing.',
        'spacing, λ',
        [1 / 2, 1 / 4, 1 / 8],
        [{ name: 'η, L2', values: [two.l2, four.l2, eight.l2] }],
      ),
    });
    expect(order(two.l2, four.l2)).toBeGreaterThan(1.85);
  });
  it('leaves a jet of g′/(fλ) = 0.016 m/s along the step', (context) => {
    proveCase(context, 'd', {
      id: 'jet',
      quantity: 'u on the row nearest the step, m/s',
      expected: (g / (F * LAMBDA)) * Math.exp(-1 / 16), // the u rows lie λ/16 from the step
      obtained: eight.jet,
      tolerance: 5e-3,
      resolution: 'dy = λ/8',
      plate: profilePlate(
        'The adjusted interface within 8 λ of the step, found at λ/4 and exact.',
        ['northward, λ', 'η, m'],
        [
          { name: 'exact', role: 'expected', x: four.profile.y, y: four.profile.exact },
          { name: 'found', role: 'found', x: four.profile.y, y: four.profile.found },
        ],
      ),
    });
  });
});
