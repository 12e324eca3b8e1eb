import { ChangeDetectionStrategy, Component, computed, inject, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { type RunSummary, runSummarySchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api, newIdempotencyKey } from '../core/api';
import { formatBytes, formatClock, formatDay, formatDuration, formatModelTime, sentenceStart } from '../core/format';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { Session } from '../core/session';
import { DataState } from '../shared/data-state/data-state';
import { ProblemMessage } from '../shared/problem-message/problem-message';
import { RunChanges } from '../shared/run-changes/run-changes';
import { StateSign } from '../shared/state-sign/state-sign';
import { Strip } from '../shared/strip/strip';
import { DeskData } from './desk-data';
import { deskSentence } from './desk-sentence';
import { EndedRun } from './ended-run';
import { ReadySetup } from './ready-setup';
import { queueLine, startsWhen } from './waiting-time';

/** Home: what moved since last time, what computes now, what ended. */
@Component({
  selector: 'app-desk',
  imports: [DataState, EndedRun, MatButton, ProblemMessage, ReadySetup, RouterLink, RunChanges, StateSign, Strip],
  providers: [DeskData],
  templateUrl: './desk.html',
  styleUrl: './desk.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Desk {
  private readonly api = inject(Api);
  protected readonly session = inject(Session);
  protected readonly data = inject(DeskData);
  protected readonly refused = signal<ApiProblem | null>(null);

  protected readonly sentence = computed(() => {
    const desk = this.data.desk();
    return desk ? deskSentence(desk) : [];
  });
  protected readonly since = computed(() => {
    const since = this.data.desk()?.since ?? null;
    if (since === null) return { day: 'First visit', clock: '' };
    return { day: sentenceStart(`since ${formatDay(since)}`), clock: `${formatClock(since)}, when you last looked` };
  });
  /** Nothing of anybody's runs here yet: the place for a ready setup. */
  protected readonly empty = computed(() => {
    const desk = this.data.desk();
    return desk !== null && desk.running.length + desk.waiting.length + desk.ended.length === 0;
  });
  protected readonly queueLine = computed(() => {
    const desk = this.data.desk();
    return desk ? queueLine(desk) : '';
  });
  protected readonly waiting = computed(() => {
    const desk = this.data.desk();
    return desk ? desk.waiting.map((run) => ({ run, when: startsWhen(run, desk) })) : [];
  });
  protected readonly ended = computed(() => {
    const desk = this.data.desk();
    if (!desk || desk.ended.length === 0) return { heading: 'Ended', about: 'nothing yet' };
    if (desk.since === null) return { heading: 'Ended', about: 'the last few' };
    if (desk.recent) return { heading: 'Ended before', about: 'the last few, nothing new since' };
    return { heading: 'Ended', about: 'since your last visit' };
  });
  protected readonly disk = computed(() => {
    const disk = this.data.desk()?.disk;
    if (!disk) return null;
    return {
      text: `${formatBytes(disk.usedBytes)} of ${formatBytes(disk.quotaBytes)}`,
      free: formatBytes(disk.freeBytes),
      share: disk.quotaBytes > 0 ? Math.min(1, disk.usedBytes / disk.quotaBytes) : 0,
    };
  });
  protected readonly modelTime = (run: RunSummary) => formatModelTime(run.progress.day, run.progress.totalDays);
  protected readonly share = (run: RunSummary) => {
    const { step, startStep, totalSteps } = run.progress;
    return totalSteps > startStep ? (step - startStep) / (totalSteps - startStep) : 0;
  };
  protected readonly timeLeft = (run: RunSummary) =>
    run.progress.secondsLeft === null ? '' : `${formatDuration(run.progress.secondsLeft)} left`;

  protected async resume(run: RunSummary): Promise<void> {
    this.refused.set(null);
    try {
      const sending = { idempotencyKey: newIdempotencyKey() };
      await firstValueFrom(this.api.post(`/api/runs/${run.id}/resume`, {}, runSummarySchema, sending));
      this.data.readAgain();
    } catch (error) {
      this.refused.set(toApiProblem(error));
    }
  }
}
