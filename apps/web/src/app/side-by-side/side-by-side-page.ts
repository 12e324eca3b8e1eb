import { ChangeDetectionStrategy, Component, computed, effect, inject, input, signal, untracked } from '@angular/core';
import { rxResource } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { Router } from '@angular/router';
import { sideBySideSchema } from '@halfdeep/contracts';
import { diffSetups } from '@halfdeep/ocean';
import { Api } from '../core/api';
import { formatCount, sentenceStart } from '../core/format';
import { PageTitle } from '../core/page-title';
import { toApiProblem } from '../core/problem';
import { type RunFollower, RunFollowers } from '../core/run-follower';
import { DataState } from '../shared/data-state/data-state';
import { RunPicker } from '../shared/run-picker/run-picker';
import { type MapMeasures } from './pair-math';
import { PairMeasures } from './pair-measures';
import { PairPlates } from './pair-plates';
import { PairTransports } from './pair-transports';
import { type SharedPlace, placeFromQuery, placeToQuery } from './shared-place';

const PARTS: Record<string, string> = {
  basin: 'Basin',
  layer: 'Layer',
  wind: 'Wind',
  friction: 'Friction',
  numerics: 'Numerics',
  length: 'Length and output',
  output: 'Length and output',
  start: 'Start',
  constants: 'Constants',
};

/** Two runs on one scale, their difference, what was changed between them, and how far apart they are. */
@Component({
  selector: 'app-side-by-side-page',
  imports: [DataState, MatButton, PairMeasures, PairPlates, PairTransports],
  templateUrl: './side-by-side-page.html',
  styleUrl: './side-by-side-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SideBySidePage {
  private readonly api = inject(Api);
  private readonly followers = inject(RunFollowers);
  private readonly picker = inject(RunPicker);
  private readonly router = inject(Router);
  private readonly title = inject(PageTitle);

  // From the address.
  readonly a = input<string>();
  readonly b = input<string>();
  readonly variable = input<string>();
  readonly day = input<string>();
  readonly mode = input<string>();
  readonly along = input<string>();
  readonly at = input<string>();

  protected readonly sides = ['a', 'b'] as const;
  protected readonly copied = signal('');
  protected readonly missing = computed(() => this.sides.filter((side) => !(side === 'a' ? this.a() : this.b())));
  private readonly followerA = this.followerOf(this.a);
  private readonly followerB = this.followerOf(this.b);
  protected readonly pair = computed(() => {
    const [followerA, followerB] = [this.followerA(), this.followerB()];
    const [a, b] = [followerA?.run(), followerB?.run()];
    return a && b && followerA && followerB ? { a, b, followerA, followerB } : null;
  });
  protected readonly problem = computed(() => {
    const error = this.followerA()?.error() ?? this.followerB()?.error() ?? null;
    return error === null ? null : toApiProblem(error);
  });

  protected readonly place = computed<SharedPlace>(() =>
    placeFromQuery({
      variable: this.variable(),
      day: this.day(),
      mode: this.mode(),
      along: this.along(),
      at: this.at(),
    }),
  );
  /** Measures of the maps on show, told by the plates. */
  protected readonly today = signal<{ day: number; variable: string; measures: MapMeasures } | null>(null);

  protected readonly answer = rxResource({
    params: () => {
      const [a, b] = [this.a(), this.b()];
      const states = this.states();
      return a && b && states ? { a, b, states } : undefined;
    },
    stream: ({ params: { a, b } }) => this.api.get('/api/side-by-side', sideBySideSchema, { a, b }),
  });
  /** Measured when both runs are known, and again when one of them has ended; not with every record. */
  private readonly states = computed(() => {
    const pair = this.pair();
    return pair && `${pair.a.state} ${pair.b.state}`;
  });
  /** From the same library as on the server, so that nobody waits for the measures to see what was changed. */
  protected readonly changes = computed(() => {
    const pair = this.pair();
    return pair ? diffSetups(pair.a.setup, pair.b.setup) : [];
  });

  constructor() {
    effect(() => {
      const pair = this.pair();
      if (pair) this.title.set(`${pair.a.label} beside ${pair.b.label}`);
    });
  }

  private followerOf(id: () => string | undefined) {
    const follower = computed<RunFollower | null>(() => {
      const wanted = id();
      return wanted ? untracked(() => this.followers.follow(wanted)) : null;
    });
    effect((onCleanup) => {
      const opened = follower();
      onCleanup(() => opened?.close());
    });
    return follower;
  }

  protected async choose(side: 'a' | 'b'): Promise<void> {
    const other = side === 'a' ? this.b() : this.a();
    const run = await this.picker.pick({ title: `Choose run ${side.toUpperCase()}`, except: other ? [other] : [] });
    if (run) await this.go({ [side]: run.id });
  }

  protected swap(): void {
    void this.go({ a: this.b(), b: this.a() });
  }

  protected async copyAddress(): Promise<void> {
    // The clipboard is missing on plain HTTP away from this machine: then the address is shown to be copied by hand.
    const address = window.location.href;
    const clipboard = navigator.clipboard as Clipboard | undefined;
    if (clipboard) await clipboard.writeText(address);
    else window.prompt('Copy this address', address);
    this.copied.set('Copied');
    setTimeout(() => this.copied.set(''), 2000);
  }

  protected keepPlace(place: SharedPlace): void {
    void this.go(placeToQuery(place), true);
  }

  protected readAgain(): void {
    for (const follower of [this.followerA(), this.followerB()]) void follower?.refresh();
  }

  protected differs(): string {
    const count = this.changes().length;
    return count === 0
      ? 'Nothing differs'
      : sentenceStart(`${formatCount(count, 'setting differs', 'settings differ')}`);
  }

  protected where(pointer: string): string {
    return PARTS[pointer.split('/')[1] ?? ''] ?? '';
  }

  private go(queryParams: Record<string, string | number | undefined | null>, replaceUrl = false): Promise<boolean> {
    return this.router.navigate(['/side-by-side'], { queryParams, queryParamsHandling: 'merge', replaceUrl });
  }
}
