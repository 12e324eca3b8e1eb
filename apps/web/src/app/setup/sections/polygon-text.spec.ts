import { readPolygon, writePolygon } from './polygon-text';

describe('readPolygon', () => {
  it.each([
    '40.5 -8\n43.5 -8\n42 -6',
    '40.5, -8\n43.5, -8\n\n42, -6\n',
    '40.5,-8\n43.5,-8\n42,-6',
    '40,5; \u22128\n43,5; \u22128\n42; \u22126',
    '40,5 -8\n43,5 -8\n42 -6',
    '40.5\t-8\r\n43.5\t-8\r\n42\t-6',
  ])('reads points parted by whatever people use', (text) => {
    expect(readPolygon(text)).toEqual({
      points: [
        [40.5, -8],
        [43.5, -8],
        [42, -6],
      ],
    });
  });
  it.each(['40.5', '40.5 north', '1 2 3'])('names the line that is no point: %s', (line) => {
    expect(readPolygon(`1 2\n${line}`)).toEqual({ problem: expect.stringContaining(`Line 2 reads “${line}”`) });
  });
  it('reads what it wrote', () => {
    const points: [number, number][] = [
      [40.5, -8.125],
      [1e-5, 0],
      [-17.5, 3],
    ];
    expect(readPolygon(writePolygon(points))).toEqual({ points });
  });
});
