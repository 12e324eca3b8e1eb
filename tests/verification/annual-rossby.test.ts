import { describe, expect, it } from 'vitest';
import { fieldOf, forcingFromFunctions, planeGrid, setState, type SpongeRates } from '@halfdeep/ocean';
import { advance, c, commonModel, commonStep, DAY, rho0, stepsFor } from './common';
import { profilePlate } from './plates';
import { proveCase } from './record';

// Case j. Annual Rossby wave off an eastern coast: linear theory, derived for this project. Pumping w0 cos ωt everywhere;
// η_t − cR η_x = −w0 cos ωt has the wave e^{iω(t + (x − xE)/cR)} from the coast beside a response in place. Dispersion
// makes it k = [β − √(β² − 4ω²f²/c²)]/(2ω), a little slower than cR = βc²/f².
const OMEGA = (2 * Math.PI) / (365.25 * DAY);
const EARTH = 6.371e6;
const ROTATION = 7.2921e-5;
const LATITUDE = (20 / 180) * Math.PI;
const F0 = 2 * ROTATION * Math.sin(LATITUDE);
const BETA = (2 * ROTATION * Math.cos(LATITUDE)) / EARTH;
const W0 = 1e-6;
const DX = 25e3;
const NX = 104;
const NY = 96;
const SPONGE = 24; // cells

interface Complex {
  re: number;
  im: number;
}

/** Amplitude of η on a row in years 4 and 5: η = Re(E e^{iωt}). */
interface Row {
  y: number;
  amplitude: Complex[];
}

function run(rows: number[]): Row[] {
  const grid = planeGrid({
    nx: NX,
    ny: NY,
    dx: DX,
    dy: DX,
    y0: (-NY / 2) * DX,
    f: (y) => F0 + BETA * y,
    beta: BETA,
  });
  const { steps: perYear, dt } = stepsFor(365.25 * DAY, commonStep(grid));
  const forcing = forcingFromFunctions(grid, [
    {
      taux: (_x, y) => -rho0 * (F0 + BETA * y) * W0 * y,
      factor: (step) => Math.cos((2 * Math.PI * (step + 0.5)) / perYear),
    },
  ]);
  const largest = (6.9 * c) / (SPONGE * DX);
  const rate = (x: number) => largest * Math.max(0, 1 - x / (SPONGE * DX)) ** 2;
  const fill = (rowsOf: number, xs: Float64Array) =>
    Float64Array.from({ length: rowsOf * xs.length }, (_, k) => rate(xs[k % xs.length]));
  const sponge: SpongeRates = {
    u: fill(NY, grid.xFace),
    v: fill(NY + 1, grid.xCentre),
    cell: fill(NY, grid.xCentre),
  };
  const model = commonModel({ grid, dt, viscosity: 200, sponge, forcing });
  setState(model, {});
  advance(model, 3 * perYear);
  const sums = rows.map(() => Array.from({ length: NX }, () => ({ re: 0, im: 0 })));
  for (let n = 0; n < 2 * perYear; n++) {
    const phase = (2 * Math.PI * n) / perYear;
    const [cos, sin] = [Math.cos(phase), Math.sin(phase)];
    const { data, offset, rowStride } = fieldOf(model, 'h');
    rows.forEach((j, r) => {
      for (let i = 0; i < NX; i++) {
        const eta = data[offset + j * rowStride + i];
        sums[r][i].re += eta * cos;
        sums[r][i].im -= eta * sin;
      }
    });
    advance(model);
  }
  return rows.map((j, r) => ({
    y: grid.yCentre[j],
    amplitude: sums[r].map(({ re, im }) => ({ re: re / perYear, im: im / perYear })),
  }));
}

/** ω/k of the wave that fits best within 1000 km of the coast, m/s, and the amplitudes that it gives. */
function fit({ amplitude }: Row): { speed: number; fitted: Complex[] } {
  const coast = amplitude[NX - 1];
  // iω E − cR E′ = −w0: in place E = i w0/ω, whatever the speed.
  const inPlace = W0 / OMEGA;
  const near = Math.round(1e6 / DX);
  const waveAt = (k: number, i: number): Complex => {
    const angle = k * (i - (NX - 1)) * DX;
    const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
    const [re, im] = [coast.re, coast.im - inPlace];
    return { re: re * cos - im * sin, im: re * sin + im * cos + inPlace };
  };
  const misfit = (k: number) => {
    let sum = 0;
    for (let i = NX - near; i < NX; i++) {
      const { re, im } = waveAt(k, i);
      sum += (re - amplitude[i].re) ** 2 + (im - amplitude[i].im) ** 2;
    }
    return sum;
  };
  // Golden section; the misfit has one minimum between half and twice the long-wave speed.
  const longWave = (OMEGA * F0 * F0) / (BETA * c * c);
  let [low, high] = [0.5 * longWave, 2 * longWave];
  const golden = (Math.sqrt(5) - 1) / 2;
  for (let round = 0; round < 80; round++) {
    const [a, b] = [high - golden * (high - low), low + golden * (high - low)];
    if (misfit(a) < misfit(b)) high = b;
    else low = a;
  }
  const k = (low + high) / 2;
  return { speed: OMEGA / k, fitted: amplitude.map((_value, i) => waveAt(k, i)) };
}

describe('annual Rossby wave off an eastern coast', () => {
  const rows = run([NY / 2 - 16, NY / 2, NY / 2 + 16]);
  const speeds = rows.map(({ y }) => {
    const f = F0 + BETA * y;
    const k = (BETA - Math.sqrt(BETA ** 2 - (4 * OMEGA ** 2 * f ** 2) / c ** 2)) / (2 * OMEGA);
    return { longWave: (BETA * c * c) / (f * f), dispersive: OMEGA / k };
  });

  it('the dispersion relation has the independently computed ratios', () => {
    speeds.forEach(({ longWave, dispersive }, k) =>
      expect(Math.abs(dispersive / longWave - [0.9758, 0.9642, 0.9502][k])).toBeLessThan(1e-4),
    );
  });
  it('moves west at the speed of the dispersive wave: to 1 %', (context) => {
    // The middle row leads.
    for (const k of [1, 0, 2]) {
      const { speed, fitted } = fit(rows[k]);
      const { longWave, dispersive } = speeds[k];
      const where = ['388 km south of 20° N', '12 km north of 20° N', '412 km north of 20° N'][k];
      proveCase(context, 'j', {
        id: `speed-${k}`,
        quantity: `speed over βc²/f², ${where}`,
        expected: dispersive / longWave,
        obtained: speed / longWave,
        tolerance: 0.01,
        resolution: 'dx = 25 km, years 4 and 5',
        ...(k === 1 && {
          plate: profilePlate(
            'Yearly cosine part of η on the middle row within 1000 km of the coast, found and with the fitted speed.',
            ['from the eastern coast, km', 'η, m'],
            [
              {
                name: 'fitted',
                role: 'expected',
                x: fitted.slice(-40).map((_value, i) => (i - 39) * 25),
                y: fitted.slice(-40).map(({ re }) => re),
              },
              {
                name: 'found',
                role: 'found',
                x: fitted.slice(-40).map((_value, i) => (i - 39) * 25),
                y: rows[k].amplitude.slice(-40).map(({ re }) => re),
              },
            ],
          ),
        }),
      });
    }
  });
});
