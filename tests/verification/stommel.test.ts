import { describe, expect, it } from 'vitest';
import { padded } from '@halfdeep/ocean';
import { H, order, relativeL2 } from './common';
import { largestTransport, runGyre, SIDE, stommel } from './gyre';

// Case e. Wind-driven gyre with Rayleigh drag: Stommel (1948), Trans. Am. Geophys. Union 29, 202–206; closed form with
// r = 1e-6 1/s. The largest transport was computed independently: 6.033428 Sv at x = 188.69 km.
const R = 1e-6;
const EXPECTED_SV = 6.033428;

describe('Stommel gyre (Stommel 1948)', () => {
  const exact = stommel(R);
  const errors = [100e3, 50e3, 25e3].map((dx) => {
    const { grid, model } = runGyre(dx, R, 1.9);
    const found: number[] = [];
    const expected: number[] = [];
    for (let j = 1; j < grid.ny; j++) {
      let psi = 0;
      for (let i = 0; i < grid.nx; i++) {
        psi += model.v.now[padded(grid, i, j)] * dx;
        found.push(psi);
        expected.push(exact.psi((i + 1) * dx, j * dx));
      }
    }
    return { transport: largestTransport(grid, model.v.now) / 1e6 / EXPECTED_SV - 1, psi: relativeL2(found, expected) };
  });
  const [coarse, middle, fine] = errors;

  it('has the closed form’s largest transport, 6.033428 Sv', () => {
    let largest = 0;
    for (let x = 0; x <= SIDE; x += 10) largest = Math.max(largest, exact.psi(x, SIDE / 2));
    expect(Math.abs((largest * H) / 1e6 - EXPECTED_SV)).toBeLessThan(1e-6);
  });
  it('carries it to 0.4 % at 25 km', () => {
    expect(Math.abs(fine.transport)).toBeLessThan(4e-3);
    expect(Math.abs(middle.transport)).toBeLessThan(1.2e-2);
    expect(Math.abs(coarse.transport)).toBeLessThan(0.1);
  });
  it('has the shape of the closed form, at second order', () => {
    expect(fine.psi).toBeLessThan(1e-2);
    expect(order(middle.psi, fine.psi)).toBeGreaterThan(1.8);
  });
});
