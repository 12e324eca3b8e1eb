import { float64Bytes, float64From, sha256Bytes } from '../exact/bytes';

/**
 * Bytes of a checkpoint or of a last state: "HALFDEEP", uint32 layout version, uint32 length of the head, the head as
 * JSON padded with spaces to a multiple of 8, float64 arrays one after the other (little-endian), SHA-256 of all before.
 */
const MAGIC = new TextEncoder().encode('HALFDEEP');
const LAYOUT_VERSION = 1;
const FIXED = 16;
const CHECKSUM = 32;

export interface Container {
  head: Record<string, unknown>;
  arrays: Record<string, Float64Array>;
}

/** Packs a head and named arrays. */
export function pack({ head, arrays }: Container): Uint8Array {
  const lengths = Object.entries(arrays).map(([name, values]) => ({ name, length: values.length }));
  const text = JSON.stringify({ ...head, arrays: lengths });
  const encoded = new TextEncoder().encode(text);
  const headBytes = Math.ceil(encoded.length / 8) * 8;
  const payload = lengths.reduce((sum, { length }) => sum + 8 * length, 0);
  const bytes = new Uint8Array(FIXED + headBytes + payload + CHECKSUM);
  const view = new DataView(bytes.buffer);
  bytes.set(MAGIC, 0);
  view.setUint32(8, LAYOUT_VERSION, true);
  view.setUint32(12, headBytes, true);
  bytes.fill(0x20, FIXED, FIXED + headBytes);
  bytes.set(encoded, FIXED);
  let offset = FIXED + headBytes;
  for (const { name } of lengths) {
    const raw = float64Bytes(arrays[name]);
    bytes.set(raw, offset);
    offset += raw.length;
  }
  bytes.set(sha256Bytes(bytes.subarray(0, offset)), offset);
  return bytes;
}

/** Unpacks and checks every byte. Throws RangeError saying what is wrong; `what` names the thing in the message. */
export function unpack(bytes: Uint8Array, what: string): Container {
  if (bytes.length < FIXED + CHECKSUM || MAGIC.some((byte, k) => bytes[k] !== byte))
    throw new RangeError(`The ${what} is not one of ours: it does not begin with the mark HALFDEEP.`);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const version = view.getUint32(8, true);
  if (version !== LAYOUT_VERSION)
    throw new RangeError(`The ${what} has layout ${version}; this version reads layout ${LAYOUT_VERSION}.`);
  const end = bytes.length - CHECKSUM;
  const sum = sha256Bytes(bytes.subarray(0, end));
  if (sum.some((byte, k) => bytes[end + k] !== byte))
    throw new RangeError(`The ${what} is damaged: its checksum does not match its ${bytes.length} bytes.`);
  const headBytes = view.getUint32(12, true);
  const text = new TextDecoder().decode(bytes.subarray(FIXED, FIXED + headBytes));
  const { arrays: lengths, ...head } = JSON.parse(text) as { arrays: { name: string; length: number }[] };
  const arrays: Record<string, Float64Array> = {};
  let offset = FIXED + headBytes;
  for (const { name, length } of lengths) {
    arrays[name] = float64From(bytes.subarray(offset, offset + 8 * length));
    offset += 8 * length;
  }
  return { head, arrays };
}
