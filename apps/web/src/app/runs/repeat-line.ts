import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { rxResource } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { type RunSummary, runSchema } from '@halfdeep/contracts';
import { Api } from '../core/api';
import { VerdictSign } from '../shared/verdict/verdict';
import { repeatVerdict } from './repeat';

/** Under the head of a run that repeats another: whether both ended in the same state, bit by bit. */
@Component({
  selector: 'app-repeat-line',
  imports: [MatButton, VerdictSign],
  template: `
    @if (original.error()) {
      <p>
        The run that it repeats was not read.
        <button mat-button class="small" type="button" (click)="original.reload()">Read again</button>
      </p>
    } @else if (original.isLoading()) {
      <p>Reading the run that it repeats</p>
    } @else {
      @let held = outcome();
      @if (held.verdict; as verdict) {
        <p role="status"><app-verdict [verdict]="verdict" [text]="held.text" /></p>
      } @else {
        <p>{{ held.text }}</p>
      }
    }
  `,
  styles: `
    p {
      margin-top: 6px;
      font: var(--hd-small);
      color: var(--hd-text-2);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RepeatLine {
  private readonly api = inject(Api);
  readonly run = input.required<RunSummary>();

  /** Read again when this run ends: by then the original may have ended too. */
  protected readonly original = rxResource({
    params: () => {
      const { parentRunId, state } = this.run();
      return parentRunId === null ? undefined : { parentRunId, state };
    },
    stream: ({ params }) => this.api.get(`/api/runs/${params.parentRunId}`, runSchema),
  });
  protected readonly outcome = computed(() =>
    repeatVerdict(this.run(), this.original.hasValue() ? this.original.value() : null),
  );
}
