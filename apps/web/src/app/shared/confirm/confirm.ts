import { ChangeDetectionStrategy, Component, Injectable, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialog,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';
import { firstValueFrom } from 'rxjs';

export interface Question {
  title: string;
  /** What happens, and what cannot be undone. */
  text: string;
  /** The verb on the button that does it. */
  yes: string;
  no?: string;
  /** True: the button is drawn as a refusal, since it ends something. */
  ends?: boolean;
}

@Component({
  selector: 'app-confirm-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle],
  template: `
    <h2 mat-dialog-title>{{ question.title }}</h2>
    <mat-dialog-content>
      <p>{{ question.text }}</p>
    </mat-dialog-content>
    <mat-dialog-actions>
      <button mat-stroked-button type="button" [mat-dialog-close]="false" cdkFocusInitial>
        {{ question.no ?? 'Cancel' }}
      </button>
      @if (question.ends) {
        <button mat-stroked-button class="stop" type="button" [mat-dialog-close]="true">{{ question.yes }}</button>
      } @else {
        <button mat-flat-button type="button" [mat-dialog-close]="true">{{ question.yes }}</button>
      }
    </mat-dialog-actions>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
class ConfirmDialog {
  protected readonly question = inject<Question>(MAT_DIALOG_DATA);
}

/** Asks before something that cannot be taken back. */
@Injectable({ providedIn: 'root' })
export class Confirm {
  private readonly dialog = inject(MatDialog);

  /** True only when the person pressed the button that does it. */
  async ask(question: Question): Promise<boolean> {
    const opened = this.dialog.open<ConfirmDialog, Question, boolean>(ConfirmDialog, { data: question, maxWidth: 480 });
    return (await firstValueFrom(opened.afterClosed())) === true;
  }
}
