import { describe, it } from 'vitest';
import { planeGrid, setState, valueAt } from '@halfdeep/ocean';
import { advance, c, commonModel, commonStep, g, order, stepsFor } from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';

// Case m. Coastal Kelvin wave on an f-plane along a southern wall: Gill (1982), § 10.4. It moves with the wall on its
// right at c, and decays away from it as e^{−y/λ}; between cells by (1 − dy/2λ)/(1 + dy/2λ), derived for this project
// from f (u_{j−1} + u_j)/2 = −g′ (η_j − η_{j−1})/dy with u = g′ η/c.
const F = 1e-4;
const LAMBDA = c / F;
const LX = 40 * LAMBDA;

interface Wave {
  speedError: number;
  /** Amplitude of η by row, over that of the first. */
  amplitudes: number[];
  ratio: number;
}

function run(points: number): Wave {
  const dx = LX / points;
  // Cells as wide as long would not resolve λ: dy is λ/4 on the grid of 32 points a wave.
  const dy = (8 * LAMBDA) / points;
  const ny = Math.round((16 * LAMBDA) / dy);
  const grid = planeGrid({ nx: points, ny, dx, dy, periodic: true, f: () => F });
  const k = (2 * Math.PI) / LX;
  const ratio = (1 - dy / (2 * LAMBDA)) / (1 + dy / (2 * LAMBDA));
  const { steps, dt } = stepsFor(LX / c, commonStep(grid));
  const model = commonModel({ grid, dt });
  setState(model, {
    eta: (i, j) => Math.cos(k * grid.xCentre[i]) * ratio ** j,
    u: (i, j) => (g / c) * Math.cos(k * grid.xFace[i]) * ratio ** j,
  });
  advance(model, steps);
  const wave = (j: number) => {
    let [a, b] = [0, 0];
    for (let i = 0; i < points; i++) {
      const eta = valueAt(model, 'h', i, j);
      a += eta * Math.cos(k * grid.xCentre[i]);
      b += eta * Math.sin(k * grid.xCentre[i]);
    }
    return { amplitude: Math.hypot(a, b), phase: Math.atan2(b, a) };
  };
  // After one period the crest is back but for what the grid takes from its speed.
  const rows = Array.from({ length: Math.round((4 * LAMBDA) / dy) }, (_, j) => wave(j));
  return {
    speedError: rows[0].phase / (2 * Math.PI),
    amplitudes: rows.map(({ amplitude }) => amplitude / rows[0].amplitude),
    ratio,
  };
}

describe('coastal Kelvin wave (Gill 1982)', () => {
  const [coarse, middle, fine] = [16, 32, 64].map(run);

  it('moves at c: within 0.3 % at 32 points a wave, second order', (context) => {
    proveCase(context, 'm', {
      id: 'speed',
      quantity: 'speed, m/s',
      expected: c,
      obtained: c * (1 + middle.speedError),
      tolerance: 3e-3,
      order: order(middle.speedError, fine.speedError),
      orderRange: [1.8, 2.2],
      resolution: '32 points a wave, dy = λ/4; order from 32 and 64 points',
      plate: convergencePlate(
        'Error of the speed of the coastal Kelvin wave against the spacing.',
        'spacing, wavelengths',
        [1 / 16, 1 / 32, 1 / 64],
        [{ name: 'speed', values: [coarse.speedError, middle.speedError, fine.speedError] }],
      ),
    });
  });
  it('decays away from the wall by (1 − dy/2λ)/(1 + dy/2λ) a cell', (context) => {
    proveCase(context, 'm', {
      id: 'decay',
      quantity: 'amplitude of η a cell farther from the wall',
      expected: middle.ratio,
      obtained: middle.amplitudes[1],
      tolerance: 3e-3,
      resolution: '32 points a wave, dy = λ/4',
      plate: profilePlate(
        'Amplitude of η over that at the wall after one period, found and by the discrete decay.',
        ['cells from the wall', 'amplitude'],
        [
          {
            name: 'discrete decay',
            role: 'expected',
            x: middle.amplitudes.map((_a, j) => j),
            y: middle.amplitudes.map((_a, j) => middle.ratio ** j),
          },
          { name: 'found', role: 'found', x: middle.amplitudes.map((_a, j) => j), y: middle.amplitudes },
        ],
      ),
    });
  });
});
