import { type Progress } from '@halfdeep/contracts';
import { type RunQueue } from '@halfdeep/queue';
import { RunFileError, runPaths, type RunFileCache, type RunFileReader } from '@halfdeep/store';
import { filter, finalize, merge, Observable, share, timer } from 'rxjs';

export type Records = Progress['records'];

const POLL_MS = 250;
/** After so many polls without news every eighth poll is enough, until a hint comes. */
const QUIET_AFTER = 40;
const QUIET_EVERY = 8;

export const NO_RECORDS: Records = { frames: 0, sections: 0, moorings: 0, budget: 0 };

/** How many records each stream of a run holds; zeros before its file is there. */
export async function recordsOf(reader: RunFileReader): Promise<Records> {
  const marks = await reader.watermarks();
  return {
    frames: marks.frames.records,
    sections: marks.sections.records,
    moorings: marks.moorings.records,
    budget: marks.budget.records,
  };
}

/**
 * Watermarks of runs, from their files: asked four times a second whether anything was committed, which is the truth
 * beside the worker's hints (a hint only makes the next question come at once). One poll serves all who watch a run.
 */
export class WatermarkWatch {
  private readonly watched = new Map<string, Observable<Records>>();

  constructor(
    private readonly parts: { queue: RunQueue; files: RunFileCache; varDir: string; failed: (error: unknown) => void },
  ) {}

  /** Records of a run now: zeros before its file is there. */
  async now(runId: string): Promise<Records> {
    return this.read(runId, recordsOf, NO_RECORDS);
  }

  /** Records of a run whenever they change, beginning with what is there. Hot while somebody listens; never errors. */
  of(runId: string): Observable<Records> {
    const known = this.watched.get(runId);
    if (known) return known;
    const shared = this.poll(runId).pipe(
      finalize(() => this.watched.delete(runId)),
      share(),
    );
    this.watched.set(runId, shared);
    return shared;
  }

  private poll(runId: string): Observable<Records> {
    const hints = this.parts.queue.events$.pipe(
      filter((event) => event.type !== 'queue' && event.runId === runId && event.type !== 'progress'),
    );
    return new Observable((subscriber) => {
      let version: number | null = null;
      let last: Records | null = null;
      let quiet = 0;
      let asking = false;
      let again = false;
      const ask = async (): Promise<void> => {
        const seen = await this.read<number | null>(runId, (reader) => reader.dataVersion(), null);
        if (seen === version && last !== null) {
          quiet++;
          return;
        }
        version = seen;
        const records = await this.now(runId);
        if (last === null || !same(last, records)) {
          quiet = 0;
          last = records;
          subscriber.next(records);
        }
      };
      const poll = (hinted: boolean): void => {
        if (hinted) quiet = 0;
        if (asking) {
          again ||= hinted;
          return;
        }
        if (quiet > QUIET_AFTER && quiet++ % QUIET_EVERY !== 0) return;
        asking = true;
        ask()
          .catch(this.parts.failed)
          .finally(() => {
            asking = false;
            if (!again) return;
            again = false;
            poll(true);
          });
      };
      const ticks = merge(timer(0, POLL_MS), hints).subscribe((what) => poll(typeof what === 'object'));
      return () => ticks.unsubscribe();
    });
  }

  /** Asks the run file; `otherwise` while there is none. */
  private async read<T>(runId: string, ask: (reader: RunFileReader) => Promise<T>, otherwise: T): Promise<T> {
    try {
      return await this.parts.files.use(runPaths(this.parts.varDir, runId).file, ask);
    } catch (error) {
      if (error instanceof RunFileError) return otherwise;
      throw error;
    }
  }
}

const same = (a: Records, b: Records) =>
  a.frames === b.frames && a.sections === b.sections && a.moorings === b.moorings && a.budget === b.budget;
