import { asFloat64, blobOf, chunkRecords, type RunFileMeta, type SeriesStream, streamNumber } from './layout';
import { type RunFileHandle } from './run-file-handle';

/**
 * Keeps one float64 series of a run file in chunks; the newest, growing chunk stays in memory too. Every method that
 * writes is called inside a transaction of the handle.
 */
export class SeriesStore {
  /** Records stored. */
  records = 0;
  private readonly columns: number;
  private readonly perChunk: number;
  private open: Float64Array;

  constructor(
    private readonly handle: RunFileHandle,
    meta: RunFileMeta,
    private readonly stream: SeriesStream,
  ) {
    this.columns = meta.columns[stream].length;
    this.perChunk = chunkRecords(this.columns);
    this.open = new Float64Array(this.perChunk * this.columns);
  }

  /** Takes up a file that holds `records` of this stream. */
  async load(records: number): Promise<void> {
    this.records = records;
    this.open.fill(0);
    const kept = records % this.perChunk;
    if (kept === 0) return;
    const chunk = Math.floor(records / this.perChunk);
    const [row] = await this.handle.all<{ data: Buffer } | undefined>(
      'SELECT data FROM series WHERE stream = ? AND chunk = ?',
      [streamNumber(this.stream), chunk],
    );
    if (!row || row.data.byteLength < kept * this.columns * 8)
      throw new RangeError(`The run file lacks records of ${this.stream} before record ${records}.`);
    this.open.set(asFloat64(row.data).subarray(0, kept * this.columns));
  }

  /** Appends rows of one value a column. RangeError when a row has another length. */
  async append(rows: readonly Float64Array[]): Promise<void> {
    let written = this.records % this.perChunk;
    for (const [k, row] of rows.entries()) {
      if (row.length !== this.columns)
        throw new RangeError(`A record of ${this.stream} has ${this.columns} columns; ${row.length} arrived.`);
      this.open.set(row, written * this.columns);
      written++;
      this.records++;
      const full = written === this.perChunk;
      if (full || k === rows.length - 1) await this.put(Math.floor((this.records - 1) / this.perChunk), written);
      if (full) written = 0;
    }
  }

  /** Forgets all records from `records` on. */
  async trim(records: number): Promise<void> {
    const kept = records % this.perChunk;
    const chunk = Math.floor(records / this.perChunk);
    const number = streamNumber(this.stream);
    await this.handle.run('DELETE FROM series WHERE stream = ? AND chunk >= ?', [number, kept ? chunk + 1 : chunk]);
    if (kept)
      await this.handle.run(
        'UPDATE series SET n = ?, data = substr(data, 1, ?) WHERE stream = ? AND chunk = ? AND n > ?',
        [kept, kept * this.columns * 8, number, chunk, kept],
      );
    await this.load(records);
  }

  /** A chunk only grows: the guard keeps a replay from shortening what is there. */
  private async put(chunk: number, n: number): Promise<void> {
    await this.handle.run(
      'INSERT INTO series (stream, chunk, n, data) VALUES (?, ?, ?, ?) ON CONFLICT (stream, chunk) ' +
        'DO UPDATE SET n = excluded.n, data = excluded.data WHERE excluded.n >= series.n',
      [streamNumber(this.stream), chunk, n, blobOf(this.open.slice(0, n * this.columns))],
    );
  }
}
