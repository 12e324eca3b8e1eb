import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { MatButtonToggle, MatButtonToggleGroup } from '@angular/material/button-toggle';
import { MatDivider } from '@angular/material/divider';
import { MatMenu, MatMenuItem, MatMenuTrigger } from '@angular/material/menu';
import { MatTabLink, MatTabNav, type MatTabNavPanel } from '@angular/material/tabs';
import { type ActivatedRouteSnapshot, NavigationEnd, Router, RouterLink } from '@angular/router';
import { filter, map, startWith } from 'rxjs';
import { Ground, type GroundName } from '../core/ground';
import { toApiProblem } from '../core/problem';
import { QueueStatus, placesInWords } from '../core/queue-status';
import { Session } from '../core/session';
import { Confirm } from '../shared/confirm/confirm';
import { StateSign } from '../shared/state-sign/state-sign';
import { Brand } from './brand';

export type Section = 'desk' | 'experiments' | 'admin' | 'help';

/** One line of words over a graduated edge: where you are is the inked stretch of that edge. */
@Component({
  selector: 'app-head',
  imports: [
    Brand,
    MatButtonToggle,
    MatButtonToggleGroup,
    MatDivider,
    MatMenu,
    MatMenuItem,
    MatMenuTrigger,
    MatTabLink,
    MatTabNav,
    RouterLink,
    StateSign,
  ],
  templateUrl: './head.html',
  styleUrl: './head.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Head {
  protected readonly session = inject(Session);
  protected readonly ground = inject(Ground);
  private readonly queue = inject(QueueStatus).summary;
  private readonly confirm = inject(Confirm);
  private readonly router = inject(Router);
  /** The panel that the sections switch; the shell owns it. */
  readonly panel = input.required<MatTabNavPanel>();

  protected readonly sections = computed(() => {
    const list: { id: Section; name: string; link: string }[] = [
      { id: 'desk', name: 'Desk', link: '/' },
      { id: 'experiments', name: 'Experiments', link: '/experiments' },
    ];
    if (this.session.has('admin')) list.push({ id: 'admin', name: 'Admin', link: '/admin' });
    list.push({ id: 'help', name: 'Help', link: '/help' });
    return list;
  });

  /** The deepest route that names a section decides; a run belongs to Experiments. */
  protected readonly here = toSignal(
    this.router.events.pipe(
      filter((event) => event instanceof NavigationEnd),
      startWith(null),
      map(() => sectionOf(this.router.routerState.snapshot.root)),
    ),
    { initialValue: null },
  );

  protected readonly computing = computed(() => {
    const queue = this.queue();
    if (!queue) return null;
    const places = placesInWords(queue.running, queue.cap);
    return {
      state: queue.running > 0 ? ('running' as const) : ('queued' as const),
      share: queue.cap > 0 ? Math.min(1, queue.running / queue.cap) : 0,
      text: queue.paused ? `${places}, intake paused` : places,
    };
  });

  protected choose(name: GroundName): void {
    this.ground.choose(name);
  }

  protected async signOut(): Promise<void> {
    try {
      await this.session.signOut();
    } catch (error) {
      const problem = toApiProblem(error);
      const again = await this.confirm.ask({
        title: 'You are still signed in',
        text: problem.detail || problem.title,
        yes: 'Try again',
        no: 'Stay signed in',
      });
      if (again) await this.signOut();
    }
  }
}

function sectionOf(route: ActivatedRouteSnapshot): Section | null {
  let found: Section | null = null;
  for (let at: ActivatedRouteSnapshot | null = route; at; at = at.firstChild) {
    const named = at.data['section'] as Section | undefined;
    if (named) found = named;
  }
  return found;
}
