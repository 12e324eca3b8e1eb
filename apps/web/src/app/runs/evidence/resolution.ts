import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal, signal } from '@angular/core';
import { rxResource } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { MatRadioButton, MatRadioGroup } from '@angular/material/radio';
import { RouterLink } from '@angular/router';
import {
  type Convergence,
  type ConvergenceCoast,
  type ConvergenceMeasure,
  type HalfdeepEvent,
  type Progress,
  type Run,
  type RunSummary,
  convergenceSchema,
} from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api } from '../../core/api';
import { formatDuration, formatModelTime, formatNumber } from '../../core/format';
import { toApiProblem } from '../../core/problem';
import { watchRuns } from '../../core/reading';
import { DataState } from '../../shared/data-state/data-state';
import { StateSign } from '../../shared/state-sign/state-sign';
import { VerdictSign } from '../../shared/verdict/verdict';
import { ConvergenceDialog, type ConvergenceAsked } from './convergence-dialog';
import {
  convergenceSummary,
  firstChoice,
  indexWords,
  measureName,
  measureVerdict,
  sectionName,
} from './convergence-words';

const COASTS: Record<ConvergenceCoast, string> = { same: 'same coast', anew: 'coast anew' };
const ROLES = { half: 'Half the resolution', twice: 'Twice the resolution' } as const;

/** Whether the transports of a run still change with its grid: the same setup at half and at twice the resolution. */
@Component({
  selector: 'app-resolution',
  imports: [DataState, MatButton, MatRadioButton, MatRadioGroup, RouterLink, StateSign, VerdictSign],
  templateUrl: './resolution.html',
  styleUrl: './resolution.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Resolution {
  private readonly api = inject(Api);
  private readonly dialog = inject(MatDialog);
  readonly run = input.required<Run>();

  protected readonly coasts = COASTS;
  protected readonly answer = rxResource({
    params: () => ({ id: this.run().id, state: this.run().state }),
    stream: ({ params }) => this.api.get(`/api/runs/${params.id}/convergence`, convergenceSchema),
  });
  /** The last good answer stays while a later reading is under way or fails. */
  protected readonly convergence = linkedSignal<Convergence | undefined, Convergence | null>({
    source: () => (this.answer.hasValue() ? this.answer.value() : undefined),
    computation: (value, previous) => value ?? (previous?.value?.runId === this.run().id ? previous.value : null),
  });
  protected readonly problem = computed(() => (this.answer.error() ? toApiProblem(this.answer.error()) : null));

  /** Kept while the same run is shown: another reading must not turn the page under a reader. */
  private readonly chosen = signal<{ runId: string; coast: ConvergenceCoast } | null>(null);
  protected readonly coast = computed<ConvergenceCoast>(() => {
    const [convergence, chosen] = [this.convergence(), this.chosen()];
    if (!convergence) return 'same';
    return chosen?.runId === convergence.runId ? chosen.coast : firstChoice(convergence);
  });
  protected readonly choice = computed(() => {
    const choices = this.convergence()?.choices ?? [];
    return choices.find(({ coast }) => coast === this.coast()) ?? choices[0] ?? null;
  });
  /** Which ways to treat the coast have runs; more than one is a choice to look at. */
  protected readonly begun = computed(() =>
    (this.convergence()?.choices ?? []).filter(({ levels }) => levels.some(({ run }) => run !== null)),
  );
  protected readonly missing = computed(() => (this.choice()?.levels ?? []).filter(({ run }) => run === null));
  protected readonly mayQueue = computed(
    () =>
      (this.convergence()?.canQueue ?? false) &&
      (this.convergence()?.choices ?? []).some(({ levels }) => levels.some(({ run }) => run === null)),
  );
  protected readonly summary = computed(() => {
    const measures = this.choice()?.result?.measures ?? [];
    return measures.length > 0 ? convergenceSummary(measures) : null;
  });

  private readonly progress = signal<ReadonlyMap<string, Progress>>(new Map());
  protected readonly runs = computed(() =>
    (this.choice()?.levels ?? []).flatMap(({ role, run }) => {
      if (!run) return [];
      const progress = this.progress().get(run.id) ?? run.progress;
      return [{ role: ROLES[role], run: { ...run, progress }, share: shareOf(progress) }];
    }),
  );
  private readonly going = computed(() =>
    (this.convergence()?.choices ?? []).flatMap(({ levels }) =>
      levels.flatMap(({ run }) => (run && run.state !== 'finished' ? [run.id] : [])),
    ),
  );

  constructor() {
    watchRuns(this.going, {
      onEvent: (event) => this.take(event),
      onMoved: () => {
        if (this.going().length > 0) this.answer.reload();
      },
    });
  }

  protected choose(coast: ConvergenceCoast): void {
    this.chosen.set({ runId: this.run().id, coast });
  }

  protected async ask(): Promise<void> {
    const convergence = this.convergence();
    if (!convergence) return;
    const opened = this.dialog.open<ConvergenceDialog, ConvergenceAsked, ConvergenceAsked>(ConvergenceDialog, {
      data: { label: this.run().label, coast: this.coast(), convergence },
      width: '620px',
      maxWidth: '94vw',
    });
    const queued = await firstValueFrom(opened.afterClosed());
    if (!queued) return;
    this.choose(queued.coast);
    this.answer.set(queued.convergence);
  }

  protected timeWords({ state, progress, queuePosition }: RunSummary): string {
    if (state === 'queued') return queuePosition === null ? 'waits' : `number ${queuePosition} in the queue`;
    const reached = formatModelTime(progress.day, progress.totalDays);
    const left = progress.secondsLeft;
    return state === 'running' && left !== null ? `${reached}, ${formatDuration(left, 1)} left` : reached;
  }

  protected spacingWords(run: RunSummary): string {
    return `${formatNumber(run.grid.nx)} × ${formatNumber(run.grid.ny)} cells`;
  }

  protected readonly measureName = measureName;
  protected readonly verdictOf = measureVerdict;
  protected readonly indexWords = indexWords;
  protected readonly sectionName = sectionName;
  /** Four digits of the largest transport of the section: a mean that is nothing beside the season reads as nothing. */
  protected value(value: number | null, { section }: ConvergenceMeasure): string {
    const measures = this.choice()?.result?.measures ?? [];
    const scale = Math.max(...measures.filter((one) => one.section === section).map(({ own }) => Math.abs(own)));
    const decimals = scale > 0 ? Math.min(6, Math.max(0, 3 - Math.floor(Math.log10(scale)))) : 3;
    return formatNumber(value ?? NaN, { decimals });
  }
  protected order(order: number | null): string {
    return formatNumber(order ?? NaN, { decimals: 2 });
  }
  protected remark({ verdict, sentence, asymptoticRatio }: ConvergenceMeasure): string {
    if (verdict === 'equal') return '';
    if (verdict !== 'asymptotic') return sentence;
    return asymptoticRatio === null ? '' : `ratio of the two indices ${formatNumber(asymptoticRatio, { decimals: 3 })}`;
  }
  protected windowWords({ fromDay, toDay, wholeYear }: { fromDay: number; toDay: number; wholeYear: boolean }): string {
    const days = `days ${formatNumber(fromDay)} to ${formatNumber(toDay)}`;
    return wholeYear ? `the last model year, ${days}` : `${days}, which is no whole year`;
  }

  private take(event: HalfdeepEvent): void {
    if (event.type !== 'progress') return;
    this.progress.update((known) => new Map(known).set(event.runId, event.progress));
  }
}

function shareOf({ step, startStep, totalSteps }: Progress): number {
  return totalSteps > startStep ? (step - startStep) / (totalSteps - startStep) : 0;
}
