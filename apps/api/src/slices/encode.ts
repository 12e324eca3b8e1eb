import type { SliceHead } from '@halfdeep/contracts';

/**
 * One binary slice: uint32 LE length of the head, the head as JSON padded with spaces so that the data start on a
 * multiple of 8, then the data, little-endian, row-major. Throws RangeError when the shape does not hold the data.
 */
export function encodeSlice(head: SliceHead, data: Float32Array | Float64Array): Buffer {
  const expected = head.shape.reduce((product, n) => product * n, 1);
  if (expected !== data.length)
    throw new RangeError(
      `The slice “${head.name}” has ${data.length} values; its shape ${head.shape.join(' × ')} needs ${expected}.`,
    );
  const json = Buffer.from(JSON.stringify(head), 'utf8');
  const headLength = Math.ceil((4 + json.length) / 8) * 8 - 4;
  const slice = Buffer.alloc(4 + headLength + data.byteLength, ' ');
  slice.writeUInt32LE(headLength, 0);
  json.copy(slice, 4);
  Buffer.from(data.buffer, data.byteOffset, data.byteLength).copy(slice, 4 + headLength);
  return slice;
}

/** The inverse of `encodeSlice`: for tests and scripts. Throws RangeError when the bytes are cut short. */
export function decodeSlice(slice: Uint8Array): { head: SliceHead; data: Float32Array | Float64Array } {
  const view = new DataView(slice.buffer, slice.byteOffset, slice.byteLength);
  const start = 4 + view.getUint32(0, true);
  const head = JSON.parse(new TextDecoder().decode(slice.subarray(4, start))) as SliceHead;
  const bytes = new Uint8Array(slice.subarray(start));
  const length = head.shape.reduce((product, n) => product * n, 1);
  const width = head.dtype === 'float32' ? 4 : 8;
  if (bytes.byteLength !== length * width)
    throw new RangeError(`The slice holds ${bytes.byteLength} bytes of data; ${length * width} are due.`);
  const data = head.dtype === 'float32' ? new Float32Array(bytes.buffer) : new Float64Array(bytes.buffer);
  return { head, data };
}
