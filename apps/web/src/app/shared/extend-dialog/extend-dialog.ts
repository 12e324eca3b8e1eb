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
import { extendRunSchema, runSummarySchema, type RunSummary } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api, newIdempotencyKey } from '../../core/api';
import { formatModelLength } from '../../core/format';
import { type ApiProblem, toApiProblem } from '../../core/problem';
import { ProblemMessage } from '../problem-message/problem-message';
import { QuantityField } from '../quantity-field/quantity-field';
import { TextField } from '../text-field/text-field';

/** By how much a finished run goes on, in a run of its own; closes with that run. */
@Component({
  selector: 'app-extend-dialog',
  imports: [
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    ProblemMessage,
    QuantityField,
    TextField,
  ],
  template: `
    <form (submit)="extend($event)">
      <h2 mat-dialog-title>Extend “{{ run.label }}”</h2>
      <mat-dialog-content>
        <div class="fields">
          <p>A new run goes on from the last state; the two equal one long run to the last bit.</p>
          <app-quantity-field
            label="Days beyond the end"
            unit="d"
            spokenUnit="days"
            [min]="0.25"
            [max]="73000"
            [why]="end()"
            [refusal]="wrong().get('/days') ?? null"
            [(value)]="days"
          />
          <app-text-field
            label="Label of the run"
            [maxLength]="80"
            [refusal]="wrong().get('/label') ?? null"
            [(value)]="label"
          />
          <app-problem-message [problem]="problem()" [shownElsewhere]="['/days', '/label']" />
        </div>
      </mat-dialog-content>
      <mat-dialog-actions>
        <button mat-stroked-button type="button" mat-dialog-close>Cancel</button>
        <button mat-flat-button type="submit" [disabled]="sending()">Queue the extension</button>
      </mat-dialog-actions>
    </form>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ExtendDialog {
  private readonly api = inject(Api);
  private readonly dialog = inject<MatDialogRef<ExtendDialog, RunSummary>>(MatDialogRef);
  protected readonly run = inject<RunSummary>(MAT_DIALOG_DATA);
  /** A year, or as long again where the run is shorter. */
  protected readonly days = signal<number | null>(Math.min(365, this.run.progress.totalDays));
  protected readonly label = signal(`${this.run.label}, extended`.slice(0, 80));
  protected readonly wrong = signal<ReadonlyMap<string, string>>(new Map());
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly sending = signal(false);
  /** The same key for the same words: a second press is not a second run. */
  private readonly key = linkedSignal(() => {
    this.days();
    this.label();
    return newIdempotencyKey();
  });
  protected readonly end = computed(() => {
    const days = this.days();
    if (days === null || !(days > 0)) return 'Whole numbers of 6 hours.';
    return `To the end of ${formatModelLength(this.run.progress.totalDays + days)}, ${formatModelLength(days)} more.`;
  });

  protected async extend(event: Event): Promise<void> {
    event.preventDefault();
    if (this.sending()) return;
    this.problem.set(null);
    const parsed = extendRunSchema.safeParse({ label: this.label(), days: this.days() });
    this.wrong.set(new Map(parsed.error?.issues.map((issue) => [`/${issue.path.join('/')}`, issue.message]) ?? []));
    if (!parsed.success) return;
    this.sending.set(true);
    try {
      const path = `/api/runs/${this.run.id}/extend`;
      this.dialog.close(
        await firstValueFrom(this.api.post(path, parsed.data, runSummarySchema, { idempotencyKey: this.key() })),
      );
    } catch (error) {
      const problem = toApiProblem(error);
      this.problem.set(problem);
      this.wrong.set(problem.fields);
    } finally {
      this.sending.set(false);
    }
  }
}
