import { type Frame } from '@halfdeep/ocean';
import {
  asFloat32,
  blobOf,
  NATIVE_VARIABLES,
  nativeShape,
  type NativeVariable,
  type RunFileMeta,
  TILE_CELLS,
  TILE_FRAMES,
  variableNumber,
} from './layout';
import { type RunFileHandle } from './run-file-handle';

const TILES_A_STATEMENT = 64;
const tilesOf = (cells: number) => Math.ceil(cells / TILE_CELLS);

/**
 * Keeps frames of a run file: the newest as whole maps (the tail, fewer than 16), all before in tiles of 16 frames ×
 * 25 × 25 cells. Every method is called inside a transaction of the handle.
 */
export class FrameStore {
  constructor(
    private readonly handle: RunFileHandle,
    private readonly meta: RunFileMeta,
  ) {}

  /** Appends `frames` as records `from`, `from + 1`, …; whole groups of 16 go to tiles, the rest to the tail. */
  async append(from: number, frames: readonly Frame[]): Promise<void> {
    const end = from + frames.length;
    const tailStart = end - (end % TILE_FRAMES);
    for (let block = Math.floor(from / TILE_FRAMES); block * TILE_FRAMES < tailStart; block++) {
      for (const variable of NATIVE_VARIABLES)
        await this.writeTiles(variable, block, (record) =>
          record < from ? this.readTail(variable, record) : frames[record - from][variable],
        );
      await this.handle.run('DELETE FROM frame WHERE rec < ?', [(block + 1) * TILE_FRAMES]);
    }
    for (let record = Math.max(from, tailStart); record < end; record++) {
      const parameters = NATIVE_VARIABLES.flatMap((variable) => [
        variableNumber(variable),
        record,
        blobOf(frames[record - from][variable]),
      ]);
      await this.handle.run(
        'INSERT INTO frame (var, rec, data) VALUES (?, ?, ?), (?, ?, ?), (?, ?, ?) ' +
          'ON CONFLICT (var, rec) DO UPDATE SET data = excluded.data',
        parameters,
      );
    }
  }

  /** Forgets all frames from record `records` on; a tile that is cut through goes back to the tail. */
  async trim(records: number): Promise<void> {
    const block = Math.floor(records / TILE_FRAMES);
    const kept = records % TILE_FRAMES;
    await this.handle.run('DELETE FROM frame WHERE rec >= ?', [records]);
    if (kept > 0)
      for (const variable of NATIVE_VARIABLES) for (let k = 0; k < kept; k++) await this.untile(variable, block, k);
    await this.handle.run('DELETE FROM tile WHERE tb >= ?', [block]);
  }

  private async readTail(variable: NativeVariable, record: number): Promise<Float32Array> {
    const [row] = await this.handle.all<{ data: Buffer } | undefined>(
      'SELECT data FROM frame WHERE var = ? AND rec = ?',
      [variableNumber(variable), record],
    );
    if (!row) throw new RangeError(`The run file lacks frame ${record} of ${variable}.`);
    return asFloat32(row.data);
  }

  /** Cuts 16 maps into tiles, one frame in memory after another, and writes them. */
  private async writeTiles(
    variable: NativeVariable,
    block: number,
    frameOf: (record: number) => Float32Array | Promise<Float32Array>,
  ): Promise<void> {
    const [rows, columns] = nativeShape(this.meta, variable);
    const tiles = Array.from({ length: tilesOf(rows) * tilesOf(columns) }, (_, k) => {
      const tj = Math.floor(k / tilesOf(columns));
      const ti = k % tilesOf(columns);
      const height = Math.min(TILE_CELLS, rows - tj * TILE_CELLS);
      const width = Math.min(TILE_CELLS, columns - ti * TILE_CELLS);
      return { tj, ti, height, width, data: new Float32Array(TILE_FRAMES * height * width) };
    });
    for (let k = 0; k < TILE_FRAMES; k++) {
      const map = await frameOf(block * TILE_FRAMES + k);
      for (const { tj, ti, height, width, data } of tiles)
        for (let j = 0; j < height; j++) {
          const source = (tj * TILE_CELLS + j) * columns + ti * TILE_CELLS;
          data.set(map.subarray(source, source + width), (k * height + j) * width);
        }
    }
    for (let start = 0; start < tiles.length; start += TILES_A_STATEMENT) {
      const batch = tiles.slice(start, start + TILES_A_STATEMENT);
      await this.handle.run(
        `INSERT INTO tile (var, tb, tj, ti, n, data) VALUES ${batch.map(() => '(?,?,?,?,?,?)').join(',')} ` +
          'ON CONFLICT (var, tb, tj, ti) DO UPDATE SET n = excluded.n, data = excluded.data',
        batch.flatMap(({ tj, ti, data }) => [variableNumber(variable), block, tj, ti, TILE_FRAMES, blobOf(data)]),
      );
    }
  }

  /** Puts frame `k` of a tiled block back into the tail; does nothing when the block is not tiled. */
  private async untile(variable: NativeVariable, block: number, k: number): Promise<void> {
    const map = await readMapFromTiles(this.handle, this.meta, variable, block, k);
    if (!map) return;
    await this.handle.run(
      'INSERT INTO frame (var, rec, data) VALUES (?, ?, ?) ON CONFLICT (var, rec) DO UPDATE SET data = excluded.data',
      [variableNumber(variable), block * TILE_FRAMES + k, blobOf(map)],
    );
  }
}

/** One map out of the tiles of a block of 16 frames; null when the block is not tiled. */
export async function readMapFromTiles(
  handle: RunFileHandle,
  meta: RunFileMeta,
  variable: NativeVariable,
  block: number,
  k: number,
): Promise<Float32Array | null> {
  const [rows, columns] = nativeShape(meta, variable);
  // Cut the one frame out in SQLite: a sixteenth of the bytes crosses over.
  const tiles = await handle.all<{ tj: number; ti: number; data: Buffer }>(
    `SELECT tj, ti, substr(data, 1 + ? * (length(data) / ${TILE_FRAMES}), length(data) / ${TILE_FRAMES}) AS data
     FROM tile WHERE var = ? AND tb = ?`,
    [k, variableNumber(variable), block],
  );
  if (tiles.length === 0) return null;
  const map = new Float32Array(rows * columns);
  for (const { tj, ti, data } of tiles) {
    const values = asFloat32(data);
    const width = Math.min(TILE_CELLS, columns - ti * TILE_CELLS);
    for (let at = 0, j = tj * TILE_CELLS; at < values.length; at += width, j++)
      map.set(values.subarray(at, at + width), j * columns + ti * TILE_CELLS);
  }
  return map;
}
