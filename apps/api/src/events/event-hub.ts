import { type HalfdeepEvent } from '@halfdeep/contracts';
import { type RunQueue } from '@halfdeep/queue';
import { Run } from '@halfdeep/store';
import { concat, concatMap, defer, EMPTY, from, last, map, merge, Observable, of, takeUntil } from 'rxjs';
import { type Actor } from '../policy/actor';
import { presentRun, SUMMARY_COLUMNS } from '../runs/run-presenter';
import { type WatermarkWatch } from './watermark-watch';

/** What happens to runs and the queue, for everybody who watches. */
export class EventHub {
  constructor(
    private readonly queue: RunQueue,
    private readonly watermarks: WatermarkWatch,
  ) {}

  /**
   * What one person's tab watches: first how everything stands (state and records of each run, then the queue), then
   * what happens. So whoever comes late, or again, needs nothing special. Completes when the queue closes.
   */
  watch(actor: Actor, runIds: readonly string[]): Observable<HalfdeepEvent> {
    return new Observable((subscriber) => {
      // Listens before it looks, so that nothing falls between the two; what happens meanwhile waits.
      let waiting: HalfdeepEvent[] | null = [];
      const listening = this.live(actor, runIds).subscribe({
        next: (event) => (waiting ? waiting.push(event) : subscriber.next(event)),
        error: (error) => subscriber.error(error),
        complete: () => subscriber.complete(),
      });
      const looking = this.standing(actor, runIds).subscribe({
        next: (event) => subscriber.next(event),
        error: (error) => subscriber.error(error),
        complete: () => {
          const missed = waiting ?? [];
          waiting = null;
          for (const event of missed) subscriber.next(event);
        },
      });
      return () => {
        listening.unsubscribe();
        looking.unsubscribe();
      };
    });
  }

  private standing(actor: Actor, runIds: readonly string[]): Observable<HalfdeepEvent> {
    const runs = from(runIds).pipe(
      concatMap((runId) =>
        concat(
          this.state(actor, runId),
          defer(() => this.watermarks.now(runId)).pipe(
            map((records): HalfdeepEvent => ({ type: 'records', runId, records })),
          ),
        ),
      ),
    );
    const queue = defer(() => this.queue.summary()).pipe(map((queue): HalfdeepEvent => ({ type: 'queue', queue })));
    return concat(runs, queue);
  }

  private live(actor: Actor, runIds: readonly string[]): Observable<HalfdeepEvent> {
    const watched = new Set(runIds);
    const told = this.queue.events$.pipe(
      concatMap((event): Observable<HalfdeepEvent> => {
        if (event.type === 'queue') return of(event);
        if (!watched.has(event.runId)) return EMPTY;
        if (event.type === 'state') return this.state(actor, event.runId);
        // Records come from the run file, which is the truth.
        return event.type === 'progress' ? of(event) : EMPTY;
      }),
    );
    const records = runIds.map((runId) =>
      this.watermarks.of(runId).pipe(map((records): HalfdeepEvent => ({ type: 'records', runId, records }))),
    );
    // The end of the queue is the end of everything.
    const closed = this.queue.events$.pipe(last(null, null));
    return merge(told, merge(...records).pipe(takeUntil(closed)));
  }

  /** How a run stands now, as this person sees it; nothing when it is gone. */
  private state(actor: Actor, runId: string): Observable<HalfdeepEvent> {
    return defer(async () => {
      const run = await Run.findByPk(runId, { attributes: SUMMARY_COLUMNS });
      return run ? presentRun(run, actor) : null;
    }).pipe(concatMap((run) => (run ? of<HalfdeepEvent>({ type: 'state', run }) : EMPTY)));
  }
}
