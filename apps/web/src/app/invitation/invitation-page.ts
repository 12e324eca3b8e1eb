import { ChangeDetectionStrategy, Component, ElementRef, effect, inject, signal, untracked } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatError, MatFormField, MatHint, MatLabel } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { Router, RouterLink } from '@angular/router';
import {
  type Invitation,
  MIN_PASSWORD_LENGTH,
  invitationRedeemSchema,
  invitationSchema,
  passwordSchema,
  signInSchema,
} from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { AddressToken } from '../core/address-token';
import { Api } from '../core/api';
import { formatMoment, sentenceStart } from '../core/format';
import { bySchema, focusFirstWrong, messageOf, showFieldProblems } from '../core/forms';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { Session } from '../core/session';
import { DataState } from '../shared/data-state/data-state';
import { ProblemMessage } from '../shared/problem-message/problem-message';

/** Reads what a mailed invitation says and makes the account that it offers. */
@Component({
  selector: 'app-invitation-page',
  imports: [
    DataState,
    MatButton,
    MatError,
    MatFormField,
    MatHint,
    MatInput,
    MatLabel,
    ProblemMessage,
    ReactiveFormsModule,
    RouterLink,
  ],
  templateUrl: './invitation-page.html',
  styleUrl: '../sign-in/sign-in.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class InvitationPage {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly router = inject(Router);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);
  protected readonly token = inject(AddressToken).follow();
  protected readonly minLength = MIN_PASSWORD_LENGTH;
  protected readonly messageOf = messageOf;
  protected readonly sentenceStart = sentenceStart;
  protected readonly invitation = signal<Invitation | null>(null);
  /** Why the invitation could not be read. */
  protected readonly unread = signal<ApiProblem | null>(null);
  protected readonly busy = signal(false);
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly shown = signal<readonly string[]>([]);
  protected readonly until = (iso: string) => formatMoment(iso);

  protected readonly form = new FormGroup({
    // For the first admin alone, whose invitation names no address.
    email: new FormControl(
      { value: '', disabled: true },
      { nonNullable: true, validators: bySchema(signInSchema.shape.email) },
    ),
    name: new FormControl('', { nonNullable: true, validators: bySchema(invitationRedeemSchema.shape.name) }),
    password: new FormControl('', { nonNullable: true, validators: bySchema(passwordSchema) }),
  });

  constructor() {
    effect(() => {
      const token = this.token();
      if (token) untracked(() => void this.look());
    });
  }

  protected async look(): Promise<void> {
    this.unread.set(null);
    this.invitation.set(null);
    try {
      const body = { token: this.token() };
      const invitation = await firstValueFrom(this.api.post('/api/invitations/look', body, invitationSchema));
      this.form.controls.name.setValue(invitation.name);
      if (invitation.email === '') this.form.controls.email.enable();
      else this.form.controls.email.disable();
      this.invitation.set(invitation);
    } catch (error) {
      this.unread.set(toApiProblem(error));
    }
  }

  /** Makes the account and signs in with it. */
  protected async accept(): Promise<void> {
    const invitation = this.invitation();
    this.form.markAllAsTouched();
    if (this.form.invalid) focusFirstWrong(this.host.nativeElement);
    if (this.form.invalid || this.busy() || !invitation) return;
    this.busy.set(true);
    this.problem.set(null);
    const { name, password, email } = this.form.value; // without the address when the invitation names it
    const body = { token: this.token(), name, password, email };
    try {
      await firstValueFrom(this.api.send('POST', '/api/invitations/redeem', body));
      await firstValueFrom(this.session.signIn(email ?? invitation.email, password ?? ''));
      await this.router.navigateByUrl('/');
    } catch (error) {
      const problem = toApiProblem(error);
      this.shown.set(showFieldProblems(this.form, problem));
      this.problem.set(problem);
    } finally {
      this.busy.set(false);
    }
  }
}
