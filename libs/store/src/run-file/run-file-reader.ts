import { type Stream } from '@halfdeep/contracts';
import { readMapFromTiles } from './frame-store';
import {
  asFloat32,
  asFloat64,
  chunkRecords,
  nativeShape,
  type NativeVariable,
  type RunFileMeta,
  type SeriesStream,
  stepOfRecord,
  streamNumber,
  TILE_CELLS,
  TILE_FRAMES,
  variableNumber,
  type Watermarks,
} from './layout';
import { readMeta, readWatermarks, RunFileHandle } from './run-file-handle';

/** Values of a native variable: [records][rows][columns], row-major; land is NaN. */
export interface Block {
  data: Float32Array;
  shape: [records: number, rows: number, columns: number];
}

/** Records of a series: [records][columns], row-major. */
export interface SeriesBlock {
  data: Float64Array;
  shape: [records: number, columns: number];
}

/** Bytes of tiles that one statement may bring into memory. */
const TILE_BYTES_A_STATEMENT = 16e6;

/**
 * Reads a run file while its worker goes on writing. Every answer is of one snapshot. Ranges are half-open; a range
 * outside what is there is a RangeError that names both.
 */
export class RunFileReader {
  private constructor(
    private readonly handle: RunFileHandle,
    private readonly known: RunFileMeta,
  ) {}

  /** `path` must be absolute. RunFileError when there is no run file of this layout. */
  static async open(path: string): Promise<RunFileReader> {
    const handle = await RunFileHandle.open(path, { readOnly: true });
    try {
      return new RunFileReader(handle, await readMeta(handle));
    } catch (error) {
      await handle.close();
      throw error;
    }
  }

  meta(): RunFileMeta {
    return this.known;
  }

  /** How many records each stream holds now. */
  watermarks(): Promise<Watermarks> {
    return this.handle.exclusive(() => readWatermarks(this.handle));
  }

  /** A number that changes whenever another process has committed: the truth behind hints. */
  async dataVersion(): Promise<number> {
    const [row] = await this.handle.exclusive(() => this.handle.all<{ data_version: number }>('PRAGMA data_version'));
    return row.data_version;
  }

  /** Model day of a record of a stream. */
  dayOf(stream: Stream, record: number): number {
    return stepOfRecord(this.known, stream, record) / this.known.stepsPerDay;
  }

  /** One whole frame of a variable, [rows][columns]. */
  readMap(variable: NativeVariable, record: number): Promise<Block> {
    const [rows, columns] = nativeShape(this.known, variable);
    return this.snapshot(async () => {
      await this.checkFrames(record, record + 1);
      const block = Math.floor(record / TILE_FRAMES);
      const tiled = await readMapFromTiles(this.handle, this.known, variable, block, record % TILE_FRAMES);
      const data = tiled ?? (await this.readTailRows(variable, record, 0, rows));
      return { data, shape: [1, rows, columns] };
    });
  }

  /** Rows j0 ≤ j < j1 of the frames rec0 ≤ rec < rec1: a space-time slice along a latitude. */
  readRows(variable: NativeVariable, j0: number, j1: number, rec0: number, rec1: number): Promise<Block> {
    return this.readBox(variable, [j0, j1], [0, nativeShape(this.known, variable)[1]], [rec0, rec1]);
  }

  /** Columns i0 ≤ i < i1 of the frames rec0 ≤ rec < rec1: a space-time slice along a meridian. */
  readColumns(variable: NativeVariable, i0: number, i1: number, rec0: number, rec1: number): Promise<Block> {
    return this.readBox(variable, [0, nativeShape(this.known, variable)[0]], [i0, i1], [rec0, rec1]);
  }

  /** One point through the frames rec0 ≤ rec < rec1: shape [records, 1, 1]. */
  readPoint(variable: NativeVariable, j: number, i: number, rec0: number, rec1: number): Promise<Block> {
    return this.readBox(variable, [j, j + 1], [i, i + 1], [rec0, rec1]);
  }

  /** Any box of rows, columns and frames. */
  readBox(
    variable: NativeVariable,
    [j0, j1]: [number, number],
    [i0, i1]: [number, number],
    [rec0, rec1]: [number, number],
  ): Promise<Block> {
    const [rows, columns] = nativeShape(this.known, variable);
    checkRange(`rows of ${variable}`, j0, j1, rows);
    checkRange(`columns of ${variable}`, i0, i1, columns);
    return this.snapshot(async () => {
      await this.checkFrames(rec0, rec1);
      const shape: Block['shape'] = [rec1 - rec0, j1 - j0, i1 - i0];
      const data = new Float32Array(shape[0] * shape[1] * shape[2]);
      const box = { variable, columns, j0, j1, i0, i1, rec0, rec1, data };
      const tiled = await this.copyTiles(box);
      for (let record = Math.max(rec0, tiled); record < rec1; record++) {
        const values = await this.readTailRows(variable, record, j0, j1);
        for (let j = 0; j < shape[1]; j++)
          data.set(values.subarray(j * columns + i0, j * columns + i1), ((record - rec0) * shape[1] + j) * shape[2]);
      }
      return { data, shape };
    });
  }

  /** Records rec0 ≤ rec < rec1 of a series. */
  readSeries(stream: SeriesStream, rec0: number, rec1: number): Promise<SeriesBlock> {
    const columns = this.known.columns[stream].length;
    const perChunk = chunkRecords(columns);
    return this.snapshot(async () => {
      checkRange(`records of ${stream}`, rec0, rec1, (await readWatermarks(this.handle))[stream].records);
      const data = new Float64Array((rec1 - rec0) * columns);
      const chunks = await this.handle.all<{ chunk: number; data: Buffer }>(
        'SELECT chunk, data FROM series WHERE stream = ? AND chunk >= ? AND chunk * ? < ? ORDER BY chunk',
        [streamNumber(stream), Math.floor(rec0 / perChunk), perChunk, rec1],
      );
      for (const { chunk, data: blob } of chunks) {
        const start = Math.max(rec0, chunk * perChunk);
        const end = Math.min(rec1, (chunk + 1) * perChunk);
        const values = asFloat64(blob);
        const first = chunk * perChunk;
        data.set(values.subarray((start - first) * columns, (end - first) * columns), (start - rec0) * columns);
      }
      return { data, shape: [rec1 - rec0, columns] };
    });
  }

  async close(): Promise<void> {
    await this.handle.close();
  }

  private snapshot<T>(work: () => Promise<T>): Promise<T> {
    return this.handle.transaction('DEFERRED', work);
  }

  private async checkFrames(rec0: number, rec1: number): Promise<void> {
    checkRange('frames', rec0, rec1, (await readWatermarks(this.handle)).frames.records);
  }

  /** Whole rows j0 ≤ j < j1 of one frame of the tail. */
  private async readTailRows(variable: NativeVariable, record: number, j0: number, j1: number): Promise<Float32Array> {
    const rowBytes = nativeShape(this.known, variable)[1] * 4;
    const [row] = await this.handle.all<{ data: Buffer }>(
      'SELECT substr(data, ?, ?) AS data FROM frame WHERE var = ? AND rec = ?',
      [1 + j0 * rowBytes, (j1 - j0) * rowBytes, variableNumber(variable), record],
    );
    return asFloat32(row.data);
  }

  /** Copies what lies in tiles into the box; resolves to the first record that does not. */
  private async copyTiles(box: Box): Promise<number> {
    const [{ blocks }] = await this.handle.all<{ blocks: number | null }>(
      'SELECT max(tb) + 1 AS blocks FROM tile WHERE var = ?',
      [variableNumber(box.variable)],
    );
    const end = Math.min(blocks ?? 0, Math.ceil(box.rec1 / TILE_FRAMES));
    const tj = [Math.floor(box.j0 / TILE_CELLS), Math.floor((box.j1 - 1) / TILE_CELLS)];
    const ti = [Math.floor(box.i0 / TILE_CELLS), Math.floor((box.i1 - 1) / TILE_CELLS)];
    const bytes = (tj[1] - tj[0] + 1) * (ti[1] - ti[0] + 1) * TILE_FRAMES * TILE_CELLS ** 2 * 4;
    const batch = Math.max(1, Math.floor(TILE_BYTES_A_STATEMENT / bytes));
    for (let block = Math.floor(box.rec0 / TILE_FRAMES); block < end; block += batch) {
      const tiles = await this.handle.all<Tile>(
        'SELECT tb, tj, ti, data FROM tile WHERE var = ? AND tb >= ? AND tb < ? AND tj >= ? AND tj <= ? ' +
          'AND ti >= ? AND ti <= ?',
        [variableNumber(box.variable), block, Math.min(end, block + batch), ...tj, ...ti],
      );
      for (const tile of tiles) copyTile(tile, box);
    }
    return (blocks ?? 0) * TILE_FRAMES;
  }
}

interface Tile {
  tb: number;
  tj: number;
  ti: number;
  data: Buffer;
}

/** A box of half-open ranges and the array, [records][rows][columns], that it fills. */
interface Box {
  variable: NativeVariable;
  /** Columns of the whole variable. */
  columns: number;
  j0: number;
  j1: number;
  i0: number;
  i1: number;
  rec0: number;
  rec1: number;
  data: Float32Array;
}

function copyTile({ tb, tj, ti, data }: Tile, box: Box): void {
  const values = asFloat32(data);
  const width = Math.min(TILE_CELLS, box.columns - ti * TILE_CELLS);
  const height = values.length / (TILE_FRAMES * width);
  const firstI = ti * TILE_CELLS;
  const i0 = Math.max(box.i0, firstI);
  const i1 = Math.min(box.i1, firstI + width);
  const firstJ = tj * TILE_CELLS;
  const j0 = Math.max(box.j0, firstJ);
  const j1 = Math.min(box.j1, firstJ + height);
  const firstRecord = tb * TILE_FRAMES;
  const rec1 = Math.min(box.rec1, firstRecord + TILE_FRAMES);
  for (let record = Math.max(box.rec0, firstRecord); record < rec1; record++)
    for (let j = j0; j < j1; j++) {
      const source = ((record - firstRecord) * height + j - firstJ) * width - firstI;
      const target = ((record - box.rec0) * (box.j1 - box.j0) + j - box.j0) * (box.i1 - box.i0) - box.i0;
      box.data.set(values.subarray(source + i0, source + i1), target + i0);
    }
}

function checkRange(what: string, start: number, end: number, available: number): void {
  const whole = Number.isInteger(start) && Number.isInteger(end);
  if (!whole || start < 0 || end > available || start >= end)
    throw new RangeError(`There are ${available} ${what}, counted from 0; ${start} to ${end} (exclusive) was asked.`);
}
