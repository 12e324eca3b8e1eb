import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  type ElementRef,
  computed,
  effect,
  inject,
  input,
  signal,
  untracked,
  viewChildren,
} from '@angular/core';
import { RouterLink } from '@angular/router';
import { PageTitle } from '../core/page-title';
import { toApiProblem } from '../core/problem';
import { RunEvents } from '../core/run-events';
import { RunFollowers } from '../core/run-follower';
import { DataState } from '../shared/data-state/data-state';
import { PlotLink } from '../shared/plate/plot-link';
import { ProblemMessage } from '../shared/problem-message/problem-message';
import { BudgetPlates } from './budget-plates';
import { TermBudgetPlates } from './term-budget-plates';
import { Evidence } from './evidence/evidence';
import { HovmollerPlate } from './hovmoller-plate';
import { MapPlate } from './map-plate';
import { MooringPlates } from './mooring-plates';
import { RunHead } from './run-head';
import { RunSetup } from './run-setup';
import { SectionPlates } from './section-plates';

const PARTS = [
  { id: 'space-and-time', name: 'Space and time' },
  { id: 'transports', name: 'Transports' },
  { id: 'budgets', name: 'Budgets' },
  { id: 'moorings', name: 'Moorings' },
  { id: 'evidence', name: 'Evidence' },
  { id: 'setup-and-descent', name: 'Setup and descent' },
] as const;

/** A run: where it stands and everything that it has drawn so far, growing by itself while it goes on. */
@Component({
  selector: 'app-run-page',
  imports: [
    BudgetPlates,
    TermBudgetPlates,
    DataState,
    Evidence,
    HovmollerPlate,
    MapPlate,
    MooringPlates,
    ProblemMessage,
    RouterLink,
    RunHead,
    RunSetup,
    SectionPlates,
  ],
  templateUrl: './run-page.html',
  styleUrl: './run-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RunPage {
  private readonly followers = inject(RunFollowers);
  private readonly events = inject(RunEvents);
  private readonly title = inject(PageTitle);

  /** From the address. */
  readonly id = input.required<string>();

  protected readonly parts = PARTS;
  protected readonly inView = signal<string>(PARTS[0].id);
  private readonly partElements = viewChildren<ElementRef<HTMLElement>>('part');

  private readonly opened = computed(() => {
    const id = this.id();
    return untracked(() => this.followers.follow(id));
  });
  protected readonly follower = this.opened;
  protected readonly run = computed(() => this.follower().run());
  protected readonly problem = computed(() => {
    const error = this.follower().error();
    return error === null ? null : toApiProblem(error);
  });
  protected readonly lost = computed(() => this.events.connection() === 'lost' && this.isGoing());
  private readonly isGoing = computed(() => ['running', 'queued'].includes(this.run()?.state ?? ''));
  protected readonly pen = computed<'live' | 'lost' | 'none'>(() => {
    if (this.run()?.state !== 'running') return 'none';
    return this.lost() ? 'lost' : 'live';
  });

  // Series plates share their time: zooming one zooms all.
  private readonly seriesTime = signal<[number, number] | null>(null);
  protected readonly sectionLinks = linksOn(this.seriesTime);
  protected readonly budgetLinks = linksOn(this.seriesTime);
  protected readonly mooringLinks = linksOn(this.seriesTime);

  constructor() {
    effect((onCleanup) => {
      const follower = this.follower();
      onCleanup(() => follower.close());
    });
    effect(() => {
      const run = this.run();
      if (run) this.title.set(`${run.label} · run`);
    });
    const showing = new Set<string>();
    const observer = new IntersectionObserver(
      (entries) => {
        for (const { isIntersecting, target } of entries)
          if (isIntersecting) showing.add(target.id);
          else showing.delete(target.id);
        const first = PARTS.find(({ id }) => showing.has(id));
        if (first) this.inView.set(first.id);
      },
      { rootMargin: '-20% 0px -65% 0px' },
    );
    effect(() => {
      observer.disconnect();
      showing.clear();
      for (const part of this.partElements()) observer.observe(part.nativeElement);
    });
    inject(DestroyRef).onDestroy(() => observer.disconnect());
  }

  protected readAgain(): void {
    void this.follower().refresh();
  }
}

/** The n-th link of a group of plates; all of them share one time range. */
function linksOn(time: PlotLink['xZoom']): (plate: number) => PlotLink {
  const links: PlotLink[] = [];
  return (plate) => (links[plate] ??= new PlotLink(time));
}
