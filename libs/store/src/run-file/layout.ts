import { type Column, type Setup } from '@halfdeep/ocean';
import { STREAMS, type Stream } from '@halfdeep/contracts';

/** Fields that a run file keeps, each on its own points. */
export const NATIVE_VARIABLES = ['eta', 'u', 'v'] as const;
export type NativeVariable = (typeof NATIVE_VARIABLES)[number];
export type SeriesStream = Exclude<Stream, 'frames'>;
export const SERIES_STREAMS = ['sections', 'moorings', 'budget'] as const satisfies SeriesStream[];

/** Version of the layout below; a file of another version is refused. */
export const RUN_FILE_VERSION = 1;
/** A tile holds this many frames of this many rows and columns (fewer at the east and north edge). */
export const TILE_FRAMES = 16;
export const TILE_CELLS = 25;

/** Everything that was known when the run file was made; it makes the file readable on its own. */
export interface RunFileMeta {
  schemaVersion: number;
  runId: string;
  coreVersion: string;
  setup: Setup;
  /** Cells west–east and south–north; u is [ny][nx + 1], v is [ny + 1][nx]. */
  nx: number;
  ny: number;
  /** Degrees: cell centres, and the lines on which u (lonFace) and v (latFace) points lie. */
  axes: { lonCentre: number[]; latCentre: number[]; lonFace: number[]; latFace: number[] };
  units: Record<NativeVariable, string>;
  stepsPerDay: number;
  /** Absolute steps: where this run begins and ends. */
  startStep: number;
  totalSteps: number;
  /** Steps between records. Frame k is the instant startStep + k·interval; series record k closes interval k. */
  intervals: Record<Stream, number>;
  columns: Record<SeriesStream, Column[]>;
}

/** Records a stream holds and the model day of the last one (NaN when there is none). */
export interface Watermark {
  records: number;
  day: number;
}
export type Watermarks = Record<Stream, Watermark>;

/** One recorded checkpoint. */
export interface CheckpointEntry {
  step: number;
  /** Frames the file held at that step. */
  frames: number;
  /** Absolute; the file keeps the name alone, so that a folder of runs can be moved. */
  path: string;
  sha256: string;
}

/** Rows and columns of a native variable. */
export function nativeShape(meta: Pick<RunFileMeta, 'nx' | 'ny'>, variable: NativeVariable): [number, number] {
  return [variable === 'v' ? meta.ny + 1 : meta.ny, variable === 'u' ? meta.nx + 1 : meta.nx];
}

/** Records of each stream when `step` is complete, none before the start: a function of the step alone, as rewinding needs. */
export function recordsAt(meta: Pick<RunFileMeta, 'startStep' | 'intervals'>, step: number): Record<Stream, number> {
  if (step < meta.startStep) return { frames: 0, sections: 0, moorings: 0, budget: 0 };
  const closed = (stream: Stream) => Math.floor((step - meta.startStep) / meta.intervals[stream]);
  return {
    frames: closed('frames') + 1,
    sections: closed('sections'),
    moorings: closed('moorings'),
    budget: closed('budget'),
  };
}

/** Absolute step at which record `record` of a stream is taken. */
export function stepOfRecord(
  meta: Pick<RunFileMeta, 'startStep' | 'intervals'>,
  stream: Stream,
  record: number,
): number {
  return meta.startStep + (stream === 'frames' ? record : record + 1) * meta.intervals[stream];
}

/** Records of one stored chunk of a series: about 32 kB. Depends on the number of columns alone. */
export function chunkRecords(columns: number): number {
  return Math.max(16, Math.min(1024, Math.floor(32_768 / (8 * Math.max(1, columns)))));
}

export const variableNumber = (variable: NativeVariable): number => NATIVE_VARIABLES.indexOf(variable);
export const streamNumber = (stream: Stream): number => STREAMS.indexOf(stream);

export const RUN_FILE_SCHEMA = `
CREATE TABLE IF NOT EXISTS frame (var INT, rec INT, data BLOB NOT NULL, PRIMARY KEY (var, rec));
CREATE TABLE IF NOT EXISTS tile (var INT, tb INT, tj INT, ti INT, n INT NOT NULL, data BLOB NOT NULL,
  PRIMARY KEY (var, tb, tj, ti));
CREATE TABLE IF NOT EXISTS series (stream INT, chunk INT, n INT NOT NULL, data BLOB NOT NULL,
  PRIMARY KEY (stream, chunk));
CREATE TABLE IF NOT EXISTS progress (stream INTEGER PRIMARY KEY, rec INT NOT NULL, day REAL);
CREATE TABLE IF NOT EXISTS checkpoint (step INTEGER PRIMARY KEY, rec INT NOT NULL, path TEXT NOT NULL,
  sha256 TEXT NOT NULL);
CREATE TABLE IF NOT EXISTS meta (key TEXT PRIMARY KEY, value TEXT NOT NULL);
`;

/** A Buffer over the same memory, as node-sqlite3 wants it for a BLOB. */
export const blobOf = (data: Float32Array | Float64Array): Buffer =>
  Buffer.from(data.buffer, data.byteOffset, data.byteLength);

/** A BLOB as float32: a view when the memory is aligned, else a copy. Little-endian, as every platform of Node is. */
export function asFloat32(blob: Buffer): Float32Array {
  const bytes = blob.byteOffset % 4 === 0 ? blob : Uint8Array.from(blob);
  return new Float32Array(bytes.buffer, bytes.byteOffset, bytes.byteLength / 4);
}

/** A BLOB as float64: a view when the memory is aligned, else a copy. */
export function asFloat64(blob: Buffer): Float64Array {
  const bytes = blob.byteOffset % 8 === 0 ? blob : Uint8Array.from(blob);
  return new Float64Array(bytes.buffer, bytes.byteOffset, bytes.byteLength / 8);
}
