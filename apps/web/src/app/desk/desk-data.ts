import { Injectable, computed, inject } from '@angular/core';
import { type Desk, deskSchema } from '@halfdeep/contracts';
import { map, tap } from 'rxjs';
import { Api } from '../core/api';
import { QueueStatus } from '../core/queue-status';
import { Reading, watchRuns } from '../core/reading';

/**
 * The desk, kept up to date: progress comes through the event stream into what is shown; when a run changes state the
 * whole desk is read again. A read that fails leaves the last good desk standing.
 */
@Injectable()
export class DeskData {
  private readonly api = inject(Api);
  private readonly queueStatus = inject(QueueStatus);
  private readonly reading = new Reading<Desk>((last) =>
    this.api.get('/api/desk', deskSchema).pipe(
      tap((desk) => this.queueStatus.take(desk.queue)),
      // The moment of the last visit belongs to this visit: later reads must not move it.
      map((desk) => (last ? { ...desk, since: last.since } : desk)),
    ),
  );
  readonly desk = this.reading.value;
  readonly problem = this.reading.problem;

  constructor() {
    const shown = computed(() =>
      [...(this.desk()?.running ?? []), ...(this.desk()?.waiting ?? [])].map((run) => run.id),
    );
    watchRuns(shown, {
      onMoved: () => this.reading.again(),
      onEvent: (event) => {
        if (event.type !== 'progress') return;
        this.reading.update((desk) => ({
          ...desk,
          running: desk.running.map((run) => (run.id === event.runId ? { ...run, progress: event.progress } : run)),
        }));
      },
    });
  }

  readAgain(): void {
    this.reading.again();
  }
}
