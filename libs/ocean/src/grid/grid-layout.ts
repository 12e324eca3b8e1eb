import type { Setup } from '../setup';

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
    basin.geometry === 'equatorial' || basin.geometry === 'spherical'
      ? snapAboutEquator(basin.southDeg, basin.northDeg, numerics.spacingLatitudeDeg, notes)
      : {
          ...snapExtent(basin.southDeg, basin.northDeg, numerics.spacingLatitudeDeg, 'latitude', notes),
          equatorRow: null,
        };
  return { nx: zonal.cells, ny: meridional.cells, zonal, meridional, notes };
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

function refuseExtent(extent: number, spacing: number, axis: string): void {
  if (!(Number.isFinite(extent) && extent > 0))
    throw new RangeError(`The extent in ${axis} must be a positive number of degrees; ${extent}° arrived.`);
  if (!(Number.isFinite(spacing) && spacing > 0))
    throw new RangeError(`The spacing in ${axis} must be a positive number of degrees; ${spacing}° arrived.`);
}

/** Degrees, or km, in four digits, for a sentence. */
export function short(degrees: number): string {
  return String(Number(degrees.toPrecision(4))).replace('-', '−');
}
