import { computed, Injectable, linkedSignal, signal } from '@angular/core';
import type { Experiment, HalfdeepEvent, RunSummary } from '@halfdeep/contracts';
import { Subject } from 'rxjs';
import { watchRuns } from '../core/reading';

/** The runs of an experiment, kept up to date by the event stream for as long as the page is open. */
@Injectable()
export class ExperimentRuns {
  private readonly experiment = signal<Experiment | null>(null);
  private readonly moved = new Subject<void>();
  /** Something moved that only a reading of the experiment shows: a new run, another place in the queue. */
  readonly reread = this.moved.asObservable();
  readonly runs = linkedSignal<RunSummary[]>(() => this.experiment()?.runList ?? []);

  constructor() {
    // What has finished moves no more.
    const moving = computed(() => this.runs().flatMap(({ id, state }) => (state === 'finished' ? [] : [id])));
    watchRuns(moving, { onEvent: (event) => this.take(event), onMoved: () => this.moved.next() });
  }

  load(experiment: Experiment): void {
    this.experiment.set(experiment);
  }

  /** Puts what the server answered in the place of what was known. */
  replace(run: RunSummary): void {
    this.runs.update((runs) => runs.map((known) => (known.id === run.id ? run : known)));
  }

  remove(runId: string): void {
    this.runs.update((runs) => runs.filter(({ id }) => id !== runId));
  }

  private take(event: HalfdeepEvent): void {
    if (event.type === 'state') this.replace(event.run);
    else if (event.type === 'progress')
      this.runs.update((runs) =>
        runs.map((run) => (run.id === event.runId ? { ...run, progress: event.progress } : run)),
      );
  }
}
