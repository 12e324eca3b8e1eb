import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';
import type { OutboxMail } from '@halfdeep/contracts';

/** One mail as it was sent, its links blanked unless this is the demonstration. */
@Component({
  selector: 'app-mail-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle],
  template: `
    <h2 mat-dialog-title>{{ mail.subject }}</h2>
    <mat-dialog-content tabindex="0">
      <p class="small quiet">to {{ mail.to }}</p>
      @if (mail.error; as error) {
        <p class="small bad">{{ error }}</p>
      }
      <div class="body">{{ mail.body }}</div>
    </mat-dialog-content>
    <mat-dialog-actions><button mat-stroked-button type="button" mat-dialog-close>Close</button></mat-dialog-actions>
  `,
  styles: `
    .body {
      white-space: pre-wrap;
      overflow-wrap: anywhere;
      margin-top: 12px;
      padding: 12px 14px;
      background: var(--hd-sheet);
      border: var(--hd-line);
      user-select: text;
    }
    .bad {
      color: var(--hd-refuse);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MailDialog {
  protected readonly mail = inject<OutboxMail>(MAT_DIALOG_DATA);
}
