import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { Verdict } from '@halfdeep/ocean';

const WORDS: Record<Verdict, string> = { pass: 'pass', caution: 'caution', refuse: 'refused' };

/** Tick, triangle or barred square with its word: three shapes, three words, three colours. */
@Component({
  selector: 'app-verdict',
  template: `
    <svg viewBox="0 0 12 12" width="12" height="12" aria-hidden="true" focusable="false">
      @switch (verdict()) {
        @case ('pass') {
          <path class="line" d="M1.5 6.5l3 3.5 6-8.5" />
        }
        @case ('caution') {
          <path class="line thin" d="M6 1.2l5.2 9.6H.8z" />
          <path class="fill" d="M5.4 4.4h1.2v3H5.4zM5.4 8.3h1.2v1.2H5.4z" />
        }
        @case ('refuse') {
          <path class="fill" fill-rule="evenodd" d="M1 1h10v10H1zM3 5v2h6V5z" />
        }
      }
    </svg>
    <span>{{ words() }}</span>
  `,
  styleUrl: './verdict.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class]': 'verdict()' },
})
export class VerdictSign {
  readonly verdict = input.required<Verdict>();
  /** What to say instead of "pass", "caution", "refused". */
  readonly text = input<string>();
  protected readonly words = computed(() => this.text() ?? WORDS[this.verdict()]);
}
