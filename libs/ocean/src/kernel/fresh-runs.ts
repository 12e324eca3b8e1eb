import type { Grid } from '../grid/grid';
import { WEST } from '../stepper/layout';
import type { Spans } from '../stepper/spans';

/**
 * Cells that row j sweeps (and the one behind each run, where a pair of columns may end) and row j − 1 does not: vt on the
 * southern side of row j was not made there; it is 0, and whatever an earlier row has left in its place must go. The halo
 * behind the last cell is not among them: it holds the periodic copy.
 */
export function freshRuns(sweep: Spans, { nx, ny }: Pick<Grid, 'nx' | 'ny'>): Spans {
  const rowStart = new Int32Array(ny + 1);
  const bounds: number[] = [];
  let before = new Uint8Array(nx);
  for (let j = 0; j < ny; j++) {
    const swept = new Uint8Array(nx);
    const reached = new Uint8Array(nx);
    for (let s = sweep.rowStart[j]; s < sweep.rowStart[j + 1]; s++) {
      const [first, end] = [sweep.bounds[2 * s] - WEST, sweep.bounds[2 * s + 1] - WEST];
      swept.fill(1, first, end);
      reached.fill(1, first, end + 1);
    }
    let open = false;
    for (let i = 0; i <= nx; i++) {
      const fresh = i < nx && reached[i] === 1 && before[i] === 0;
      if (fresh !== open) bounds.push(WEST + i);
      open = fresh;
    }
    rowStart[j + 1] = bounds.length / 2;
    before = swept;
  }
  return { rowStart, bounds: Int32Array.from(bounds) };
}
