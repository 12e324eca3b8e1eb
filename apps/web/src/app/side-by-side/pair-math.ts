/** What two runs have in common and how far apart they are: arithmetic on plain arrays, no screen. */

/** Records of both runs on one model day. */
export interface CommonRecord {
  a: number;
  b: number;
  day: number;
}

/** Frames of a run: how many, the day of the first, days between two. */
export interface FrameTimes {
  count: number;
  firstDay: number;
  intervalDays: number;
}

/** Records of the same model day, ascending. Days are multiples of a quarter, so they are compared as such. */
export function commonRecords(a: FrameTimes, b: FrameTimes): CommonRecord[] {
  const quarter = (times: FrameTimes, k: number) => Math.round(4 * (times.firstDay + k * times.intervalDays));
  const found: CommonRecord[] = [];
  for (let i = 0, k = 0; i < a.count && k < b.count;) {
    const [dayA, dayB] = [quarter(a, i), quarter(b, k)];
    if (dayA === dayB) found.push({ a: i, b: k, day: dayA / 4 });
    if (dayA <= dayB) i++;
    if (dayB <= dayA) k++;
  }
  return found;
}

/** For each target the lower of two neighbours in `source` and the share of the upper one; −1 outside. */
export interface Brackets {
  low: Int32Array;
  share: Float64Array;
}

/** Both lists ascend. A target beyond the ends by more than rounding has no neighbours: nothing is extrapolated. */
export function brackets(source: ArrayLike<number>, target: ArrayLike<number>): Brackets {
  const low = new Int32Array(target.length).fill(-1);
  const share = new Float64Array(target.length);
  const last = source.length - 1;
  if (last < 0) return { low, share };
  let k = 0;
  for (let t = 0; t < target.length; t++) {
    const x = target[t] ?? NaN;
    const slack = 1e-9 * Math.max(1, Math.abs(x));
    if (!(x >= (source[0] ?? NaN) - slack && x <= (source[last] ?? NaN) + slack)) continue;
    while (k < last - 1 && (source[k + 1] ?? NaN) <= x) k++;
    const [x0, x1] = [source[k] ?? 0, source[k + 1] ?? source[k] ?? 0];
    low[t] = k;
    share[t] = x1 > x0 ? Math.min(1, Math.max(0, (x - x0) / (x1 - x0))) : 0;
  }
  return { low, share };
}

/**
 * Bilinear interpolation of rows[j][i] at (x, y) to the points (toX, toY). NaN where a neighbour that counts is land or
 * where the target lies outside. A neighbour without weight does not count: 0 · NaN would be NaN.
 */
export function regridded(
  rows: readonly ArrayLike<number>[],
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  toX: ArrayLike<number>,
  toY: ArrayLike<number>,
): Float32Array[] {
  const columns = brackets(x, toX);
  const lines = brackets(y, toY);
  return Array.from({ length: toY.length }, (_, j) => {
    const line = lines.low[j] ?? -1;
    const north = lines.share[j] ?? 0;
    const [low, high] = [rows[line], north > 0 ? rows[line + 1] : undefined];
    return Float32Array.from({ length: toX.length }, (_, i) => {
      const column = columns.low[i] ?? -1;
      if (column < 0 || !low) return NaN;
      const east = columns.share[i] ?? 0;
      const along = (row: ArrayLike<number>) =>
        east > 0 ? (row[column] ?? NaN) * (1 - east) + (row[column + 1] ?? NaN) * east : (row[column] ?? NaN);
      return high ? along(low) * (1 - north) + along(high) * north : along(low);
    });
  });
}

/** True when both lists name the same points. */
export function samePoints(a: ArrayLike<number>, b: ArrayLike<number>): boolean {
  if (a.length !== b.length) return false;
  for (let k = 0; k < a.length; k++)
    if (Math.abs((a[k] ?? 0) - (b[k] ?? 0)) > 1e-9 * Math.max(1, Math.abs(a[k] ?? 0))) return false;
  return true;
}

/** b − a, point by point; NaN where either is. */
export function difference(a: readonly ArrayLike<number>[], b: readonly ArrayLike<number>[]): Float32Array[] {
  return a.map((row, j) => Float32Array.from({ length: row.length }, (_, i) => (b[j]?.[i] ?? NaN) - (row[i] ?? NaN)));
}

export interface MapMeasures {
  rmsDifference: number;
  correlation: number;
  rmsA: number;
  rmsB: number;
  points: number;
}

/**
 * RMS difference, pattern correlation (means removed) and RMS of two maps on the same points, each row weighted by
 * `rowWeight`; points where either is NaN are left out. NaNs when no point is left; correlation NaN when one is flat.
 */
export function mapMeasures(
  a: readonly ArrayLike<number>[],
  b: readonly ArrayLike<number>[],
  rowWeight: (row: number) => number,
): MapMeasures {
  let [weight, sumA, sumB, squareA, squareB, squareDifference, points] = [0, 0, 0, 0, 0, 0, 0];
  const each = (visit: (w: number, p: number, q: number) => void) =>
    a.forEach((row, j) => {
      const w = rowWeight(j);
      for (let i = 0; i < row.length; i++) {
        const [p, q] = [row[i] ?? NaN, b[j]?.[i] ?? NaN];
        if (!Number.isNaN(p) && !Number.isNaN(q)) visit(w, p, q);
      }
    });
  each((w, p, q) => {
    weight += w;
    points += 1;
    sumA += w * p;
    sumB += w * q;
    squareA += w * p * p;
    squareB += w * q * q;
    squareDifference += w * (p - q) ** 2;
  });
  if (weight === 0) return { rmsDifference: NaN, correlation: NaN, rmsA: NaN, rmsB: NaN, points };
  const [meanA, meanB] = [sumA / weight, sumB / weight];
  let [spreadA, spreadB, product] = [0, 0, 0];
  each((w, p, q) => {
    spreadA += w * (p - meanA) ** 2;
    spreadB += w * (q - meanB) ** 2;
    product += w * (p - meanA) * (q - meanB);
  });
  return {
    rmsDifference: Math.sqrt(squareDifference / weight),
    correlation: spreadA > 0 && spreadB > 0 ? product / Math.sqrt(spreadA * spreadB) : NaN,
    rmsA: Math.sqrt(squareA / weight),
    rmsB: Math.sqrt(squareB / weight),
    points,
  };
}
