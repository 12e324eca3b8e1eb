import { ChangeDetectionStrategy, Component, inject, linkedSignal, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import { experimentSummarySchema, newExperimentSchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api, newIdempotencyKey } from '../core/api';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { ProblemMessage } from '../shared/problem-message/problem-message';
import { TextField } from '../shared/text-field/text-field';

/** Asks for the question that a new experiment is about; closes with the experiment's id. */
@Component({
  selector: 'app-new-experiment-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle, ProblemMessage, TextField],
  template: `
    <form (submit)="begin($event)">
      <h2 mat-dialog-title>New experiment</h2>
      <mat-dialog-content>
        <div class="fields">
          <app-text-field
            label="Question"
            cdkFocusInitial
            [rows]="2"
            [maxLength]="300"
            placeholder="Does a stronger season carry proportionally more heat?"
            why="What the runs should answer. It leads everything that comes after."
            [refusal]="wrong().get('/question') ?? null"
            [(value)]="question"
          />
          <app-text-field
            label="Notes"
            [rows]="4"
            [maxLength]="20000"
            placeholder="may be empty"
            why="What is known, what is expected, how it will be told."
            [refusal]="wrong().get('/notes') ?? null"
            [(value)]="notes"
          />
          <app-problem-message [problem]="problem()" [shownElsewhere]="['/question', '/notes']" />
        </div>
      </mat-dialog-content>
      <mat-dialog-actions>
        <button mat-stroked-button type="button" mat-dialog-close>Cancel</button>
        <button mat-flat-button type="submit" [disabled]="sending()">Begin</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    .fields {
      padding-top: 4px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class NewExperimentDialog {
  private readonly api = inject(Api);
  private readonly dialog = inject<MatDialogRef<NewExperimentDialog, string>>(MatDialogRef);
  protected readonly question = signal('');
  protected readonly notes = signal('');
  /** The same key for the same words: a second press is not a second experiment. */
  private readonly key = linkedSignal(() => {
    this.question();
    this.notes();
    return newIdempotencyKey();
  });
  protected readonly wrong = signal<ReadonlyMap<string, string>>(new Map());
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly sending = signal(false);

  protected async begin(event: Event): Promise<void> {
    event.preventDefault();
    if (this.sending()) return;
    this.problem.set(null);
    const parsed = newExperimentSchema.safeParse({ question: this.question(), notes: this.notes() });
    this.wrong.set(new Map(parsed.error?.issues.map((issue) => [`/${issue.path.join('/')}`, issue.message]) ?? []));
    if (!parsed.success) return;
    this.sending.set(true);
    try {
      const made = await firstValueFrom(
        this.api.post('/api/experiments', parsed.data, experimentSummarySchema, { idempotencyKey: this.key() }),
      );
      this.dialog.close(made.id);
    } catch (error) {
      const problem = toApiProblem(error);
      this.problem.set(problem);
      this.wrong.set(problem.fields);
    } finally {
      this.sending.set(false);
    }
  }
}
