import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { type ApiProblem } from '../../core/problem';
import { ProblemMessage } from '../problem-message/problem-message';

/**
 * What stands where data will be. Loading: the graduated frame at once, its edge inked as pieces arrive. Empty: dotted
 * paper that says what will be here and from when, with an action (projected) if there is one. Error: the refusal, what
 * is safe, and "Read again". Nothing shimmers.
 */
@Component({
  selector: 'app-data-state',
  imports: [ProblemMessage],
  templateUrl: './data-state.html',
  styleUrl: './data-state.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class]': 'state()', '[attr.aria-busy]': "state() === 'loading' ? true : null" },
})
export class DataState {
  readonly state = input.required<'loading' | 'empty' | 'error'>();
  /** Empty: what will be here. Loading: what is read. */
  readonly heading = input('');
  /** One sentence beneath it. */
  readonly about = input('');
  readonly problem = input<ApiProblem | null>(null);
  /** Pieces that have arrived, of how many, while loading. */
  readonly pieces = input<{ arrived: number; of: number } | null>(null);
  readonly again = output();

  protected readonly reading = computed(() => {
    const pieces = this.pieces();
    const what = this.heading() ? ` ${this.heading()}` : '';
    return pieces ? `Reading${what}, ${pieces.arrived} of ${pieces.of} pieces` : `Reading${what}`;
  });
  protected readonly inkedPercent = computed(() => {
    const pieces = this.pieces();
    return pieces && pieces.of > 0 ? (100 * pieces.arrived) / pieces.of : 0;
  });
}
