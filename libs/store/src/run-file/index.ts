export * from './run-paths';
export * from './safe-file';
export {
  NATIVE_VARIABLES,
  type NativeVariable,
  nativeShape,
  recordsAt,
  stepOfRecord,
  RUN_FILE_VERSION,
  type RunFileMeta,
  type SeriesStream,
  type CheckpointEntry,
  type Watermark,
  type Watermarks,
} from './layout';
export { RunFileError } from './run-file-handle';
export * from './run-file-writer';
export * from './run-file-reader';
export * from './run-file-cache';
