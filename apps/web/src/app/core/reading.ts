import { DestroyRef, type Signal, inject, signal } from '@angular/core';
import { takeUntilDestroyed, toObservable } from '@angular/core/rxjs-interop';
import type { HalfdeepEvent } from '@halfdeep/contracts';
import {
  EMPTY,
  type Observable,
  Subject,
  auditTime,
  catchError,
  distinctUntilChanged,
  filter,
  finalize,
  merge,
  switchMap,
  tap,
} from 'rxjs';
import { type ApiProblem, toApiProblem } from './problem';
import { RunEvents } from './run-events';

/** At most so often is a whole page read again when states move. */
const READ_AGAIN_MS = 400;

/** Something read from the server that can be read again: the last good value stays while a later read fails. */
export class Reading<T> {
  private readonly asked = new Subject<void>();
  private readonly last = signal<T | null>(null);
  private readonly failed = signal<ApiProblem | null>(null);
  readonly value = this.last.asReadonly();
  readonly problem = this.failed.asReadonly();
  private readonly under = signal(false);
  /** True while an answer is awaited. */
  readonly pending = this.under.asReadonly();

  /** In an injection context: reads at once, and stops when what made it is gone. A new read overtakes an older one. */
  constructor(source: (last: T | null) => Observable<T>) {
    this.asked
      .pipe(
        tap(() => this.under.set(true)),
        switchMap(() =>
          source(this.last()).pipe(
            tap((value) => this.set(value)),
            catchError((error: unknown) => {
              this.failed.set(toApiProblem(error));
              return EMPTY;
            }),
            finalize(() => this.under.set(false)),
          ),
        ),
        takeUntilDestroyed(inject(DestroyRef)),
      )
      .subscribe();
    this.again();
  }

  again(): void {
    this.asked.next();
  }

  /** What the server answered to a change is as good as a read. */
  set(value: T): void {
    this.last.set(value);
    this.failed.set(null);
  }

  update(change: (value: T) => T): void {
    this.last.update((value) => (value === null ? null : change(value)));
  }
}

/**
 * Watches runs through the event stream, in an injection context. `onEvent` hears all of them; `onMoved` is called, at
 * most a few times a second, when a state or the queue changed or the stream came back after a loss.
 */
export function watchRuns(
  ids: Signal<readonly string[]>,
  hooks: { onEvent: (event: HalfdeepEvent) => void; onMoved: () => void },
): void {
  const events = inject(RunEvents);
  const watched = toObservable(ids).pipe(
    // The list is made anew at every progress; only other members open the stream anew.
    distinctUntilChanged((a, b) => a.join() === b.join()),
    switchMap((list) => (list.length ? merge(...list.map((id) => events.watch(id))) : EMPTY)),
    tap(hooks.onEvent),
  );
  merge(watched.pipe(filter((event) => event.type === 'state')), events.queue, events.reopened)
    .pipe(auditTime(READ_AGAIN_MS), takeUntilDestroyed(inject(DestroyRef)))
    .subscribe(hooks.onMoved);
}
