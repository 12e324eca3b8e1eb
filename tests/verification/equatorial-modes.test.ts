import { describe, expect, it } from 'vitest';
import { fieldOf, modeFrequency, planeGrid, setState, waveMode, type WaveMode } from '@halfdeep/ocean';
import { advance, beta, c, commonModel, commonStep, DAY, g, H, L, order, T } from './common';
import { convergencePlate } from './plates';
import { proveCase } from './record';

// Case b. Equatorial waves: Matsuno (1966), eq. 8: ω² − k² − k/ω = 2n + 1 in units of L and T, one wave in 4000 km
// (kL = 0.517876), walls at ±6 L. Frequencies below were computed independently of this code.
const LX = 4e6;
const KL = (2 * Math.PI * L) / LX;
const MODES: [WaveMode, string, number, number, number][] = [
  // mode, its name, ω T, period in days, tolerance at 50 km
  ['rossby1', 'Rossby n = 1', -0.159706, 60.05, 0.015],
  ['rossby2', 'Rossby n = 2', -0.098484, 97.38, 0.022],
  ['mixedWest', 'mixed Rossby-gravity, westward', -0.774043, 12.39, 0.006],
  ['mixedEast', 'mixed Rossby-gravity, eastward', 1.291919, 7.423, 0.006],
  ['gravity1East', 'inertia-gravity n = 1, eastward', 1.88237, 5.095, 0.006],
  ['gravity1West', 'inertia-gravity n = 1, westward', -1.722664, 5.567, 0.006],
];

/** ω of a mode by bisection of ω³ − (k² + 2n + 1) ω − k (n ≥ 1), or ω² − kω − 1 (n = 0), in units of L and T. */
function root(mode: WaveMode): number {
  const n = mode.startsWith('mixed') ? 0 : Number(/\d/.exec(mode)![0]);
  const residual = (w: number) => (n === 0 ? w * w - KL * w - 1 : w ** 3 - (KL * KL + 2 * n + 1) * w - KL);
  const turn = Math.sqrt((KL * KL + 2 * n + 1) / 3);
  let [low, high] = mode.startsWith('rossby')
    ? [-turn, turn]
    : mode.endsWith('West')
      ? [-10, n === 0 ? 0 : -turn]
      : [n === 0 ? 0 : turn, 10];
  for (let k = 0; k < 80; k++) {
    const middle = (low + high) / 2;
    if (residual(middle) > 0 === residual(low) > 0) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/**
 * Relative error of ω over one period, from the phase of the state's projection on the mode: modes are orthogonal in the
 * energy g′ η² + H (u² + v²), so that what the grid makes of other modes stays out.
 */
function frequencyError(mode: WaveMode, dx: number): number {
  const nx = Math.round(LX / dx);
  const ny = 2 * Math.round((6 * L) / dx);
  const dy = (12 * L) / ny;
  const grid = planeGrid({ nx, ny, dx: LX / nx, dy, y0: -6 * L, periodic: true, f: (y) => beta * y, beta });
  const wave = waveMode(mode, { amplitude: 1, wavelength: LX, crest: 0, c, beta, H });
  const samples = 48;
  const period = (2 * Math.PI) / Math.abs(wave.omega);
  const perSample = Math.ceil(period / samples / commonStep(grid));
  const dt = period / samples / perSample;
  const model = commonModel({ grid, dt });
  setState(model, {
    eta: (i, j) => wave.eta(grid.xCentre[i], grid.yCentre[j]),
    u: (i, j) => wave.u(grid.xFace[i], grid.yCentre[j]),
    v: (i, j) => wave.v(grid.xCentre[i], grid.yFace[j]),
  });
  // Every field of a mode is a profile of y times a wave of x: one Fourier sum a row does for both phases.
  const profiles = (['eta', 'u', 'v'] as const).map((name) => {
    const y = name === 'v' ? grid.yFace : grid.yCentre;
    const x = name === 'u' ? grid.xFace : grid.xCentre;
    return {
      variable: name === 'eta' ? ('h' as const) : name,
      weight: name === 'eta' ? g : H,
      cos: Array.from({ length: nx }, (_, i) => Math.cos(wave.k * x[i])),
      sin: Array.from({ length: nx }, (_, i) => Math.sin(wave.k * x[i])),
      // wave = inPhase cos kx + across sin kx; a quarter farther east it is inPhase sin kx − across cos kx.
      inPhase: Array.from({ length: ny }, (_, j) => wave[name](0, y[j])),
      across: Array.from({ length: ny }, (_, j) => wave[name](LX / 4, y[j])),
    };
  });
  const phaseNow = () => {
    let [here, farther] = [0, 0];
    for (const { variable, weight, cos, sin, inPhase, across } of profiles) {
      const { data, offset, rowStride } = fieldOf(model, variable);
      for (let j = 0; j < ny; j++) {
        let [a, b] = [0, 0];
        for (let i = 0; i < nx; i++) {
          const value = data[offset + j * rowStride + i];
          a += value * cos[i];
          b += value * sin[i];
        }
        here += weight * (a * inPhase[j] + b * across[j]);
        farther += weight * (b * inPhase[j] - a * across[j]);
      }
    }
    return Math.atan2(farther, here);
  };
  const phases: number[] = [];
  for (let n = 0; n <= samples; n++) {
    if (n > 0) advance(model, perSample);
    const phase = phaseNow(); // cos(kx − ωt): the phase is ωt
    const last = phases.at(-1) ?? 0;
    phases.push(phase + 2 * Math.PI * Math.round((last - phase) / (2 * Math.PI)));
  }
  // Slope of the phase by least squares.
  const mean = samples / 2;
  const slope =
    phases.reduce((sum, phase, n) => sum + (n - mean) * phase, 0) /
    phases.reduce((sum, _phase, n) => sum + (n - mean) ** 2, 0);
  return slope / (period / samples) / wave.omega - 1;
}

describe('equatorial wave modes (Matsuno 1966)', () => {
  it.each(MODES)('%s (%s) has its frequency %f/T and period %f d', (mode, _name, omega, periodDays) => {
    // The root of the cubic found here, the figure computed independently, and what a start state is made of.
    expect(Math.abs(root(mode) - omega)).toBeLessThan(1e-6);
    expect(Math.abs(modeFrequency(mode, KL) - root(mode))).toBeLessThan(1e-12);
    expect(Math.abs((2 * Math.PI * T) / Math.abs(omega) / DAY - periodDays)).toBeLessThan(5e-3);
  });
  for (const [mode, name, , , tolerance] of MODES)
    it(`${name} travels at its frequency at 50 km, second order`, (context) => {
      const spacings = [100, 50, 25];
      const errors = spacings.map((dx) => frequencyError(mode, dx * 1e3));
      const omega = root(mode);
      proveCase(context, 'b', {
        id: mode,
        quantity: `ω T of ${name}`,
        expected: omega,
        obtained: omega * (1 + errors[1]),
        tolerance,
        order: order(errors[1], errors[2]),
        orderRange: [1.9, 2.1],
        resolution: 'dx = 50 km; order from 50 and 25 km',
        ...(mode === 'rossby1' && {
          plate: convergencePlate(
            'Error of the frequency of the first Rossby mode against the spacing.',
            'spacing, km',
            spacings,
            [{ name: 'ω', values: errors }],
          ),
        }),
      });
      if (!mode.startsWith('rossby')) return;
      for (const error of errors) expect(error, 'the scheme is slow for Rossby waves').toBeLessThan(0);
    });
});
