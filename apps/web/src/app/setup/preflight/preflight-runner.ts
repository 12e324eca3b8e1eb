import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import { preflight, type Preflight, type PreflightContext, type Setup } from '@halfdeep/ocean';
import { SetupDraft } from '../setup-draft';
import { unbroken } from './check-words';

/** Longer than this and typing would be felt to stick: then preflight waits until the typing rests. */
const FELT_MS = 24;

/**
 * Runs preflight of libs/ocean on the setup being written: once an animation frame while it is quick, once the typing
 * rests where the grid is large. The same function decides again on the server.
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
  private lastCostMs = 0;
  private cancel: () => void = () => undefined;

  constructor() {
    effect(() => {
      const setup = this.draft.judged();
      const context = this.context();
      if (setup) untracked(() => this.schedule(setup, context));
    });
    inject(DestroyRef).onDestroy(() => this.cancel());
  }

  private schedule(setup: Setup, context: PreflightContext): void {
    this.cancel();
    this.waiting.set(true);
    const work = () => this.run(setup, context);
    if (this.lastCostMs > FELT_MS) {
      const timer = setTimeout(work, Math.min(600, 150 + this.lastCostMs));
      this.cancel = () => clearTimeout(timer);
    } else {
      const frame = requestAnimationFrame(work);
      this.cancel = () => cancelAnimationFrame(frame);
    }
  }

  private run(setup: Setup, context: PreflightContext): void {
    const began = performance.now();
    try {
      this.draft.preflight.set(told(preflight(setup, context), this.draft.outside().length > 0));
      this.failure.set(null);
    } catch (error) {
      if (!(error instanceof RangeError)) throw error;
      // A grid that cannot be built: the message names the limit.
      this.draft.preflight.set(null);
      this.failure.set(error.message);
    } finally {
      this.lastCostMs = performance.now() - began;
      this.waiting.set(false);
    }
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
