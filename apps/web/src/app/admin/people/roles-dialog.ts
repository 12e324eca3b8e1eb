import { ChangeDetectionStrategy, Component, computed, inject, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import { type Person, type Role, inviteSchema, personSchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api } from '../../core/api';
import { type ApiProblem, toApiProblem } from '../../core/problem';
import { ProblemMessage } from '../../shared/problem-message/problem-message';
import { RoleBoxes } from './role-boxes';

/** Gives and takes roles; closes with the person as the server has them now. */
@Component({
  selector: 'app-roles-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle, ProblemMessage, RoleBoxes],
  template: `
    <h2 mat-dialog-title>Roles of {{ person.name }}</h2>
    <mat-dialog-content>
      <app-problem-message [problem]="problem()" />
      <app-role-boxes [(roles)]="roles" [message]="message()" />
      <p class="note quiet">A change ends their open sessions; they sign in again and are told by mail.</p>
    </mat-dialog-content>
    <mat-dialog-actions>
      <button mat-stroked-button type="button" mat-dialog-close>Cancel</button>
      <button mat-flat-button type="button" [disabled]="busy() || message() !== '' || same()" (click)="save()">
        Change the roles
      </button>
    </mat-dialog-actions>
  `,
  styles: 'app-problem-message { display: block; margin-bottom: 12px; } app-problem-message:empty { margin: 0; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RolesDialog {
  private readonly api = inject(Api);
  private readonly opened = inject<MatDialogRef<RolesDialog, Person>>(MatDialogRef);
  protected readonly person = inject<Person>(MAT_DIALOG_DATA);
  protected readonly roles = signal<readonly Role[]>(this.person.roles);
  protected readonly busy = signal(false);
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly same = computed(() => [...this.roles()].sort().join() === [...this.person.roles].sort().join());
  protected readonly message = computed(() => {
    const parsed = inviteSchema.shape.roles.safeParse(this.roles());
    return parsed.success ? '' : (parsed.error.issues[0]?.message ?? '');
  });

  protected async save(): Promise<void> {
    this.busy.set(true);
    this.problem.set(null);
    try {
      const path = `/api/admin/people/${this.person.id}`;
      this.opened.close(await firstValueFrom(this.api.patch(path, { roles: this.roles() }, personSchema)));
    } catch (error) {
      this.problem.set(toApiProblem(error));
    } finally {
      this.busy.set(false);
    }
  }
}
