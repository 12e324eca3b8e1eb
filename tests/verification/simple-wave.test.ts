import { describe, expect, it } from 'vitest';
import { etaAt, planeGrid, setState } from '@halfdeep/ocean';
import { advance, c, DAY, g, H, nonlinearModel, order, relativeL2, stepsFor } from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';

// Case r1. Simple wave without rotation by the method of characteristics (Riemann 1860): with u = 2(√(g′h) − c) every
// value of h travels at u + √(g′h) = 3√(g′h) − 2c. Followed to half the time at which it would break.
const LX = 2e6;
const start = (x: number) => H + 15 * Math.sin((2 * Math.PI * x) / LX);
const speed = (h: number) => 3 * Math.sqrt(g * h) - 2 * c;

/** −1/min d(speed)/dx over the start, s. */
function breakingTime(): number {
  let steepest = 0;
  const n = 20_000;
  for (let k = 0; k < n; k++) {
    const x = (k / n) * LX;
    const slope = ((15 * 2 * Math.PI) / LX) * Math.cos((2 * Math.PI * x) / LX);
    steepest = Math.min(steepest, (1.5 * Math.sqrt(g) * slope) / Math.sqrt(start(x)));
  }
  return -1 / steepest;
}

/** h at (x, t): the start of the characteristic through it by bisection of ξ + speed t − x, which grows with ξ. */
function exactThickness(x: number, t: number): number {
  let [low, high] = [x - speed(H + 15) * t, x - speed(H - 15) * t];
  for (let round = 0; round < 70; round++) {
    const middle = (low + high) / 2;
    if (middle + speed(start(middle)) * t > x) high = middle;
    else low = middle;
  }
  return start((low + high) / 2);
}

const TIME = breakingTime() / 2;

function run(n: number): { l2: number; x: number[]; found: number[]; exact: number[] } {
  const dx = LX / n;
  const grid = planeGrid({ nx: n, ny: 4, dx, dy: dx, periodic: true, f: () => 0 });
  // S = 0.5 with the greatest speed of the wave, where u is a tenth of c.
  const { steps, dt } = stepsFor(TIME, (0.5 * dx) / (Math.SQRT2 * speed(H + 15)));
  const model = nonlinearModel({ grid, dt });
  setState(model, {
    eta: (i) => start(grid.xCentre[i]) - H,
    u: (i) => 2 * (Math.sqrt(g * start(grid.xFace[i])) - c),
  });
  advance(model, steps);
  const found = Array.from({ length: n }, (_, i) => etaAt(model, i, 1));
  const exact = Array.from(grid.xCentre, (x) => exactThickness(x, TIME) - H);
  return { l2: relativeL2(found, exact), x: Array.from(grid.xCentre, (x) => x / 1e3), found, exact };
}

describe('nonlinear simple wave (characteristics)', () => {
  const counts = [50, 100, 200, 400];
  const runs = counts.map(run);

  it('would break after twice 5.111 days', () => {
    expect(Math.abs(TIME / DAY - 5.111)).toBeLessThan(1e-3);
  });
  it('steepens as characteristics say: L2 error below 3e-3 at 100 cells, second order', (context) => {
    proveCase(context, 'r1', {
      id: 'profile',
      quantity: 'h − H at half the breaking time, L2 error',
      expected: 0,
      obtained: runs[1].l2,
      kind: 'L2',
      tolerance: 3e-3,
      order: order(runs[2].l2, runs[3].l2),
      orderRange: [1.9, 2.1],
      resolution: '100 cells; order from 200 and 400',
      plate: convergencePlate(
        'L2 error of the simple wave at half its breaking time against the spacing.',
        'spacing, km',
        counts.map((n) => LX / n / 1e3),
        [{ name: 'h, L2', values: runs.map(({ l2 }) => l2) }],
      ),
    });
    proveCase(context, 'r1', {
      id: 'finest',
      quantity: 'h − H at half the breaking time, L2 error on the finest grid',
      expected: 0,
      obtained: runs[3].l2,
      kind: 'L2',
      tolerance: 2e-4,
      resolution: '400 cells',
      plate: profilePlate(
        'The simple wave at half its breaking time, found with 100 cells and by characteristics.',
        ['eastward, km', 'h − H, m'],
        [
          { name: 'exact', role: 'expected', x: runs[3].x, y: runs[3].exact },
          { name: 'found', role: 'found', x: runs[1].x, y: runs[1].found },
        ],
      ),
    });
  });
});
