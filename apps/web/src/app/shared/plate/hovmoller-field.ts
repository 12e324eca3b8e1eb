import { type Variable } from '@halfdeep/ocean';
import { type GrowingSlice } from '../../core/growing-rows';
import { type LineAlong } from '../../core/slices';
import { type Field } from './field-plot';
import { VARIABLE_VIEWS } from './variables';

/** Rows of a space-time slice in time order; `row` may give views. */
export interface SpaceTimeRows {
  readonly count: number;
  row(k: number): ArrayLike<number>;
  /** Model days of the rows. */
  days(): ArrayLike<number>;
}

/** A growing space-time slice as a field to draw; null while nothing of it is here. */
export function hovmollerField(slice: GrowingSlice, along: LineAlong, variable: Variable): Field | null {
  const version = slice.version();
  const places = slice.head()?.axes[1]?.values;
  return places ? spaceTimeField(slice.rows, places, version, along, variable) : null;
}

/**
 * Rows in time order as a field. Along a latitude: longitude to the right, time upward, rows are views on the store.
 * Along a longitude: time to the right, latitude up, so the rows are turned.
 */
export function spaceTimeField(
  rows: SpaceTimeRows,
  places: ArrayLike<number>,
  version: number,
  along: LineAlong,
  variable: Variable,
): Field | null {
  if (rows.count === 0) return null;
  const { scale, factor, unit } = VARIABLE_VIEWS[variable];
  const common = { scale, factor, unit, version };
  const times = rows.days();
  if (along === 'latitude')
    return {
      ...common,
      x: places,
      y: times,
      rows: Array.from({ length: rows.count }, (_, k) => rows.row(k)),
      xKind: 'longitude',
      yKind: 'time',
    };
  const turned = Array.from({ length: places.length }, () => new Float32Array(rows.count));
  for (let k = 0; k < rows.count; k++) {
    const row = rows.row(k);
    for (let j = 0; j < turned.length; j++) {
      const line = turned[j];
      if (line) line[k] = row[j] ?? NaN;
    }
  }
  return { ...common, x: times, y: places, rows: turned, xKind: 'time', yKind: 'latitude' };
}
