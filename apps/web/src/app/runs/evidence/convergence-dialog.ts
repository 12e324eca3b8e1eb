import { ChangeDetectionStrategy, Component, computed, inject, linkedSignal, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import { MatRadioButton, MatRadioGroup } from '@angular/material/radio';
import { type Convergence, type ConvergenceCoast, type ConvergenceLevel, convergenceSchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api, newIdempotencyKey } from '../../core/api';
import { formatBytes, formatDuration, formatNumber } from '../../core/format';
import { type ApiProblem, toApiProblem } from '../../core/problem';
import { ProblemMessage } from '../../shared/problem-message/problem-message';
import { VerdictSign } from '../../shared/verdict/verdict';
import { costOf, openChoice } from './convergence-words';

/** What the dialog is about when it opens, and what stands when it closes. */
export interface ConvergenceAsked {
  label: string;
  coast: ConvergenceCoast;
  convergence: Convergence;
}

const ROLES = { half: 'half the resolution', twice: 'twice the resolution' } as const;
const SHORT = { half: 'half', twice: 'twice' } as const;

/** What the two other grids cost, and how their coast is made; closes with the answer once they are queued. */
@Component({
  selector: 'app-convergence-dialog',
  imports: [
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatRadioButton,
    MatRadioGroup,
    ProblemMessage,
    VerdictSign,
  ],
  templateUrl: './convergence-dialog.html',
  styleUrl: './convergence-dialog.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ConvergenceDialog {
  private readonly api = inject(Api);
  private readonly dialog = inject<MatDialogRef<ConvergenceDialog, ConvergenceAsked>>(MatDialogRef);
  protected readonly asked = inject<ConvergenceAsked>(MAT_DIALOG_DATA);

  protected readonly coast = signal(openChoice(this.asked.convergence, this.asked.coast));
  protected readonly choices = this.asked.convergence.choices;
  protected readonly choice = computed(
    () => this.choices.find(({ coast }) => coast === this.coast()) ?? this.choices[0],
  );
  protected readonly levels = computed(() =>
    (this.choice()?.levels ?? []).map((level) => ({
      role: SHORT[level.role],
      there: level.run !== null,
      ...words(level),
    })),
  );
  protected readonly missing = computed(() => (this.choice()?.levels ?? []).filter(({ run }) => run === null));
  protected readonly total = computed(() => {
    const cost = costOf(this.choice()?.levels ?? []);
    return cost && this.missing().length > 1 ? costWords(cost) : null;
  });
  protected readonly refusals = computed(() =>
    this.missing().flatMap(({ role, refusal }) => (refusal ? [{ role: ROLES[role], refusal }] : [])),
  );
  protected readonly remarks = computed(() =>
    this.missing().flatMap(({ role, plan, refusal }) =>
      (refusal ? [] : (plan?.remarks ?? [])).map((remark) => ({ role: ROLES[role], remark })),
    ),
  );
  protected readonly notes = computed(() =>
    this.missing().flatMap(({ role, plan }) => (plan?.notes ?? []).map((note) => ({ role: ROLES[role], note }))),
  );
  protected readonly whyNot = computed(() => {
    if (this.missing().length === 0) return 'Both are queued already.';
    return this.refusals().length > 0 ? 'One of the two cannot be made, and without it the three say nothing.' : '';
  });
  protected readonly button = computed(() => (this.missing().length === 1 ? 'Queue the other one' : 'Queue both'));

  protected readonly sending = signal(false);
  protected readonly problem = signal<ApiProblem | null>(null);
  /** The same key for the same choice: a second press is not a second pair of runs. */
  private readonly key = linkedSignal(() => {
    this.coast();
    return newIdempotencyKey();
  });

  protected async queue(event: Event): Promise<void> {
    event.preventDefault();
    if (this.sending() || this.whyNot()) return;
    this.sending.set(true);
    this.problem.set(null);
    const coast = this.choice()?.coast ?? 'same';
    try {
      const path = `/api/runs/${this.asked.convergence.runId}/convergence`;
      const convergence = await firstValueFrom(
        this.api.post(path, { coast }, convergenceSchema, { idempotencyKey: this.key() }),
      );
      this.dialog.close({ ...this.asked, coast, convergence });
    } catch (error) {
      this.problem.set(toApiProblem(error));
      this.key.set(newIdempotencyKey());
    } finally {
      this.sending.set(false);
    }
  }
}

function words({ plan }: ConvergenceLevel) {
  if (!plan) return { grid: '–', steps: '–', time: '–', disk: '–' };
  const { time, disk } = costWords({ ...plan, cells: plan.nx * plan.ny });
  return {
    grid: `${formatNumber(plan.nx)} × ${formatNumber(plan.ny)}`,
    steps: formatNumber(plan.stepsPerDay),
    time,
    disk,
  };
}

function costWords({ seconds, diskBytes, cells }: { seconds: number; diskBytes: number; cells: number }) {
  // Less than a second is no "0 s".
  const time = seconds < 1 ? 'under 1 s' : formatDuration(seconds);
  return { time, disk: formatBytes(diskBytes), cells: formatNumber(cells) };
}
