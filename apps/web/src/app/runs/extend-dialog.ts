import { ChangeDetectionStrategy, Component, computed, inject, signal } from '@angular/core';
import { FormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { type RunSummary, extendRunSchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { formatModelLength } from '../core/format';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { ProblemMessage } from '../shared/problem-message/problem-message';
import { RunActions } from './run-actions';

/** Asks by how many days a finished run goes on, and under which label; answers the new run. */
@Component({
  selector: 'app-extend-dialog',
  imports: [
    FormsModule,
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatFormFieldModule,
    MatInput,
    ProblemMessage,
  ],
  template: `
    <h2 mat-dialog-title>Extend {{ run.label }}</h2>
    <form (ngSubmit)="extend()">
      <mat-dialog-content>
        <p class="small quiet">
          A new run goes on from the last state of this one: same setup, same clock, equal to the last bit to one long
          run.
        </p>
        <div class="fields">
          <mat-form-field appearance="outline" floatLabel="always">
            <mat-label>Label</mat-label>
            <input
              matInput
              name="label"
              [ngModel]="label()"
              (ngModelChange)="label.set($event)"
              maxlength="80"
              required
            />
          </mat-form-field>
          <mat-form-field appearance="outline" floatLabel="always">
            <mat-label>Days beyond the end</mat-label>
            <input
              matInput
              type="number"
              name="days"
              min="0.25"
              max="73000"
              step="0.25"
              [ngModel]="days()"
              (ngModelChange)="days.set($event)"
              required
            />
            <span matTextSuffix>d</span>
            <mat-hint>{{ length() }}</mat-hint>
          </mat-form-field>
        </div>
        @if (refusal()) {
          <p class="refusal" role="alert">{{ refusal() }}</p>
        }
        <app-problem-message [problem]="problem()" />
      </mat-dialog-content>
      <mat-dialog-actions>
        <button mat-stroked-button type="button" mat-dialog-close>Cancel</button>
        <button mat-flat-button type="submit" [disabled]="sending()">{{ sending() ? 'Queueing' : 'Queue it' }}</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    .fields {
      margin-top: 14px;
    }
    .refusal {
      font: var(--hd-small);
      color: var(--hd-refuse);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ExtendDialog {
  private readonly actions = inject(RunActions);
  private readonly dialog = inject<MatDialogRef<ExtendDialog, RunSummary>>(MatDialogRef);
  protected readonly run = inject<RunSummary>(MAT_DIALOG_DATA);
  protected readonly label = signal(`${this.run.label}, extended`.slice(0, 80));
  protected readonly days = signal<number | null>(Math.max(1, this.run.progress.totalDays));
  protected readonly sending = signal(false);
  protected readonly refusal = signal('');
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly length = computed(() => {
    const days = this.days();
    if (days === null || !(days > 0)) return '';
    return `${formatModelLength(days)}; the new run ends on day ${this.run.progress.totalDays + days}`;
  });

  protected async extend(): Promise<void> {
    const asked = extendRunSchema.safeParse({ label: this.label(), days: this.days() });
    this.refusal.set('');
    this.problem.set(null);
    if (!asked.success) {
      const issue = asked.error.issues[0];
      const days = issue?.path[0] === 'days';
      this.refusal.set(
        days
          ? 'A whole number of quarter days between 0.25 and 73 000 is needed.'
          : (issue?.message ?? 'A label is needed.'),
      );
      return;
    }
    this.sending.set(true);
    try {
      this.dialog.close(await firstValueFrom(this.actions.extend(this.run.id, asked.data.label, asked.data.days)));
    } catch (error) {
      this.problem.set(toApiProblem(error));
    } finally {
      this.sending.set(false);
    }
  }
}
