import { WEST } from '../stepper/layout';
import type { LastStep } from '../terms/last-step';
import { createRowTerms, meridionalTerms } from '../terms/momentum-terms';
import { noTerms, sumOf, type BalanceTerms } from './latitude-balance';

/**
 * What holds the eastward transport across a meridian, f-weighted because f varies along it: for cell column i, between
 * u columns i and i + 1, ½ (Φ_i + Φ_{i + 1}) with Φ = Σ_j ½ (f_j + f_{j + 1}) U_j is the sum of the terms, m³/s² (numerics.md
 * §12, derived for this project). The terms are those of the v equation, with the sign that they have in Φ:
 * wind Σ τy dy/ρ0, pressure −Σ g′ h_v p_y dy, acceleration −Σ h_v v_t dy, and so on.
 */
export interface MeridianBalance {
  /** Σ_j U_j across u columns i and i + 1, m³/s, from the fluxes that the step used. */
  west: number;
  east: number;
  /** Φ_i and Φ_{i + 1}, m³/s². */
  weightedWest: number;
  weightedEast: number;
  /** ½ (Φ_i + Φ_{i + 1}). */
  rotation: number;
  terms: BalanceTerms;
  /** rotation − Σ terms: round-off. */
  residual: number;
}

/** The balance of cell column i, 0 … nx − 1, of the step that `last` holds. Throws RangeError when it is not on the grid. */
export function meridianBalance(last: LastStep, i: number): MeridianBalance {
  const { model, nonlinear } = last;
  const { grid, restThickness, spans } = model;
  if (!(Number.isInteger(i) && i >= 0 && i < grid.nx))
    throw new RangeError(`Cell columns are numbered 0 to ${grid.nx - 1}; ${i} arrived.`);
  const row = createRowTerms(grid.nx);
  const terms: BalanceTerms = noTerms();
  const eastward = (column: number, j: number, which: 'used' | 'turning') => {
    if (j < 0 || j >= grid.ny) return 0;
    const k = last.at(j) + column;
    if (!nonlinear) return last.ut[k] * restThickness * grid.dy;
    return (which === 'used' ? nonlinear.fluxU : nonlinear.turningU)[k] * grid.dy;
  };
  const around = (j: number, which: 'used' | 'turning') =>
    eastward(i, j - 1, which) + eastward(i, j, which) + (eastward(i + 1, j - 1, which) + eastward(i + 1, j, which));
  const sums = { west: 0, east: 0, weightedWest: 0, weightedEast: 0 };
  for (let j = 0; j < grid.ny; j++) {
    const f = 0.5 * (grid.f[j] + grid.f[j + 1]);
    sums.west += eastward(i, j, 'used');
    sums.east += eastward(i + 1, j, 'used');
    sums.weightedWest += f * eastward(i, j, 'used');
    sums.weightedEast += f * eastward(i + 1, j, 'used');
  }
  for (let j = 0; j <= grid.ny; j++) {
    const turning = 0.25 * grid.f[j] * around(j, 'turning');
    terms.limiter += 0.25 * grid.f[j] * (around(j, 'used') - around(j, 'turning'));
    if (!isStepped(spans.vPoints, i, j)) {
      terms.land += turning;
      continue;
    }
    meridionalTerms(last, j, row);
    const h = (nonlinear ? nonlinear.meridionalThickness(i, j) : restThickness) * grid.dy;
    terms.wind += h * row.wind[i];
    terms.pressure += h * row.pressure[i];
    terms.acceleration -= h * row.tendency[i];
    terms.friction += h * (row.rayleigh[i] + row.sponge[i]);
    terms.viscosity += h * row.viscosity[i];
    if (!nonlinear) continue;
    terms.kinetic += h * row.kinetic[i];
    terms.vorticity += h * row.vorticity[i];
    for (const column of [i, i + 1]) {
      const pair = eastward(column, j - 1, 'turning') + eastward(column, j, 'turning');
      const excess = nonlinear.meridionalThickness(i, j) / nonlinear.cornerThickness[last.at(j) + column] - 1;
      terms.stretching -= 0.25 * excess * grid.f[j] * pair;
    }
    terms.entrainment += h * row.entrainment[i];
  }
  const rotation = 0.5 * (sums.weightedWest + sums.weightedEast);
  return { ...sums, rotation, terms, residual: rotation - sumOf(terms) };
}

function isStepped(spans: LastStep['model']['spans']['vPoints'], i: number, j: number): boolean {
  for (let s = spans.rowStart[j]; s < spans.rowStart[j + 1]; s++)
    if (WEST + i >= spans.bounds[2 * s] && WEST + i < spans.bounds[2 * s + 1]) return true;
  return false;
}
