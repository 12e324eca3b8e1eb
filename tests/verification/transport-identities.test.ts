import { describe, it } from 'vitest';
import { forcingFromFunctions, planeGrid, setState, type Model, type ModelOptions } from '@halfdeep/ocean';
import { LastStep } from '../../libs/ocean/src/terms/last-step';
import {
  BALANCE_TERMS,
  type BalanceTerms,
  equatorValidBalance,
  latitudeBalance,
} from '../../libs/ocean/src/transport/latitude-balance';
import { meridianBalance } from '../../libs/ocean/src/transport/meridian-balance';
import { advance, beta, commonModel, commonStep, DAY } from './common';
import { profilePlate } from './plates';
import { proveCase } from './record';

// Case q. The transport across a line, times f, is the sum of its parts: wind (Ekman), pressure (geostrophic), friction,
// acceleration, coasts … (identities of numerics.md §9 and §12, derived for this project). The left side is summed from
// the fluxes that changed the layer, each part from its own operator of the scheme.
const NX = 80;
const NY = 60;
const DX = 5e4;

/** An equatorial basin with an island under steady and changing wind, after 60 days. */
function basin(options: Partial<ModelOptions>): Model {
  const grid = planeGrid({
    nx: NX,
    ny: NY,
    dx: DX,
    dy: DX,
    y0: (-NY / 2) * DX,
    f: (y) => beta * y,
    beta,
    isWater: (x, y) => Math.hypot(x - 2.4e6, y - 6e5) > 2.5e5,
  });
  const dt = 0.8 * commonStep(grid);
  const forcing = forcingFromFunctions(grid, [
    { taux: (_x, y) => -0.05 * Math.cos((Math.PI * y) / 1.5e6) },
    { taux: (_x, y) => (0.05 / 1.5e6) * y, factor: (step) => Math.cos((2 * Math.PI * (step + 0.5) * dt) / (60 * DAY)) },
  ]);
  const model = commonModel({ grid, dt, forcing, rayleigh: 1e-7, viscosity: 4000, ...options });
  setState(model, {});
  advance(model, Math.round((60 * DAY) / dt));
  return model;
}

const NONLINEAR = {
  equations: 'nonlinear',
  slip: 'none',
  minimumThickness: 40,
  stressFloor: 60,
  entrainment: { onsetThickness: 120, timescale: 10 * DAY, detrainment: 'uniform' },
} as const;

describe.each([
  ['linear', {}],
  ['nonlinear, no slip, entrainment given back, stress floor', NONLINEAR],
] as const)('balances of transport: %s', (name, options) => {
  const last = new LastStep(basin(options));
  last.update();

  /** |left − Σ parts| over the largest of them, the largest of many lines. */
  const worst = (lines: readonly { left: number; residual: number; terms: BalanceTerms }[]) =>
    lines.reduce((most, { left, residual, terms }) => {
      const size = Math.max(Math.abs(left), ...BALANCE_TERMS.map((term) => Math.abs(terms[term])));
      return Math.max(most, Math.abs(residual) / size);
    }, 0);
  const rows = Array.from({ length: NY }, (_, j) => latitudeBalance(last, j));
  const inner = Array.from({ length: NY - 1 }, (_, j) => equatorValidBalance(last, j + 1));
  const columns = Array.from({ length: NX - 1 }, (_, i) => meridianBalance(last, i + 1));

  it('close on every latitude, on the equator’s own form, and on every meridian', (context) => {
    const y = Array.from(last.model.grid.yCentre, (value) => value / 1e3);
    for (const [id, quantity, lines] of [
      ['latitudes', 'f V across each latitude', rows.map((row) => ({ ...row, left: row.rotation }))],
      ['equator', 'β V in the form that holds on the equator', inner.map((row) => ({ ...row, left: row.beta }))],
      ['meridians', 'f U across each meridian', columns.map((column) => ({ ...column, left: column.rotation }))],
    ] as const)
      proveCase(context, 'q', {
        id: `${id} (${name})`,
        quantity: `${quantity} less the sum of its parts, over the largest part; ${name}`,
        expected: 0,
        obtained: worst(lines),
        kind: 'absolute',
        tolerance: 1e-11,
        resolution: `${NX} × ${NY} cells, an island, 60 days`,
        ...(id === 'latitudes' && {
          plate: profilePlate(
            `f V across each latitude and its two largest parts; ${name}.`,
            ['northward, km', 'f V, m³/s²'],
            [
              { name: 'f V', role: 'found', x: y, y: rows.map((row) => row.rotation) },
              { name: 'wind', role: 'expected', x: y, y: rows.map(({ terms }) => terms.wind) },
              { name: 'pressure', role: 'expected', x: y, y: rows.map(({ terms }) => terms.pressure) },
            ],
          ),
        }),
      });
  });
});
