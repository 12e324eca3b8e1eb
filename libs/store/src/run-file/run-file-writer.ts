import { basename, join } from 'node:path';
import { type Frame } from '@halfdeep/ocean';
import { STREAMS, type Stream } from '@halfdeep/contracts';
import { FrameStore } from './frame-store';
import {
  type CheckpointEntry,
  recordsAt,
  RUN_FILE_SCHEMA,
  RUN_FILE_VERSION,
  type RunFileMeta,
  SERIES_STREAMS,
  type SeriesStream,
  stepOfRecord,
  streamNumber,
  type Watermarks,
} from './layout';
import { readMeta, readWatermarks, RunFileError, RunFileHandle } from './run-file-handle';
import { listRunFiles, type RunPaths, unlinkIfThere } from './run-paths';
import { writeWhole } from './safe-file';
import { SeriesStore } from './series-store';

const KEPT_CHECKPOINTS = 2;

/**
 * The one writer of a run file. Records gather in memory (`addFrame`, `addRecord`) and go to the file in one
 * transaction with their watermarks (`commit`). Not for concurrent use by two processes: the run's lock sees to that.
 */
export class RunFileWriter {
  private readonly frames: FrameStore;
  private readonly series: Record<SeriesStream, SeriesStore>;
  private frameRecords = 0;
  private pendingFrames: Frame[] = [];
  private pendingRows: Record<SeriesStream, Float64Array[]> = { sections: [], moorings: [], budget: [] };
  /** Bytes that wait for the next commit. */
  pendingBytes = 0;

  private constructor(
    private readonly handle: RunFileHandle,
    readonly meta: RunFileMeta,
    private readonly paths: RunPaths,
  ) {
    this.frames = new FrameStore(handle, meta);
    const store = (stream: SeriesStream) => new SeriesStore(handle, meta, stream);
    this.series = { sections: store('sections'), moorings: store('moorings'), budget: store('budget') };
  }

  /**
   * Opens the run file of a run, or makes it. RunFileError when the file belongs to another setup or layout: a run file
   * and its setup never part.
   */
  static async open(paths: RunPaths, meta: Omit<RunFileMeta, 'schemaVersion'>): Promise<RunFileWriter> {
    const handle = await RunFileHandle.open(paths.file);
    try {
      const full: RunFileMeta = { ...meta, schemaVersion: RUN_FILE_VERSION };
      for (const statement of RUN_FILE_SCHEMA.split(';').filter((text) => text.trim())) await handle.run(statement);
      await handle.transaction('IMMEDIATE', () => writeMetaOnce(handle, full));
      const writer = new RunFileWriter(handle, full, paths);
      await writer.load(await readWatermarks(handle));
      return writer;
    } catch (error) {
      await handle.close();
      throw error;
    }
  }

  /** Records that `commit` has written, by stream. */
  get committed(): Record<Stream, number> {
    const { sections, moorings, budget } = this.series;
    return {
      frames: this.frameRecords,
      sections: sections.records,
      moorings: moorings.records,
      budget: budget.records,
    };
  }

  /** The frame's arrays are kept until the commit: give each call its own. */
  addFrame(frame: Frame): void {
    this.pendingFrames.push(frame);
    this.pendingBytes += frame.eta.byteLength + frame.u.byteLength + frame.v.byteLength;
  }

  /** One record of a series: a value a column, kept until the commit. */
  addRecord(stream: SeriesStream, row: Float64Array): void {
    this.pendingRows[stream].push(row);
    this.pendingBytes += row.byteLength;
  }

  /**
   * Writes all pending records and the watermarks in one transaction. Resolves to false when nothing was pending. After
   * a failure (a full disk) the file holds what it held before, and this writer serves only to be closed or rewound.
   */
  async commit(): Promise<boolean> {
    if (this.pendingBytes === 0 && this.pendingFrames.length === 0) return false;
    const frames = this.pendingFrames;
    const rows = this.pendingRows;
    this.pendingFrames = [];
    this.pendingRows = { sections: [], moorings: [], budget: [] };
    this.pendingBytes = 0;
    await this.handle.transaction('IMMEDIATE', async () => {
      if (frames.length > 0) await this.frames.append(this.frameRecords, frames);
      for (const stream of SERIES_STREAMS) await this.series[stream].append(rows[stream]);
      this.frameRecords += frames.length;
      await this.writeWatermarks();
    });
    return true;
  }

  /** Recorded checkpoints, newest first. */
  async checkpoints(): Promise<CheckpointEntry[]> {
    const entries = await this.handle.exclusive(() =>
      this.handle.all<CheckpointEntry>('SELECT step, rec AS frames, path, sha256 FROM checkpoint ORDER BY step DESC'),
    );
    return entries.map((entry) => ({ ...entry, path: join(this.paths.folder, entry.path) }));
  }

  /**
   * Commits what is pending, writes the checkpoint whole, records it and forgets all but the last two. When this
   * resolves, the checkpoint survives a loss of power. All records up to `step` must have been added.
   */
  async saveCheckpoint(step: number, bytes: Uint8Array): Promise<void> {
    await this.commit();
    const path = this.paths.checkpoint(step);
    const sha256 = await writeWhole(path, bytes);
    const target = recordsAt(this.meta, step);
    const gone = await this.durably(async () => {
      await this.requireRecords(target, step);
      await this.handle.run(
        'INSERT INTO checkpoint (step, rec, path, sha256) VALUES (?, ?, ?, ?) ' +
          'ON CONFLICT (step) DO UPDATE SET rec = excluded.rec, path = excluded.path, sha256 = excluded.sha256',
        [step, target.frames, basename(path), sha256],
      );
      const old = await this.handle.all<{ step: number; path: string }>(
        'SELECT step, path FROM checkpoint ORDER BY step DESC LIMIT -1 OFFSET ?',
        [KEPT_CHECKPOINTS],
      );
      for (const entry of old) await this.handle.run('DELETE FROM checkpoint WHERE step = ?', [entry.step]);
      return old;
    });
    for (const entry of gone) await unlinkIfThere(join(this.paths.folder, entry.path));
  }

  /**
   * Takes the file back to what it held when `step` was complete, in one transaction: later records and checkpoints are
   * forgotten. A step before the start empties it. RunFileError when the file holds less than that.
   */
  async rewindTo(step: number): Promise<void> {
    this.pendingFrames = [];
    this.pendingRows = { sections: [], moorings: [], budget: [] };
    this.pendingBytes = 0;
    const target = recordsAt(this.meta, step);
    await this.durably(async () => {
      await this.requireRecords(target, step);
      await this.frames.trim(target.frames);
      this.frameRecords = target.frames;
      for (const stream of SERIES_STREAMS) await this.series[stream].trim(target[stream]);
      await this.writeWatermarks();
      await this.handle.run('DELETE FROM checkpoint WHERE step > ?', [step]);
    });
    await this.sweep();
  }

  async close(): Promise<void> {
    await this.handle.close();
  }

  private async requireRecords(target: Record<Stream, number>, step: number): Promise<void> {
    const held = await readWatermarks(this.handle);
    for (const stream of STREAMS)
      if (held[stream].records < target[stream])
        throw new RunFileError(
          `The run file holds ${held[stream].records} records of ${stream}; at step ${step} it must have ${target[stream]}.`,
        );
  }

  /** Unlinks checkpoint files that are not recorded, half-written ones among them. */
  private async sweep(): Promise<void> {
    const kept = new Set((await this.checkpoints()).map((entry) => entry.path));
    for (const file of await listRunFiles(this.paths))
      if (/\.(checkpoint|tmp)$/.test(file) && !kept.has(file)) await unlinkIfThere(file);
  }

  /** A transaction that is on the disk, not only in the system's cache, when it resolves. */
  private async durably<T>(work: () => Promise<T>): Promise<T> {
    await this.handle.exclusive(() => this.handle.run('PRAGMA synchronous = FULL'));
    try {
      return await this.handle.transaction('IMMEDIATE', work);
    } finally {
      await this.handle.exclusive(() => this.handle.run('PRAGMA synchronous = NORMAL'));
    }
  }

  private async load(held: Watermarks): Promise<void> {
    this.frameRecords = held.frames.records;
    for (const stream of SERIES_STREAMS) await this.series[stream].load(held[stream].records);
  }

  private async writeWatermarks(): Promise<void> {
    const rows = STREAMS.flatMap((stream) => {
      const records = this.committed[stream];
      const day = records ? stepOfRecord(this.meta, stream, records - 1) / this.meta.stepsPerDay : null;
      return [streamNumber(stream), records, day];
    });
    await this.handle.run(
      `INSERT INTO progress (stream, rec, day) VALUES ${STREAMS.map(() => '(?,?,?)').join(',')} ` +
        'ON CONFLICT (stream) DO UPDATE SET rec = excluded.rec, day = excluded.day',
      rows,
    );
  }
}

/** Writes the meta table of a new file, or checks that the file is of the same run. */
async function writeMetaOnce(handle: RunFileHandle, meta: RunFileMeta): Promise<void> {
  const [{ n }] = await handle.all<{ n: number }>('SELECT count(*) AS n FROM meta');
  if (n === 0) {
    const entries = Object.entries(meta).map(([key, value]) => [key, JSON.stringify(value)]);
    await handle.run(`INSERT INTO meta (key, value) VALUES ${entries.map(() => '(?,?)').join(',')}`, entries.flat());
    return;
  }
  const found = await readMeta(handle);
  if (found.runId !== meta.runId || JSON.stringify(found.setup) !== JSON.stringify(meta.setup))
    throw new RunFileError(`The run file belongs to run ${found.runId} with another setup than run ${meta.runId}.`);
}
