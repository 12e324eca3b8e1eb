import { describe, expect, it } from 'vitest';
import { valueAt } from '@halfdeep/ocean';
import { H } from './common';
import { proveCase } from './record';
import { runGyre, SIDE, stommel } from './gyre';

// Case g. Sverdrup (1947), Proc. Natl. Acad. Sci. 33, 318–326: V = curl τ/(ρ0 β) in the interior, −3.831211 m²/s in the
// middle of the basin of case e; with r = 2e-7 1/s friction takes 2.4 % of it. The closed form's −3.737513 m²/s was
// evaluated at the v point 6.25 km east of the middle, of a 12.5 km grid; in the very middle it is −3.736937.
const SVERDRUP = -3.831211;
const WITH_FRICTION = -3.737513;

describe('Sverdrup interior (Sverdrup 1947)', () => {
  const dx = 50e3;
  let sum = 0;
  let count = 0;
  runGyre(dx, 2e-7, 3, (model, step, steps) => {
    if (step <= (2 * steps) / 3) return; // mean of the third year, over the basin modes that still ring
    const { grid } = model;
    const j = grid.ny / 2;
    const i = grid.nx / 2;
    sum += 0.5 * (valueAt(model, 'v', i - 1, j) + valueAt(model, 'v', i, j)) * H;
    count += 1;
  });
  const found = sum / count;

  it('has the exact value of Stommel’s closed form, −3.737513 m²/s', () => {
    expect(Math.abs(stommel(2e-7).v(SIDE / 2 + 6250, SIDE / 2) * H - WITH_FRICTION)).toBeLessThan(1e-6);
  });
  it('flows south at the Sverdrup transport to 3 %', (context) => {
    proveCase(context, 'g', {
      id: 'sverdrup',
      quantity: 'V in the middle of the basin, m²/s',
      expected: SVERDRUP,
      obtained: found,
      tolerance: 0.03,
      resolution: 'dx = 50 km',
    });
  });
  it('misses it by friction’s own share', (context) => {
    proveCase(context, 'g', {
      id: 'with-friction',
      quantity: 'V against Stommel’s closed form, m²/s',
      expected: WITH_FRICTION,
      obtained: found,
      tolerance: 5e-3,
      resolution: 'dx = 50 km',
    });
  });
});
