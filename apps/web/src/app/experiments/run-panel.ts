import {
  ChangeDetectionStrategy,
  Component,
  computed,
  inject,
  input,
  linkedSignal,
  output,
  signal,
} from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { Router, RouterLink } from '@angular/router';
import { runSummarySchema, type RunSummary } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api, newIdempotencyKey } from '../core/api';
import {
  formatBytes,
  formatChange,
  formatDuration,
  formatModelLength,
  formatMoment,
  formatNumber,
} from '../core/format';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { ChoiceField, type Choice } from '../shared/choice-field/choice-field';
import { Confirm } from '../shared/confirm/confirm';
import { ProblemMessage } from '../shared/problem-message/problem-message';
import { StateSign } from '../shared/state-sign/state-sign';
import { outcomeBelow, secondsTaken, shareDone } from './descent/descent';
import { ExtendDialog } from '../shared/extend-dialog/extend-dialog';

/** The chosen run of the descent: what it is, what can be done with it, and beside which other it can be laid. */
@Component({
  selector: 'app-run-panel',
  imports: [ChoiceField, MatButton, ProblemMessage, RouterLink, StateSign],
  templateUrl: './run-panel.html',
  styleUrl: './run-panel.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RunPanel {
  private readonly api = inject(Api);
  private readonly router = inject(Router);
  private readonly dialog = inject(MatDialog);
  private readonly confirm = inject(Confirm);
  readonly run = input.required<RunSummary>();
  readonly runs = input.required<readonly RunSummary[]>();
  readonly changed = output<RunSummary>();
  readonly removed = output<string>();
  protected readonly busy = signal(false);
  /** Belongs to the run that it was about. */
  protected readonly problem = linkedSignal<string, ApiProblem | null>({
    source: () => this.run().id,
    computation: () => null,
  });

  protected readonly words = computed(() => outcomeBelow(this.run()));
  protected readonly share = computed(() => shareDone(this.run()));
  protected readonly changes = computed(() =>
    this.run().changes.map(({ label, from, to, unit }) => ({ label, text: formatChange(from, to, unit) })),
  );
  protected readonly facts = computed(() => {
    const { grid, diskBytes, createdAt, owner, progress, state } = this.run();
    // A finished run says it in its words already.
    const took = state === 'finished' ? null : secondsTaken(this.run());
    return [
      `${formatNumber(grid.nx)} × ${formatNumber(grid.ny)} cells, ${formatModelLength(progress.totalDays)}`,
      `set up by ${owner.name}, ${formatMoment(createdAt)}`,
      ...(state === 'running' && progress.secondsLeft !== null ? [`${formatDuration(progress.secondsLeft)} left`] : []),
      ...(took === null ? [] : [`${formatDuration(took)} from start to end`]),
      ...(diskBytes === null ? [] : [`${formatBytes(diskBytes)} on disk`]),
    ];
  });
  protected readonly others = computed<Choice[]>(() =>
    this.runs().map((run) => ({ value: run.id, label: `${run.label} (${run.state})` })),
  );
  /** A stands for the reference: the parent, else the first run. */
  protected readonly a = linkedSignal<{ id: string; a: string }, string>({
    source: () => ({
      id: this.run().id,
      a: this.run().parentRunId ?? this.runs().find(({ id }) => id !== this.run().id)?.id ?? '',
    }),
    computation: ({ a }, before) => (before?.source.id === this.run().id ? before.value : a),
  });
  protected readonly b = linkedSignal(() => this.run().id);

  protected async stop(): Promise<void> {
    await this.act(async () =>
      this.changed.emit(await firstValueFrom(this.api.post(`/api/runs/${this.run().id}/stop`, {}, runSummarySchema))),
    );
  }

  protected async resume(): Promise<void> {
    await this.act(async () =>
      this.changed.emit(await firstValueFrom(this.api.post(`/api/runs/${this.run().id}/resume`, {}, runSummarySchema))),
    );
  }

  protected async extend(): Promise<void> {
    const opened = this.dialog.open<ExtendDialog, RunSummary, RunSummary>(ExtendDialog, {
      data: this.run(),
      width: '460px',
      maxWidth: '94vw',
    });
    const made = await firstValueFrom(opened.afterClosed());
    if (made) await this.router.navigate(['/runs', made.id]);
  }

  /** The same setup once more: it must end in the same state, to the last bit. */
  protected async repeat(): Promise<void> {
    await this.act(async () => {
      const idempotencyKey = newIdempotencyKey();
      const path = `/api/runs/${this.run().id}/repeat`;
      const made = await firstValueFrom(this.api.post(path, {}, runSummarySchema, { idempotencyKey }));
      await this.router.navigate(['/runs', made.id]);
    });
  }

  protected async delete(): Promise<void> {
    const { id, label, state } = this.run();
    const sure = await this.confirm.ask({
      title: `Delete “${label}”?`,
      text: `The run (${state}) and everything it produced go for good. Runs made from it stay, with their setups.`,
      yes: 'Delete',
      ends: true,
    });
    if (!sure) return;
    await this.act(async () => {
      await firstValueFrom(this.api.send('DELETE', `/api/runs/${id}`));
      this.removed.emit(id);
    });
  }

  private async act(work: () => Promise<void>): Promise<void> {
    this.busy.set(true);
    this.problem.set(null);
    try {
      await work();
    } catch (error) {
      this.problem.set(toApiProblem(error));
    } finally {
      this.busy.set(false);
    }
  }
}
