import { cos, RADIANS_PER_DEGREE } from '../exact/elementary';
import { LIMITS } from '../limits';
import type { Setup } from '../setup';
import { coastLayout, coastNotes, maskFromCoast, refuseCoastSize } from './coast-grid';
import type { Grid } from './grid';
import { gridLayout, short } from './grid-layout';
import { landMask } from './land';
import { coriolisAt, planeOf } from './plane';

export { gridLayout, type GridLayout, type Snapped } from './grid-layout';
export { planeOf } from './plane';

/**
 * The snapped grid of a setup (numerics.md §2, §12). Whole numbers of cells fill the extents; on an equatorial plane
 * and on a sphere the equator lies exactly on a v row where the basin holds it. On a sphere dx shrinks with the cosine
 * of each row's latitude, and f = 2Ω sin φ. `notes` says what was moved.
 * Throws RangeError, naming the limit, when the grid would have too many or too few cells, a spacing in km is out of
 * range, an extent or spacing is not a positive finite number, or no water is left.
 */
export function buildGrid(setup: Pick<Setup, 'basin' | 'constants' | 'numerics'>): Grid {
  const { basin, constants } = setup;
  const layout = gridLayout(setup);
  const { nx, ny, zonal, meridional, notes } = layout;
  refuseSize(nx, ny);

  const lonCentre = Float64Array.from({ length: nx }, (_, i) => zonal.start + (i + 0.5) * zonal.spacing);
  const lonFace = Float64Array.from({ length: nx + 1 }, (_, i) => zonal.start + i * zonal.spacing);
  const { start: south, spacing: dLat, equatorRow } = meridional;
  // Counted from the equator when there is one, so that latitude and f are exactly antisymmetric and exactly 0 on it.
  const latitudeAt = (row: number) => (equatorRow === null ? south + row * dLat : (row - equatorRow) * dLat);
  const latCentre = Float64Array.from({ length: ny }, (_, j) => latitudeAt(j + 0.5));
  const latFace = Float64Array.from({ length: ny + 1 }, (_, j) => latitudeAt(j));

  const plane = planeOf(setup);
  const metresPerDegreeLat = constants.earthRadiusM * RADIANS_PER_DEGREE;
  const metresPerDegreeLon = metresPerDegreeLat * plane.cosReference;
  const spherical = basin.geometry === 'spherical';
  const dxAt = (latitude: number) =>
    zonal.spacing * (spherical ? metresPerDegreeLat * cos(latitude * RADIANS_PER_DEGREE) : metresPerDegreeLon);
  const dxC = latCentre.map(dxAt);
  const dxV = latFace.map(dxAt);
  const dy = dLat * metresPerDegreeLat;
  // On a sphere the smallest and the largest spacing lie at different latitudes.
  for (const dx of [Math.min, Math.max].map((pick) => dxV.reduce((a, b) => pick(a, b)))) refuseSpacing(dx, 'zonal');
  refuseSpacing(dy, 'meridional');
  const coast = coastLayout(setup);
  if (coast) refuseCoastSize(coast);
  const mask = coast ? maskFromCoast(setup, layout, coast) : landMask(basin, lonCentre, latCentre);
  const wetCells = mask.reduce((sum, wet) => sum + wet, 0);
  if (wetCells === 0)
    throw new RangeError('Coast and islands cover every cell of the basin; at least one must be water.');
  const yFace = latFace.map((latitude) => (latitude - plane.referenceDeg) * metresPerDegreeLat);
  return {
    geometry: basin.geometry,
    nx,
    ny,
    periodic: basin.zonallyPeriodic,
    dxC,
    dxV,
    dy,
    lonCentre,
    lonFace,
    latCentre,
    latFace,
    xCentre: lonCentre.map((longitude) => (longitude - zonal.start) * metresPerDegreeLon),
    xFace: lonFace.map((longitude) => (longitude - zonal.start) * metresPerDegreeLon),
    yCentre: latCentre.map((latitude) => (latitude - plane.referenceDeg) * metresPerDegreeLat),
    yFace,
    f: spherical ? latFace.map(coriolisAt(setup)) : yFace.map((y) => plane.f0 + plane.beta * y),
    beta: plane.beta,
    equatorRow,
    mask,
    wetCells,
    notes: coast ? [...notes, ...coastNotes(layout, coast)] : notes,
  };
}

function refuseSize(nx: number, ny: number): void {
  const cells = nx * ny;
  const { min, max } = LIMITS.cells;
  if (cells > max)
    throw new RangeError(
      `A grid has at most ${max} cells; this one would have ${nx} × ${ny} = ${cells}. Use a wider spacing.`,
    );
  if (cells < min)
    throw new RangeError(
      `A grid has at least ${min} cells; this one would have ${nx} × ${ny} = ${cells}. Use a finer spacing.`,
    );
}

function refuseSpacing(metres: number, axis: string): void {
  const { min, max } = LIMITS.spacingKm;
  const km = metres / 1000;
  if (!(km >= min && km <= max))
    throw new RangeError(`The ${axis} grid spacing must be between ${min} and ${max} km; ${short(km)} km arrived.`);
}
