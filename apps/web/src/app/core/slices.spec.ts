import { type SliceHead } from '@halfdeep/contracts';
import { SliceError, decodeSlice } from './slices';

const HEAD = {
  runId: 'r',
  name: 'Thickness anomaly',
  variable: 'eta',
  unit: 'm',
  dtype: 'float32',
  shape: [2, 3],
  axes: [
    { name: 'time', unit: 'd', values: [0, 5] },
    { name: 'longitude', unit: '° E', values: [0.5, 1.5, 2.5] },
  ],
  line: { along: 'latitude', askedDeg: 0, atDeg: 0.125, index: 70 },
  columns: null,
  from: 0,
  available: 2,
} satisfies SliceHead;

/** Bytes as architecture's contract says, made without the product's own encoder. */
function bytesOf(head: unknown, data: number[], dtype: 'float32' | 'float64' = 'float32'): ArrayBuffer {
  const text = new TextEncoder().encode(JSON.stringify(head));
  const headLength = Math.ceil((4 + text.length) / 8) * 8 - 4;
  const size = dtype === 'float32' ? 4 : 8;
  const buffer = new ArrayBuffer(4 + headLength + data.length * size);
  const view = new DataView(buffer);
  view.setUint32(0, headLength, true);
  const bytes = new Uint8Array(buffer);
  bytes.fill(0x20, 4, 4 + headLength);
  bytes.set(text, 4);
  data.forEach((value, k) =>
    dtype === 'float32'
      ? view.setFloat32(4 + headLength + k * 4, value, true)
      : view.setFloat64(4 + headLength + k * 8, value, true),
  );
  return buffer;
}

describe('decodeSlice', () => {
  it('reads head and values, and keeps land as NaN', () => {
    const { head, data } = decodeSlice(bytesOf(HEAD, [1, -2.5, NaN, 4, 5, 6]));
    expect(head.line?.atDeg).toBe(0.125);
    expect(data).toBeInstanceOf(Float32Array);
    expect(Array.from(data)).toEqual([1, -2.5, NaN, 4, 5, 6]);
  });

  it('keeps double precision where the head says so', () => {
    const value = 0.1 + 1e-16 * 7;
    const { data } = decodeSlice(bytesOf({ ...HEAD, dtype: 'float64', shape: [1, 1] }, [value], 'float64'));
    expect(data[0]).toBe(value);
  });

  it('takes an empty range', () => {
    expect(decodeSlice(bytesOf({ ...HEAD, shape: [0, 3] }, [])).data.length).toBe(0);
  });

  it('refuses data that are shorter than the shape, and says what arrived', () => {
    expect(() => decodeSlice(bytesOf(HEAD, [1, 2, 3, 4, 5]))).toThrowError(/2 × 3 values of float32 need 24 bytes; 20/);
  });

  it('refuses a head that is cut off, is not JSON, or lacks a field', () => {
    expect(() => decodeSlice(bytesOf(HEAD, [1, 2, 3, 4, 5, 6]).slice(0, 40))).toThrowError(SliceError);
    const broken = bytesOf(HEAD, [1, 2, 3, 4, 5, 6]);
    new Uint8Array(broken)[4] = 0x21;
    expect(() => decodeSlice(broken)).toThrowError(/not JSON/);
    expect(() => decodeSlice(bytesOf({ ...HEAD, shape: 'x' }, []))).toThrowError(/shape/);
    expect(() => decodeSlice(new ArrayBuffer(3))).toThrowError(/3 arrived/);
  });
});
