/** Values on points (x[i], y[j]): rows[j][i]. */
export interface FieldGrid {
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  rows: readonly ArrayLike<number>[];
}

/**
 * Marching squares: calls `emit` with each piece of the isoline at `level`, in the coordinates of the grid. Squares that
 * touch land (NaN) are left out. At a saddle the pieces are joined so that the mean of the corners decides.
 */
export function traceIsoline(
  grid: FieldGrid,
  level: number,
  emit: (x0: number, y0: number, x1: number, y1: number) => void,
): void {
  const { x, y, rows } = grid;
  const nx = x.length;
  for (let j = 0; j + 1 < rows.length; j++) {
    const south = rows[j];
    const north = rows[j + 1];
    if (!south || !north) continue;
    const y0 = y[j] ?? 0;
    const y1 = y[j + 1] ?? 0;
    for (let i = 0; i + 1 < nx; i++) {
      const a = (south[i] ?? NaN) - level;
      const b = (south[i + 1] ?? NaN) - level;
      const c = (north[i + 1] ?? NaN) - level;
      const d = (north[i] ?? NaN) - level;
      const code = (a > 0 ? 1 : 0) | (b > 0 ? 2 : 0) | (c > 0 ? 4 : 0) | (d > 0 ? 8 : 0);
      if (code === 0 || code === 15 || Number.isNaN(a + b + c + d)) continue;
      const x0 = x[i] ?? 0;
      const x1 = x[i + 1] ?? 0;
      // Crossings of the four sides: south, east, north, west.
      const sx = x0 + ((x1 - x0) * a) / (a - b);
      const ey = y0 + ((y1 - y0) * b) / (b - c);
      const nxx = x0 + ((x1 - x0) * d) / (d - c);
      const wy = y0 + ((y1 - y0) * a) / (a - d);
      switch (code) {
        case 1:
        case 14:
          emit(x0, wy, sx, y0);
          break;
        case 2:
        case 13:
          emit(sx, y0, x1, ey);
          break;
        case 3:
        case 12:
          emit(x0, wy, x1, ey);
          break;
        case 4:
        case 11:
          emit(x1, ey, nxx, y1);
          break;
        case 6:
        case 9:
          emit(sx, y0, nxx, y1);
          break;
        case 7:
        case 8:
          emit(x0, wy, nxx, y1);
          break;
        default: {
          // Saddles 5 (a, c above) and 10 (b, d above).
          const joined = a + b + c + d > 0 === (code === 5);
          if (joined) {
            emit(sx, y0, x1, ey);
            emit(x0, wy, nxx, y1);
          } else {
            emit(x0, wy, sx, y0);
            emit(x1, ey, nxx, y1);
          }
        }
      }
    }
  }
}
