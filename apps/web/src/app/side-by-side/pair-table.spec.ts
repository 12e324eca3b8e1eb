import { type Field } from '../shared/plate/field-plot';
import { pairTable } from './pair-table';

const shown = { factor: 10, unit: 'cm', scale: 'diverging', version: 1 } as const;
/** Along a latitude: longitude to the right, time upward; 100 × day + longitude. */
const alongLatitude = (days: number[], places: number[]): Field => ({
  ...shown,
  x: places,
  y: days,
  rows: days.map((day) => places.map((place) => 100 * day + place)),
  xKind: 'longitude',
  yKind: 'time',
});
const turned = (days: number[], places: number[]): Field => ({
  ...shown,
  x: days,
  y: places,
  rows: places.map((place) => days.map((day) => 100 * day + place)),
  xKind: 'time',
  yKind: 'latitude',
});
const rowsOf = (a: Field | null, b: Field | null) => {
  const table = pairTable(a, b, []);
  return Array.from({ length: table.rows }, (_, k) => table.row(k));
};

describe('pairTable', () => {
  it('lists every day of either run when they keep frames at different intervals', () => {
    const rows = rowsOf(alongLatitude([0, 5, 10], [30]), alongLatitude([0, 2.5, 5, 7.5, 10], [30]));
    expect(rows.map((row) => row[1])).toEqual([0, 2.5, 5, 7.5, 10]);
    expect(rows[1]).toEqual([30, 2.5, NaN, 2800, NaN]);
    expect(rows[2]).toEqual([30, 5, 5300, 5300, 0]);
  });
  it('does the same with time to the right', () => {
    const rows = rowsOf(turned([0, 5], [1, 2]), turned([5, 8], [1, 2]));
    expect(rows).toEqual([
      [0, 1, 10, NaN, NaN],
      [5, 1, 5010, 5010, 0],
      [8, 1, NaN, 8010, NaN],
      [0, 2, 20, NaN, NaN],
      [5, 2, 5020, 5020, 0],
      [8, 2, NaN, 8020, NaN],
    ]);
  });
  it('brings B onto the places of A', () => {
    const rows = rowsOf(alongLatitude([0], [1, 2]), alongLatitude([0], [0, 4]));
    expect(rows).toEqual([
      [1, 0, 10, 10, 0],
      [2, 0, 20, 20, 0],
    ]);
  });
  it('names its columns with their units, and is empty before anything was read', () => {
    const table = pairTable(alongLatitude([0], [1]), null, ['a note']);
    expect(table.columns).toEqual(['longitude (° E)', 'model day', 'A (cm)', 'B (cm)', 'B − A (cm)']);
    expect(table.row(0)).toEqual([1, 0, 10, NaN, NaN]);
    expect(pairTable(null, null, ['a note'])).toMatchObject({ rows: 0, notes: ['a note'] });
  });
});
