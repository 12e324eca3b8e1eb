import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal } from '@angular/core';
import { rxResource } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { type HalfdeepEvent, type Run, type RunSummary, experimentSchema } from '@halfdeep/contracts';
import { Api } from '../../core/api';
import { formatNumber, formatQuantity } from '../../core/format';
import { type GrowingSlice } from '../../core/growing-rows';
import { watchRuns } from '../../core/reading';
import { VerdictSign } from '../../shared/verdict/verdict';
import { isRepeat } from '../repeat';
import { restMassGt } from '../rest-mass';
import { sameSetup } from '../same-setup';
import { type BudgetClosure, REST_MASS, budgetClosures } from './budget-closures';
import { repeatFact } from './convergence-words';
import { Resolution } from './resolution';

/** The facts that a reviewer asks for: do the budgets close, does a repeat come out the same, is the grid fine enough. */
@Component({
  selector: 'app-evidence',
  imports: [MatButton, Resolution, RouterLink, VerdictSign],
  templateUrl: './evidence.html',
  styleUrl: './evidence.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Evidence {
  private readonly api = inject(Api);
  readonly run = input.required<Run>();
  readonly budget = input.required<GrowingSlice>();

  private readonly setup = computed(() => this.run().setup, { equal: sameSetup });
  private readonly restMass = computed(() => restMassGt(this.setup()));
  protected readonly closures = computed(() => budgetClosures(this.budget(), this.restMass()));
  protected readonly allClose = computed(() => this.closures().every(({ closes }) => closes));
  protected readonly budgetState = computed<'ready' | 'reading' | 'error' | 'none'>(() => {
    if (this.closures().length > 0) return 'ready';
    if (this.budget().error() !== null) return 'error';
    return this.budget().reading() === null ? 'none' : 'reading';
  });

  protected readonly relatives = rxResource({
    params: () => ({ id: this.run().experimentId, state: this.run().state }),
    stream: ({ params }) => this.api.get(`/api/experiments/${params.id}`, experimentSchema),
  });
  private readonly known = linkedSignal<RunSummary[]>(() =>
    this.relatives.hasValue() ? this.relatives.value().runList : [],
  );
  protected readonly repeat = computed(() => repeatFact(this.run(), this.known()));

  constructor() {
    const going = computed(() =>
      this.known()
        .filter((run) => run.parentRunId === this.run().id && isRepeat(run) && run.state !== 'finished')
        .map(({ id }) => id),
    );
    watchRuns(going, { onEvent: (event) => this.take(event), onMoved: () => undefined });
  }

  protected closureWords({ residual, unit, share, referenceName, reference }: BudgetClosure): string {
    const left = formatQuantity(residual, unit, { significant: 2 });
    const held = formatQuantity(reference, unit, { significant: 3 });
    if (residual === 0) return 'nothing is left over in any interval';
    const term =
      referenceName === REST_MASS ? `the ${REST_MASS} (${held})` : `the largest term (${referenceName}, ${held})`;
    return `largest residual of any interval ${left}, ${formatNumber(share, { significant: 1 })} of ${term}`;
  }

  private take(event: HalfdeepEvent): void {
    if (event.type === 'state')
      this.known.update((runs) => runs.map((run) => (run.id === event.run.id ? event.run : run)));
  }
}
