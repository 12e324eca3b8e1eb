import { setImmediate as breathe } from 'node:timers/promises';
import { type SliceHead, type Stream } from '@halfdeep/contracts';
import {
  axesOf,
  buildGrid,
  deriveColumn,
  deriveMap,
  deriveRow,
  nativesOf,
  neededColumns,
  neededRows,
  VARIABLE_INFO,
  type Grid,
  type NativeFields,
  type Variable,
} from '@halfdeep/ocean';
import {
  NATIVE_VARIABLES,
  RunFileError,
  runPaths,
  type NativeVariable,
  type Run,
  type RunFileCache,
  type RunFileReader,
  type SeriesStream,
} from '@halfdeep/store';
import { ConflictError, InputError, NotFoundError } from '../http/errors';

export interface Slice {
  head: SliceHead;
  data: Float32Array | Float64Array;
}

/** Where a space-time slice lies, as it was asked. */
export interface AskedLine {
  along: 'latitude' | 'longitude';
  askedDeg: number;
}

/** Model days, both included; left out: from the first, to the last. */
export interface DayRange {
  from?: number;
  to?: number;
}

const MOST_VALUES = 32e6;
const RECORDS_A_READ = 64;
const GRIDS_KEPT = 16;
const LATITUDE = { name: 'latitude', unit: '° N' };
const LONGITUDE = { name: 'longitude', unit: '° E' };
const TIME = { name: 'time', unit: 'd' };
const STREAM_NAMES: Record<SeriesStream, string> = {
  sections: 'Sections',
  moorings: 'Moorings',
  budget: 'Mass and energy budget',
};

/** Slices of run files: native variables as they stand there, others derived by the numerical core. */
export class SliceService {
  /** Grids used last, oldest first. */
  private readonly grids = new Map<string, Grid>();

  constructor(
    private readonly files: RunFileCache,
    private readonly varDir: string,
  ) {}

  /** A map of one frame. NotFoundError when the run does not hold it. */
  map(run: Run, variable: Variable, asked: number | 'latest'): Promise<Slice> {
    return this.read(run, async (reader) => {
      const available = (await reader.watermarks()).frames.records;
      const record = asked === 'latest' ? available - 1 : asked;
      if (record < 0 || record >= available)
        throw new NotFoundError(`“${run.label}” holds ${available} frames, counted from 0; frame ${asked} was asked.`);
      const day = reader.dayOf('frames', record);
      const state: NativeFields = { day };
      for (const name of nativesOf(variable)) state[name] = (await reader.readMap(name, record)).data;
      const map = deriveMap(variable, this.gridOf(run), run.setup, state);
      const axes = [
        { ...LATITUDE, values: map.latDeg },
        { ...LONGITUDE, values: map.lonDeg },
      ];
      return {
        head: { ...this.fieldHead(run, variable), shape: map.shape, axes, line: null, day, from: record, available },
        data: map.data,
      };
    });
  }

  /** A space-time slice, [time, place], along the nearest row or column. InputError (422) when it would be too large. */
  hovmoller(run: Run, variable: Variable, asked: AskedLine, range: DayRange): Promise<Slice> {
    return this.read(run, async (reader) => {
      const grid = this.gridOf(run);
      const along = asked.along === 'latitude';
      const needed = along ? neededRows(variable, grid, asked.askedDeg) : neededColumns(variable, grid, asked.askedDeg);
      const axes = axesOf(variable, grid);
      const places = along ? axes.lonDeg : axes.latDeg;
      const available = (await reader.watermarks()).frames.records;
      const [rec0, rec1] = recordsWithin(reader, 'frames', available, range);
      const data = new Float32Array(checkedSize(rec1 - rec0, places.length));
      for (let first = rec0; first < rec1; first += RECORDS_A_READ) {
        const end = Math.min(rec1, first + RECORDS_A_READ);
        const lines = await readLines(reader, needed, along, first, end);
        for (let record = first; record < end; record++) {
          const native = { ...lines(record), day: reader.dayOf('frames', record) };
          const line = (along ? deriveRow : deriveColumn)(variable, grid, run.setup, needed, native);
          data.set(line, (record - rec0) * places.length);
        }
        await breathe();
      }
      return {
        head: {
          ...this.fieldHead(run, variable),
          shape: [rec1 - rec0, places.length],
          axes: [
            { ...TIME, values: daysOf(reader, 'frames', rec0, rec1) },
            { ...(along ? LONGITUDE : LATITUDE), values: Array.from(places) },
          ],
          line: { ...asked, atDeg: needed.atDeg, index: needed.index },
          from: rec0,
          available,
        },
        data,
      };
    });
  }

  /** Records of a series stream, [time, column], float64. */
  series(run: Run, stream: SeriesStream, range: DayRange): Promise<Slice> {
    return this.read(run, async (reader) => {
      const columns = reader.meta().columns[stream];
      const available = (await reader.watermarks())[stream].records;
      const [rec0, rec1] = recordsWithin(reader, stream, available, range);
      checkedSize(rec1 - rec0, columns.length);
      const empty = rec1 === rec0 || columns.length === 0;
      const data = empty ? new Float64Array(0) : (await reader.readSeries(stream, rec0, rec1)).data;
      return {
        head: {
          runId: run.id,
          name: STREAM_NAMES[stream],
          variable: null,
          unit: null,
          dtype: 'float64',
          shape: [rec1 - rec0, columns.length],
          axes: [
            { ...TIME, values: daysOf(reader, stream, rec0, rec1) },
            { name: 'column', unit: '', values: columns.map((_, k) => k) },
          ],
          line: null,
          columns,
          from: rec0,
          available,
        },
        data,
      };
    });
  }

  private fieldHead(run: Run, variable: Variable) {
    const { label, unit } = VARIABLE_INFO[variable];
    return { runId: run.id, name: label, variable, unit, dtype: 'float32' as const, columns: null };
  }

  /** The grid follows from the setup, which never changes. */
  private gridOf(run: Run): Grid {
    const grid = this.grids.get(run.id) ?? buildGrid(run.setup);
    this.grids.delete(run.id);
    this.grids.set(run.id, grid);
    const [oldest] = this.grids.keys();
    if (this.grids.size > GRIDS_KEPT) this.grids.delete(oldest);
    return grid;
  }

  private async read<T>(run: Run, work: (reader: RunFileReader) => Promise<T>): Promise<T> {
    try {
      return await this.files.use(runPaths(this.varDir, run.id).file, work);
    } catch (error) {
      if (!(error instanceof RunFileError)) throw error;
      throw new ConflictError(`“${run.label}” is ${run.state} and has no results yet.`);
    }
  }
}

/** Half-open range of the records whose day lies in the range of days. */
export function recordsWithin(
  reader: Pick<RunFileReader, 'dayOf'>,
  stream: Stream,
  available: number,
  { from = 0, to = Infinity }: DayRange,
): [number, number] {
  const first = reader.dayOf(stream, 0);
  const interval = reader.dayOf(stream, 1) - first;
  // Days on the wire have been through text: a hair beside a record still means it.
  const hair = 1e-6 * interval;
  const rec0 = Math.max(0, Math.ceil((from - hair - first) / interval));
  const rec1 = Math.min(available, Math.floor((to + hair - first) / interval) + 1);
  return rec0 < rec1 ? [rec0, rec1] : [Math.min(rec0, available), Math.min(rec0, available)];
}

function daysOf(reader: RunFileReader, stream: Stream, rec0: number, rec1: number): number[] {
  return Array.from({ length: rec1 - rec0 }, (_, k) => reader.dayOf(stream, rec0 + k));
}

function checkedSize(records: number, width: number): number {
  if (records * width <= MOST_VALUES) return records * width;
  const detail =
    `The slice would hold ${records} × ${width} values; ${MOST_VALUES} at most go out at once. ` +
    'Ask for fewer days with from and to.';
  throw new InputError(detail, [{ pointer: '/to', detail }], 422);
}

type Needed = Record<NativeVariable, [number, number] | null>;

/** Reads the native lines of some records and hands out those of one record. */
async function readLines(
  reader: RunFileReader,
  needed: Needed,
  along: boolean,
  rec0: number,
  rec1: number,
): Promise<(record: number) => Partial<Record<NativeVariable, Float32Array>>> {
  const blocks: [NativeVariable, Float32Array, number][] = [];
  for (const name of NATIVE_VARIABLES) {
    const lines = needed[name];
    if (!lines) continue;
    const block = along
      ? await reader.readRows(name, lines[0], lines[1], rec0, rec1)
      : await reader.readColumns(name, lines[0], lines[1], rec0, rec1);
    blocks.push([name, block.data, block.shape[1] * block.shape[2]]);
  }
  return (record) =>
    Object.fromEntries(
      blocks.map(([name, data, size]) => [name, data.subarray((record - rec0) * size, (record - rec0 + 1) * size)]),
    );
}
