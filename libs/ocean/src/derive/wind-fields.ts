import { evaluatePattern, variesZonally } from '../forcing/pattern';
import { seasonFactor } from '../forcing/season';
import { windTaper } from '../forcing/sponges';
import type { Grid } from '../grid/grid';
import { betaAt, coriolisAt, zonalShrink } from '../grid/plane';
import type { Setup } from '../setup';
import type { Box } from './window';

type Component = 'taux' | 'tauy';

/** Stress of a setup's wind on one latitude at a day, as sponges leave it: at(longitudeDeg), N/m². */
export function stressAlong(
  setup: Setup,
  latitudeDeg: number,
  day: number,
): (lon: number) => Record<Component, number> {
  const radius = setup.constants.earthRadiusM;
  const taper = windTaper(setup.basin);
  const share = taper && !taper.variesZonally ? taper.at(0, latitudeDeg) : 1;
  const even = { taux: 0, tauy: 0 };
  const uneven: { factor: number; pattern: Setup['wind']['components'][number]['pattern'] }[] = [];
  for (const { pattern, season } of setup.wind.components) {
    const factor = share * seasonFactor(season, day, setup.wind.seasonalStrength);
    if (factor === 0) continue;
    if (variesZonally(pattern)) {
      uneven.push({ factor, pattern });
      continue;
    }
    const stress = evaluatePattern(pattern, 0, latitudeDeg, radius);
    even.taux += factor * stress.taux;
    even.tauy += factor * stress.tauy;
  }
  if (uneven.length === 0 && !taper?.variesZonally) return () => even;
  return (longitudeDeg) => {
    const total = { ...even };
    for (const { factor, pattern } of uneven) {
      const stress = evaluatePattern(pattern, longitudeDeg, latitudeDeg, radius);
      total.taux += factor * stress.taux;
      total.tauy += factor * stress.tauy;
    }
    const left = taper?.variesZonally ? taper.at(longitudeDeg, latitudeDeg) : 1;
    return { taux: left * total.taux, tauy: left * total.tauy };
  };
}

/** Wind stress at the cell centres of a box, written to `out` row-major; land NaN. */
export function fillStress(
  component: Component,
  grid: Grid,
  setup: Setup,
  day: number,
  box: Box,
  out: Float32Array,
): void {
  let k = 0;
  for (let j = box.j0; j < box.j1; j++) {
    const at = stressAlong(setup, grid.latCentre[j], day);
    for (let i = box.i0; i < box.i1; i++)
      out[k++] = grid.mask[j * grid.nx + i] ? at(grid.lonCentre[i])[component] : NaN;
  }
}

/**
 * Ekman pumping [∂x(τy/f) − ∂y(τx/f)]/ρ0 at the cell centres of a box, m/s, upward positive, by differences over two cells;
 * on a sphere ∂y(cos φ τx/f)/cos φ. NaN on land and within L_eq = √(c/β) of the equator, where division by f is meaningless (numerics.md §12).
 */
export function fillEkmanPumping(grid: Grid, setup: Setup, day: number, box: Box, out: Float32Array): void {
  const c = Math.sqrt(setup.layer.reducedGravityMS2 * setup.layer.restThicknessM);
  const nearest = grid.beta > 0 ? Math.sqrt(c / grid.beta) : 0;
  const dLat = grid.latFace[1] - grid.latFace[0];
  const dLon = grid.lonFace[1] - grid.lonFace[0];
  const f = coriolisAt(setup);
  const beta = betaAt(setup);
  const shrink = zonalShrink(setup);
  const perDensity = 1 / setup.constants.densityKgM3;
  let k = 0;
  for (let j = box.j0; j < box.j1; j++) {
    const latitude = grid.latCentre[j];
    const [fSouth, fHere, fNorth] = [f(latitude - dLat), f(latitude), f(latitude + dLat)];
    const meaningless = fSouth * fNorth <= 0 || Math.abs(fHere) < beta(latitude) * nearest;
    const [toSouth, toNorth] = [-dLat, dLat].map((away) => shrink(latitude + away) / shrink(latitude));
    const south = stressAlong(setup, latitude - dLat, day);
    const here = stressAlong(setup, latitude, day);
    const north = stressAlong(setup, latitude + dLat, day);
    for (let i = box.i0; i < box.i1; i++) {
      if (meaningless || !grid.mask[j * grid.nx + i]) {
        out[k++] = NaN;
        continue;
      }
      const longitude = grid.lonCentre[i];
      const zonal = (here(longitude + dLon).tauy - here(longitude - dLon).tauy) / (2 * grid.dxC[j] * fHere);
      const meridional =
        ((toNorth * north(longitude).taux) / fNorth - (toSouth * south(longitude).taux) / fSouth) / (2 * grid.dy);
      out[k++] = (zonal - meridional) * perDensity;
    }
  }
}
