import { ChangeDetectionStrategy, Component, ElementRef, DestroyRef, inject, input, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatError, MatFormField, MatLabel } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { Router, RouterLink } from '@angular/router';
import { signInSchema } from '@halfdeep/contracts';
import { firstValueFrom, map, takeWhile, timer } from 'rxjs';
import { bySchema, focusFirstWrong, messageOf, showFieldProblems } from '../core/forms';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { Session } from '../core/session';
import { ProblemMessage } from '../shared/problem-message/problem-message';

/** Sign in, and come back to the page that asked for it. */
@Component({
  selector: 'app-sign-in',
  imports: [MatButton, MatError, MatFormField, MatInput, MatLabel, ProblemMessage, ReactiveFormsModule, RouterLink],
  templateUrl: './sign-in.html',
  styleUrl: './sign-in.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SignIn {
  protected readonly session = inject(Session);
  private readonly router = inject(Router);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);
  private readonly destroyed = inject(DestroyRef);
  /** Address to go on to, from ?next=; only ever inside this application. */
  readonly next = input<string>();

  protected readonly form = new FormGroup({
    email: new FormControl('', { nonNullable: true, validators: bySchema(signInSchema.shape.email) }),
    password: new FormControl('', { nonNullable: true, validators: bySchema(signInSchema.shape.password) }),
  });
  protected readonly messageOf = messageOf;
  protected readonly busy = signal(false);
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly shown = signal<readonly string[]>([]);
  /** Seconds until the server listens again after too many tries. */
  protected readonly waitSeconds = signal(0);

  protected async submit(): Promise<void> {
    this.form.markAllAsTouched();
    if (this.form.invalid) focusFirstWrong(this.host.nativeElement);
    if (this.form.invalid || this.busy() || this.waitSeconds() > 0) return;
    const { email, password } = this.form.getRawValue();
    this.busy.set(true);
    this.problem.set(null);
    try {
      await firstValueFrom(this.session.signIn(email.trim(), password));
      await this.router.navigateByUrl(inside(this.next()));
    } catch (error) {
      this.refused(toApiProblem(error));
    } finally {
      this.busy.set(false);
    }
  }

  private refused(problem: ApiProblem): void {
    this.shown.set(showFieldProblems(this.form, problem));
    this.problem.set(problem);
    if (problem.retryAfterSeconds === null) return;
    const seconds = Math.max(1, problem.retryAfterSeconds);
    timer(0, 1000)
      .pipe(
        map((passed) => seconds - passed),
        takeWhile((left) => left >= 0),
        takeUntilDestroyed(this.destroyed),
      )
      .subscribe((left) => {
        this.waitSeconds.set(left);
        if (left === 0) this.problem.set(null);
      });
  }
}

/** Only a path of this application: "//elsewhere" and "https:…" lead to the desk. */
function inside(next: string | undefined): string {
  return next && /^\/(?![/\\])/.test(next) ? next : '/';
}
