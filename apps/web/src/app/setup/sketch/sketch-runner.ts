import { LiveAnnouncer } from '@angular/cdk/a11y';
import { computed, DestroyRef, inject, Injectable, InjectionToken, signal } from '@angular/core';
import type { Fingerprint, Setup, SketchLine } from '@halfdeep/ocean';
import { formatModelTime } from '../../core/format';
import { SetupDraft } from '../setup-draft';
import { sameValue } from '../setup-pointer';
import type { SketchOrder, SketchProgress, SketchReport } from './sketch-work';

/** The part of a Worker that is used. */
export type SketchThread = Pick<Worker, 'postMessage' | 'addEventListener' | 'terminate'>;

/** Opens the thread that sketches; null where the browser has none. */
export const SKETCH_THREAD = new InjectionToken<() => SketchThread | null>('thread that sketches', {
  providedIn: 'root',
  factory: () => () =>
    typeof Worker === 'undefined' ? null : new Worker(new URL('./sketch.worker', import.meta.url), { type: 'module' }),
});

/** none: not asked for yet. impossible: no sketch of this setup can be made. failed: the integration broke off. */
export type SketchState = 'none' | 'planning' | 'running' | 'ended' | 'stopped' | 'failed' | 'impossible';

/** Rows of the line that is shown, in time order. */
export class SketchDrawing {
  placesDeg: ArrayLike<number> = [];
  atDeg = NaN;
  private readonly values: Float32Array[] = [];
  private readonly times: number[] = [];

  constructor(readonly line: SketchLine) {}

  get count(): number {
    return this.values.length;
  }
  row(k: number): Float32Array {
    return this.values[k] ?? new Float32Array(0);
  }
  days(): Float64Array {
    return Float64Array.from(this.times);
  }
  add({ rows }: Extract<SketchReport, { kind: 'rows' }>): void {
    this.placesDeg = rows.placesDeg;
    this.atDeg = rows.atDeg;
    const width = rows.placesDeg.length;
    rows.days.forEach((day, k) => {
      this.times[rows.first + k] = day;
      this.values[rows.first + k] = rows.values.subarray(k * width, (k + 1) * width);
    });
  }
}

/** Has a coarse version of the setup being written integrated in the browser, and holds what comes of it. */
@Injectable()
export class SketchRunner {
  private readonly draft = inject(SetupDraft);
  private readonly announcer = inject(LiveAnnouncer);
  private readonly open = inject(SKETCH_THREAD);
  private thread: SketchThread | null = null;
  /** What was written when the sketch was asked for. */
  readonly source = signal<Setup | null>(null);

  readonly state = signal<SketchState>('none');
  readonly plan = signal<Extract<SketchReport, { kind: 'planned' }>['sketch'] | null>(null);
  readonly progress = signal<SketchProgress | null>(null);
  readonly reason = signal('');
  readonly fingerprint = signal<Fingerprint | null>(null);
  /** Bumped when rows have come. */
  readonly version = signal(0);
  readonly drawing = signal<SketchDrawing | null>(null);
  /** The form says something else by now. */
  readonly outdated = computed(() => {
    const source = this.source();
    return source !== null && !sameValue(source, this.draft.value());
  });
  readonly busy = computed(() => this.state() === 'planning' || this.state() === 'running');

  constructor() {
    inject(DestroyRef).onDestroy(() => this.thread?.terminate());
  }

  /** Begins anew with what is written now, along the line that `pick` names then; nothing happens while a field cannot be read. */
  start(pick: () => SketchLine): void {
    const setup = this.draft.setup();
    if (!setup) return;
    this.thread?.terminate();
    this.source.set(this.draft.value());
    const line = pick();
    this.plan.set(null);
    this.progress.set(null);
    this.fingerprint.set(null);
    this.reason.set('');
    this.drawing.set(new SketchDrawing(line));
    this.thread = this.open();
    if (!this.thread) {
      this.fail('impossible', 'This browser has no threads to sketch in.');
      return;
    }
    this.state.set('planning');
    this.listen(this.thread);
    this.send({ kind: 'start', setup, line });
  }

  /** Draws another line of what has been computed, and goes on with that. */
  choose(line: SketchLine): void {
    if (this.state() === 'none' || this.state() === 'impossible') return;
    this.drawing.set(new SketchDrawing(line));
    this.send({ kind: 'line', line });
  }

  stop(): void {
    if (!this.busy()) return;
    this.send({ kind: 'stop' });
    this.state.set('stopped');
    this.announce('The sketch is stopped.');
  }

  private send(order: SketchOrder): void {
    this.thread?.postMessage(order);
  }

  private listen(thread: SketchThread): void {
    thread.addEventListener('message', ({ data }: MessageEvent<SketchReport>) => {
      if (this.thread === thread) this.take(data);
    });
    thread.addEventListener('error', ({ message }: ErrorEvent) => {
      if (this.thread === thread)
        this.fail('failed', `The sketch broke off: ${message || 'its thread did not start'}. Reload the page.`);
    });
  }

  private take(report: SketchReport): void {
    switch (report.kind) {
      case 'planned':
        this.plan.set(report.sketch);
        if (this.state() === 'planning') this.state.set('running');
        break;
      case 'none':
        this.fail('impossible', report.reason);
        break;
      case 'rows':
        this.takeRows(report);
        break;
      case 'ended':
        this.fingerprint.set(report.fingerprint);
        this.state.set('ended');
        this.announce('The sketch is drawn.');
        break;
      case 'failed':
        this.fail('failed', report.reason);
    }
  }

  private takeRows(report: Extract<SketchReport, { kind: 'rows' }>): void {
    const drawing = this.drawing();
    const before = this.progress();
    this.progress.set(report.progress);
    // Rows of a line that was given up meanwhile are let go.
    if (!drawing || !sameValue(drawing.line, report.line)) return;
    drawing.add(report);
    this.version.update((n) => n + 1);
    const year = ({ day }: SketchProgress) => Math.floor(day / 365);
    const total = this.plan()?.setup.length.days ?? 0;
    if (before && year(report.progress) > year(before) && report.progress.day < total)
      this.announce(`Sketch: ${formatModelTime(365 * year(report.progress), total)}.`);
  }

  private fail(state: 'failed' | 'impossible', reason: string): void {
    this.state.set(state);
    this.reason.set(reason);
    this.announce(reason);
  }

  private announce(words: string): void {
    void this.announcer.announce(words, 'polite');
  }
}
