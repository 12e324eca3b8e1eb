import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  inject,
  input,
  linkedSignal,
  resource,
  signal,
  untracked,
} from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { Router, RouterLink } from '@angular/router';
import { experimentPatchSchema, experimentSchema } from '@halfdeep/contracts';
import { PRESETS } from '@halfdeep/ocean';
import { firstValueFrom } from 'rxjs';
import { Api } from '../core/api';
import { formatCount, formatDay, formatMoment, sentenceStart } from '../core/format';
import { KeptDrafts, type DraftPlace } from '../core/kept-drafts';
import { PageTitle } from '../core/page-title';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { Session } from '../core/session';
import { ChoiceField, type Choice } from '../shared/choice-field/choice-field';
import { DataState } from '../shared/data-state/data-state';
import { ProblemMessage } from '../shared/problem-message/problem-message';
import { TextField } from '../shared/text-field/text-field';
import { DescentTree } from './descent/descent-tree';
import { ExperimentRuns } from './experiment-runs';
import { RunPanel } from './run-panel';

/** One experiment: its question, and the descent of its runs with what each changed and did. */
@Component({
  selector: 'app-experiment-page',
  imports: [ChoiceField, DataState, DescentTree, MatButton, ProblemMessage, RouterLink, RunPanel, TextField],
  templateUrl: './experiment-page.html',
  styleUrl: './experiment-page.scss',
  providers: [ExperimentRuns],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ExperimentPage {
  private readonly api = inject(Api);
  private readonly router = inject(Router);
  private readonly session = inject(Session);
  private readonly drafts = inject(KeptDrafts);
  protected readonly live = inject(ExperimentRuns);
  /** From the route. */
  readonly id = input.required<string>();

  protected readonly experiment = resource({
    params: () => this.id(),
    loader: ({ params }) => firstValueFrom(this.api.get(`/api/experiments/${params}`, experimentSchema)),
  });
  /** Stays while it is read again. */
  protected readonly shown = computed(() => (this.experiment.hasValue() ? this.experiment.value() : null));
  protected readonly problem = computed(() => {
    const error = this.experiment.error();
    return error ? toApiProblem(error.cause ?? error) : null;
  });
  protected readonly asked = computed(() => {
    const experiment = this.shown();
    return experiment ? `asked by ${experiment.owner.name}, ${formatDay(experiment.createdAt)}` : '';
  });
  protected readonly count = computed(() => sentenceStart(formatCount(this.live.runs().length, 'run')));

  /** The chosen run; the youngest that is still there when nobody chose. */
  protected readonly chosen = linkedSignal<string[], string | null>({
    source: () => this.live.runs().map(({ id }) => id),
    computation: (ids, before) => (before?.value && ids.includes(before.value) ? before.value : (ids[0] ?? null)),
  });
  protected readonly chosenRun = computed(() => this.live.runs().find(({ id }) => id === this.chosen()) ?? null);

  protected readonly editing = signal(false);
  protected readonly question = signal('');
  protected readonly notes = signal('');
  protected readonly wrong = signal<ReadonlyMap<string, string>>(new Map());
  protected readonly editProblem = signal<ApiProblem | null>(null);
  protected readonly saving = signal(false);

  private readonly draftsRead = signal(0);
  protected readonly kept = computed(() => {
    this.draftsRead();
    const personId = this.session.me()?.id;
    if (!personId) return [];
    return this.drafts.of(personId, this.id()).map(({ place, draft }) => {
      const parent = this.live.runs().find(({ id }) => id === place.parentRunId);
      const from = place.parentRunId === null ? 'a control run' : `from ${parent?.label ?? 'a run that is gone'}`;
      return {
        place,
        name: draft.label || draft.shown || 'Without a label',
        about: `${from}, ${formatMoment(draft.savedAt)}`,
      };
    });
  });
  protected readonly presets: Choice[] = [
    { value: 'blank', label: 'blank' },
    ...PRESETS.map(({ id, name }) => ({ value: id, label: name })),
  ];
  protected readonly preset = signal(PRESETS[0]?.id ?? 'blank');
  protected readonly presetAbout = computed(
    () => PRESETS.find(({ id }) => id === this.preset())?.about ?? 'A closed basin at rest; every field is yours.',
  );

  constructor() {
    const title = inject(PageTitle);
    effect(() => title.set(this.shown()?.question ?? 'Experiment'));
    effect(() => {
      const experiment = this.shown();
      if (experiment) untracked(() => this.live.load(experiment));
    });
    this.live.reread.pipe(takeUntilDestroyed()).subscribe(() => this.experiment.reload());
  }

  protected reload(): void {
    this.experiment.reload();
  }

  protected edit(): void {
    const experiment = this.shown();
    if (!experiment) return;
    this.question.set(experiment.question);
    this.notes.set(experiment.notes);
    this.wrong.set(new Map());
    this.editProblem.set(null);
    this.editing.set(true);
  }

  protected async save(event: Event): Promise<void> {
    event.preventDefault();
    if (this.saving()) return;
    const parsed = experimentPatchSchema.safeParse({ question: this.question(), notes: this.notes() });
    this.wrong.set(new Map(parsed.error?.issues.map((issue) => [`/${issue.path.join('/')}`, issue.message]) ?? []));
    if (!parsed.success) return;
    this.saving.set(true);
    this.editProblem.set(null);
    try {
      const path = `/api/experiments/${this.id()}`;
      this.experiment.set(await firstValueFrom(this.api.patch(path, parsed.data, experimentSchema)));
      this.editing.set(false);
    } catch (error) {
      const problem = toApiProblem(error);
      this.editProblem.set(problem);
      this.wrong.set(problem.fields);
    } finally {
      this.saving.set(false);
    }
  }

  protected async begin(): Promise<void> {
    const preset = this.preset();
    const queryParams = preset === 'blank' ? {} : { preset };
    await this.router.navigate(['/experiments', this.id(), 'setup'], { queryParams });
  }

  protected forget(place: DraftPlace): void {
    this.drafts.remove(place);
    this.draftsRead.update((count) => count + 1);
  }
}
