import { CAUTION, type SliceHead } from '@halfdeep/contracts';
import { describe, expect, it } from 'vitest';
import { csvRows, csvText } from './csv';
import { decodeSlice, encodeSlice } from './encode';

const head = (over: Partial<SliceHead> = {}): SliceHead => ({
  runId: 'r',
  name: 'η – thickness anomaly',
  variable: 'eta',
  unit: 'm',
  dtype: 'float32',
  shape: [2, 3],
  axes: [
    { name: 'latitude', unit: '° N', values: [-1, 1] },
    { name: 'longitude', unit: '° E', values: [0, 1, 2] },
  ],
  line: null,
  columns: null,
  from: 0,
  available: 1,
  ...over,
});

describe('a binary slice', () => {
  it('puts the data on a multiple of 8 whatever the head’s length in bytes', () => {
    for (let n = 0; n < 9; n++) {
      const slice = encodeSlice(head({ name: 'é'.repeat(n) }), Float32Array.from([1, 2, NaN, 4, 5, 6]));
      const start = 4 + slice.readUInt32LE(0);
      expect(start % 8).toBe(0);
      expect(slice.length).toBe(start + 24);
      expect(slice.readFloatLE(start + 4)).toBe(2);
      expect(Number.isNaN(slice.readFloatLE(start + 8))).toBe(true);
    }
  });
  it('comes back as it went, in both widths', () => {
    const single = Float32Array.from([0.1, -0, NaN, 4, 5, 6]);
    const back = decodeSlice(encodeSlice(head(), single));
    expect(back.head).toEqual(head());
    expect(new Uint8Array(back.data.buffer)).toEqual(new Uint8Array(single.buffer));
    const double = Float64Array.from([Math.PI]);
    expect(decodeSlice(encodeSlice(head({ dtype: 'float64', shape: [1] }), double)).data).toEqual(double);
  });
  it('takes a view into a larger buffer', () => {
    const whole = Float32Array.from([9, 1, 2, 3, 4, 5, 6, 9]);
    expect([...decodeSlice(encodeSlice(head(), whole.subarray(1, 7))).data]).toEqual([1, 2, 3, 4, 5, 6]);
  });
  it('refuses data that do not fill the shape', () =>
    expect(() => encodeSlice(head(), new Float32Array(5))).toThrow(/5 values.*2 × 3 needs 6/));
  it('is refused when cut short', () => {
    const slice = encodeSlice(head(), new Float32Array(6));
    expect(() => decodeSlice(slice.subarray(0, slice.length - 4))).toThrow(RangeError);
  });
});

describe('comma-separated text', () => {
  it('never starts a cell like a formula, and quotes what must be', () => {
    expect(csvText('=HYPERLINK("x")')).toBe(`"'=HYPERLINK(""x"")"`);
    for (const start of ['+', '-', '@', '\t', '\r']) expect(csvText(`${start}1`).replace('"', '')).toMatch(/^'/);
    expect(csvText('wind, strong')).toBe('"wind, strong"');
  });
  it('has one row a point, the caution, and empty cells on land', () => {
    const rows = [...csvRows(head(), Float32Array.from([0.1, 2, NaN, 4, 5, 6]), ['two\nlines'])];
    expect(rows.slice(0, 2)).toEqual(['# two lines', `# ${CAUTION}`]);
    expect(rows[2]).toBe('latitude (° N),longitude (° E),η – thickness anomaly (m)');
    expect(rows.slice(3)).toEqual(['-1,0,0.100000001', '-1,1,2', '-1,2,', '1,0,4', '1,1,5', '1,2,6']);
  });
  it('has one row a record for series', () => {
    const series = head({
      dtype: 'float64',
      unit: null,
      axes: [
        { name: 'time', unit: 'd', values: [5, 10] },
        { name: 'column', unit: '', values: [0, 1] },
      ],
      shape: [2, 2],
      columns: [
        { name: 'a', label: '=A', unit: 'Sv', kind: 'mean' },
        { name: 'b', label: 'B', unit: 'J', kind: 'instant' },
      ],
    });
    const rows = [...csvRows(series, Float64Array.from([1, 2, 3, 4]), [])].slice(1);
    expect(rows).toEqual([`time (d),"'=A (Sv, mean)","B (J, instant)"`, '5,1,2', '10,3,4']);
  });
});
