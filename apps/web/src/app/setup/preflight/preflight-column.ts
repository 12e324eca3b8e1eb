import {
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  input,
  output,
  signal,
  viewChild,
} from '@angular/core';
import { MatButton } from '@angular/material/button';
import type { QueueSummary } from '@halfdeep/contracts';
import { fieldLabel, type Check, type Verdict } from '@halfdeep/ocean';
import { formatBytes, formatDuration, sentenceStart } from '../../core/format';
import { type ApiProblem } from '../../core/problem';
import { ProblemMessage } from '../../shared/problem-message/problem-message';
import { Quantity } from '../../shared/quantity/quantity';
import { VerdictSign } from '../../shared/verdict/verdict';
import { SetupDraft } from '../setup-draft';
import { SketchRunner } from '../sketch/sketch-runner';
import { checkNumbers, splitUnit, verdictWords } from './check-words';
import { PreflightRunner } from './preflight-runner';
import { RemedyActions } from './remedy-actions';

/** Always in view beside the form: what follows from the setup, the sounding line of checks, what it costs, and the queue. */
@Component({
  selector: 'app-preflight-column',
  imports: [MatButton, ProblemMessage, Quantity, VerdictSign],
  templateUrl: './preflight-column.html',
  styleUrl: './preflight-column.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class.open]': 'open()' },
})
export class PreflightColumn {
  protected readonly draft = inject(SetupDraft);
  protected readonly runner = inject(PreflightRunner);
  protected readonly remedies = inject(RemedyActions);
  protected readonly sketch = inject(SketchRunner);
  readonly queue = input<QueueSummary | null>(null);
  /** Why this person or this moment cannot queue, beyond what the setup says; '' when nothing stands in the way. */
  readonly hindrance = input('');
  readonly sending = input(false);
  readonly problem = input<ApiProblem | null>(null);
  readonly queued = output<void>();
  readonly kept = output<void>();
  readonly sketched = output<void>();
  /** On a narrow screen the sheet shows the refusals alone until it is opened. */
  protected readonly open = signal(false);
  private readonly heading = viewChild.required<ElementRef<HTMLElement>>('heading');

  protected readonly result = this.draft.preflight;
  protected readonly numbers = checkNumbers;
  protected readonly unread = computed(() =>
    [...this.draft.problems()].map(([pointer, reason]) => ({
      pointer,
      label: sentenceStart(fieldLabel(pointer, this.draft.value())),
      reason,
    })),
  );
  protected readonly verdict = computed<Verdict>(() => {
    if (this.unread().length > 0 || this.runner.failure() !== null) return 'refuse';
    return this.result()?.verdict ?? 'caution';
  });
  protected readonly words = computed(() => {
    if (this.runner.failure() !== null) return 'refused';
    const result = this.result();
    if (!result) return 'reading the setup';
    return verdictWords(result, this.unread().length);
  });
  protected readonly cost = computed(() => {
    const cost = this.result()?.cost;
    if (!cost) return null;
    return {
      time: cost.seconds < 1 ? { number: '< 1', unit: 's' } : splitUnit(formatDuration(cost.seconds, 1)),
      disk: splitUnit(formatBytes(cost.diskBytes)),
      free: this.runner.context().freeDiskBytes,
    };
  });
  protected readonly free = computed(() => {
    const context = this.runner.context();
    const free = Math.min(context.freeDiskBytes ?? Infinity, context.quotaBytes ?? Infinity);
    return Number.isFinite(free) ? formatBytes(free) : '';
  });
  protected readonly place = computed(() => {
    const queue = this.queue();
    if (!queue) return null;
    if (queue.paused) return { number: String(queue.waiting + 1), note: 'place; the queue is paused' };
    if (queue.waiting === 0 && queue.running < queue.cap) return { number: 'now', note: 'a place is free' };
    return { number: String(queue.waiting + 1), note: 'place in the queue' };
  });
  /** Why "Queue this run" is not to be pressed yet; '' when it is. */
  protected readonly whyNot = computed(() => {
    if (this.unread().length > 0) return 'It can be queued once every field can be read.';
    if (this.verdict() === 'refuse') return 'It can be queued once nothing is refused.';
    if (this.hindrance()) return this.hindrance();
    if (this.draft.parent() && this.draft.changes().length === 0)
      return `Nothing differs from ${this.draft.parent()?.label} yet.`;
    if (this.draft.label().trim() === '') return 'It needs a label.';
    if (!this.result() || this.runner.stale()) return 'Preflight is still reading the setup.';
    return this.sending() ? 'It is on its way to the queue.' : '';
  });

  protected readonly sketchWords = computed(() => {
    if (this.draft.setup() === null) return 'It can be sketched once every field can be read.';
    if (this.sketch.busy()) return 'A sketch is being drawn, below the form.';
    if (this.sketch.outdated()) return 'The sketch below the form is outdated.';
    return 'A coarse version, a few seconds in this browser.';
  });

  /** Takes the focus, for F6. */
  focus(): void {
    this.heading().nativeElement.focus();
  }

  protected width(check: Check): number {
    return Math.min(1.6, Math.max(0, check.ratio)) * 62;
  }

  protected send(): void {
    if (this.whyNot() === '') this.queued.emit();
  }

  /** Brings the field that a refusal is about into view and into the hand. */
  protected goTo(pointer: string): void {
    const field = document.querySelector<HTMLElement>(`[data-pointer="${CSS.escape(pointer)}"]`);
    const control = field?.querySelector<HTMLElement>('input, select, textarea');
    control?.closest('details')?.setAttribute('open', '');
    control?.focus();
  }
}
