import { describe, expect, it } from 'vitest';
import { modeFrequency, padded, planeGrid, setState, stepModel, waveMode, type WaveMode } from '@halfdeep/ocean';
import { beta, c, commonModel, commonStep, DAY, H, L, order, stepsFor, T } from './common';

// Case b. Equatorial waves: Matsuno (1966), eq. 8: ω² − k² − k/ω = 2n + 1 in units of L and T, one wave in 4000 km
// (kL = 0.517876), walls at ±6 L. Frequencies below were computed independently of this code.
const LX = 4e6;
const KL = (2 * Math.PI * L) / LX;
const MODES: [WaveMode, number, number, number][] = [
  // mode, ω T, period in days, tolerance at 50 km
  ['rossby1', -0.159706, 60.05, 0.015],
  ['rossby2', -0.098484, 97.38, 0.022],
  ['mixedWest', -0.774043, 12.39, 0.006],
  ['mixedEast', 1.291919, 7.423, 0.006],
  ['gravity1East', 1.88237, 5.095, 0.006],
  ['gravity1West', -1.722664, 5.567, 0.006],
];

/** Relative error of ω over one period, from the phase of the wave's own projection. */
function frequencyError(mode: WaveMode, dx: number): number {
  const nx = Math.round(LX / dx);
  const ny = 2 * Math.round((6 * L) / dx);
  const dy = (12 * L) / ny;
  const grid = planeGrid({ nx, ny, dx: LX / nx, dy, y0: -6 * L, periodic: true, f: (y) => beta * y, beta });
  const wave = waveMode(mode, { amplitude: 1, wavelength: LX, crest: 0, c, beta, H });
  const { steps, dt } = stepsFor((2 * Math.PI) / Math.abs(wave.omega), commonStep(grid));
  const model = commonModel({ grid, dt });
  setState(model, {
    eta: (i, j) => wave.eta(grid.xCentre[i], grid.yCentre[j]),
    u: (i, j) => wave.u(grid.xFace[i], grid.yCentre[j]),
    v: (i, j) => wave.v(grid.xCentre[i], grid.yFace[j]),
  });
  const shape = Array.from(grid.yCentre, (y) => wave.eta(0, y));
  const cosine = Array.from(grid.xCentre, (x) => Math.cos(wave.k * x));
  const sine = Array.from(grid.xCentre, (x) => Math.sin(wave.k * x));
  const phases: number[] = [];
  for (let n = 0; n <= steps; n++) {
    let [a, b] = [0, 0];
    for (let j = 0; j < ny; j++)
      for (let i = 0; i < nx; i++) {
        const value = shape[j] * model.eta.now[padded(grid, i, j)];
        a += value * cosine[i];
        b += value * sine[i];
      }
    const phase = Math.atan2(b, a); // η ~ cos(kx − ωt): the phase is ωt
    const last = phases.at(-1) ?? 0;
    phases.push(phase + 2 * Math.PI * Math.round((last - phase) / (2 * Math.PI)));
    if (n < steps) stepModel(model);
  }
  // Slope of the phase by least squares.
  const mean = steps / 2;
  const slope =
    phases.reduce((sum, phase, n) => sum + (n - mean) * phase, 0) /
    phases.reduce((sum, _phase, n) => sum + (n - mean) ** 2, 0);
  return slope / dt / wave.omega - 1;
}

describe('equatorial wave modes (Matsuno 1966)', () => {
  it.each(MODES)('%s has its frequency %f/T and period %f d', (mode, omega, periodDays) => {
    expect(Math.abs(modeFrequency(mode, KL) - omega)).toBeLessThan(1e-6);
    expect(Math.abs((2 * Math.PI * T) / Math.abs(omega) / DAY - periodDays)).toBeLessThan(5e-3);
  });
  it.each(MODES)('%s travels at its frequency at 50 km', (mode, _omega, _period, tolerance) => {
    expect(Math.abs(frequencyError(mode, 50e3))).toBeLessThan(tolerance);
  });
  it('the first Rossby mode is slow by 4.4 %, 1.1 %, 0.28 % at 100, 50, 25 km: second order', () => {
    const [coarse, middle, fine] = [100e3, 50e3, 25e3].map((dx) => frequencyError('rossby1', dx));
    expect(coarse).toBeLessThan(0);
    expect(fine).toBeLessThan(0);
    expect(Math.abs(middle)).toBeLessThan(0.015);
    expect(Math.abs(fine)).toBeLessThan(0.004);
    expect(order(coarse, middle)).toBeGreaterThan(1.85);
    expect(order(middle, fine)).toBeGreaterThan(1.9);
  });
});
