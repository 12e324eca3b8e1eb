import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  ElementRef,
  afterNextRender,
  computed,
  inject,
  input,
  signal,
} from '@angular/core';
import { type RunSummary } from '@halfdeep/contracts';
import { formatModelDay, formatModelTime } from '../core/format';
import { startDay } from '../core/run-follower';
import { timeTicks } from '../shared/plate/ticks';

const EDGE = 6;

/** The whole run as one graduated rule: years, the last checkpoint, the pen. */
@Component({
  selector: 'app-progress-rule',
  template: `
    <svg role="img" [attr.aria-label]="label()" [attr.width]="width()" height="40">
      @for (stretch of stretches(); track $index) {
        <rect class="ink" [attr.x]="stretch.x" y="12" [attr.width]="stretch.width" height="6" />
      }
      <rect class="edge" [attr.x]="edge - 0.5" y="11.5" [attr.width]="width() - 2 * edge + 1" height="7" />
      @for (tick of ticks(); track tick.x) {
        <rect class="mark" [attr.x]="tick.x - 0.5" y="12" width="1" height="9" />
        <text [attr.x]="tick.x" y="35" [attr.text-anchor]="tick.anchor">{{ tick.label }}</text>
      }
      @if (savedX(); as x) {
        <line class="saved" [attr.x1]="x" [attr.x2]="x" y1="4" y2="10" />
      }
      @if (penX(); as x) {
        <g [class.lost]="lost()" class="pen">
          <rect class="halo" [attr.x]="x - 2.5" y="11" width="5" height="8" />
          <rect [attr.x]="x - 1" y="11" width="2" height="8" />
          <path [attr.d]="'M' + x + ' 14L' + (x - 5) + ' 3h10z'" />
        </g>
      }
    </svg>
  `,
  styles: `
    :host {
      display: block;
      min-width: 0;
      overflow: hidden;
    }
    svg {
      display: block;
      overflow: visible;
    }
    text {
      font: var(--hd-plot);
      fill: var(--hd-text-2);
    }
    .ink,
    .mark {
      fill: var(--hd-text);
    }
    .edge {
      fill: none;
      stroke: var(--hd-text);
    }
    .saved {
      stroke: var(--hd-text);
    }
    .pen {
      fill: var(--hd-live);
    }
    .pen.lost {
      fill: var(--hd-text-3);
    }
    .halo {
      fill: var(--hd-ground);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ProgressRule {
  readonly run = input.required<RunSummary>();
  readonly lost = input(false);
  protected readonly edge = EDGE;
  protected readonly width = signal(600);

  private readonly range = computed<[number, number]>(() => {
    const first = startDay(this.run());
    return [first, Math.max(this.run().progress.totalDays, first + 0.25)];
  });
  private readonly axis = computed(() => timeTicks(...this.range(), this.width() - 2 * EDGE, 60));
  protected readonly ticks = computed(() => {
    const { values, labels } = this.axis();
    return values.map((value, k) => {
      const x = this.toX(value);
      const anchor = x < 24 ? 'start' : x > this.width() - 24 ? 'end' : 'middle';
      return { x, anchor, label: labels[k] ?? '' };
    });
  });
  protected readonly stretches = computed(() => {
    const { values } = this.axis();
    const [first, last] = this.range();
    const stops = [...new Set([first, ...values, last])].sort((a, b) => a - b);
    const done = this.run().progress.day;
    return stops
      .slice(0, -1)
      .map((from, k) => ({ from, to: Math.min(stops[k + 1] ?? from, done), inked: k % 2 === 0 }))
      .filter(({ from, to, inked }) => inked && to > from)
      .map(({ from, to }) => ({ x: this.toX(from), width: this.toX(to) - this.toX(from) }));
  });
  protected readonly penX = computed(() => (this.run().state === 'running' ? this.toX(this.run().progress.day) : null));
  private readonly savedDay = computed(() => {
    const { savedStep, totalSteps, totalDays } = this.run().progress;
    return savedStep === null || totalSteps === 0 ? null : (savedStep * totalDays) / totalSteps;
  });
  protected readonly savedX = computed(() => {
    const day = this.savedDay();
    return day === null || this.run().state === 'finished' ? null : this.toX(day);
  });
  protected readonly label = computed(() => {
    const { day, totalDays } = this.run().progress;
    const saved = this.savedDay();
    return `Progress: ${formatModelTime(day, totalDays)}${saved === null ? '' : `, last checkpoint ${formatModelDay(saved)}`}`;
  });

  constructor() {
    const element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
    const destroy = inject(DestroyRef);
    afterNextRender(() => {
      const observer = new ResizeObserver(() => this.width.set(Math.max(60, element.clientWidth)));
      observer.observe(element);
      destroy.onDestroy(() => observer.disconnect());
    });
  }

  private toX(day: number): number {
    const [first, last] = this.range();
    return EDGE + ((day - first) / (last - first)) * (this.width() - 2 * EDGE);
  }
}
