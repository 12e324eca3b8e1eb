import { ChangeDetectionStrategy, Component, computed, inject, input, resource } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { MatPaginator, type PageEvent } from '@angular/material/paginator';
import { Router, RouterLink } from '@angular/router';
import { experimentSummarySchema, pageSchema, type ExperimentSummary } from '@halfdeep/contracts';
import { debounceTime, distinctUntilChanged, firstValueFrom, Subject } from 'rxjs';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { Api } from '../core/api';
import { formatCount, formatMoment, sentenceStart } from '../core/format';
import { toApiProblem } from '../core/problem';
import { Session } from '../core/session';
import { ChoiceField, type Choice } from '../shared/choice-field/choice-field';
import { DataState } from '../shared/data-state/data-state';
import { StateSign } from '../shared/state-sign/state-sign';
import { TextField } from '../shared/text-field/text-field';
import { NewExperimentDialog } from './new-experiment-dialog';

const experimentPageSchema = pageSchema(experimentSummarySchema);
const STATES = ['running', 'queued', 'failed', 'stopped', 'finished'] as const;
const DEFAULT_SORT = '-moved';
const DEFAULT_PAGE_SIZE = 20;

/** Every experiment of the group, led by its question and its physics. Search, order and page live in the address. */
@Component({
  selector: 'app-experiment-list',
  imports: [ChoiceField, DataState, MatButton, MatPaginator, RouterLink, StateSign, TextField],
  templateUrl: './experiment-list.html',
  styleUrl: './experiment-list.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ExperimentList {
  private readonly api = inject(Api);
  private readonly router = inject(Router);
  private readonly dialog = inject(MatDialog);
  protected readonly session = inject(Session);
  /** From the address. */
  readonly q = input<string>();
  readonly sort = input<string>();
  readonly page = input<string>();
  readonly pageSize = input<string>();

  protected readonly sorts: Choice[] = [
    { value: '-moved', label: 'what moved last' },
    { value: '-created', label: 'newest' },
    { value: 'created', label: 'oldest' },
    { value: 'question', label: 'question, A to Z' },
    { value: 'owner', label: 'owner, A to Z' },
  ];
  protected readonly order = computed(() => this.sort() || DEFAULT_SORT);
  protected readonly asked = computed(() => ({
    q: this.q() ?? '',
    sort: this.order(),
    page: positive(this.page(), 1),
    pageSize: Math.min(100, positive(this.pageSize(), DEFAULT_PAGE_SIZE)),
  }));
  protected readonly experiments = resource({
    params: () => this.asked(),
    loader: ({ params }) => firstValueFrom(this.api.get('/api/experiments', experimentPageSchema, params)),
  });
  protected readonly problem = computed(() => {
    const error = this.experiments.error();
    return error ? toApiProblem(error.cause ?? error) : null;
  });
  protected readonly found = computed(() => (this.experiments.hasValue() ? this.experiments.value() : null));
  protected readonly sentence = computed(() => {
    const total = this.found()?.total ?? 0;
    const { q } = this.asked();
    if (q) return `${sentenceStart(formatCount(total, 'experiment'))} for “${q}”.`;
    return `${sentenceStart(formatCount(total, 'experiment'))} of the group.`;
  });
  private readonly typed = new Subject<string>();

  constructor() {
    this.typed
      .pipe(debounceTime(250), distinctUntilChanged(), takeUntilDestroyed())
      .subscribe((q) => this.go({ q: q.trim() || null, page: null }));
  }

  protected search(q: string): void {
    this.typed.next(q);
  }

  protected reorder(sort: string): void {
    this.go({ sort: sort === DEFAULT_SORT ? null : sort, page: null });
  }

  protected turn({ pageIndex, pageSize }: PageEvent): void {
    this.go({
      page: pageIndex === 0 ? null : String(pageIndex + 1),
      pageSize: pageSize === DEFAULT_PAGE_SIZE ? null : String(pageSize),
    });
  }

  protected async begin(): Promise<void> {
    const opened = this.dialog.open<NewExperimentDialog, void, string>(NewExperimentDialog, {
      width: '560px',
      maxWidth: '94vw',
    });
    const id = await firstValueFrom(opened.afterClosed());
    if (id) await this.router.navigate(['/experiments', id]);
  }

  protected moved(experiment: ExperimentSummary): string {
    return `${experiment.moved}, ${formatMoment(experiment.movedAt)}`;
  }

  /** "two running, five finished": the states that occur. */
  protected counts(experiment: ExperimentSummary): { state: (typeof STATES)[number]; text: string }[] {
    return STATES.filter((state) => experiment.runs[state] > 0).map((state) => ({
      state,
      text: `${experiment.runs[state]} ${state}`,
    }));
  }

  private go(queryParams: Record<string, string | null>): void {
    void this.router.navigate([], { queryParams, queryParamsHandling: 'merge' });
  }
}

/** A whole number above zero from the address, else the default. */
function positive(text: string | undefined, otherwise: number): number {
  const value = Number(text);
  return Number.isInteger(value) && value > 0 ? value : otherwise;
}
