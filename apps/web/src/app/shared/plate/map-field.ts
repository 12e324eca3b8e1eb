import { type Variable } from '@halfdeep/ocean';
import { type Slice } from '../../core/slices';
import { type Field } from './field-plot';
import { VARIABLE_VIEWS } from './variables';

/** A map slice, [latitude, longitude], as a field to draw: rows are views on it. */
export function mapField(slice: Slice, variable: Variable, version: number): Field {
  const { scale, factor, unit } = VARIABLE_VIEWS[variable];
  const [ny = 0, nx = 0] = slice.head.shape;
  return {
    x: slice.head.axes[1]?.values ?? [],
    y: slice.head.axes[0]?.values ?? [],
    rows: Array.from({ length: ny }, (_, j) => slice.data.subarray(j * nx, (j + 1) * nx)),
    xKind: 'longitude',
    yKind: 'latitude',
    scale,
    factor,
    unit,
    version,
  };
}
