/** Cell centres of a grid, degrees, ascending; `periodic` closes the longitudes after 360°-wise wrapping by `spanDeg`. */
export interface CellCentres {
  lonDeg: ArrayLike<number>;
  latDeg: ArrayLike<number>;
  /** Zonal extent after which a periodic basin repeats; null in a closed basin. */
  periodDeg: number | null;
}

/** Bilinear weights: for every target point four source indices (−1: none) and their weights. */
export interface Regridding {
  sources: Int32Array;
  weights: Float64Array;
  points: number;
}

/** Lower neighbour and fraction of `x` among ascending `values`; null outside (by more than rounding). */
function bracket(values: ArrayLike<number>, x: number): { low: number; fraction: number } | null {
  const last = values.length - 1;
  const slack = 1e-9 * Math.max(1, Math.abs(x));
  if (x < values[0] - slack || x > values[last] + slack) return null;
  if (last === 0) return { low: 0, fraction: 0 };
  let low = 0;
  let high = last;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (values[middle] <= x) low = middle;
    else high = middle;
  }
  const fraction = Math.min(1, Math.max(0, (x - values[low]) / (values[high] - values[low])));
  return { low, fraction };
}

/**
 * Bilinear interpolation from the cell centres of `from` to those of `to`. Points of `to` outside `from` have no
 * source. On a periodic source the last and first column are neighbours.
 */
export function bilinear(from: CellCentres, to: CellCentres): Regridding {
  const nx = from.lonDeg.length;
  const points = to.lonDeg.length * to.latDeg.length;
  const sources = new Int32Array(4 * points).fill(-1);
  const weights = new Float64Array(4 * points);
  const columns = Array.from(to.lonDeg, (lon) => zonal(from, lon));
  const rows = Array.from(to.latDeg, (lat) => bracket(from.latDeg, lat));
  let k = 0;
  for (const row of rows)
    for (const column of columns) {
      if (row && column) {
        const high = Math.min(row.low + 1, from.latDeg.length - 1);
        sources.set([row.low * nx + column.low, row.low * nx + column.high], 4 * k);
        sources.set([high * nx + column.low, high * nx + column.high], 4 * k + 2);
        const [x, y] = [column.fraction, row.fraction];
        weights.set([(1 - y) * (1 - x), (1 - y) * x, y * (1 - x), y * x], 4 * k);
      }
      k++;
    }
  return { sources, weights, points };
}

function zonal(from: CellCentres, lon: number): { low: number; high: number; fraction: number } | null {
  const last = from.lonDeg.length - 1;
  const inside = bracket(from.lonDeg, lon);
  if (inside) return { ...inside, high: Math.min(inside.low + 1, last) };
  if (from.periodDeg === null) return null;
  const [first, end] = [from.lonDeg[0], from.lonDeg[last]];
  const turned = first + ((((lon - first) % from.periodDeg) + from.periodDeg) % from.periodDeg);
  const again = bracket(from.lonDeg, turned);
  if (again) return { ...again, high: Math.min(again.low + 1, last) };
  return { low: last, high: 0, fraction: (turned - end) / (from.periodDeg - (end - first)) };
}

/** Applies a regridding; a point is NaN when a source with weight is land or there is none. Writes into `out`. */
export function applyRegridding(regridding: Regridding, field: ArrayLike<number>, out: Float64Array): Float64Array {
  const { sources, weights, points } = regridding;
  for (let k = 0; k < points; k++) {
    let value = sources[4 * k] < 0 ? NaN : 0;
    // A source without weight must not make the point land: 0 · NaN is NaN.
    for (let c = 4 * k; c < 4 * k + 4; c++) if (weights[c] !== 0) value += weights[c] * field[sources[c]];
    out[k] = value;
  }
  return out;
}
