import ndarray, { type NdArray } from 'ndarray';
import { H_PLANE, levelOffset, U_PLANE, V_PLANE, WEST, type Role } from './layout';
import type { Model } from './model';

/** The planes of the state: h is η in linear mode and the thickness in nonlinear mode. */
export type StateVariable = 'h' | 'u' | 'v';
export type Field = NdArray<Float64Array>;

const PLANE: Record<StateVariable, number> = { h: H_PLANE, u: U_PLANE, v: V_PLANE };

/** Where a field lies: value (row j, column i) at data[offset + j · rowStride + i]; columns −1 and nx are halos. */
export interface FieldPlace {
  data: Float64Array;
  offset: number;
  rowStride: number;
}

/** Place of a field of the state at a level of time. Moves with every step: ask again after each. */
export function fieldOf(model: Model, variable: StateVariable, role: Role = 'now'): FieldPlace {
  const { layout, data, phase } = model;
  const offset = levelOffset(layout, phase, role) + layout.record + PLANE[variable] * layout.pitch + WEST;
  return { data, offset, rowStride: layout.record };
}

/** Logical view without halos: h and cells [ny][nx], u [ny][nx + 1], v [ny + 1][nx]; it shares the data. */
export function viewOf(model: Model, variable: StateVariable, role: Role = 'now'): Field {
  const { nx, ny } = model.grid;
  const { data, offset, rowStride } = fieldOf(model, variable, role);
  const shape = variable === 'h' ? [ny, nx] : variable === 'u' ? [ny, nx + 1] : [ny + 1, nx];
  return ndarray(data, shape, [rowStride, 1], offset);
}

/** Value of a field at column i of row j. */
export function valueAt(model: Model, variable: StateVariable, i: number, j: number, role: Role = 'now'): number {
  const { data, offset, rowStride } = fieldOf(model, variable, role);
  return data[offset + j * rowStride + i];
}

/** h − H at cell (i, j), m; 0 on land. */
export function etaAt(model: Model, i: number, j: number): number {
  const value = valueAt(model, 'h', i, j);
  return model.equations === 'nonlinear' && model.grid.mask[j * model.grid.nx + i]
    ? value - model.restThickness
    : value;
}

/** Rebuilds the two older levels as copies of the present one. */
export function copyHistory(model: Model): void {
  const { layout, data, phase } = model;
  const now = levelOffset(layout, phase, 'now');
  for (const role of ['previous', 'before'] as const)
    data.copyWithin(levelOffset(layout, phase, role), now, now + layout.levelLength);
}

/** Periodic copies of the first and last columns into the halo; nothing on a closed grid. */
export function fillSeam(model: Model, variable: StateVariable, role: Role = 'now'): void {
  const { nx, ny, periodic } = model.grid;
  if (!periodic) return;
  const { data, offset, rowStride } = fieldOf(model, variable, role);
  for (let j = 0; j <= ny; j++) {
    const base = offset + j * rowStride;
    data[base - 1] = data[base + nx - 1];
    data[base + nx] = data[base];
  }
}
