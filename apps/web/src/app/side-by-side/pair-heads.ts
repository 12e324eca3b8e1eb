import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { RouterLink } from '@angular/router';
import { type RunSummary } from '@halfdeep/contracts';
import { formatChange } from '../core/format';
import { StateSign } from '../shared/state-sign/state-sign';

/** Names the three plates of a pair: A outlined, B inked, each with what it changes, and the difference. */
@Component({
  selector: 'app-pair-heads',
  imports: [RouterLink, StateSign],
  template: `
    @for (side of sides(); track side.id) {
      <div>
        <h2>
          <span class="letter" [class.inked]="side.id === 'b'">{{ side.letter }}</span><a
            [routerLink]="['/runs', side.run.id]"
            >{{ side.run.label }}</a
          >
          <app-state-sign [state]="side.run.state" />
        </h2>
        <p class="change">
          {{ side.words }}
          <button type="button" class="word" (click)="choose.emit(side.id)">Choose another {{ side.letter }}</button>
        </p>
      </div>
    }
    <div>
      <h2>B − A</h2>
      <p class="change">what B adds to A</p>
    </div>
  `,
  styleUrl: './pair-heads.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PairHeads {
  readonly a = input.required<RunSummary>();
  readonly b = input.required<RunSummary>();
  readonly choose = output<'a' | 'b'>();

  protected readonly sides = computed(() => {
    const [a, b] = [this.a(), this.b()];
    return [
      { id: 'a' as const, letter: 'A', run: a, words: changeWords(a, { run: b, letter: 'B' }) },
      { id: 'b' as const, letter: 'B', run: b, words: changeWords(b, { run: a, letter: 'A' }) },
    ];
  });
}

/** What a run changes, and from which run; the other one of the pair is called by its letter. */
export function changeWords(run: RunSummary, other: { run: RunSummary; letter: string }): string {
  if (run.descent === 'control') return 'the reference of its experiment.';
  const parent = run.parentRunId === other.run.id ? other.letter : (run.parentLabel ?? 'a run that is gone');
  if (run.descent === 'extension') return `goes on from ${parent}.`;
  if (run.changes.length === 0) return `repeats ${parent}.`;
  const shown = run.changes.slice(0, 2).map(({ label, from, to, unit }) => `${label} ${formatChange(from, to, unit)}`);
  const more = run.changes.length - shown.length;
  return `from ${parent}: ${shown.join(', ')}${more > 0 ? ` and ${more} more` : ''}.`;
}
