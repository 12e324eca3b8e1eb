import { Matrix } from 'ml-matrix';

/** Chebyshev collocation on [from, to]: Trefethen (2000), Spectral Methods in MATLAB, ch. 6. */
export interface Chebyshev {
  /** Number of nodes; the first is `to`, the last `from`. */
  count: number;
  nodes: number[];
  /** d/dx of values at the nodes. */
  D: Matrix;
  /** Barycentric interpolation of values at the nodes (Berrut & Trefethen 2004). */
  interpolate: (values: ArrayLike<number>) => (x: number) => number;
}

/** Collocation with N + 1 nodes. */
export function chebyshev(N: number, from: number, to: number): Chebyshev {
  const half = (to - from) / 2;
  const x = Array.from({ length: N + 1 }, (_, k) => Math.cos((Math.PI * k) / N));
  const weight = (k: number) => (k === 0 || k === N ? 2 : 1) * (k % 2 ? -1 : 1);
  const D = Matrix.zeros(N + 1, N + 1);
  for (let i = 0; i <= N; i++) {
    let sum = 0;
    for (let k = 0; k <= N; k++) {
      if (i === k) continue;
      const entry = weight(i) / weight(k) / (x[i] - x[k]);
      D.set(i, k, entry);
      sum += entry;
    }
    D.set(i, i, -sum);
  }
  D.div(half);
  const nodes = x.map((value) => from + half * (value + 1));
  const interpolate = (values: ArrayLike<number>) => (at: number) => {
    let top = 0;
    let bottom = 0;
    for (let k = 0; k <= N; k++) {
      const distance = at - nodes[k];
      if (distance === 0) return values[k];
      const w = ((k % 2 ? -1 : 1) * (k === 0 || k === N ? 0.5 : 1)) / distance;
      top += w * values[k];
      bottom += w;
    }
    return top / bottom;
  };
  return { count: N + 1, nodes, D, interpolate };
}

/** Makes row `row` of a system say: Σ coefficients · unknowns = value. */
export function setRow(
  operator: Matrix,
  right: Matrix,
  row: number,
  coefficients: (column: number) => number,
  value = 0,
): void {
  for (let column = 0; column < operator.columns; column++) operator.set(row, column, coefficients(column));
  right.set(row, 0, value);
}
