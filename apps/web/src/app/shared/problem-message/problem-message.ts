import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { formatDuration } from '../../core/format';
import { type ApiProblem } from '../../core/problem';
import { VerdictSign } from '../verdict/verdict';

/**
 * What went wrong, in the server's own sentence, with the fields it names that no field on screen shows, and the wait
 * it asks for. `retryLabel` adds a button.
 */
@Component({
  selector: 'app-problem-message',
  imports: [MatButton, VerdictSign],
  template: `
    @if (problem(); as problem) {
      <div class="message" role="alert">
        <app-verdict verdict="refuse" [text]="problem.title" />
        @if (detail(); as detail) {
          <p>{{ detail }}</p>
        }
        @if (others().length) {
          <ul>
            @for (field of others(); track field[0]) {
              <li>{{ field[1] }}</li>
            }
          </ul>
        }
        @if (wait(); as wait) {
          <p>Try again in {{ wait }}.</p>
        }
        @if (retryLabel()) {
          <button mat-stroked-button class="small" type="button" (click)="again.emit()">{{ retryLabel() }}</button>
        }
      </div>
    }
  `,
  styleUrl: './problem-message.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ProblemMessage {
  readonly problem = input.required<ApiProblem | null>();
  /** Pointers whose message stands beside their own field already. */
  readonly shownElsewhere = input<readonly string[]>([]);
  readonly retryLabel = input('');
  /** A wait that counts down, instead of the one that the answer named. */
  readonly waitSeconds = input<number | null>(null);
  readonly again = output();

  /** The sentence, unless the title or a field on screen says the very same. */
  protected readonly detail = computed(() => {
    const problem = this.problem();
    const beside = this.shownElsewhere().map((pointer) => problem?.fields.get(pointer));
    return problem?.detail && problem.detail !== problem.title && !beside.includes(problem.detail)
      ? problem.detail
      : '';
  });
  protected readonly others = computed(() =>
    [...(this.problem()?.fields ?? [])].filter(
      ([pointer, message]) => !this.shownElsewhere().includes(pointer) && !this.saysAlready(message),
    ),
  );
  protected readonly wait = computed(() => {
    const asked = this.problem()?.retryAfterSeconds ?? null;
    return asked === null ? '' : formatDuration(Math.max(1, this.waitSeconds() ?? asked));
  });

  /** The sentence above the list names the first field's trouble itself. */
  private saysAlready(message: string): boolean {
    return this.problem()?.detail?.includes(message.replace(/\.$/, '')) ?? false;
  }
}
