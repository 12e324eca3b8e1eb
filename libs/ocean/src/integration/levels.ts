import type { Grid } from '../grid/grid';
import { fillSeam, type Levels, type Model } from '../stepper/model';

export type NativeVariable = 'eta' | 'u' | 'v';
export const NATIVE_VARIABLES: readonly NativeVariable[] = ['eta', 'u', 'v'];

/** Rows and columns of a variable without halos. */
export function shapeOf(grid: { nx: number; ny: number }, variable: NativeVariable): [number, number] {
  const { nx, ny } = grid;
  return variable === 'eta' ? [ny, nx] : variable === 'u' ? [ny, nx + 1] : [ny + 1, nx];
}

/** Copies a padded array to its logical shape, row-major. */
export function unpad(grid: Grid, variable: NativeVariable, data: Float64Array): Float64Array {
  const [rows, columns] = shapeOf(grid, variable);
  const out = new Float64Array(rows * columns);
  for (let j = 0; j < rows; j++) {
    const from = (j + 1) * grid.stride + 1;
    out.set(data.subarray(from, from + columns), j * columns);
  }
  return out;
}

/** Copies logical values into a padded array and fills the periodic seam. Throws RangeError on another length. */
export function pad(grid: Grid, variable: NativeVariable, values: Float64Array, out: Float64Array): void {
  const [rows, columns] = shapeOf(grid, variable);
  if (values.length !== rows * columns)
    throw new RangeError(`${variable} must hold ${rows} × ${columns} values; ${values.length} arrived.`);
  out.fill(0);
  for (let j = 0; j < rows; j++) out.set(values.subarray(j * columns, (j + 1) * columns), (j + 1) * grid.stride + 1);
  fillSeam(grid, out);
}

/** The nine arrays of the state: three levels of η, u and v, newest first, in logical shapes. */
export function nineArrays(model: Model): Record<string, Float64Array> {
  const arrays: Record<string, Float64Array> = {};
  for (const variable of NATIVE_VARIABLES) {
    const levels: Levels = model[variable];
    arrays[variable] = unpad(model.grid, variable, levels.now);
    arrays[`${variable} previous`] = unpad(model.grid, variable, levels.previous);
    arrays[`${variable} before`] = unpad(model.grid, variable, levels.before);
  }
  return arrays;
}

/** Puts nine arrays back. Throws RangeError when one is missing or has another shape. */
export function setNineArrays(model: Model, arrays: Record<string, Float64Array>): void {
  for (const variable of NATIVE_VARIABLES) {
    const levels: Levels = model[variable];
    for (const [name, target] of [
      [variable, levels.now],
      [`${variable} previous`, levels.previous],
      [`${variable} before`, levels.before],
    ] as const) {
      if (!(name in arrays)) throw new RangeError(`The state lacks the array “${name}”.`);
      pad(model.grid, variable, arrays[name], target);
    }
  }
}
