import { type SideBySide } from '@halfdeep/contracts';
import { diffSetups } from '@halfdeep/ocean';
import { RunFileError, runPaths, type Run, type RunFileCache } from '@halfdeep/store';
import { ConflictError } from '../http/errors';
import { type Actor } from '../policy/actor';
import { presentRun } from '../runs/run-presenter';
import { compareRuns, MEASURED, type Comparison } from './compare';

const KEPT = 32;

interface Entry {
  comparison: Promise<Comparison>;
  abort: AbortController;
  waiting: number;
  done: boolean;
}

/** Two runs side by side: what differs in the setups, and how far apart the results are. */
export class SideBySideService {
  /** By pair and numbers of frames, oldest first. */
  private readonly kept = new Map<string, Entry>();

  constructor(
    private readonly files: RunFileCache,
    private readonly varDir: string,
  ) {}

  /** `left` says that the asker has gone; the work then ends when nobody else waits for it. */
  async compare(a: Run, b: Run, actor: Actor, left: AbortSignal): Promise<SideBySide> {
    return {
      a: await presentRun(a, actor),
      b: await presentRun(b, actor),
      changes: diffSetups(a.setup, b.setup),
      ...(await this.measures(a, b, left)),
    };
  }

  private async measures(a: Run, b: Run, left: AbortSignal): Promise<Comparison> {
    const frames = [await this.frames(a), await this.frames(b)];
    const without = [a, b].filter((_, k) => frames[k] === 0);
    if (without.length > 0) {
      const names = without.map((run) => `“${run.label}”`).join(' and ');
      return nothingYet(`${names} ${without.length > 1 ? 'have' : 'has'} no frames yet.`);
    }
    const key = [a.id, b.id, ...frames].join(' ');
    const entry = this.kept.get(key) ?? this.begin(a, b);
    this.kept.delete(key);
    this.kept.set(key, entry);
    const [oldest] = this.kept.keys();
    if (this.kept.size > KEPT) this.kept.delete(oldest);

    entry.waiting++;
    const leave = () => {
      entry.waiting--;
      if (entry.waiting > 0 || entry.done) return;
      this.kept.delete(key);
      entry.abort.abort();
    };
    left.addEventListener('abort', leave, { once: true });
    try {
      return await entry.comparison;
    } catch (error) {
      if (this.kept.get(key) === entry) this.kept.delete(key); // a failure is not kept
      if (left.aborted) throw new ConflictError('Nobody waits for this comparison any more.');
      throw error;
    } finally {
      left.removeEventListener('abort', leave);
    }
  }

  private begin(a: Run, b: Run): Entry {
    const abort = new AbortController();
    const path = (run: Run) => runPaths(this.varDir, run.id).file;
    const comparison = this.files.use(path(a), (readerA) =>
      this.files.use(path(b), (readerB) =>
        compareRuns({ setup: a.setup, reader: readerA }, { setup: b.setup, reader: readerB }, abort.signal),
      ),
    );
    const entry: Entry = { comparison, abort, waiting: 0, done: false };
    comparison.then(
      () => (entry.done = true),
      () => (entry.done = true),
    );
    return entry;
  }

  /** Frames that a run holds; 0 while there is no run file. */
  private async frames(run: Run): Promise<number> {
    try {
      return await this.files.use(
        runPaths(this.varDir, run.id).file,
        async (reader) => (await reader.watermarks()).frames.records,
      );
    } catch (error) {
      if (error instanceof RunFileError) return 0;
      throw error;
    }
  }
}

function nothingYet(reason: string): Comparison {
  const none = { rmsDifference: null, correlation: null, rmsA: null, rmsB: null };
  const measures = MEASURED.map(({ variable, unit }) => ({ variable, unit, ...none }));
  return { reason, regridding: 'nothing to compare', commonDays: null, measures };
}
