import { brackets, commonRecords, difference, mapMeasures, regridded, samePoints } from './pair-math';
import { placeFromQuery, placeToQuery } from './shared-place';

describe('commonRecords', () => {
  it('pairs records of the same day, whatever the intervals', () => {
    const a = { count: 5, firstDay: 0, intervalDays: 5 };
    const b = { count: 8, firstDay: 0, intervalDays: 2.5 };
    expect(commonRecords(a, b)).toEqual([
      { a: 0, b: 0, day: 0 },
      { a: 1, b: 2, day: 5 },
      { a: 2, b: 4, day: 10 },
      { a: 3, b: 6, day: 15 },
    ]);
  });
  it('finds none when one has ended before the other begins', () => {
    expect(
      commonRecords({ count: 3, firstDay: 0, intervalDays: 5 }, { count: 3, firstDay: 365, intervalDays: 5 }),
    ).toEqual([]);
  });
});

describe('regridded', () => {
  const x = [0, 1, 2, 3];
  const y = [0, 2];
  // A bilinear field is given back exactly: 1 + 2x + 3y + xy.
  const exact = (px: number, py: number) => 1 + 2 * px + 3 * py + px * py;
  const rows = y.map((py) => x.map((px) => exact(px, py)));

  it('gives a bilinear field back', () => {
    const [toX, toY] = [
      [0, 0.25, 1.5, 3],
      [0, 0.7, 2],
    ];
    const out = regridded(rows, x, y, toX, toY);
    out.forEach((row, j) => row.forEach((value, i) => expect(value).toBeCloseTo(exact(toX[i] ?? 0, toY[j] ?? 0), 5)));
  });
  it('extrapolates nothing', () => {
    const out = regridded(rows, x, y, [-0.1, 3.1], [1]);
    expect(Array.from(out[0] ?? [])).toEqual([NaN, NaN]);
  });
  it('is blank where a neighbour that counts is land, and only there', () => {
    const coast = [
      [NaN, 1, 1, 1],
      [NaN, 1, 1, 1],
    ];
    expect(Array.from(regridded(coast, x, y, [0.5, 1, 1.5], [1])[0] ?? [])).toEqual([NaN, 1, 1]);
  });
  it('brackets the last point', () => {
    const { low, share } = brackets([0, 1, 2], [2]);
    expect([low[0], share[0]]).toEqual([1, 1]);
  });
});

describe('mapMeasures', () => {
  it('agrees with sums by hand, rows weighted', () => {
    // Weights 1 and 3: differences 1 and −1, land left out.
    const { rmsDifference, points } = mapMeasures(
      [
        [1, NaN],
        [4, 5],
      ],
      [
        [2, 3],
        [3, NaN],
      ],
      (j) => 1 + 2 * j,
    );
    expect(points).toBe(2);
    expect(rmsDifference).toBeCloseTo(1, 12);
  });
  it('knows patterns that are the same, opposite, and flat', () => {
    const a = [[1, 2, 3, 4]];
    expect(mapMeasures(a, [[11, 12, 13, 14]], () => 1).correlation).toBeCloseTo(1, 12);
    expect(mapMeasures(a, [[-1, -2, -3, -4]], () => 1).correlation).toBeCloseTo(-1, 12);
    expect(mapMeasures(a, [[5, 5, 5, 5]], () => 1).correlation).toBeNaN();
    expect(mapMeasures([[NaN]], [[1]], () => 1).rmsDifference).toBeNaN();
  });
});

it('takes B − A with blanks from either', () => {
  expect(difference([[1, NaN, 3]], [[2, 2, NaN]]).map((row) => Array.from(row))).toEqual([[1, NaN, NaN]]);
});

it('tells grids apart', () => {
  expect(samePoints([0, 1], [0, 1 + 1e-12])).toBe(true);
  expect(samePoints([0, 1], [0, 1.1])).toBe(false);
});

describe('address', () => {
  it('keeps what is looked at, and falls back where it makes no sense', () => {
    const place = { mode: 'hovmoller', variable: 'u', day: 120, along: 'longitude', at: 30 } as const;
    const query = placeToQuery(place);
    expect(placeFromQuery(Object.fromEntries(Object.entries(query).map(([k, v]) => [k, v ?? undefined])))).toEqual(
      place,
    );
    expect(placeFromQuery({ variable: 'salt', day: 'soon', mode: 'x', at: '' })).toEqual({
      mode: 'map',
      variable: 'eta',
      day: null,
      along: 'latitude',
      at: null,
    });
  });
});
