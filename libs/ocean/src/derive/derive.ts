import type { Grid } from '../grid/grid';
import { NATIVE_VARIABLES, shapeOf, type NativeVariable } from '../integration/levels';
import type { Setup, Variable } from '../setup';
import { fillBox } from './fill';
import { axesOf, VARIABLE_INFO } from './variable-info';
import type { NativeParts } from './window';

/**
 * Native fields of one moment: η [ny][nx], u [ny][nx + 1], v [ny + 1][nx], land NaN, and the model day. Those that a
 * variable is not made of may be left out.
 */
export interface NativeFields {
  eta?: Float32Array;
  u?: Float32Array;
  v?: Float32Array;
  day: number;
}

/** A variable on its own points. */
export interface DerivedMap {
  /** Row-major, south to north; land NaN. */
  data: Float32Array;
  /** Rows and columns. */
  shape: [number, number];
  latDeg: number[];
  lonDeg: number[];
  unit: string;
}

/**
 * A map of any variable from the native fields. u lies on u points, v on v points, vorticity and pv on corners
 * [ny + 1][nx + 1], all others at cell centres. Throws RangeError when a native field that it is made of (`nativesOf`) is
 * missing or has another length than the grid's.
 */
export function deriveMap(variable: Variable, grid: Grid, setup: Setup, fields: NativeFields): DerivedMap {
  const parts: NativeParts = { eta: null, u: null, v: null };
  for (const name of nativesOf(variable)) {
    const [rows, columns] = shapeOf(grid, name);
    const data = fields[name];
    if (data?.length !== rows * columns)
      throw new RangeError(`${name} must hold ${rows} × ${columns} values; ${data?.length ?? 'none'} arrived.`);
    parts[name] = { data, j0: 0, j1: rows, i0: 0, i1: columns };
  }
  const { latDeg, lonDeg } = axesOf(variable, grid);
  const [rows, columns] = [latDeg.length, lonDeg.length];
  const data = new Float32Array(rows * columns);
  fillBox(variable, grid, setup, fields.day, parts, { j0: 0, j1: rows, i0: 0, i1: columns }, data);
  return {
    data,
    shape: [rows, columns],
    latDeg: Array.from(latDeg),
    lonDeg: Array.from(lonDeg),
    unit: VARIABLE_INFO[variable].unit,
  };
}

/** The native fields that a variable is made of; none for the wind. */
export function nativesOf(variable: Variable): NativeVariable[] {
  const lines = linesFor(variable, 0, (_native, first, last) => [first, last], 'rows');
  return NATIVE_VARIABLES.filter((name) => lines[name] !== null);
}

/** Which line of a variable lies nearest to a place, and which native lines it is made of: [first, last + 1] or null. */
export interface NeededLines {
  /** Row (for a latitude) or column (for a longitude) among the variable's own points. */
  index: number;
  /** Where that line lies, degrees. */
  atDeg: number;
  eta: [number, number] | null;
  u: [number, number] | null;
  v: [number, number] | null;
}

/** Native rows from which `deriveRow` makes the row of a variable nearest to a latitude. */
export function neededRows(variable: Variable, grid: Grid, latitudeDeg: number): NeededLines {
  const { latDeg } = axesOf(variable, grid);
  const index = nearest(latDeg, latitudeDeg, 0, latDeg.length - 1);
  const at = (native: NativeVariable, first: number, last: number): [number, number] => {
    const rows = shapeOf(grid, native)[0];
    return [Math.max(first, 0), Math.min(last, rows - 1) + 1];
  };
  return { index, atDeg: latDeg[index], ...linesFor(variable, index, at, 'rows') };
}

/**
 * Native columns from which `deriveColumn` makes the column of a variable nearest to a longitude. On a periodic grid the
 * corner columns of the seam need both ends of a row: their neighbours are taken instead.
 */
export function neededColumns(variable: Variable, grid: Grid, longitudeDeg: number): NeededLines {
  const { lonDeg } = axesOf(variable, grid);
  const seam = grid.periodic && VARIABLE_INFO[variable].points === 'corner' ? 1 : 0;
  const index = nearest(lonDeg, longitudeDeg, seam, lonDeg.length - 1 - seam);
  const at = (native: NativeVariable, first: number, last: number): [number, number] => {
    const columns = shapeOf(grid, native)[1];
    return [Math.max(first, 0), Math.min(last, columns - 1) + 1];
  };
  return { index, atDeg: lonDeg[index], ...linesFor(variable, index, at, 'columns') };
}

function nearest(lines: Float64Array, degrees: number, first: number, last: number): number {
  const index = Math.round((degrees - lines[0]) / (lines[1] - lines[0] || 1));
  return Math.min(Math.max(index, first), last);
}

function linesFor(
  variable: Variable,
  k: number,
  at: (native: NativeVariable, first: number, last: number) => [number, number],
  direction: 'rows' | 'columns',
): Pick<NeededLines, NativeVariable> {
  const none = { eta: null, u: null, v: null };
  // Along rows a centre lies between v rows k and k + 1 and a corner between u rows k − 1 and k; along columns u and v
  // change places.
  const across: NativeVariable = direction === 'rows' ? 'v' : 'u';
  const along: NativeVariable = direction === 'rows' ? 'u' : 'v';
  switch (variable) {
    case 'eta':
    case 'h':
      return { ...none, eta: at('eta', k, k) };
    case 'u':
    case 'v':
      return { ...none, [variable]: at(variable, k, k) };
    case 'uCentre':
    case 'vCentre': {
      const native = variable === 'uCentre' ? 'u' : 'v';
      return { ...none, [native]: at(native, k, native === across ? k + 1 : k) };
    }
    case 'speed':
      return { ...none, [along]: at(along, k, k), [across]: at(across, k, k + 1) };
    case 'vorticity':
    case 'pv':
      return {
        eta: variable === 'pv' ? at('eta', k - 1, k) : null,
        u: along === 'u' ? at('u', k - 1, k) : at('u', k, k),
        v: along === 'v' ? at('v', k - 1, k) : at('v', k, k),
      };
    case 'taux':
    case 'tauy':
    case 'ekmanPumping':
      return none;
  }
}

/** Native lines of one moment, each over the range that `neededRows` or `neededColumns` named. */
export interface NativeLines {
  eta?: Float32Array | null;
  u?: Float32Array | null;
  v?: Float32Array | null;
  day: number;
}

/** The row of a variable that `needed` names, from whole native rows, row-major. Land NaN. */
export function deriveRow(
  variable: Variable,
  grid: Grid,
  setup: Setup,
  needed: NeededLines,
  lines: NativeLines,
): Float32Array {
  const columns = axesOf(variable, grid).lonDeg.length;
  const out = new Float32Array(columns);
  const box = { j0: needed.index, j1: needed.index + 1, i0: 0, i1: columns };
  fillBox(variable, grid, setup, lines.day, partsOf(grid, needed, lines, 'rows'), box, out);
  return out;
}

/** The column of a variable that `needed` names, south to north, from whole native columns, row-major. Land NaN. */
export function deriveColumn(
  variable: Variable,
  grid: Grid,
  setup: Setup,
  needed: NeededLines,
  lines: NativeLines,
): Float32Array {
  const rows = axesOf(variable, grid).latDeg.length;
  const out = new Float32Array(rows);
  const box = { j0: 0, j1: rows, i0: needed.index, i1: needed.index + 1 };
  fillBox(variable, grid, setup, lines.day, partsOf(grid, needed, lines, 'columns'), box, out);
  return out;
}

function partsOf(grid: Grid, needed: NeededLines, lines: NativeLines, direction: 'rows' | 'columns'): NativeParts {
  const parts: NativeParts = { eta: null, u: null, v: null };
  for (const name of NATIVE_VARIABLES) {
    const range = needed[name];
    if (!range) continue;
    const [rows, columns] = shapeOf(grid, name);
    const box =
      direction === 'rows'
        ? { j0: range[0], j1: range[1], i0: 0, i1: columns }
        : { j0: 0, j1: rows, i0: range[0], i1: range[1] };
    const expected = (box.j1 - box.j0) * (box.i1 - box.i0);
    const data = lines[name];
    if (data?.length !== expected)
      throw new RangeError(
        `${name} must hold ${direction} ${range[0]} to ${range[1] - 1}, ${expected} values; ${data?.length ?? 'none'} arrived.`,
      );
    parts[name] = { ...box, data };
  }
  return parts;
}
