import { type PlotBox, toPxX, toPxY } from './plot-box';

/** The parts of a grid that say where land is: mask [ny][nx], 1 water; cell edges in degrees, nx + 1 and ny + 1. */
export interface LandGrid {
  nx: number;
  ny: number;
  mask: Uint8Array;
  lonFace: ArrayLike<number>;
  latFace: ArrayLike<number>;
}

/** Land as SVG paths for the view of a plot. Land is whole cells, as the equations see it: no coast is smoothed. */
export class LandOutline {
  constructor(private readonly grid: LandGrid) {}

  private isLand(j: number, i: number): boolean {
    const { nx, ny, mask } = this.grid;
    return i >= 0 && j >= 0 && i < nx && j < ny && mask[j * nx + i] === 0;
  }

  /** Filled area: one rectangle for each run of land cells in a row. */
  area(box: PlotBox): string {
    const { nx, ny, lonFace, latFace } = this.grid;
    let d = '';
    for (let j = 0; j < ny; j++) {
      const top = toPxY(box, latFace[j + 1] ?? 0).toFixed(1);
      const bottom = toPxY(box, latFace[j] ?? 0).toFixed(1);
      for (let i = 0; i < nx; i++) {
        if (!this.isLand(j, i)) continue;
        const from = i;
        while (i + 1 < nx && this.isLand(j, i + 1)) i++;
        const x0 = toPxX(box, lonFace[from] ?? 0).toFixed(1);
        const x1 = toPxX(box, lonFace[i + 1] ?? 0).toFixed(1);
        d += `M${x0} ${top}H${x1}V${bottom}H${x0}z`;
      }
    }
    return d;
  }

  /** Edges between a land cell and a water cell inside the basin. */
  coast(box: PlotBox): string {
    const { nx, ny, lonFace, latFace } = this.grid;
    let d = '';
    for (let j = 0; j < ny; j++)
      for (let i = 0; i < nx; i++) {
        const here = this.isLand(j, i);
        if (i + 1 < nx && here !== this.isLand(j, i + 1)) {
          const x = toPxX(box, lonFace[i + 1] ?? 0).toFixed(1);
          d += `M${x} ${toPxY(box, latFace[j] ?? 0).toFixed(1)}V${toPxY(box, latFace[j + 1] ?? 0).toFixed(1)}`;
        }
        if (j + 1 < ny && here !== this.isLand(j + 1, i)) {
          const y = toPxY(box, latFace[j + 1] ?? 0).toFixed(1);
          d += `M${toPxX(box, lonFace[i] ?? 0).toFixed(1)} ${y}H${toPxX(box, lonFace[i + 1] ?? 0).toFixed(1)}`;
        }
      }
    return d;
  }
}

/** Stretches of an axis whose values are NaN in every row: land throughout a space-time plot. Edges lie half-way. */
export function landStretches(
  positions: ArrayLike<number>,
  rows: readonly ArrayLike<number>[],
): { from: number; to: number }[] {
  const n = positions.length;
  if (rows.length === 0 || n < 2) return [];
  const dry = (k: number) => rows.every((row) => Number.isNaN(row[k] ?? NaN));
  const edge = (k: number) => {
    const before = positions[Math.max(0, k - 1)] ?? 0;
    const after = positions[Math.min(n - 1, k)] ?? 0;
    const half = ((positions[1] ?? 0) - (positions[0] ?? 0)) / 2;
    if (k === 0) return after - half;
    return k === n ? before + half : (before + after) / 2;
  };
  const found: { from: number; to: number }[] = [];
  for (let k = 0; k < n; k++) {
    if (!dry(k)) continue;
    const first = k;
    while (k + 1 < n && dry(k + 1)) k++;
    found.push({ from: edge(first), to: edge(k + 1) });
  }
  return found;
}
