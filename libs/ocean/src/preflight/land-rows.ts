import { LIMITS } from '../limits';
import { coastLayout, decidingCells } from '../grid/coast-grid';
import type { GridLayout } from '../grid/grid-layout';
import { coastLongitude } from '../grid/land';
import type { Basin, Island, Setup } from '../setup';

/** Rows of an oversize grid that are looked at. */
const SAMPLED_ROWS = 500;
const SEARCHED_ROWS = 1000;

/** Columns [from, to) of a row. */
type Span = [number, number];

/** Edges in degrees; a polygon has the longitudes at which its ring crosses each row of cell centres, a box has none. */
interface PlacedIsland {
  west: number;
  east: number;
  south: number;
  north: number;
  crossings: Map<number, number[]> | null;
}

/**
 * Land and water of a snapped grid, row by row as spans: the same cells as `buildGrid` makes, without an array of them.
 * A row costs one pass over the islands that it meets; where the coast has a finer grid of its own, one over its rows.
 */
export class LandRows {
  readonly #basin: Basin;
  readonly #layout: GridLayout;
  readonly #islands: PlacedIsland[];
  readonly #columns: Axis;
  readonly #rows: Axis;
  /** Land of the rows looked at so far: many moorings on land look at the same rows for the nearest water. */
  readonly #land = new Map<number, readonly Span[]>();
  #wet: number | null = null;
  /** Where the coast has a grid of its own: its land, and which of its columns and rows decide about each cell here. */
  readonly #coast: { land: LandRows; columns: DecidingCells; rows: DecidingCells } | null;

  /** Of a setup, with the grid of its coast. */
  static of(setup: Pick<Setup, 'basin' | 'numerics'>, layout: GridLayout): LandRows {
    const coast = coastLayout(setup);
    // Grids beyond the hard limit are refused by rows of their own; until then the run's grid stands for the coast's.
    const built = (grid: GridLayout) => grid.nx * grid.ny <= LIMITS.cells.max;
    return new LandRows(setup.basin, layout, coast && built(coast) && built(layout) ? coast : null);
  }

  /** `coast`: the grid on which coast and islands become land, where that is another. */
  constructor(basin: Basin, layout: GridLayout, coast: GridLayout | null = null) {
    this.#basin = basin;
    this.#layout = layout;
    const { zonal, meridional } = layout;
    // Lines as the grid has them, so that a place between two cells falls to the same one.
    const row = (j: number) =>
      meridional.equatorRow === null
        ? meridional.start + j * meridional.spacing
        : (j - meridional.equatorRow) * meridional.spacing;
    this.#columns = axisOf((i) => zonal.start + i * zonal.spacing, layout.nx);
    this.#rows = axisOf(row, layout.ny);
    this.#islands = basin.islands.map((island) => ({
      ...boundsOf(island),
      crossings: island.kind === 'polygon' && coast === null ? this.#crossingsOf(island.points) : null,
    }));
    this.#coast =
      coast && this.hasLand
        ? {
            land: new LandRows(basin, coast),
            columns: decidingCells(zonal, coast.zonal),
            rows: decidingCells(meridional, coast.meridional),
          }
        : null;
  }

  get hasLand(): boolean {
    return this.#islands.length > 0 || this.#basin.westernCoast.kind === 'slanting';
  }

  /** Number of water cells; of a grid beyond the hard limit an estimate from every so many rows, since it is refused. */
  wetCells(): number {
    const { nx, ny } = this.#layout;
    if (!this.hasLand) return nx * ny;
    if (this.#wet === null) {
      const every = nx * ny > LIMITS.cells.max ? Math.ceil(ny / SAMPLED_ROWS) : 1;
      let [wet, rows] = [0, 0];
      for (let j = 0; j < ny; j += every, rows++)
        wet += nx - this.#landOf(j).reduce((sum, [from, to]) => sum + to - from, 0);
      this.#wet = every === 1 ? wet : Math.round((wet * ny) / rows);
    }
    return this.#wet;
  }

  /** True when any cell is water; looks only as far as the first row that has some. */
  hasWater(): boolean {
    const { nx, ny } = this.#layout;
    if (!this.hasLand || (this.#wet ?? 0) > 0) return true;
    for (let j = 0; j < ny; j++) if (this.#landOf(j).reduce((sum, [from, to]) => sum + to - from, 0) < nx) return true;
    return false;
  }

  isWet(i: number, j: number): boolean {
    const { nx, ny } = this.#layout;
    if (j < 0 || j >= ny) return false;
    const k = this.#basin.zonallyPeriodic ? ((i % nx) + nx) % nx : i;
    return k >= 0 && k < nx && !this.#isLand(k, j);
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
    const i = cellOf(this.#columns, longitudeDeg);
    const j = cellOf(this.#rows, latitudeDeg);
    return i < 0 || j < 0 ? null : { i, j };
  }

  /** The row of v points, or the column of u points, to which a section snaps. */
  lineOf(along: 'latitude' | 'longitude', atDeg: number): number {
    const { first, spacing, cells } = along === 'latitude' ? this.#rows : this.#columns;
    return Math.min(Math.max(Math.round((atDeg - first) / spacing), 0), cells);
  }

  /** The water cell nearest to a cell, dx and dy in any one unit; null when there is none in a thousand rows. */
  nearestWater(i: number, j: number, dx: number, dy: number): { i: number; j: number } | null {
    const { nx, ny } = this.#layout;
    let best: { i: number; j: number } | null = null;
    let shortest = Infinity;
    for (let away = 0; away < Math.min(ny, SEARCHED_ROWS) && away * dy < shortest; away++)
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

  /** Land or not of one cell, for walks along a column. */
  #isLand(i: number, j: number): boolean {
    if (!this.hasLand) return false;
    if (this.#coast) return this.#landOf(j).some(([from, to]) => i >= from && i < to);
    const longitude = this.longitudeOf(i);
    const latitude = this.latitudeOf(j);
    if (this.#basin.westernCoast.kind === 'slanting' && longitude < coastLongitude(this.#basin, latitude)) return true;
    return this.#islands.some(({ west, east, south, north, crossings }) => {
      if (latitude < south || latitude > north || longitude < west || longitude > east) return false;
      return crossings === null || (crossings.get(j) ?? []).filter((crossing) => longitude < crossing).length % 2 === 1;
    });
  }

  #landOf(j: number): readonly Span[] {
    const known = this.#land.get(j) ?? this.#findLand(j);
    this.#land.set(j, known);
    return known;
  }

  #findLand(j: number): Span[] {
    if (this.#coast) return this.#landFromCoast(this.#coast, j);
    const { nx } = this.#layout;
    const latitude = this.latitudeOf(j);
    const spans: Span[] = [];
    if (this.#basin.westernCoast.kind === 'slanting')
      spans.push([0, this.#firstNotWestOf(coastLongitude(this.#basin, latitude))]);
    for (const { west, east, south, north, crossings } of this.#islands) {
      if (latitude < south || latitude > north) continue;
      const [first, last] = [this.#firstNotWestOf(west), this.#firstEastOf(east)];
      if (crossings === null) spans.push([first, last]);
      else
        for (const [from, to] of twoByTwo(crossings.get(j) ?? []))
          spans.push([Math.max(first, this.#firstNotWestOf(from)), Math.min(last, this.#firstNotWestOf(to))]);
    }
    return merged(spans.map(([from, to]): Span => [Math.max(0, from), Math.min(nx, to)]));
  }

  /** A cell is land when at least half of the cells of the coast's grid that decide about it are. */
  #landFromCoast(coast: { land: LandRows; columns: DecidingCells; rows: DecidingCells }, j: number): Span[] {
    const { nx } = this.#layout;
    const { first, end } = coast.columns;
    // Land cells of the coast in each column here: full columns by a difference, the ends of a span by themselves.
    const counts = new Int32Array(nx);
    const rises = new Int32Array(nx + 1);
    for (let row = coast.rows.first[j]; row < coast.rows.end[j]; row++)
      for (const [from, to] of coast.land.#landOf(row)) {
        let i = firstEndingBeyond(end, from);
        for (; i < nx && first[i] < from && first[i] < to; i++) counts[i] += Math.min(end[i], to) - from;
        const full = i;
        let last = Math.max(full, firstEndingBeyond(end, to));
        rises[full] += 1;
        rises[last] -= 1;
        for (; last < nx && first[last] < to; last++) counts[last] += to - Math.max(first[last], from);
      }
    const rows = coast.rows.end[j] - coast.rows.first[j];
    const spans: Span[] = [];
    for (let i = 0, through = 0; i < nx; i++) {
      through += rises[i];
      const width = end[i] - first[i];
      if (2 * (counts[i] + through * width) < rows * width) continue;
      const open = spans[spans.length - 1];
      if (open && open[1] === i) open[1] = i + 1;
      else spans.push([i, i + 1]);
    }
    return spans;
  }

  /** Where the edges of a ring cross the rows of cell centres; each edge looks only at the rows that it spans. */
  #crossingsOf(ring: readonly [number, number][]): Map<number, number[]> {
    const { start, spacing, cells } = this.#layout.meridional;
    const rowNear = (latitude: number) => Math.round((latitude - start) / spacing - 0.5);
    const rows = new Map<number, number[]>();
    for (let k = 0, previous = ring.length - 1; k < ring.length; previous = k++) {
      const [x1, y1] = ring[previous];
      const [x2, y2] = ring[k];
      const last = Math.min(cells - 1, rowNear(Math.max(y1, y2)) + 1);
      for (let j = Math.max(0, rowNear(Math.min(y1, y2)) - 1); j <= last; j++) {
        const latitude = this.latitudeOf(j);
        if (y1 > latitude === y2 > latitude) continue;
        const row = rows.get(j) ?? [];
        row.push(x1 + ((latitude - y1) / (y2 - y1)) * (x2 - x1));
        rows.set(j, row);
      }
    }
    return rows;
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

type DecidingCells = ReturnType<typeof decidingCells>;

/** First column whose deciding cells end beyond `cell`, by bisection. */
function firstEndingBeyond(end: Int32Array, cell: number): number {
  let [low, high] = [0, end.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (end[middle] > cell) high = middle;
    else low = middle + 1;
  }
  return low;
}

/** Stretches of longitude inside a ring along a row: between its crossings, two by two (even-odd rule). */
function twoByTwo(crossings: readonly number[]): [number, number][] {
  const sorted = [...crossings].sort((a, b) => a - b);
  return Array.from({ length: sorted.length / 2 }, (_, k) => [sorted[2 * k], sorted[2 * k + 1]]);
}

function boundsOf(island: Island): Omit<PlacedIsland, 'crossings'> {
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
  if (spans.length === 1) return spans[0][1] > spans[0][0] ? spans : [];
  const out: Span[] = [];
  for (const [from, to] of spans.filter(([a, b]) => b > a).sort((a, b) => a[0] - b[0])) {
    const last = out[out.length - 1];
    if (last && from <= last[1]) last[1] = Math.max(last[1], to);
    else out.push([from, to]);
  }
  return out;
}

/** What sorted spans leave of [0, n). */
function complement(spans: readonly Span[], n: number): Span[] {
  const out: Span[] = [];
  let from = 0;
  for (const [land, end] of spans) {
    if (land > from) out.push([from, land]);
    from = end;
  }
  if (from < n) out.push([from, n]);
  return out;
}

/** First and last line of points of an axis, their spacing, and the number of cells between them. */
interface Axis {
  first: number;
  last: number;
  spacing: number;
  cells: number;
}

function axisOf(line: (index: number) => number, cells: number): Axis {
  return { first: line(0), last: line(cells), spacing: line(1) - line(0), cells };
}

/** Cell that holds a coordinate; half a cell beyond either edge belongs to the edge cell, as for moorings. */
function cellOf({ first, last, spacing, cells }: Axis, degrees: number): number {
  const index = Math.floor((degrees - first) / spacing);
  if (index === -1 && degrees > first - spacing / 2) return 0;
  if (index === cells && degrees <= last + spacing / 2) return cells - 1;
  return index >= 0 && index < cells ? index : -1;
}
