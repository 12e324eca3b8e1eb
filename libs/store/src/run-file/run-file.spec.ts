import fc from 'fast-check';
import { mkdtemp, readdir, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { type Frame, type Setup } from '@halfdeep/ocean';
import {
  adoptStartState,
  deleteRunFiles,
  NATIVE_VARIABLES,
  nativeShape,
  type NativeVariable,
  readVerified,
  recordsAt,
  RunFileCache,
  RunFileError,
  type RunFileMeta,
  RunFileReader,
  RunFileWriter,
  type RunPaths,
  runPaths,
  sha256Of,
  StateFileError,
  writeWhole,
} from './index';
import { chunkRecords } from './layout';

// The machine may be busy: none of these measures time.
vi.setConfig({ testTimeout: 60_000 });

// Two tiles and a bit each way, so that edges, corners and the wider u and taller v rows are all met.
const SIZE = { nx: 53, ny: 31 };
const column = (name: string) => ({ name, label: name, unit: '1', kind: 'instant' as const });
const META: Omit<RunFileMeta, 'schemaVersion'> = {
  runId: 'r',
  coreVersion: '0',
  setup: { schemaVersion: 1, length: { days: 100 } } as Setup,
  ...SIZE,
  axes: { lonCentre: [], latCentre: [], lonFace: [], latFace: [] },
  units: { eta: 'm', u: 'm/s', v: 'm/s' },
  stepsPerDay: 4,
  startStep: 8,
  totalSteps: 408,
  intervals: { frames: 4, sections: 4, moorings: 1, budget: 4 },
  columns: {
    sections: [column('a'), column('b')],
    moorings: Array.from({ length: 40 }, (_, k) => column(`m${k}`)),
    budget: [column('mass')],
  },
};

/** Value of a native variable at (j, i) of frame k, exact in float32; one cell is land. */
const valueOf = (variable: NativeVariable, k: number, j: number, i: number) =>
  j === 3 && i === 30 ? NaN : NATIVE_VARIABLES.indexOf(variable) * 2 ** 20 + k * 4096 + j * 64 + i;

function mapOf(variable: NativeVariable, k: number): Float32Array {
  const [rows, columns] = nativeShape(SIZE, variable);
  return Float32Array.from({ length: rows * columns }, (_, at) =>
    valueOf(variable, k, Math.floor(at / columns), at % columns),
  );
}
const frameOf = (k: number): Frame => ({
  step: 8 + 4 * k,
  day: 2 + k,
  eta: mapOf('eta', k),
  u: mapOf('u', k),
  v: mapOf('v', k),
});
/** Stands for all bits of an array: comparing hashes is much faster than comparing numbers. */
const bits = (data: Float32Array | Float64Array) =>
  sha256Of(new Uint8Array(data.buffer, data.byteOffset, data.byteLength));
const row = (columns: number, k: number) => Float64Array.from({ length: columns }, (_, c) => k + c / 7);

/** Adds all records of the steps after `from` up to `to`, as a worker would, committing every `every` steps. */
async function write(writer: RunFileWriter, from: number, to: number, every: number): Promise<void> {
  for (let step = from; step <= to; step++) {
    const before = recordsAt(META, step - 1);
    const now = recordsAt(META, step);
    if (now.frames > before.frames) writer.addFrame(frameOf(before.frames));
    for (const stream of ['sections', 'moorings', 'budget'] as const)
      if (now[stream] > before[stream]) writer.addRecord(stream, row(META.columns[stream].length, before[stream]));
    if ((step - from) % every === every - 1) await writer.commit();
  }
  await writer.commit();
}

let varDir: string;
let paths: RunPaths;
beforeEach(async () => {
  varDir = await mkdtemp(join(tmpdir(), 'run-file-'));
  paths = runPaths(varDir, 'r');
});
afterEach(() => rm(varDir, { recursive: true, force: true }));

async function written(to: number, every = 13): Promise<RunFileWriter> {
  const writer = await RunFileWriter.open(paths, META);
  await write(writer, META.startStep, to, every);
  return writer;
}

/** Everything a reader can see, for comparing two files. */
async function contents(path: string) {
  const reader = await RunFileReader.open(path);
  const marks = await reader.watermarks();
  const { frames, sections, moorings, budget } = marks;
  const maps = [];
  for (const variable of NATIVE_VARIABLES)
    for (let k = 0; k < frames.records; k++) maps.push(bits((await reader.readMap(variable, k)).data));
  const series = [];
  for (const [stream, mark] of Object.entries({ sections, moorings, budget }))
    if (mark.records) series.push(bits((await reader.readSeries(stream as 'budget', 0, mark.records)).data));
  await reader.close();
  return { marks, maps, series };
}

describe('run file', () => {
  it.each([1, 15, 16, 17, 33, 47])('gives back %i frames and their series as they were written', async (frames) => {
    const last = META.startStep + 4 * (frames - 1);
    const writer = await written(last);
    const reader = await RunFileReader.open(paths.file);
    const marks = await reader.watermarks();
    expect(marks.frames).toEqual({ records: frames, day: 2 + frames - 1 });
    expect(marks.moorings.records).toBe(4 * (frames - 1));
    for (const variable of NATIVE_VARIABLES)
      for (let k = 0; k < frames; k++)
        expect(bits((await reader.readMap(variable, k)).data)).toBe(bits(mapOf(variable, k)));
    if (frames > 1) {
      const { data, shape } = await reader.readSeries('moorings', 0, marks.moorings.records);
      expect(shape).toEqual([4 * (frames - 1), 40]);
      for (let k = 0; k < shape[0]; k++) expect(data.slice(k * 40, (k + 1) * 40)).toEqual(row(40, k));
    }
    expect(reader.meta().setup).toEqual(META.setup);
    await reader.close();
    await writer.close();
  });

  it('reads any box as a plain array would', async () => {
    const frames = 45;
    const writer = await written(META.startStep + 4 * (frames - 1), 29);
    const reader = await RunFileReader.open(paths.file);
    const range = (n: number) =>
      fc.tuple(fc.nat(n - 1), fc.nat(n - 1)).map(([a, b]): [number, number] => [Math.min(a, b), Math.max(a, b) + 1]);
    const boxes = fc.constantFrom(...NATIVE_VARIABLES).chain((variable) => {
      const [rows, columns] = nativeShape(SIZE, variable);
      return fc.record({ variable: fc.constant(variable), j: range(rows), i: range(columns), rec: range(frames) });
    });
    await fc.assert(
      fc.asyncProperty(boxes, async ({ variable, j, i, rec }) => {
        const { data, shape } = await reader.readBox(variable, j, i, rec);
        expect(shape).toEqual([rec[1] - rec[0], j[1] - j[0], i[1] - i[0]]);
        const plain = new Float32Array(data.length);
        let at = 0;
        for (let k = rec[0]; k < rec[1]; k++)
          for (let y = j[0]; y < j[1]; y++) for (let x = i[0]; x < i[1]; x++) plain[at++] = valueOf(variable, k, y, x);
        expect(bits(data)).toBe(bits(plain));
      }),
      { numRuns: 150 },
    );
    const [rows, columns] = nativeShape(SIZE, 'u');
    expect((await reader.readRows('u', 7, 9, 3, 40)).shape).toEqual([37, 2, columns]);
    expect((await reader.readColumns('u', 53, 54, 3, 40)).shape).toEqual([37, rows, 1]);
    expect((await reader.readPoint('v', 31, 52, 44, 45)).data[0]).toBe(valueOf('v', 44, 31, 52));
    await reader.close();
    await writer.close();
  });

  it('reads any part of a series across chunks', async () => {
    const writer = await written(META.totalSteps, 7);
    const reader = await RunFileReader.open(paths.file);
    const records = 400;
    expect(records).toBeGreaterThan(3 * chunkRecords(40));
    await fc.assert(
      fc.asyncProperty(fc.nat(records - 1), fc.integer({ min: 1, max: records }), async (start, length) => {
        const end = Math.min(records, start + length);
        const { data } = await reader.readSeries('moorings', start, end);
        const plain = Float64Array.from(
          { length: (end - start) * 40 },
          (_, at) => row(40, start + Math.floor(at / 40))[at % 40],
        );
        expect(bits(data)).toBe(bits(plain));
      }),
      { numRuns: 60 },
    );
    await reader.close();
    await writer.close();
  });

  it('says what is there when something else is asked', async () => {
    const writer = await written(META.startStep + 8);
    const reader = await RunFileReader.open(paths.file);
    await expect(reader.readMap('eta', 3)).rejects.toThrow(/3 frames.*3 to 4/);
    expect(() => reader.readRows('v', 31, 33, 0, 1)).toThrow(/32 rows of v/);
    await expect(reader.readSeries('budget', 0, 9)).rejects.toThrow(/2 records of budget/);
    await reader.close();
    await writer.close();
    await expect(RunFileReader.open(join(varDir, 'runs', 'none.sqlite'))).rejects.toThrow(RunFileError);
    await writeFile(join(varDir, 'runs', 'other.sqlite'), '');
    await expect(RunFileReader.open(join(varDir, 'runs', 'other.sqlite'))).rejects.toThrow(/not a run file/);
  });

  it.each([8, 40, 68, 72, 73, 130, 203])(
    'rewound to step %i and written again, equals one never rewound',
    async (step) => {
      const writer = await written(207, 11);
      await writer.rewindTo(step);
      const rewound = await contents(paths.file);
      expect(rewound.marks.frames.records).toBe(recordsAt(META, step).frames);
      await write(writer, step + 1, 300, 17);
      await writer.close();
      const straight = runPaths(varDir, 'straight');
      const other = await RunFileWriter.open(straight, { ...META, runId: 'straight' });
      await write(other, META.startStep, 300, 300);
      await other.close();
      expect(await contents(paths.file)).toEqual(await contents(straight.file));
    },
  );

  it('goes on after it was closed in the middle of a block and a chunk', async () => {
    await (await written(101, 3)).close();
    const again = await RunFileWriter.open(paths, META);
    expect(again.committed).toEqual(recordsAt(META, 101));
    await write(again, 102, 206, 5);
    await again.close();
    const { maps, marks } = await contents(paths.file);
    expect(marks.frames.records).toBe(50);
    expect(maps[49]).toBe(bits(mapOf('eta', 49)));
  });

  it('empties itself when rewound before the start', async () => {
    const writer = await written(150);
    await writer.rewindTo(META.startStep - 1);
    expect((await contents(paths.file)).marks.frames.records).toBe(0);
    await writer.close();
  });

  it('refuses a file of another setup', async () => {
    await (await written(20)).close();
    const other = { ...META, setup: { ...META.setup, length: { days: 3 } } };
    await expect(RunFileWriter.open(paths, other)).rejects.toThrow(/another setup/);
  });

  it('serves a reader one snapshot while it is written', async () => {
    const writer = await RunFileWriter.open(paths, META);
    await write(writer, META.startStep, META.startStep, 1);
    const reader = await RunFileReader.open(paths.file);
    const writing = write(writer, META.startStep + 1, META.totalSteps, 3);
    let reads = 0;
    let seen = 0;
    while (seen < 101) {
      const { frames } = await reader.watermarks();
      expect(frames.records).toBeGreaterThanOrEqual(seen);
      seen = frames.records;
      const { data } = await reader.readPoint('u', 30, 53, 0, seen);
      data.forEach((value, k) => expect(value).toBe(valueOf('u', k, 30, 53)));
      reads++;
    }
    await writing;
    expect(reads).toBeGreaterThan(3);
    await reader.close();
    await writer.close();
  });

  it('tells by its data version that another process committed', async () => {
    const writer = await written(20);
    const reader = await RunFileReader.open(paths.file);
    const before = await reader.dataVersion();
    expect(await reader.dataVersion()).toBe(before);
    await write(writer, 21, 24, 4);
    expect(await reader.dataVersion()).not.toBe(before);
    await reader.close();
    await writer.close();
  });
});

describe('checkpoints', () => {
  const bytes = (k: number) => Uint8Array.from({ length: 1000 }, (_, at) => (at * k) % 251);

  it('keeps the last two, verified by hash, and sweeps what was left half-written', async () => {
    const writer = await written(60);
    for (const step of [30, 40, 50]) await writer.saveCheckpoint(step, bytes(step));
    const entries = await writer.checkpoints();
    expect(entries.map(({ step, frames }) => [step, frames])).toEqual([
      [50, 11],
      [40, 9],
    ]);
    await writeFile(`${paths.checkpoint(55)}.tmp`, 'half');
    await writeFile(paths.checkpoint(57), 'not recorded');
    await writer.rewindTo(50);
    const files = (await readdir(paths.folder)).filter((name) => name.includes('checkpoint')).sort();
    expect(files).toEqual(['r.40.checkpoint', 'r.50.checkpoint']);
    expect(await readVerified(entries[0].path, entries[0].sha256, 'checkpoint')).toEqual(bytes(50));
    await writeFile(entries[0].path, 'damaged');
    await expect(readVerified(entries[0].path, entries[0].sha256, 'checkpoint')).rejects.toThrow(StateFileError);
    await writer.rewindTo(40);
    expect((await writer.checkpoints()).map(({ step }) => step)).toEqual([40]);
    await writer.close();
  });

  it('is not recorded when records before it are missing', async () => {
    const writer = await written(60);
    await expect(writer.saveCheckpoint(64, bytes(1))).rejects.toThrow(/at step 64 it must have 15/);
    expect(await writer.checkpoints()).toEqual([]);
    await writer.close();
  });

  it('adopts a start state by hash, and refuses another', async () => {
    await (await written(20)).close();
    const sha256 = await writeWhole(paths.last, bytes(9));
    const child = runPaths(varDir, 'child');
    await adoptStartState(paths, child, sha256);
    expect(await readVerified(child.start, sha256, 'start state')).toEqual(bytes(9));
    await expect(adoptStartState(paths, child, 'f'.repeat(64))).rejects.toThrow(/damaged/);
    await expect(adoptStartState(child, paths, sha256)).rejects.toThrow(/missing/);
  });

  it('deletes everything of one run and nothing of another', async () => {
    await (await written(20)).close();
    await writeWhole(runPaths(varDir, 'r2').last, bytes(2));
    await writeWhole(paths.last, bytes(2));
    expect(await deleteRunFiles(paths)).toBeGreaterThanOrEqual(2);
    expect(await readdir(paths.folder)).toEqual(['r2.last']);
    expect(() => runPaths(varDir, '../r')).toThrow(RangeError);
  });
});

describe('cache of readers', () => {
  it('keeps the files used last open, and closes none in use', async () => {
    const files: string[] = [];
    for (const id of ['a', 'b', 'c']) {
      const own = runPaths(varDir, id);
      const writer = await RunFileWriter.open(own, { ...META, runId: id });
      await write(writer, META.startStep, 20, 100);
      await writer.close();
      files.push(own.file);
    }
    const cache = new RunFileCache(2);
    const [a, b, c] = files;
    const first = await cache.use(a, (reader) => Promise.resolve(reader));
    expect(await cache.use(a, (reader) => Promise.resolve(reader))).toBe(first);
    let reader: RunFileReader | undefined;
    await cache.use(a, async (held) => {
      await cache.use(b, () => Promise.resolve());
      await cache.use(c, () => Promise.resolve());
      reader = held;
      expect((await held.readMap('eta', 0)).data).toEqual(mapOf('eta', 0));
    });
    expect(reader).toBe(first);
    expect(cache.size).toBe(2);
    const evicted = cache.use(a, async (held) => {
      const gone = cache.evict(a);
      expect((await held.readMap('v', 1)).data).toEqual(mapOf('v', 1));
      return gone;
    });
    await expect(Promise.race([evicted, new Promise((r) => setTimeout(r, 50, 'waits'))])).resolves.toBe('waits');
  });

  it('forgets a file that would not open', async () => {
    const cache = new RunFileCache();
    await expect(cache.use(paths.file, () => Promise.resolve(1))).rejects.toThrow(RunFileError);
    expect(cache.size).toBe(0);
    await (await written(20)).close();
    expect(await cache.use(paths.file, (reader) => Promise.resolve(reader.meta().runId))).toBe('r');
    await cache.close();
    expect(cache.size).toBe(0);
  });
});
