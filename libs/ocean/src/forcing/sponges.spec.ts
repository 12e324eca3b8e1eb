import { describe, expect, it } from 'vitest';
import { buildGrid } from '../grid/build-grid';
import type { Setup, Sponge } from '../setup';
import { smallSetup } from '../testing/setups';
import { SPONGE_STRENGTH, spongePeakRate, spongeRates, windTaper } from './sponges';

const base = smallSetup(); // 0–20° E, 8° S – 8° N, 1/2°
const sponge = (edge: Sponge['edge'], change: Partial<Sponge> = {}): Sponge => ({
  edge,
  widthDeg: 4,
  peakRatePerS: 1e-5,
  tapersWind: true,
  ...change,
});
const withSponges = (...sponges: Sponge[]): Setup => ({ ...base, basin: { ...base.basin, islands: [], sponges } });
const ratesOf = (setup: Setup) => {
  const grid = buildGrid(setup);
  const rates = spongeRates(setup, grid)!;
  return { grid, rates };
};

describe('rates of sponges', () => {
  it('are not there without a sponge', () => {
    expect(spongeRates(base, buildGrid(base))).toBeNull();
    expect(windTaper(base.basin)).toBeNull();
  });
  it('rise as the square of the way in, to the peak at the edge, and are 0 outside', () => {
    const { grid, rates } = ratesOf(withSponges(sponge('north')));
    const { nx, ny } = grid;
    for (let j = 0; j <= ny; j++) {
      const s = Math.max(0, (grid.latFace[j] - 4) / 4);
      for (let i = 0; i < nx; i++) expect(rates.v[j * nx + i]).toBeCloseTo(1e-5 * s * s, 20);
    }
    expect(rates.v[ny * nx]).toBe(1e-5);
    for (let j = 0; j < ny; j++) {
      const s = Math.max(0, (grid.latCentre[j] - 4) / 4);
      expect(rates.cell[j * nx + 3]).toBeCloseTo(1e-5 * s * s, 20);
      expect(rates.u[j * (nx + 1) + nx]).toBe(rates.cell[j * nx]); // same row, same latitude
    }
  });
  it.each(['west', 'east', 'south', 'north'] as const)('%s lies at its own edge', (edge) => {
    const { grid, rates } = ratesOf(withSponges(sponge(edge)));
    const { nx, ny } = grid;
    const corners = [rates.cell[0], rates.cell[nx - 1], rates.cell[(ny - 1) * nx], rates.cell[ny * nx - 1]];
    const damped = { west: [0, 2], east: [1, 3], south: [0, 1], north: [2, 3] }[edge];
    corners.forEach((rate, k) => expect(rate > 0).toBe(damped.includes(k)));
    expect(rates.cell[(ny / 2) * nx + nx / 2]).toBe(0);
  });
  it('add up where two overlap, whatever their order', () => {
    const [west, south] = [sponge('west'), sponge('south', { peakRatePerS: 3e-6 })];
    const one = ratesOf(withSponges(west, south)).rates;
    const other = ratesOf(withSponges(south, west)).rates;
    expect(other).toEqual(one);
    expect(one.cell[0]).toBe(ratesOf(withSponges(west)).rates.cell[0] + ratesOf(withSponges(south)).rates.cell[0]);
  });
  it('peak at 6.9 c/W where nothing else is said, W in metres of that latitude', () => {
    const auto = sponge('east', { peakRatePerS: null });
    const { grid, rates } = ratesOf(withSponges(auto));
    const c = Math.sqrt(0.03 * 200);
    const width = (4 * Math.PI * 6.371e6) / 180;
    expect(rates.u[grid.nx]).toBeCloseTo((6.9 * c) / width, 15);
    expect(spongePeakRate(auto, c, width / 4)).toBeCloseTo((SPONGE_STRENGTH * c) / width, 15);
    const north = withSponges(auto);
    Object.assign(north.basin, { geometry: 'midlatitude', southDeg: 50, northDeg: 70 });
    const shrunk = ratesOf(north);
    const metres = width * Math.cos(Math.PI / 3); // at the reference latitude of 60°
    expect(shrunk.rates.u[shrunk.grid.nx]).toBeCloseTo((6.9 * c) / metres, 15);
  });
});

describe('wind inside sponges', () => {
  it('falls to 0 as cos² of the way in, and not where a sponge leaves it alone', () => {
    const taper = windTaper(withSponges(sponge('north'), sponge('west', { tapersWind: false })).basin)!;
    expect(taper.variesZonally).toBe(false);
    expect(taper.at(0, 0)).toBe(1);
    expect(taper.at(10, 4)).toBe(1);
    expect(taper.at(10, 6)).toBeCloseTo(0.5, 14);
    expect(taper.at(10, 8)).toBe(0);
    expect(windTaper(withSponges(sponge('west', { tapersWind: false })).basin)).toBeNull();
  });
  it('is the product where two overlap', () => {
    const taper = windTaper(withSponges(sponge('north'), sponge('east')).basin)!;
    expect(taper.variesZonally).toBe(true);
    expect(taper.at(18, 6)).toBeCloseTo(0.25, 14);
  });
});
