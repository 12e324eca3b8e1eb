import { levelOffset, ringRow, WEST, type Role } from './layout';
import type { Model } from './model';
import type { Spans } from './spans';

/** Column 0 of a plane of row j of a level. */
export function levelRow(model: Model, role: Role, plane: number, j: number): number {
  const { layout, phase } = model;
  return levelOffset(layout, phase, role) + (j + 1) * layout.record + plane * layout.pitch;
}

/** Sets a row of the ring to 0: beyond the walls nothing moves. */
export function clearRing(model: Model, plane: number, j: number): void {
  const row = ringRow(model.layout, plane, j);
  model.data.fill(0, row, row + model.layout.pitch);
}

/** Puts 0 where the next row's sweep will read a v at n + ½ that this row's sweep does not make. */
export function bareRow({ data, layout, spans }: Model, vtPlane: number, j: number): void {
  const { bounds, rowStart } = spans.bare;
  const vt = ringRow(layout, vtPlane, j + 1);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) data.fill(0, vt + bounds[2 * s], vt + bounds[2 * s + 1]);
}

/** Periodic copies of the first and last columns of one row into its halo. */
export function wrapRow(data: Float64Array, row: number, nx: number): void {
  data[row + WEST - 1] = data[row + WEST + nx - 1];
  data[row + WEST + nx] = data[row + WEST];
}

/** Crank–Nicolson drag at rate r + data[rate + column]: `next` holds the tendency of everything else and gets the result. */
export function brakeRow(model: Model, rate: number, now: number, next: number, spans: Spans, j: number): void {
  const { data, dt, rayleigh } = model;
  const { bounds, rowStart } = spans;
  const half = 0.5 * dt;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const k = half * (rayleigh + data[rate + c]);
      data[next + c] = ((1 - k) * data[now + c] + dt * data[next + c]) / (1 + k);
    }
}
