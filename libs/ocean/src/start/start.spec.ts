import { describe, expect, it } from 'vitest';
import { Integration } from '../integration/integration';
import type { Setup, Start, WaveMode } from '../setup';
import { smallSetup } from '../testing/setups';
import { hermite, modeFrequency, waveMode } from './wave-mode';

const base = smallSetup();
const startWith = (start: Start, change: Partial<Setup> = {}) => Integration.start({ ...base, ...change, start });

describe('analytic starts', () => {
  it('rest is exactly 0', () => {
    const { eta, u, v } = startWith({ kind: 'rest' }).fields();
    for (const field of [eta, u, v]) expect(field.every((value) => value === 0)).toBe(true);
  });
  it('a bump has its height at its centre and falls to e^−½ a width away', () => {
    const run = startWith({
      kind: 'bump',
      amplitudeM: 10,
      longitudeDeg: 8.25,
      latitudeDeg: 1.25,
      widthLongitudeDeg: 3,
      widthLatitudeDeg: 2,
    });
    const at = (lon: number, lat: number) => run.fields().eta[Math.floor((lat + 8) / 0.5) * 40 + Math.floor(lon / 0.5)];
    expect(at(8.25, 1.25)).toBe(10);
    expect(at(11.25, 1.25)).toBeCloseTo(10 * Math.exp(-0.5), 12);
    expect(at(8.25, -0.75)).toBeCloseTo(10 * Math.exp(-0.5), 12);
    expect(at(12.75, -2.75)).toBe(0); // land
  });
  it('a step is −a north of its latitude, +a south of it, 0 on it', () => {
    const run = startWith({ kind: 'step', amplitudeM: 3, latitudeDeg: 1.25 });
    const column = [0, 18, 19, 31].map((j) => run.fields().eta[j * 40]);
    expect(column).toEqual([3, 0, -3, -3]);
  });
  it.each(['kelvin', 'rossby1', 'rossby2', 'mixedWest', 'mixedEast', 'gravity1West', 'gravity1East'] as WaveMode[])(
    'the mode %s has its amplitude as the largest |η|, with a crest where it was asked',
    (mode) => {
      const wave = waveMode(mode, { amplitude: 4, wavelength: 2e6, crest: 3e5, c: 2.45, beta: 2.3e-11, H: 200 });
      let largest = 0;
      let crestX = NaN;
      for (let x = 0; x < 2e6; x += 1e4)
        for (let y = 0; y < 2.4e6; y += 2e3) if (wave.eta(x, y) > largest) [largest, crestX] = [wave.eta(x, y), x];
      expect(largest).toBeCloseTo(4, 3);
      expect(crestX).toBe(3e5);
    },
  );
  it('a mode solves the equations: η_t + H (u_x + v_y) = 0 and u_t − β y v + g′ η_x = 0 at t = 0', () => {
    const [c, beta, H] = [2.5, 2.3e-11, 156.25];
    const g = (c * c) / H;
    for (const mode of ['kelvin', 'rossby1', 'mixedWest', 'gravity1East'] as WaveMode[]) {
      const wave = waveMode(mode, { amplitude: 1, wavelength: 4e6, crest: 0, c, beta, H });
      const [x, y, d] = [7e5, 2.5e5, 1e3];
      // η ~ cos(kx − ωt): ∂t = −(ω/k) ∂x, and the same for u and v.
      const dx = (f: (x: number, y: number) => number) => (f(x + d, y) - f(x - d, y)) / (2 * d);
      const dy = (f: (x: number, y: number) => number) => (f(x, y + d) - f(x, y - d)) / (2 * d);
      const speed = wave.omega / wave.k;
      const scale = Math.abs(speed) * wave.k;
      expect(Math.abs(-speed * dx(wave.eta) + H * (dx(wave.u) + dy(wave.v)))).toBeLessThan(1e-4 * scale);
      expect(Math.abs(-speed * dx(wave.u) - beta * y * wave.v(x, y) + g * dx(wave.eta))).toBeLessThan(
        1e-4 * scale * (g / c),
      );
      expect(Math.abs(-speed * dx(wave.v) + beta * y * wave.u(x, y) + g * dy(wave.eta))).toBeLessThan(
        1e-4 * scale * (g / c),
      );
    }
  });
  it('the roots satisfy ω² − k² − k/ω = 2n + 1 and the Hermite functions are normalised', () => {
    for (const [mode, n] of [
      ['rossby1', 1],
      ['rossby2', 2],
      ['mixedWest', 0],
      ['gravity1East', 1],
    ] as const)
      for (const k of [0.05, 0.5, 3]) {
        const w = modeFrequency(mode, k);
        expect((w * w - k * k - k / w) / (2 * n + 1)).toBeCloseTo(1, 10);
      }
    for (const n of [0, 1, 2, 3]) {
      let sum = 0;
      for (let y = -12; y <= 12; y += 0.01) sum += hermite(n, y) ** 2 * 0.01;
      expect(sum).toBeCloseTo(1, 10);
    }
  });
  it('a mode is refused off the equatorial plane', () => {
    const start: Start = { kind: 'mode', mode: 'kelvin', amplitudeM: 1, wavelengthDeg: 10, crestLongitudeDeg: 5 };
    const basin = { ...base.basin, geometry: 'fplane', southDeg: 20, northDeg: 30 } as const;
    const output = { ...base.output, sections: [], moorings: [] };
    expect(() => startWith(start, { basin, output })).toThrow(/equatorial plane only; the basin is an f-plane/);
    const sphere = { ...basin, geometry: 'spherical' } as const;
    expect(() => startWith(start, { basin: sphere, output })).toThrow(/the basin is a spherical band/);
  });
  it('a value that is not finite is refused', () => {
    expect(() => startWith({ kind: 'step', amplitudeM: NaN, latitudeDeg: 0 })).toThrow(/eta = NaN at a water point/);
  });
});
