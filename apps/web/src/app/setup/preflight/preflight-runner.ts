import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { Preflight, PreflightContext, Setup } from '@halfdeep/ocean';
import { SetupDraft } from '../setup-draft';
import { unbroken } from './check-words';
import { judge, type PreflightAnswer, type PreflightOutcome, type PreflightQuestion } from './judge';

/**
 * Runs preflight of libs/ocean on the setup being written, in a thread of its own: while one answer is computed only the
 * newest question waits, so that typing never does. The same function decides again on the server.
 */
@Injectable()
export class PreflightRunner {
  private readonly draft = inject(SetupDraft);
  /** What the machine allows, as far as the server said. */
  readonly context = signal<PreflightContext>({});
  /** Why preflight could not say anything, for example a grid beyond all limits; null when it could. */
  readonly failure = signal<string | null>(null);
  private readonly waiting = signal(false);
  /** True while what is shown is older than what is typed. */
  readonly stale = computed(() => this.waiting() || this.draft.setup() === null);
  private readonly thread = this.openThread();
  private asked = 0;
  private busy = false;
  private next: PreflightQuestion | null = null;
  private cancel: () => void = () => undefined;

  constructor() {
    effect(() => {
      const setup = this.draft.judged();
      const context = this.context();
      if (setup) untracked(() => this.schedule(setup, context));
    });
    inject(DestroyRef).onDestroy(() => {
      this.cancel();
      this.thread?.terminate();
    });
  }

  private schedule(setup: Setup, context: PreflightContext): void {
    this.waiting.set(true);
    if (this.thread) {
      this.next = { number: ++this.asked, setup, context };
      this.ask(this.thread);
      return;
    }
    // Where there are no threads: once an animation frame.
    this.cancel();
    const frame = requestAnimationFrame(() => this.show(judge(setup, context)));
    this.cancel = () => cancelAnimationFrame(frame);
  }

  private ask(thread: Worker): void {
    if (this.busy || !this.next) return;
    this.busy = true;
    thread.postMessage(this.next);
    this.next = null;
  }

  private openThread(): Worker | null {
    if (typeof Worker === 'undefined') return null;
    const thread = new Worker(new URL('./preflight.worker', import.meta.url), { type: 'module' });
    thread.addEventListener('message', ({ data }: MessageEvent<PreflightAnswer>) => {
      this.busy = false;
      this.ask(thread);
      // An answer to a question that has been overtaken is shown all the same, but stays stale.
      this.show(data);
      if (data.number !== this.asked) this.waiting.set(true);
    });
    thread.addEventListener('error', ({ message }) => {
      this.busy = false;
      this.show({ failure: `Preflight broke off: ${message || 'its thread did not start'}. Reload the page.` });
    });
    return thread;
  }

  private show(outcome: PreflightOutcome): void {
    const good = 'result' in outcome;
    this.draft.preflight.set(good ? told(outcome.result, this.draft.outside().length > 0) : null);
    this.failure.set(good ? null : outcome.failure);
    this.waiting.set(false);
  }
}

/** Places outside the basin were left out, so what is said of lists of places waits; units stay with their numbers. */
function told(result: Preflight, placesMissing: boolean): Preflight {
  return {
    ...result,
    checks: result.checks
      .filter(({ id }) => !placesMissing || (id !== 'sections' && id !== 'moorings'))
      .map((check) => ({ ...check, reason: unbroken(check.reason) })),
  };
}
