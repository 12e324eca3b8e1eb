import { cos, RADIANS_PER_DEGREE, sin } from '../exact/elementary';
import { LIMITS } from '../limits';
import type { Setup } from '../setup';
import type { Grid } from './grid';
import { landMask } from './land';

/**
 * The snapped grid of a setup (numerics.md §2, §12). Whole numbers of cells fill the extents; on an equatorial plane
 * the equator lies exactly on a v row. `notes` says what was moved.
 * Throws RangeError, naming the limit, when the grid would have too many or too few cells, a spacing in km is out of
 * range, an extent or spacing is not a positive finite number, or no water is left.
 */
export function buildGrid(setup: Pick<Setup, 'basin' | 'constants' | 'numerics'>): Grid {
  const { basin, constants } = setup;
  const { nx, ny, zonal, meridional, notes } = gridLayout(setup);
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
  const dx = zonal.spacing * metresPerDegreeLon;
  const dy = dLat * metresPerDegreeLat;
  refuseSpacing(dx, 'zonal');
  refuseSpacing(dy, 'meridional');
  const mask = landMask(basin, lonCentre, latCentre);
  const wetCells = mask.reduce((sum, wet) => sum + wet, 0);
  if (wetCells === 0)
    throw new RangeError('Coast and islands cover every cell of the basin; at least one must be water.');
  const yFace = latFace.map((latitude) => (latitude - plane.referenceDeg) * metresPerDegreeLat);
  return {
    geometry: basin.geometry,
    nx,
    ny,
    stride: nx + 2,
    periodic: basin.zonallyPeriodic,
    dxC: new Float64Array(ny).fill(dx),
    dxV: new Float64Array(ny + 1).fill(dx),
    dy,
    lonCentre,
    lonFace,
    latCentre,
    latFace,
    xCentre: lonCentre.map((longitude) => (longitude - zonal.start) * metresPerDegreeLon),
    xFace: lonFace.map((longitude) => (longitude - zonal.start) * metresPerDegreeLon),
    yCentre: latCentre.map((latitude) => (latitude - plane.referenceDeg) * metresPerDegreeLat),
    yFace,
    f: yFace.map((y) => plane.f0 + plane.beta * y),
    beta: plane.beta,
    equatorRow,
    mask,
    wetCells,
    notes,
  };
}

/** Columns, rows, edges and spacings of a setup's snapped grid, without any array; sizes are not refused here. */
export interface GridLayout {
  nx: number;
  ny: number;
  zonal: Snapped;
  meridional: Snapped & { equatorRow: number | null };
  notes: string[];
}

/** Lays a grid out as `buildGrid` does, in no time for any setup: preflight asks while a person types. */
export function gridLayout(setup: Pick<Setup, 'basin' | 'numerics'>): GridLayout {
  const { basin, numerics } = setup;
  const notes: string[] = [];
  const zonal = snapExtent(basin.westDeg, basin.eastDeg, numerics.spacingLongitudeDeg, 'longitude', notes);
  const meridional =
    basin.geometry === 'equatorial'
      ? snapAboutEquator(basin.southDeg, basin.northDeg, numerics.spacingLatitudeDeg, notes)
      : {
          ...snapExtent(basin.southDeg, basin.northDeg, numerics.spacingLatitudeDeg, 'latitude', notes),
          equatorRow: null,
        };
  return { nx: zonal.cells, ny: meridional.cells, zonal, meridional, notes };
}

/** f = f0 + β (y − y0) of a setup: f0 in 1/s at `referenceDeg`, β in 1/(m s), and cos of the reference latitude. */
export function planeOf(setup: Pick<Setup, 'basin' | 'constants'>): {
  referenceDeg: number;
  f0: number;
  beta: number;
  cosReference: number;
} {
  const { basin, constants } = setup;
  const twoOmega = 2 * constants.rotationRatePerS;
  if (basin.geometry === 'equatorial')
    return { referenceDeg: 0, f0: 0, beta: basin.betaPerMS ?? twoOmega / constants.earthRadiusM, cosReference: 1 };
  const referenceDeg = basin.referenceLatitudeDeg ?? (basin.southDeg + basin.northDeg) / 2;
  const phi0 = referenceDeg * RADIANS_PER_DEGREE;
  const cosReference = cos(phi0);
  const f0 = basin.f0PerS ?? twoOmega * sin(phi0);
  const beta =
    basin.geometry === 'fplane' ? 0 : (basin.betaPerMS ?? (twoOmega * cosReference) / constants.earthRadiusM);
  return { referenceDeg, f0, beta, cosReference };
}

/** One axis: its first edge and spacing, degrees, and the number of cells. */
export interface Snapped {
  start: number;
  spacing: number;
  cells: number;
}

/** Fills an extent with a whole number of cells, changing the spacing a little where it must. */
function snapExtent(
  start: number,
  end: number,
  wanted: number,
  axis: 'longitude' | 'latitude',
  notes: string[],
): Snapped {
  const extent = end - start;
  refuseExtent(extent, wanted, axis);
  const cells = Math.max(1, Math.round(extent / wanted));
  const spacing = extent / cells;
  noteSpacing(wanted, spacing, axis, notes);
  return { start, spacing, cells };
}

/**
 * Puts the equator on a v row. The side with the farther edge keeps its edge and sets the spacing; the other edge moves
 * by less than half a cell. A basin that does not reach across the equator is filled like any other.
 */
function snapAboutEquator(
  south: number,
  north: number,
  wanted: number,
  notes: string[],
): Snapped & { equatorRow: number | null } {
  refuseExtent(north - south, wanted, 'latitude');
  if (south > 0 || north < 0) return { ...snapExtent(south, north, wanted, 'latitude', notes), equatorRow: null };
  const far = Math.max(north, -south);
  const spacing = far / Math.max(1, Math.round(far / wanted));
  noteSpacing(wanted, spacing, 'latitude', notes);
  const rowsSouth = rowsTo(-south, spacing);
  const rowsNorth = rowsTo(north, spacing);
  noteEdge('South', south, -rowsSouth * spacing, spacing, notes);
  noteEdge('North', north, rowsNorth * spacing, spacing, notes);
  return { start: -rowsSouth * spacing, spacing, cells: rowsSouth + rowsNorth, equatorRow: rowsSouth };
}

/** Rows from the equator to an edge; an edge off the equator keeps at least one. */
function rowsTo(distance: number, spacing: number): number {
  return distance > 0 ? Math.max(1, Math.round(distance / spacing)) : 0;
}

function noteSpacing(wanted: number, spacing: number, axis: string, notes: string[]): void {
  if (Math.abs(spacing - wanted) > 1e-9 * wanted)
    notes.push(
      `Spacing in ${axis} changed from ${short(wanted)}° to ${short(spacing)}° so that whole cells fill the basin.`,
    );
}

function noteEdge(edge: string, wanted: number, snapped: number, spacing: number, notes: string[]): void {
  const moved = Math.abs(snapped - wanted);
  if (moved > 1e-9 * spacing)
    notes.push(
      `${edge} edge moved by ${short(moved)}° to ${short(snapped)}° so that the equator lies on a row of v points.`,
    );
}

function short(degrees: number): string {
  return String(Number(degrees.toPrecision(4))).replace('-', '−');
}

function refuseExtent(extent: number, spacing: number, axis: string): void {
  if (!(Number.isFinite(extent) && extent > 0))
    throw new RangeError(`The extent in ${axis} must be a positive number of degrees; ${extent}° arrived.`);
  if (!(Number.isFinite(spacing) && spacing > 0))
    throw new RangeError(`The spacing in ${axis} must be a positive number of degrees; ${spacing}° arrived.`);
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
