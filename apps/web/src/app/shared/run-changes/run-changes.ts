import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { RunSummary } from '@halfdeep/contracts';
import { formatChange } from '../../core/format';

/** More changes than this are counted instead of written out. */
const SHOWN = 2;

/** A run by what it changes: "from Control: seasonal strength 1.00 → 1.20". */
@Component({
  selector: 'app-run-changes',
  template: `
    @switch (run().descent) {
      @case ('control') {
        the reference of its experiment
      }
      @case ('extension') {
        goes on from {{ run().parentLabel ?? 'a deleted run' }}
      }
      @default {
        @if (run().changes.length === 0) {
          repeats {{ run().parentLabel ?? 'a deleted run' }}
        } @else if (withParent() && run().parentLabel) {
          from {{ run().parentLabel }}:
        }
        @for (change of shown(); track change.pointer) {
          <b
            >{{ change.label }} <span class="n">{{ change.values }}</span></b
          >{{ $last ? '' : ', ' }}
        }
        @if (hidden() > 0) {
          and {{ hidden() }} more
        }
      }
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { class: 'change' },
})
export class RunChanges {
  readonly run = input.required<Pick<RunSummary, 'changes' | 'descent' | 'parentLabel'>>();
  /** Whether to begin with the run that it came from. */
  readonly withParent = input(true);

  /** Three are still written out: "and 1 more" says less than the change itself. */
  private readonly limit = computed(() => (this.run().changes.length <= SHOWN + 1 ? SHOWN + 1 : SHOWN));
  protected readonly shown = computed(() =>
    this.run()
      .changes.slice(0, this.limit())
      .map(({ pointer, label, from, to, unit }) => ({ pointer, label, values: formatChange(from, to, unit) })),
  );
  protected readonly hidden = computed(() => Math.max(0, this.run().changes.length - this.limit()));
}
