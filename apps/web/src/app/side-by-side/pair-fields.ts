import { type Run } from '@halfdeep/contracts';
import { type Grid, type Variable } from '@halfdeep/ocean';
import { type GrowingSlice } from '../core/growing-rows';
import { type LineAlong, type Slice } from '../core/slices';
import { type Field } from '../shared/plate/field-plot';
import { hovmollerField } from '../shared/plate/hovmoller-field';
import { mapField } from '../shared/plate/map-field';
import { VARIABLE_VIEWS } from '../shared/plate/variables';
import { difference, regridded, samePoints } from './pair-math';

/** Three fields to draw; B on A's points. */
export interface PairFields {
  a: Field | null;
  b: Field | null;
  difference: Field | null;
}

/** Whether two setups share all points: the same snapped edges and the same number of cells. */
export function sameGrid(a: Grid, b: Grid): boolean {
  return samePoints(a.lonFace, b.lonFace) && samePoints(a.latFace, b.latFace);
}

/** Maps of A and B of one day, and B − A; B is brought onto A's points when the grids differ. */
export function pairMaps(
  a: Slice | null,
  b: Slice | null,
  variable: Variable,
  same: boolean,
  version: number,
): PairFields {
  const fieldA = a && mapField(a, variable, version);
  const own = b && mapField(b, variable, version);
  if (!fieldA || !own) return { a: fieldA, b: own, difference: null };
  const rows = same ? own.rows : regridded(own.rows, own.x, own.y, fieldA.x, fieldA.y);
  const fieldB = { ...fieldA, rows };
  return { a: fieldA, b: fieldB, difference: { ...fieldA, rows: difference(fieldA.rows, rows), scale: 'diverging' } };
}

/** Space-time slices of A and B along one line, and B − A on the days that both have. */
export function pairHovmollers(a: GrowingSlice, b: GrowingSlice, along: LineAlong, variable: Variable): PairFields {
  const fieldA = hovmollerField(a, along, variable);
  const fieldB = hovmollerField(b, along, variable);
  const places = a.head()?.axes[1]?.values;
  const placesB = b.head()?.axes[1]?.values;
  if (!fieldA || !fieldB || !places || !placesB) return { a: fieldA, b: fieldB, difference: null };
  const days: number[] = [];
  const [linesA, linesB]: [ArrayLike<number>[], ArrayLike<number>[]] = [[], []];
  for (let i = 0, k = 0; i < a.rows.count && k < b.rows.count;) {
    const [dayA, dayB] = [Math.round(4 * a.rows.day(i)), Math.round(4 * b.rows.day(k))];
    if (dayA === dayB) {
      days.push(dayA / 4);
      linesA.push(a.rows.row(i));
      linesB.push(b.rows.row(k));
    }
    if (dayA <= dayB) i++;
    if (dayB <= dayA) k++;
  }
  if (days.length === 0) return { a: fieldA, b: fieldB, difference: null };
  const onA = samePoints(places, placesB) ? linesB : regridded(linesB, placesB, days, places, days);
  const gaps = difference(linesA, onA);
  const { factor, unit } = VARIABLE_VIEWS[variable];
  const common = { factor, unit, scale: 'diverging' as const, version: fieldA.version + fieldB.version };
  if (along === 'latitude')
    return {
      a: fieldA,
      b: fieldB,
      difference: { ...common, x: places, y: days, rows: gaps, xKind: 'longitude', yKind: 'time' },
    };
  const turned = Array.from({ length: places.length }, (_, j) => Float32Array.from(gaps, (line) => line[j] ?? NaN));
  return {
    a: fieldA,
    b: fieldB,
    difference: { ...common, x: days, y: places, rows: turned, xKind: 'time', yKind: 'latitude' },
  };
}

/** How the two grids were brought together, in a sentence; empty when they are the same. */
export function regriddingWords(a: Run, b: Run, same: boolean): string {
  if (same) return '';
  const size = (run: Run) => `${run.setup.numerics.spacingLongitudeDeg}° × ${run.setup.numerics.spacingLatitudeDeg}°`;
  return `The grids differ (A ${size(a)}, B ${size(b)}): B is interpolated bilinearly to the points of A.`;
}
