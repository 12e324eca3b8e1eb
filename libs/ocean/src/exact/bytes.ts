import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';

const LITTLE_ENDIAN = new Uint8Array(Uint32Array.of(1).buffer)[0] === 1;

/** SHA-256 as 64 hex digits. */
export function sha256Hex(...parts: Uint8Array[]): string {
  const hash = sha256.create();
  for (const part of parts) hash.update(part);
  return bytesToHex(hash.digest());
}

/** SHA-256, 32 bytes. */
export function sha256Bytes(bytes: Uint8Array): Uint8Array {
  return sha256(bytes);
}

/** The raw bits of float64 values, little-endian on every machine. Shares memory where the machine is little-endian. */
export function float64Bytes(values: Float64Array): Uint8Array {
  if (LITTLE_ENDIAN) return new Uint8Array(values.buffer, values.byteOffset, values.byteLength);
  const bytes = new Uint8Array(values.byteLength);
  const view = new DataView(bytes.buffer);
  values.forEach((value, k) => view.setFloat64(8 * k, value, true));
  return bytes;
}

/** Float64 values from little-endian bytes; always a copy. */
export function float64From(bytes: Uint8Array): Float64Array {
  const copy = new Uint8Array(bytes); // not slice(): of a Buffer that would be a view into shared memory
  if (LITTLE_ENDIAN) return new Float64Array(copy.buffer);
  const view = new DataView(copy.buffer);
  return Float64Array.from({ length: copy.byteLength / 8 }, (_, k) => view.getFloat64(8 * k, true));
}

/** JSON with sorted keys: the same text for equal values, whatever order their keys came in. */
export function canonicalJson(value: unknown): string {
  return JSON.stringify(value, (_key, item: unknown) => {
    if (item === null || typeof item !== 'object' || Array.isArray(item)) return item;
    const entries = Object.entries(item as Record<string, unknown>);
    return Object.fromEntries(entries.sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0)));
  });
}
