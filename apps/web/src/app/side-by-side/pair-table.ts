import { type PlotTable } from '../shared/plate/csv';
import { type AxisKind, type Field } from '../shared/plate/field-plot';
import { regridded, samePoints } from './pair-math';

/** One row for each point: where, A, B, B − A; empty where a run has nothing there. */
export function pairTable(a: Field | null, b: Field | null, notes: string[]): PlotTable {
  const base = a ?? b;
  if (!base) return { columns: [], rows: 0, row: () => [], notes };
  const onBase = b && a ? ontoPlacesOf(a, b) : b;
  const x = positions(base.xKind, a?.x, onBase?.x);
  const y = positions(base.yKind, a?.y, onBase?.y);
  const lookA = lookUp(a, x, y);
  const lookB = lookUp(onBase, x, y);
  return {
    columns: [axisTitle(base.xKind), axisTitle(base.yKind), ...['A', 'B', 'B − A'].map((n) => `${n} (${base.unit})`)],
    rows: x.length * y.length,
    row: (k) => {
      const [j, i] = [Math.floor(k / x.length), k % x.length];
      const [valueA, valueB] = [lookA(j, i), lookB(j, i)];
      return [x[i] ?? NaN, y[j] ?? NaN, valueA, valueB, valueB - valueA];
    },
    notes,
  };
}

function axisTitle(kind: AxisKind): string {
  if (kind === 'time') return 'model day';
  return kind === 'latitude' ? 'latitude (° N)' : 'longitude (° E)';
}

/** Days are quarters of a day; the two runs may keep frames on different ones, and then all of them are listed. */
const quarter = (day: number) => Math.round(4 * day) / 4;

function positions(kind: AxisKind, a: ArrayLike<number> | undefined, b: ArrayLike<number> | undefined): number[] {
  if (kind !== 'time') return Array.from(a ?? b ?? []);
  return [...new Set([...Array.from(a ?? [], quarter), ...Array.from(b ?? [], quarter)])].sort((p, q) => p - q);
}

/** Shown value of a field at the point (y[j], x[i]) of the table; NaN on days that the field does not have. */
function lookUp(field: Field | null, x: readonly number[], y: readonly number[]): (j: number, i: number) => number {
  if (!field) return () => NaN;
  const column = field.xKind === 'time' ? daysOf(field.x, x) : null;
  const line = field.yKind === 'time' ? daysOf(field.y, y) : null;
  return (j, i) => {
    const [row, at] = [line ? (line[j] ?? -1) : j, column ? (column[i] ?? -1) : i];
    return (field.rows[row]?.[at] ?? NaN) * field.factor;
  };
}

/** Index in `days` of each wanted day, −1 where it is missing. */
function daysOf(days: ArrayLike<number>, wanted: readonly number[]): number[] {
  const at = new Map(Array.from(days, (day, k) => [quarter(day), k]));
  return wanted.map((day) => at.get(day) ?? -1);
}

/** B on the places of A, on its own days. */
function ontoPlacesOf(a: Field, b: Field): Field {
  const x = b.xKind === 'time' ? b.x : a.x;
  const y = b.yKind === 'time' ? b.y : a.y;
  if (samePoints(x, b.x) && samePoints(y, b.y)) return b;
  return { ...b, x, y, rows: regridded(b.rows, b.x, b.y, x, y) };
}
