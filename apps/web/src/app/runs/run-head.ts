import { ChangeDetectionStrategy, Component, computed, inject, input, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { Router, RouterLink } from '@angular/router';
import { type Run, type RunSummary } from '@halfdeep/contracts';
import { type Observable, firstValueFrom } from 'rxjs';
import {
  DAYS_PER_YEAR,
  formatCellSteps,
  formatChange,
  formatDuration,
  formatModelDay,
  formatModelTime,
  formatNumber,
  numberParts,
} from '../core/format';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { RunEvents } from '../core/run-events';
import { type RunFollower, lastRecordDay } from '../core/run-follower';
import { Confirm } from '../shared/confirm/confirm';
import { ExtendDialog } from '../shared/extend-dialog/extend-dialog';
import { ProblemMessage } from '../shared/problem-message/problem-message';
import { RunPicker } from '../shared/run-picker/run-picker';
import { StateSign } from '../shared/state-sign/state-sign';
import { VerdictSign } from '../shared/verdict/verdict';
import { energyClosure } from './energy-closure';
import { ProgressRule } from './progress-rule';
import { isRepeat } from './repeat';
import { RepeatLine } from './repeat-line';
import { RunActions } from './run-actions';

const CHANGES_SHOWN = 4;
interface Part {
  value: string;
  unit: string;
}

/** Head of a run: what it is, where it stands, and what may be done with it now. */
@Component({
  selector: 'app-run-head',
  imports: [MatButton, ProblemMessage, ProgressRule, RepeatLine, RouterLink, StateSign, VerdictSign],
  templateUrl: './run-head.html',
  styleUrl: './run-head.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RunHead {
  private readonly actions = inject(RunActions);
  private readonly confirm = inject(Confirm);
  private readonly dialog = inject(MatDialog);
  private readonly picker = inject(RunPicker);
  private readonly router = inject(Router);
  protected readonly events = inject(RunEvents);

  readonly run = input.required<Run>();
  readonly follower = input.required<RunFollower>();
  readonly lost = input(false);

  protected readonly busy = signal(false);
  protected readonly problem = signal<ApiProblem | null>(null);

  protected readonly repeats = computed(() => isRepeat(this.run()));
  protected readonly share = computed(() => {
    const { step, startStep, totalSteps } = this.run().progress;
    return totalSteps > startStep ? (step - startStep) / (totalSteps - startStep) : 0;
  });
  protected readonly changes = computed(() =>
    this.run()
      .changes.slice(0, CHANGES_SHOWN)
      .map(({ pointer, label, from, to, unit }) => ({ pointer, label, text: formatChange(from, to, unit) })),
  );
  protected readonly moreChanges = computed(() => Math.max(0, this.run().changes.length - CHANGES_SHOWN));

  protected readonly time = computed<Part>(() => {
    const { day, totalDays } = this.run().progress;
    const years = totalDays >= DAYS_PER_YEAR;
    const value = formatNumber(years ? day / DAYS_PER_YEAR : day, { decimals: years ? 2 : 1 });
    const whole = formatModelTime(day, totalDays);
    return { value, unit: `${whole.slice(whole.indexOf(' of ') + 1)} ${years ? 'years' : 'days'}` };
  });
  protected readonly left = computed(() => durationParts(this.run().progress.secondsLeft));
  protected readonly took = computed(() => {
    const { startedAt, endedAt } = this.run();
    if (!startedAt || !endedAt) return null;
    return durationParts((Date.parse(endedAt) - Date.parse(startedAt)) / 1000);
  });
  protected readonly speed = computed<Part | null>(() => {
    const speed = this.run().progress.cellStepsPerSecond;
    if (speed === null) return null;
    const [value = '', ...unit] = formatCellSteps(speed).split(' ');
    return { value, unit: unit.join(' ') };
  });

  private readonly closing = computed(() => energyClosure(this.follower().series('budget')));
  protected readonly closure = computed(() => {
    const { share } = this.closing();
    if (Number.isNaN(share)) return null;
    const parts = numberParts(share, { significant: 1 });
    return { ...parts, exponentText: parts.exponent === null ? '' : formatNumber(parts.exponent) };
  });
  protected readonly closureTitle = computed(() => {
    const against = this.closing().against === 'wind work' ? 'largest work of the wind' : 'largest energy';
    return `Largest residual of the energy budget in any interval, over the ${against} in any interval`;
  });

  protected readonly queueLine = computed(() => {
    const { state, queuePosition, queuedReason } = this.run();
    if (state !== 'queued') return '';
    const place =
      queuePosition === null
        ? 'waits'
        : queuePosition === 1
          ? 'next in the queue'
          : `number ${queuePosition} in the queue`;
    return queuedReason
      ? `Back in the queue: ${queuedReason}; ${place}.`
      : `It is ${place}.`.replace('It is waits', 'It waits');
  });
  protected readonly failureFacts = computed(() => {
    const { failure, progress } = this.run();
    if (!failure) return '';
    const where =
      failure.day === null
        ? ''
        : `Failed on ${formatModelDay(failure.day)}${failure.place ? `, ${failure.place}` : ''}. `;
    if (failure.lastGoodStep === null || progress.totalSteps === 0) return `${where}No good state was saved.`;
    const day = (failure.lastGoodStep * progress.totalDays) / progress.totalSteps;
    return `${where}Last good state: ${formatModelDay(day)}${this.run().can.resume ? '; it can be resumed from there' : ''}.`;
  });
  protected readonly lastRecord = computed(() => formatModelDay(lastRecordDay(this.run())));
  /** Changes once a model year while the run goes on: screen readers hear that, not every record. */
  protected readonly yearSpoken = computed(() => {
    const { state, progress, label } = this.run();
    if (state !== 'running') return `${label} is ${state}`;
    return `${label}: model year ${Math.floor(progress.day / DAYS_PER_YEAR)}`;
  });

  protected stop(): void {
    void this.act(this.actions.stop(this.run().id));
  }
  protected resume(): void {
    void this.act(this.actions.resume(this.run().id));
  }

  protected async extend(): Promise<void> {
    const opened = this.dialog.open<ExtendDialog, RunSummary, RunSummary>(ExtendDialog, {
      data: this.run(),
      width: '440px',
      maxWidth: '94vw',
    });
    const extended = await firstValueFrom(opened.afterClosed());
    if (extended) await this.router.navigate(['/runs', extended.id]);
  }

  protected async repeat(): Promise<void> {
    this.busy.set(true);
    this.problem.set(null);
    try {
      const repeated = await firstValueFrom(this.actions.repeat(this.run().id));
      await this.router.navigate(['/runs', repeated.id]);
    } catch (error) {
      this.problem.set(toApiProblem(error));
    } finally {
      this.busy.set(false);
    }
  }

  protected async putBeside(): Promise<void> {
    const run = this.run();
    const other =
      run.parentRunId ?? (await this.picker.pick({ title: `Put beside ${run.label}`, except: [run.id] }))?.id;
    if (!other) return;
    // The reference is A, what was made from it is B.
    await this.router.navigate(['/side-by-side'], { queryParams: { a: other, b: run.id } });
  }

  protected async delete(): Promise<void> {
    const run = this.run();
    const sure = await this.confirm.ask({
      title: `Delete ${run.label}?`,
      text: 'Its setup and everything that it produced go for good: maps, sections, moorings, budgets, checkpoints. Runs made from it stay.',
      yes: 'Delete it',
      ends: true,
    });
    if (!sure) return;
    this.busy.set(true);
    try {
      await firstValueFrom(this.actions.delete(run.id));
      await this.router.navigate(['/experiments', run.experimentId]);
    } catch (error) {
      this.problem.set(toApiProblem(error));
    } finally {
      this.busy.set(false);
    }
  }

  private async act(request: Observable<RunSummary>): Promise<void> {
    this.busy.set(true);
    this.problem.set(null);
    try {
      this.follower().adopt(await firstValueFrom(request));
    } catch (error) {
      this.problem.set(toApiProblem(error));
    } finally {
      this.busy.set(false);
    }
  }
}

/** "6 min 5 s" as pairs of number and unit. */
function durationParts(seconds: number | null): Part[] {
  if (seconds === null || !Number.isFinite(seconds)) return [];
  // The space between number and unit is a narrow one; all kinds count here.
  return [...formatDuration(seconds).matchAll(/([\d.]+)\s*([a-z]+)/g)].map(([, value = '', unit = '']) => ({
    value,
    unit,
  }));
}
