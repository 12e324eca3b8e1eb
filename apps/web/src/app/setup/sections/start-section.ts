import { ChangeDetectionStrategy, Component, computed, inject, resource, signal } from '@angular/core';
import { pageSchema, runSchema, runSummarySchema } from '@halfdeep/contracts';
import type { Start } from '@halfdeep/ocean';
import { firstValueFrom } from 'rxjs';
import { Api } from '../../core/api';
import { formatModelDay } from '../../core/format';
import { type ApiProblem, toApiProblem } from '../../core/problem';
import { ChoiceField, type Choice } from '../../shared/choice-field/choice-field';
import { ProblemMessage } from '../../shared/problem-message/problem-message';
import { newStart } from '../blank-setup';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupDraft } from '../setup-draft';
import { SectionFrame } from './section-frame';

const finishedRunsSchema = pageSchema(runSummarySchema);

/** The state at day 0: rest, a shape, a free wave, or the last state of a finished run. */
@Component({
  selector: 'app-start-section',
  imports: [ChoiceField, ProblemMessage, SectionFrame, SetupChoice, SetupQuantity],
  templateUrl: './start-section.html',
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StartSection {
  private readonly api = inject(Api);
  protected readonly draft = inject(SetupDraft);
  protected readonly kinds: Choice[] = [
    { value: 'rest', label: 'rest' },
    { value: 'bump', label: 'Gaussian bump' },
    { value: 'step', label: 'step' },
    { value: 'mode', label: 'equatorial wave' },
    { value: 'state', label: 'last state of a run' },
  ];
  protected readonly modes: Choice[] = [
    { value: 'kelvin', label: 'Kelvin' },
    { value: 'rossby1', label: 'Rossby, n = 1' },
    { value: 'rossby2', label: 'Rossby, n = 2' },
    { value: 'mixedWest', label: 'mixed, westward' },
    { value: 'mixedEast', label: 'mixed, eastward' },
    { value: 'gravity1West', label: 'gravity, n = 1, westward' },
    { value: 'gravity1East', label: 'gravity, n = 1, eastward' },
  ];
  protected readonly start = computed<Start>(() => this.draft.value().start);
  /** The picker is open: asked for, or a state is already in the setup. */
  private readonly picking = signal(false);
  protected readonly picks = computed(() => this.picking() || this.start().kind === 'state');
  protected readonly kind = computed(() => (this.picking() ? 'state' : this.start().kind));
  protected readonly problem = signal<ApiProblem | null>(null);

  protected readonly finished = resource({
    params: () => (this.picks() ? {} : undefined),
    loader: () => firstValueFrom(this.api.get('/api/runs', finishedRunsSchema, { state: 'finished', pageSize: 100 })),
  });
  protected readonly readProblem = computed(() => {
    const error = this.finished.error();
    return error ? toApiProblem(error.cause ?? error) : null;
  });
  protected readonly picked = computed(() => {
    const start = this.start();
    return start.kind === 'state' ? start.runId : '';
  });
  protected readonly runs = computed<Choice[]>(() => {
    const grid = this.draft.preflight()?.grid;
    const items = this.finished.hasValue() ? this.finished.value().items : [];
    const listed = items.map((run) => {
      const fits = !grid || (run.grid.nx === grid.nx && run.grid.ny === grid.ny);
      const end = formatModelDay(run.progress.day);
      return {
        value: run.id,
        label: fits ? `${run.label}, ${end}` : `${run.label}, ${run.grid.nx} × ${run.grid.ny}: another grid`,
        disabled: !fits,
      };
    });
    const known = listed.some(({ value }) => value === this.picked());
    const kept = this.picked() && !known ? [{ value: this.picked(), label: `run ${this.picked().slice(0, 8)}` }] : [];
    return [
      { value: '', label: this.finished.isLoading() ? 'reading the runs' : 'choose a run', disabled: true },
      ...kept,
      ...listed,
    ];
  });
  /** What is wrong with the start as a whole, for example a run that is gone. */
  protected readonly stateProblem = computed(
    () =>
      [...this.draft.problems()].find(([pointer]) => pointer === '/start' || pointer.startsWith('/start/'))?.[1] ??
      null,
  );

  protected chooseKind(kind: string): void {
    this.picking.set(kind === 'state');
    if (kind !== 'state')
      this.draft.set('/start', newStart(kind as Exclude<Start['kind'], 'state'>, this.draft.readable()));
  }

  /** Reads the run whole: its last state is named by hashes that only the server knows. */
  protected async pick(runId: string): Promise<void> {
    if (!runId) return;
    this.problem.set(null);
    try {
      const { lastState } = await firstValueFrom(this.api.get(`/api/runs/${runId}`, runSchema));
      if (!lastState) throw new Error('This run has no last state any more. Choose another.');
      this.draft.set('/start', lastState);
      this.picking.set(false);
    } catch (error) {
      this.problem.set(toApiProblem(error));
    }
  }
}
