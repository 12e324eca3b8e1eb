import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  computed,
  effect,
  inject,
  input,
  model,
  signal,
  untracked,
} from '@angular/core';
import { formatModelDay, formatModelYear } from '../../core/format';

/** Records a second when playing; a record that has not come yet is waited for. */
const RECORDS_A_SECOND = 12;

/**
 * Steps and plays through the records of a map. Arrows move by a record, Page by a month, Home and End to the ends,
 * L goes along with the pen of a run that is growing.
 */
@Component({
  selector: 'app-time-slider',
  template: `
    <button type="button" class="play" [disabled]="count() < 2" [attr.aria-pressed]="playing()" (click)="toggle()">
      {{ playing() ? 'Pause' : 'Play' }}
    </button>
    <input
      type="range"
      min="0"
      [max]="Math.max(0, count() - 1)"
      step="1"
      [value]="record()"
      [disabled]="count() === 0"
      [attr.aria-label]="label()"
      [attr.aria-valuetext]="valueText()"
      (input)="slide($event)"
      (keydown)="pressKey($event)"
    />
    @if (live()) {
      <button type="button" class="follow" [class.on]="follows()" [attr.aria-pressed]="follows()" (click)="follow()">
        {{ follows() ? 'follows the pen' : 'follow the pen' }}
      </button>
    }
  `,
  styleUrl: './time-slider.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class TimeSlider {
  protected readonly Math = Math;
  readonly record = model.required<number>();
  /** Records that there are now, and the day of each. */
  readonly count = input.required<number>();
  readonly dayOf = input.required<(record: number) => number>();
  readonly intervalDays = input.required<number>();
  /** The run is still growing. */
  readonly live = input(false);
  readonly follows = model(false);
  readonly label = input('Model day');
  /** False while the record asked for has not been drawn yet: playing waits for it. */
  readonly ready = input(true);

  protected readonly playing = signal(false);
  protected readonly valueText = computed(() => {
    const day = this.dayOf()(this.record());
    return `${formatModelDay(day)}, ${formatModelYear(day)}`;
  });
  private handle: number | null = null;
  private due = 0;

  constructor() {
    effect(() => {
      const last = this.count() - 1;
      if (this.live() && this.follows() && last >= 0) untracked(() => this.record.set(last));
    });
    effect(() => {
      if (this.playing()) untracked(() => this.run());
      else this.halt();
    });
    inject(DestroyRef).onDestroy(() => this.halt());
  }

  /** Starts or pauses playing; from the last record it begins again at the first. */
  toggle(): void {
    if (this.count() < 2) return;
    if (!this.playing()) {
      this.follows.set(false);
      if (this.record() >= this.count() - 1) this.record.set(0);
    }
    this.playing.update((playing) => !playing);
  }

  protected slide(event: Event): void {
    this.move(Number((event.target as HTMLInputElement).value));
  }

  protected follow(): void {
    this.playing.set(false);
    this.follows.update((follows) => !follows);
  }

  protected pressKey(event: KeyboardEvent): void {
    if (event.altKey || event.ctrlKey || event.metaKey) return;
    const month = Math.max(1, Math.round(30 / this.intervalDays()));
    if (event.key === 'PageUp') this.move(this.record() + month);
    else if (event.key === 'PageDown') this.move(this.record() - month);
    else if (event.key === 'l' || event.key === 'L') this.follow();
    else if (event.key === ' ') this.toggle();
    else return;
    event.preventDefault();
  }

  private move(record: number): void {
    this.playing.set(false);
    this.follows.set(false);
    this.record.set(Math.min(Math.max(0, record), Math.max(0, this.count() - 1)));
  }

  private run(): void {
    this.halt();
    const turn = (now: number) => {
      this.handle = requestAnimationFrame(turn);
      if (now < this.due || !this.ready()) return;
      this.due = now + 1000 / RECORDS_A_SECOND;
      if (this.record() >= this.count() - 1) this.playing.set(false);
      else this.record.update((record) => record + 1);
    };
    this.handle = requestAnimationFrame(turn);
  }

  private halt(): void {
    if (this.handle !== null) cancelAnimationFrame(this.handle);
    this.handle = null;
  }
}
