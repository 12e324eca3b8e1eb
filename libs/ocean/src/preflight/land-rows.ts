import { coastLongitude } from '../grid/land';
import type { GridLayout } from '../grid/build-grid';
import type { Basin, Island } from '../setup';

/** Columns [from, to) of a row. */
type Span = [number, number];

/**
 * Land and water of a snapped grid, row by row as spans: the same cells as `landMask`, without an array of them.
 * A row costs one pass over the islands that it meets; rows are kept once asked for.
 */
export class LandRows {
  readonly #basin: Basin;
  readonly #layout: GridLayout;
  readonly #rows = new Map<number, Span[]>();
  readonly #boxes: { island: Island; west: number; east: number; south: number; north: number }[];

  constructor(basin: Basin, layout: GridLayout) {
    this.#basin = basin;
    this.#layout = layout;
    this.#boxes = basin.islands.map((island) => ({ island, ...boundsOf(island) }));
  }

  get hasLand(): boolean {
    return this.#boxes.length > 0 || this.#basin.westernCoast.kind === 'slanting';
  }

  /** Number of water cells. */
  wetCells(): number {
    const { nx, ny } = this.#layout;
    if (!this.hasLand) return nx * ny;
    let wet = 0;
    for (let j = 0; j < ny; j++) wet += nx - this.#landOf(j).reduce((sum, [from, to]) => sum + to - from, 0);
    return wet;
  }

  isWet(i: number, j: number): boolean {
    const { nx, ny } = this.#layout;
    if (j < 0 || j >= ny) return false;
    const k = this.#basin.zonallyPeriodic ? ((i % nx) + nx) % nx : i;
    if (k < 0 || k >= nx) return false;
    return !this.#landOf(j).some(([from, to]) => k >= from && k < to);
  }

  /** True when any v point of the row between cell rows j − 1 and j lies between two water cells. */
  rowHasWater(j: number): boolean {
    const { nx, ny } = this.#layout;
    if (j <= 0 || j >= ny) return false;
    if (!this.hasLand) return true;
    const covered = merged([...this.#landOf(j - 1), ...this.#landOf(j)]);
    return covered.reduce((sum, [from, to]) => sum + to - from, 0) < nx;
  }

  /** True when any u point of the column between cell columns i − 1 and i lies between two water cells. */
  columnHasWater(i: number): boolean {
    for (let j = 0; j < this.#layout.ny; j++) if (this.isWet(i - 1, j) && this.isWet(i, j)) return true;
    return false;
  }

  /** The cell that holds a place, as moorings snap; null outside. */
  cellAt(longitudeDeg: number, latitudeDeg: number): { i: number; j: number } | null {
    const { zonal, meridional } = this.#layout;
    const i = cellOf(zonal, longitudeDeg);
    const j = cellOf(meridional, latitudeDeg);
    return i < 0 || j < 0 ? null : { i, j };
  }

  /** The water cell nearest to a cell, distances in metres of dx and dy; null when all is land. */
  nearestWater(i: number, j: number, dx: number, dy: number): { i: number; j: number } | null {
    const { nx, ny } = this.#layout;
    let best: { i: number; j: number } | null = null;
    let shortest = Infinity;
    for (let away = 0; away < ny && away * dy < shortest; away++)
      for (const row of away === 0 ? [j] : [j - away, j + away]) {
        if (row < 0 || row >= ny) continue;
        for (const [from, to] of complement(this.#landOf(row), nx)) {
          const column = Math.min(Math.max(i, from), to - 1);
          const distance = Math.hypot((column - i) * dx, away * dy);
          if (distance < shortest) [best, shortest] = [{ i: column, j: row }, distance];
        }
      }
    return best;
  }

  longitudeOf(i: number): number {
    return this.#layout.zonal.start + (i + 0.5) * this.#layout.zonal.spacing;
  }

  latitudeOf(j: number): number {
    const { start, spacing, equatorRow } = this.#layout.meridional;
    return equatorRow === null ? start + (j + 0.5) * spacing : (j + 0.5 - equatorRow) * spacing;
  }

  #landOf(j: number): Span[] {
    const known = this.#rows.get(j);
    if (known) return known;
    const { nx } = this.#layout;
    const latitude = this.latitudeOf(j);
    const spans: Span[] = [];
    if (this.#basin.westernCoast.kind === 'slanting')
      spans.push([0, this.#firstNotWestOf(coastLongitude(this.#basin, latitude))]);
    for (const { island, west, east, south, north } of this.#boxes) {
      if (latitude < south || latitude > north) continue;
      const [first, last] = [this.#firstNotWestOf(west), this.#firstEastOf(east)];
      if (island.kind === 'box') spans.push([first, last]);
      else
        for (const [from, to] of inside(island.points, latitude))
          spans.push([Math.max(first, this.#firstNotWestOf(from)), Math.min(last, this.#firstNotWestOf(to))]);
    }
    const row = merged(spans.map(([from, to]): Span => [Math.max(0, from), Math.min(nx, to)]));
    this.#rows.set(j, row);
    return row;
  }

  /** First column whose centre is not west of a longitude; compared with the very centres of the grid. */
  #firstNotWestOf(longitude: number): number {
    let i = this.#guess(longitude);
    while (i > 0 && this.longitudeOf(i - 1) >= longitude) i--;
    while (i < this.#layout.nx && this.longitudeOf(i) < longitude) i++;
    return i;
  }

  #firstEastOf(longitude: number): number {
    let i = this.#firstNotWestOf(longitude);
    while (i < this.#layout.nx && this.longitudeOf(i) <= longitude) i++;
    return i;
  }

  #guess(longitude: number): number {
    const { start, spacing } = this.#layout.zonal;
    return Math.min(Math.max(Math.round((longitude - start) / spacing), 0), this.#layout.nx);
  }
}

/** Stretches of longitude inside a ring along a latitude: between its crossings, two by two (even-odd rule). */
function inside(ring: readonly [number, number][], latitude: number): [number, number][] {
  const crossings: number[] = [];
  for (let k = 0, previous = ring.length - 1; k < ring.length; previous = k++) {
    const [x1, y1] = ring[previous];
    const [x2, y2] = ring[k];
    if (y1 > latitude !== y2 > latitude) crossings.push(x1 + ((latitude - y1) / (y2 - y1)) * (x2 - x1));
  }
  crossings.sort((a, b) => a - b);
  return Array.from({ length: crossings.length / 2 }, (_, k) => [crossings[2 * k], crossings[2 * k + 1]]);
}

function boundsOf(island: Island): { west: number; east: number; south: number; north: number } {
  if (island.kind === 'box')
    return { west: island.westDeg, east: island.eastDeg, south: island.southDeg, north: island.northDeg };
  const longitudes = island.points.map(([longitude]) => longitude);
  const latitudes = island.points.map(([, latitude]) => latitude);
  return {
    west: Math.min(...longitudes),
    east: Math.max(...longitudes),
    south: Math.min(...latitudes),
    north: Math.max(...latitudes),
  };
}

/** Sorted, without overlaps, without empty spans. */
function merged(spans: Span[]): Span[] {
  const out: Span[] = [];
  for (const [from, to] of spans.filter(([a, b]) => b > a).sort((a, b) => a[0] - b[0])) {
    const last = out[out.length - 1];
    if (last && from <= last[1]) last[1] = Math.max(last[1], to);
    else out.push([from, to]);
  }
  return out;
}

/** What sorted spans leave of [0, n). */
function complement(spans: Span[], n: number): Span[] {
  const out: Span[] = [];
  let from = 0;
  for (const [land, end] of spans) {
    if (land > from) out.push([from, land]);
    from = end;
  }
  if (from < n) out.push([from, n]);
  return out;
}

/** Cell that holds a coordinate; half a cell beyond either edge belongs to the edge cell, as for moorings. */
function cellOf(axis: { start: number; spacing: number; cells: number }, degrees: number): number {
  const { start, spacing, cells } = axis;
  const index = Math.floor((degrees - start) / spacing);
  if (index === -1 && degrees > start - spacing / 2) return 0;
  if (index === cells && degrees <= start + (cells + 0.5) * spacing) return cells - 1;
  return index >= 0 && index < cells ? index : -1;
}
