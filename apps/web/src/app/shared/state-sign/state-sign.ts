import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { RunState } from '@halfdeep/contracts';

/**
 * The state of a run: a small graduated rule, a word, a colour; never the sign alone. The word can say more
 * ("failed at day 212"), it must still begin with the state.
 */
@Component({
  selector: 'app-state-sign',
  templateUrl: './state-sign.html',
  styleUrl: './state-sign.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class]': 'state()' },
})
export class StateSign {
  readonly state = input.required<RunState>();
  readonly text = input<string>();
  /** Share of the run that is done, 0 to 1; moves the pen of a running one and the end of a broken one. */
  readonly share = input(0.55);

  protected readonly words = computed(() => this.text() ?? this.state());
  /** Length of the inked part inside the rule, px. */
  protected readonly inked = computed(() => 3 + 20 * Math.min(1, Math.max(0, this.share())));
}
