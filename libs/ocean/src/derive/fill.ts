import { isWet, type Grid } from '../grid/grid';
import type { Setup, Variable } from '../setup';
import { fillEkmanPumping, fillStress } from './wind-fields';
import { eastOf, valueOrZero, westOf, type Box, type NativeParts, type Part } from './window';

/** Writes a variable over a box of its own points to `out`, row-major, NaN on land, from the parts it needs. */
export function fillBox(
  variable: Variable,
  grid: Grid,
  setup: Setup,
  day: number,
  parts: NativeParts,
  box: Box,
  out: Float32Array,
): void {
  switch (variable) {
    case 'eta':
    case 'u':
    case 'v':
      return copy(needed(parts[variable], variable), box, out, 0);
    case 'h':
      return copy(needed(parts.eta, 'eta'), box, out, setup.layer.restThicknessM);
    case 'uCentre':
    case 'vCentre':
    case 'speed':
      return fillCentres(variable, grid, parts, box, out);
    case 'vorticity':
    case 'pv':
      return fillCorners(variable, grid, setup, parts, box, out);
    case 'taux':
    case 'tauy':
      return fillStress(variable, grid, setup, day, box, out);
    case 'ekmanPumping':
      return fillEkmanPumping(grid, setup, day, box, out);
  }
}

function needed(part: Part | null, name: string): Part {
  if (!part) throw new RangeError(`This variable is derived from ${name}, which did not arrive.`);
  return part;
}

function copy(part: Part, box: Box, out: Float32Array, shift: number): void {
  const width = part.i1 - part.i0;
  let k = 0;
  for (let j = box.j0; j < box.j1; j++)
    for (let i = box.i0; i < box.i1; i++) out[k++] = part.data[(j - part.j0) * width + i - part.i0] + shift;
}

/** Velocities at cell centres as means of the two faces, and their speed. */
function fillCentres(
  variable: 'uCentre' | 'vCentre' | 'speed',
  grid: Grid,
  parts: NativeParts,
  box: Box,
  out: Float32Array,
): void {
  const uPart = variable === 'vCentre' ? null : needed(parts.u, 'u');
  const vPart = variable === 'uCentre' ? null : needed(parts.v, 'v');
  const uWidth = uPart ? uPart.i1 - uPart.i0 : 0;
  const vWidth = vPart ? vPart.i1 - vPart.i0 : 0;
  let k = 0;
  for (let j = box.j0; j < box.j1; j++)
    for (let i = box.i0; i < box.i1; i++) {
      let u = 0;
      let v = 0;
      if (uPart) {
        const at = (j - uPart.j0) * uWidth + i - uPart.i0;
        u = 0.5 * (uPart.data[at] + uPart.data[at + 1]);
      }
      if (vPart) {
        const at = (j - vPart.j0) * vWidth + i - vPart.i0;
        v = 0.5 * (vPart.data[at] + vPart.data[at + vWidth]);
      }
      const value = variable === 'uCentre' ? u : variable === 'vCentre' ? v : Math.sqrt(u * u + v * v);
      out[k++] = grid.mask[j * grid.nx + i] ? value : NaN;
    }
}

/**
 * ζ with the slip factor of coasts, and q = (f + ζ)/(H + η) with η the mean of the water cells around the corner
 * (numerics.md §3); NaN where all four cells are land.
 */
function fillCorners(
  variable: 'vorticity' | 'pv',
  grid: Grid,
  setup: Setup,
  parts: NativeParts,
  box: Box,
  out: Float32Array,
): void {
  const u = needed(parts.u, 'u');
  const v = needed(parts.v, 'v');
  const eta = variable === 'pv' ? needed(parts.eta, 'eta') : null;
  const coast = setup.friction.slip === 'free' ? 0 : 2;
  let k = 0;
  for (let j = box.j0; j < box.j1; j++) {
    const north = grid.dxC[Math.min(j, grid.ny - 1)];
    const south = grid.dxC[Math.max(j - 1, 0)];
    for (let i = box.i0; i < box.i1; i++) {
      const west = westOf(grid, i);
      const east = eastOf(grid, i);
      let wet = 0;
      let anomaly = 0;
      for (const row of [j - 1, j])
        for (const column of [west, east]) {
          if (column < 0 || !isWet(grid, column, row)) continue;
          wet += 1;
          if (eta) anomaly += valueOrZero(eta, column, row);
        }
      const slip = wet === 4 ? 1 : coast;
      const across = valueOrZero(v, east, j) - valueOrZero(v, west, j);
      const along = valueOrZero(u, i, j) * north - valueOrZero(u, i, j - 1) * south;
      const zeta = (slip * (across * grid.dy - along)) / (grid.dxV[j] * grid.dy);
      const value = eta ? (grid.f[j] + zeta) / (setup.layer.restThicknessM + anomaly / wet) : zeta;
      out[k++] = wet === 0 ? NaN : value;
    }
  }
}
