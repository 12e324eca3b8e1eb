import { ChangeDetectionStrategy, Component, ElementRef, computed, inject, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import {
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import { MatError, MatFormField, MatLabel } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { type Person, type Role, inviteSchema, personSchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api, newIdempotencyKey } from '../../core/api';
import { bySchema, focusFirstWrong, messageOf, showFieldProblems } from '../../core/forms';
import { type ApiProblem, toApiProblem } from '../../core/problem';
import { ProblemMessage } from '../../shared/problem-message/problem-message';
import { RoleBoxes } from './role-boxes';

/** Asks whom to invite and as what; closes with the invited person. */
@Component({
  selector: 'app-invite-dialog',
  imports: [
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatError,
    MatFormField,
    MatInput,
    MatLabel,
    ProblemMessage,
    ReactiveFormsModule,
    RoleBoxes,
  ],
  template: `
    <h2 mat-dialog-title>Invite a person</h2>
    <form [formGroup]="form" (ngSubmit)="send()" novalidate>
      <mat-dialog-content>
        <div class="fields">
          <app-problem-message [problem]="problem()" [shownElsewhere]="shown()" />
          <mat-form-field>
            <mat-label>E-mail address</mat-label>
            <input matInput type="email" formControlName="email" autocomplete="off" required cdkFocusInitial />
            <mat-error>{{ messageOf(form.controls.email) }}</mat-error>
          </mat-form-field>
          <mat-form-field>
            <mat-label>Name</mat-label>
            <input matInput formControlName="name" autocomplete="off" required />
            <mat-error>{{ messageOf(form.controls.name) }}</mat-error>
          </mat-form-field>
          <app-role-boxes [(roles)]="roles" [message]="rolesMessage()" />
        </div>
      </mat-dialog-content>
      <mat-dialog-actions>
        <button mat-stroked-button type="button" mat-dialog-close>Cancel</button>
        <button mat-flat-button type="submit" [disabled]="busy()">Send the invitation</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: '.fields { padding-top: 8px; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class InviteDialog {
  private readonly api = inject(Api);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);
  private readonly opened = inject<MatDialogRef<InviteDialog, Person>>(MatDialogRef);
  protected readonly form = new FormGroup({
    email: new FormControl('', { nonNullable: true, validators: bySchema(inviteSchema.shape.email) }),
    name: new FormControl('', { nonNullable: true, validators: bySchema(inviteSchema.shape.name) }),
  });
  protected readonly roles = signal<readonly Role[]>(['modeller']);
  protected readonly messageOf = messageOf;
  protected readonly busy = signal(false);
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly shown = signal<readonly string[]>([]);
  protected readonly rolesMessage = computed(() => {
    const parsed = inviteSchema.shape.roles.safeParse(this.roles());
    return parsed.success ? '' : (parsed.error.issues[0]?.message ?? '');
  });

  protected async send(): Promise<void> {
    this.form.markAllAsTouched();
    if (this.form.invalid) focusFirstWrong(this.host.nativeElement);
    if (this.form.invalid || this.rolesMessage() || this.busy()) return;
    this.busy.set(true);
    this.problem.set(null);
    try {
      const body = { ...this.form.getRawValue(), roles: this.roles() };
      const sending = { idempotencyKey: newIdempotencyKey() };
      this.opened.close(await firstValueFrom(this.api.post('/api/admin/people', body, personSchema, sending)));
    } catch (error) {
      const problem = toApiProblem(error);
      this.shown.set(showFieldProblems(this.form, problem));
      this.problem.set(problem);
    } finally {
      this.busy.set(false);
    }
  }
}
