import { signal } from '@angular/core';
import { type SliceHead } from '@halfdeep/contracts';
import { type Observable, Subscription } from 'rxjs';
import { SliceError, type Slice } from './slices';

/** Values of one request: 64 Ki values are 256 KiB of float32, read and drawn without a hitch. */
const VALUES_A_PIECE = 65_536;

/** Rows in time order that grow at their end: one typed array, doubled when it is full, never copied for a reader. */
export class RowStore {
  width = 0;
  count = 0;
  private values: Float32Array | Float64Array = new Float32Array(0);
  private times = new Float64Array(0);

  /** Row k, a view; do not keep it across an append. */
  row(k: number): Float32Array | Float64Array {
    return this.values.subarray(k * this.width, (k + 1) * this.width);
  }
  /** Model day of row k; NaN outside. */
  day(k: number): number {
    return k >= 0 && k < this.count ? (this.times[k] ?? NaN) : NaN;
  }
  value(k: number, column: number): number {
    if (k < 0 || k >= this.count || column < 0 || column >= this.width) return NaN;
    return this.values[k * this.width + column] ?? NaN;
  }
  days(): Float64Array {
    return this.times.subarray(0, this.count);
  }
  /** One column as an array of its own, length `count`. */
  column(column: number): Float64Array {
    return Float64Array.from({ length: this.count }, (_, k) => this.value(k, column));
  }

  /** Appends what is new in the slice and returns how many rows that was. Throws SliceError on a gap or another width. */
  append(slice: Slice): number {
    const [rows = 0, width = 0] = slice.head.shape;
    if (rows === 0) return 0;
    if (this.count > 0 && width !== this.width)
      throw new SliceError(`Rows of ${this.width} values were expected; rows of ${width} arrived.`);
    if (slice.head.from > this.count)
      throw new SliceError(`Record ${this.count} was expected next; record ${slice.head.from} arrived.`);
    const skip = this.count - slice.head.from;
    const fresh = rows - skip;
    if (fresh <= 0) return 0;
    if (this.count === 0) {
      this.width = width;
      this.values = slice.head.dtype === 'float32' ? new Float32Array(0) : new Float64Array(0);
    }
    this.reserve(this.count + fresh);
    this.values.set(slice.data.subarray(skip * width), this.count * width);
    const times = slice.head.axes[0]?.values ?? [];
    for (let k = 0; k < fresh; k++) this.times[this.count + k] = times[skip + k] ?? NaN;
    this.count += fresh;
    return fresh;
  }

  /** Forgets rows from `count` on: a worker that died goes back to its checkpoint. */
  truncate(count: number): void {
    this.count = Math.min(this.count, Math.max(0, count));
  }

  private reserve(rows: number): void {
    if (rows <= this.times.length && rows * this.width <= this.values.length) return;
    const room = Math.max(rows, 2 * this.times.length, 64);
    const values =
      this.values instanceof Float32Array ? new Float32Array(room * this.width) : new Float64Array(room * this.width);
    values.set(this.values.subarray(0, this.count * this.width));
    this.values = values;
    const times = new Float64Array(room);
    times.set(this.times.subarray(0, this.count));
    this.times = times;
  }
}

/** How far a run has come with one stream: records there are, the day of the first, days between two. */
export interface Watermark {
  available: number;
  firstDay: number;
  intervalDays: number;
}

/**
 * Follows a slice that grows: told a watermark, it asks for the range that it lacks, piece by piece, and bumps
 * `version` when rows have come. An error keeps what was read; `again` or the next watermark goes on.
 */
export class GrowingSlice {
  readonly rows = new RowStore();
  readonly head = signal<SliceHead | null>(null);
  readonly version = signal(0);
  /** Pieces read and pieces in all while more than a tail is missing; null when nothing is being read. */
  readonly reading = signal<{ done: number; of: number } | null>(null);
  readonly error = signal<unknown>(null);
  private wanted: Watermark = { available: 0, firstDay: 0, intervalDays: 1 };
  private request: Subscription | null = null;
  private closed = false;

  /** `read(fromDay, toDay)` answers the records in that range, both ends included. */
  constructor(
    private readonly read: (fromDay: number, toDay: number) => Observable<Slice>,
    private readonly expectedWidth: number,
  ) {}

  want(mark: Watermark): void {
    this.wanted = mark;
    if (mark.available < this.rows.count) {
      this.rows.truncate(mark.available);
      this.version.update((n) => n + 1);
    }
    if (!this.request) this.next(0);
  }

  again(): void {
    this.error.set(null);
    if (!this.request) this.next(0);
  }

  close(): void {
    this.closed = true;
    this.request?.unsubscribe();
    this.request = null;
  }

  private next(done: number): void {
    const missing = this.wanted.available - this.rows.count;
    if (this.closed || missing <= 0) {
      this.reading.set(null);
      return;
    }
    const rowsAPiece = Math.max(16, Math.floor(VALUES_A_PIECE / (this.rows.width || this.expectedWidth)));
    const pieces = Math.ceil(missing / rowsAPiece);
    this.reading.set({ done, of: done + pieces });
    // Half an interval before the next record, so that rounding of days never asks for one twice or misses one.
    const half = this.wanted.intervalDays / 2;
    const from =
      this.rows.count === 0 ? Math.max(0, this.wanted.firstDay - half) : this.rows.day(this.rows.count - 1) + half;
    const first = this.rows.count === 0 ? this.wanted.firstDay : this.rows.day(this.rows.count - 1) + 2 * half;
    const to = first - half + Math.min(missing, rowsAPiece) * this.wanted.intervalDays;
    // Held before it is asked: an answer that comes at once must find it.
    const request = new Subscription();
    this.request = request;
    request.add(
      this.read(from, to).subscribe({
        next: (slice) => this.take(slice, done),
        error: (error: unknown) => this.fail(error),
      }),
    );
  }

  private take(slice: Slice, done: number): void {
    this.request = null;
    try {
      const fresh = this.rows.append(slice);
      this.error.set(null);
      this.head.set(slice.head);
      if (fresh > 0) {
        this.version.update((n) => n + 1);
        this.next(done + 1);
      } else this.reading.set(null); // the watermark is ahead of the file for a moment: the next one asks again
    } catch (error) {
      if (!(error instanceof SliceError)) throw error;
      this.fail(error);
    }
  }

  private fail(error: unknown): void {
    this.request = null;
    this.reading.set(null);
    this.error.set(error);
  }
}
