import { Injectable, inject } from '@angular/core';
import { sliceHeadSchema, type SliceHead } from '@halfdeep/contracts';
import { map, type Observable } from 'rxjs';
import { Api, type Query } from './api';

/** A binary slice as it came: its head and its values, row-major, land NaN. */
export interface Slice {
  head: SliceHead;
  data: Float32Array | Float64Array;
}

/** The bytes of a slice do not say what they should: which part, what arrived, what would be right. */
export class SliceError extends Error {
  override readonly name = 'SliceError';
}

/** Typed arrays read memory in the machine's own order; the wire is little-endian. */
const LITTLE_ENDIAN = new Uint8Array(new Uint32Array([1]).buffer)[0] === 1;

/**
 * Decodes a binary slice: uint32 LE head length, the head as JSON, then the data at a multiple of 8.
 * The arrays are views on `bytes`, not copies. Throws SliceError when the bytes and the head disagree.
 */
export function decodeSlice(bytes: ArrayBuffer): Slice {
  if (bytes.byteLength < 8) throw new SliceError(`A slice has at least 8 bytes; ${bytes.byteLength} arrived.`);
  const headLength = new DataView(bytes).getUint32(0, true);
  const start = 4 + headLength;
  if (start > bytes.byteLength)
    throw new SliceError(`The head should have ${headLength} bytes; ${bytes.byteLength - 4} arrived.`);
  if (start % 8 !== 0) throw new SliceError(`The data should start at a multiple of 8 bytes; they start at ${start}.`);
  const head = parseHead(new TextDecoder().decode(new Uint8Array(bytes, 4, headLength)));
  const count = head.shape.reduce((product, length) => product * length, 1);
  const size = head.dtype === 'float32' ? 4 : 8;
  if (bytes.byteLength - start !== count * size)
    throw new SliceError(
      `${head.shape.join(' × ')} values of ${head.dtype} need ${count * size} bytes; ${bytes.byteLength - start} arrived.`,
    );
  if (!LITTLE_ENDIAN) return { head, data: swapped(bytes, start, count, head.dtype) };
  const data = head.dtype === 'float32' ? new Float32Array(bytes, start, count) : new Float64Array(bytes, start, count);
  return { head, data };
}

function parseHead(text: string): SliceHead {
  let json: unknown;
  try {
    json = JSON.parse(text);
  } catch (error) {
    throw new SliceError(
      `The head of the slice is not JSON: ${error instanceof Error ? error.message : 'unreadable'}.`,
    );
  }
  const parsed = sliceHeadSchema.safeParse(json);
  if (parsed.success) return parsed.data;
  const issue = parsed.error.issues[0];
  throw new SliceError(`The head of the slice is wrong at “${issue?.path.join('.') ?? ''}”: ${issue?.message ?? ''}.`);
}

function swapped(bytes: ArrayBuffer, start: number, count: number, dtype: 'float32' | 'float64') {
  const view = new DataView(bytes, start);
  if (dtype === 'float32') return Float32Array.from({ length: count }, (_, k) => view.getFloat32(4 * k, true));
  return Float64Array.from({ length: count }, (_, k) => view.getFloat64(8 * k, true));
}

export type LineAlong = 'latitude' | 'longitude';
export type SeriesStream = 'sections' | 'moorings' | 'budget';

/** Reads binary slices of runs. Each call is one request; an unsubscribe cancels it. */
@Injectable({ providedIn: 'root' })
export class SliceClient {
  private readonly api = inject(Api);

  /** The map of one record: [latitude, longitude]. */
  map(runId: string, record: number, variable: string): Observable<Slice> {
    return this.read(`/api/runs/${runId}/frames/${record}`, { variable });
  }

  /** Days `fromDay` to `toDay` of the row or column nearest to `atDeg`: [time, place]. */
  hovmoller(
    runId: string,
    variable: string,
    along: LineAlong,
    atDeg: number,
    fromDay: number,
    toDay: number,
  ): Observable<Slice> {
    return this.read(`/api/runs/${runId}/hovmoller`, { variable, [along]: atDeg, from: fromDay, to: toDay });
  }

  /** Records of a series stream from day `fromDay` to `toDay`: [time, column]. */
  series(runId: string, stream: SeriesStream, fromDay: number, toDay: number): Observable<Slice> {
    return this.read(`/api/runs/${runId}/series/${stream}`, { from: fromDay, to: toDay });
  }

  private read(path: string, query: Query): Observable<Slice> {
    return this.api.bytes(path, query).pipe(map(decodeSlice));
  }
}
