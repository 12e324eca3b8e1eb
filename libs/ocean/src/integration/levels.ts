import { fieldOf, fillSeam, type StateVariable } from '../stepper/fields';
import type { Role } from '../stepper/layout';
import type { Model } from '../stepper/model';

export type NativeVariable = 'eta' | 'u' | 'v';
export const NATIVE_VARIABLES: readonly NativeVariable[] = ['eta', 'u', 'v'];
export const STATE_VARIABLES: readonly StateVariable[] = ['h', 'u', 'v'];

/** Rows and columns of a variable without halos. */
export function shapeOf(grid: { nx: number; ny: number }, variable: NativeVariable | StateVariable): [number, number] {
  const { nx, ny } = grid;
  return variable === 'u' ? [ny, nx + 1] : variable === 'v' ? [ny + 1, nx] : [ny, nx];
}

/** Copies a field of the state to its logical shape, row-major: η (linear) or h (nonlinear), u, v; land 0. */
export function unpad(model: Model, variable: StateVariable, role: Role = 'now'): Float64Array {
  const [rows, columns] = shapeOf(model.grid, variable);
  const { data, offset, rowStride } = fieldOf(model, variable, role);
  const out = new Float64Array(rows * columns);
  for (let j = 0; j < rows; j++) {
    const from = offset + j * rowStride;
    out.set(data.subarray(from, from + columns), j * columns);
  }
  return out;
}

/** η = h − H, u or v now, row-major, land 0; a copy. */
export function nativeField(model: Model, variable: NativeVariable): Float64Array {
  if (variable !== 'eta') return unpad(model, variable);
  const values = unpad(model, 'h');
  const { grid, restThickness, equations } = model;
  if (equations === 'nonlinear') for (let k = 0; k < values.length; k++) if (grid.mask[k]) values[k] -= restThickness;
  return values;
}

/** Copies logical values into a field of the state and fills the periodic seam. Throws RangeError on another length. */
function pad(model: Model, variable: StateVariable, role: Role, name: string, values: Float64Array): void {
  const [rows, columns] = shapeOf(model.grid, variable);
  if (values.length !== rows * columns)
    throw new RangeError(`${name} must hold ${rows} × ${columns} values; ${values.length} arrived.`);
  const { data, offset, rowStride } = fieldOf(model, variable, role);
  for (let j = 0; j < rows; j++) data.set(values.subarray(j * columns, (j + 1) * columns), offset + j * rowStride);
  fillSeam(model, variable, role);
}

const LEVELS = [
  ['', 'now'],
  [' previous', 'previous'],
  [' before', 'before'],
] as const;

/** Names of the nine arrays: “eta” (linear) or “h” (nonlinear), “u”, “v”, and “… previous”, “… before” of each. */
function arrayNames(equations: Model['equations']): { name: string; variable: StateVariable; role: Role }[] {
  return STATE_VARIABLES.flatMap((variable) =>
    LEVELS.map(([suffix, role]) => ({
      name: `${variable === 'h' && equations === 'linear' ? 'eta' : variable}${suffix}`,
      variable,
      role,
    })),
  );
}

/** The nine arrays of the state: three levels of h (η in linear mode), u and v, newest first, in logical shapes. */
export function nineArrays(model: Model): Record<string, Float64Array> {
  return Object.fromEntries(
    arrayNames(model.equations).map(({ name, variable, role }) => [name, unpad(model, variable, role)]),
  );
}

/**
 * Puts nine arrays of a state of `equations` into a model; those of h or η as they are. Throws RangeError when one is
 * missing or has another shape.
 */
export function setNineArrays(
  model: Model,
  arrays: Record<string, Float64Array>,
  equations: Model['equations'] = model.equations,
): void {
  for (const { name, variable, role } of arrayNames(equations)) {
    if (!(name in arrays)) throw new RangeError(`The state lacks the array “${name}”.`);
    pad(model, variable, role, name, arrays[name]);
  }
}
