import { ChangeDetectionStrategy, Component, ElementRef, inject, linkedSignal, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatError, MatFormField, MatHint, MatLabel } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { RouterLink } from '@angular/router';
import { MIN_PASSWORD_LENGTH, passwordResetRequestSchema, passwordSchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { AddressToken } from '../core/address-token';
import { Api } from '../core/api';
import { bySchema, focusFirstWrong, messageOf, showFieldProblems } from '../core/forms';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { ProblemMessage } from '../shared/problem-message/problem-message';

/** Asks for a link by mail; opened from such a link, sets the new password. */
@Component({
  selector: 'app-reset-page',
  imports: [
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
  templateUrl: './reset-page.html',
  styleUrl: '../sign-in/sign-in.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ResetPage {
  private readonly api = inject(Api);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);
  private readonly fromAddress = inject(AddressToken).follow();
  /** The token in use; a link that is opened later in this tab takes the place of what stood here. */
  protected readonly token = linkedSignal(() => this.fromAddress());
  protected readonly minLength = MIN_PASSWORD_LENGTH;
  protected readonly messageOf = messageOf;
  protected readonly busy = signal(false);
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly shown = signal<readonly string[]>([]);
  /** The token that set a password in this tab: its link may be opened once more, by the mail or by going back. */
  private spent: string | null = null;
  protected readonly done = linkedSignal<'asked' | 'changed' | 'spent' | null>(() => {
    const token = this.fromAddress();
    return token !== null && token === this.spent ? 'spent' : null;
  });

  protected readonly request = new FormGroup({
    email: new FormControl('', { nonNullable: true, validators: bySchema(passwordResetRequestSchema.shape.email) }),
  });
  protected readonly renewal = new FormGroup({
    password: new FormControl('', { nonNullable: true, validators: bySchema(passwordSchema) }),
  });

  protected askForLink(): Promise<void> {
    return this.send(this.request, '/api/password-resets', this.request.getRawValue(), 'asked');
  }

  protected setPassword(): Promise<void> {
    const token = this.token();
    const body = { token, ...this.renewal.getRawValue() };
    return this.send(this.renewal, '/api/password-resets/redeem', body, 'changed').then(() => {
      if (this.done() !== 'changed') return;
      this.spent = token;
      this.renewal.reset();
    });
  }

  /** A link that is used up or expired leads back to asking for another. */
  protected askAgain(): void {
    this.token.set(null);
    this.problem.set(null);
    this.done.set(null);
  }

  private async send(form: FormGroup, path: string, body: unknown, done: 'asked' | 'changed'): Promise<void> {
    form.markAllAsTouched();
    if (form.invalid) focusFirstWrong(this.host.nativeElement);
    if (form.invalid || this.busy()) return;
    this.busy.set(true);
    this.problem.set(null);
    try {
      await firstValueFrom(this.api.send('POST', path, body));
      this.done.set(done);
    } catch (error) {
      const problem = toApiProblem(error);
      this.shown.set(showFieldProblems(form, problem));
      this.problem.set(problem);
    } finally {
      this.busy.set(false);
    }
  }
}
