import { describe, expect, it } from 'vitest';
import { valueAt } from '@halfdeep/ocean';
import { H, order, relativeL2 } from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';
import { largestTransport, runGyre, SIDE, stommel } from './gyre';

// Case e. Wind-driven gyre with Rayleigh drag: Stommel (1948), Trans. Am. Geophys. Union 29, 202–206; closed form with
// r = 1e-6 1/s. The largest transport was computed independently: 6.033428 Sv at x = 188.69 km.
const R = 1e-6;
const EXPECTED_SV = 6.033428;

describe('Stommel gyre (Stommel 1948)', () => {
  const exact = stommel(R);
  const runs = [100e3, 50e3, 25e3].map((dx) => {
    const { grid, model } = runGyre(dx, R, 1.9);
    const found: number[] = [];
    const expected: number[] = [];
    for (let j = 1; j < grid.ny; j++) {
      let psi = 0;
      for (let i = 0; i < grid.nx; i++) {
        psi += valueAt(model, 'v', i, j) * dx;
        found.push(psi);
        expected.push(exact.psi((i + 1) * dx, j * dx));
      }
    }
    const across = Array.from({ length: grid.nx }, (_, i) => valueAt(model, 'v', i, grid.ny / 2));
    return { dx, transport: largestTransport(model) / 1e6, psi: relativeL2(found, expected), across };
  });
  const [coarse, middle, fine] = runs;
  const miss = ({ transport }: { transport: number }) => Math.abs(transport / EXPECTED_SV - 1);

  it('has the closed form’s largest transport, 6.033428 Sv', () => {
    let largest = 0;
    for (let x = 0; x <= SIDE; x += 10) largest = Math.max(largest, exact.psi(x, SIDE / 2));
    expect(Math.abs((largest * H) / 1e6 - EXPECTED_SV)).toBeLessThan(1e-6);
  });
  it('carries it to 0.4 % at 25 km', (context) => {
    proveCase(context, 'e', {
      id: 'transport',
      quantity: 'largest transport, Sv',
      expected: EXPECTED_SV,
      obtained: fine.transport,
      tolerance: 4e-3,
      resolution: 'dx = 25 km',
      plate: profilePlate(
        'Northward velocity across the middle of the Stommel gyre, found at 25 km and exact.',
        ['eastward, km', 'v, m/s'],
        [
          { name: 'exact', role: 'expected', x: axis(25), y: axis(25).map((x) => exact.v(x * 1e3, SIDE / 2)) },
          { name: 'found', role: 'found', x: axis(25), y: fine.across },
        ],
      ),
    });
    expect(miss(middle)).toBeLessThan(1.2e-2);
    expect(miss(coarse)).toBeLessThan(0.1);
  });
  it('has the shape of the closed form, at second order', (context) => {
    proveCase(context, 'e', {
      id: 'shape',
      quantity: 'streamfunction, L2 error',
      expected: 0,
      obtained: fine.psi,
      kind: 'L2',
      tolerance: 1e-2,
      order: order(middle.psi, fine.psi),
      orderRange: [1.8, 2.2],
      resolution: 'dx = 25 km; order from 50 and 25 km',
      plate: convergencePlate(
        'Errors of the Stommel gyre against the spacing.',
        'spacing, km',
        [100, 50, 25],
        [
          { name: 'ψ, L2', values: runs.map(({ psi }) => psi) },
          { name: 'transport', values: runs.map(miss) },
        ],
      ),
    });
  });
});

/** v points, km. */
function axis(dxKm: number): number[] {
  return Array.from({ length: SIDE / 1e3 / dxKm }, (_, i) => (i + 0.5) * dxKm);
}
