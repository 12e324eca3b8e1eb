import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { RunSummary } from '@halfdeep/contracts';
import { formatBytes, formatDuration, formatModelDay, formatModelLength, formatMoment } from '../core/format';
import { RunChanges } from '../shared/run-changes/run-changes';
import { StateSign } from '../shared/state-sign/state-sign';
import { Strip } from '../shared/strip/strip';

/** A run that ended: its miniature, what it changed, how it ended, and the next thing to do with it. */
@Component({
  selector: 'app-ended-run',
  imports: [MatButton, RouterLink, RunChanges, StateSign, Strip],
  templateUrl: './ended-run.html',
  styleUrl: './ended-run.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class EndedRun {
  readonly run = input.required<RunSummary>();
  readonly resumed = output();

  protected readonly sign = computed(() => {
    const run = this.run();
    if (run.state === 'finished') return `finished, ${formatModelLength(run.progress.totalDays)}`;
    return `${run.state} at ${formatModelDay(run.failure?.day ?? run.progress.day)}`;
  });
  protected readonly share = computed(() => {
    const { step, startStep, totalSteps } = this.run().progress;
    return totalSteps > startStep ? (step - startStep) / (totalSteps - startStep) : 0;
  });
  protected readonly facts = computed(() => {
    const run = this.run();
    const facts: string[] = [];
    if (run.endedAt) facts.push(formatMoment(run.endedAt));
    if (run.startedAt && run.endedAt)
      facts.push(`computed in ${formatDuration((Date.parse(run.endedAt) - Date.parse(run.startedAt)) / 1000)}`);
    if (run.diskBytes !== null) facts.push(formatBytes(run.diskBytes));
    return facts;
  });
  protected readonly failure = computed(() => {
    const failure = this.run().failure;
    if (!failure) return '';
    const place = failure.place && !failure.message.includes(failure.place) ? ` At ${failure.place}.` : '';
    return failure.message + place;
  });
  /** What one most likely does next: side by side with its parent, go on, mend the setup, or look. */
  protected readonly next = computed(() => {
    const run = this.run();
    if (run.state === 'stopped' && run.can.resume) return 'resume';
    if (run.state === 'failed') return run.can.resume ? 'resume' : run.can.derive ? 'derive' : 'open';
    if (run.state === 'finished' && run.parentRunId && run.descent === 'sensitivity') return 'beside';
    return 'open';
  });
}
