import { Injectable, computed, inject, signal } from '@angular/core';
import { type HalfdeepEvent, type Progress, type Run, type RunSummary, runSchema } from '@halfdeep/contracts';
import {
  type Observable,
  Subscription,
  asapScheduler,
  firstValueFrom,
  from,
  merge,
  observeOn,
  of,
  switchMap,
  throwError,
} from 'rxjs';
import { Api } from './api';
import { oncePerFrame } from './frame-scheduler';
import { GrowingSlice, type Watermark } from './growing-rows';
import { RunEvents } from './run-events';
import { type LineAlong, type SeriesStream, type Slice, SliceClient } from './slices';

/** Lines kept at hand: going back to a variable or a latitude looked at a moment ago asks for nothing. */
const LINES_KEPT = 8;
const MAPS_KEPT = 48;

/** Anything that knows how far it has come: the summary of a list or the whole run. */
type Followed = RunSummary | Run;

/** Days between frames: from the setup when it is there, else from what the progress says. */
export function frameIntervalDays(run: Followed): number {
  if ('setup' in run) return run.setup.output.frameIntervalDays;
  const { records, day } = run.progress;
  return records.frames > 1 ? Math.max(0.25, (day - startDay(run)) / (records.frames - 1)) : 1;
}

/** Model day on which the run begins: not 0 when it extends another. */
export function startDay(run: Followed): number {
  const { startStep, totalSteps, totalDays } = run.progress;
  return totalSteps > 0 ? (startStep * totalDays) / totalSteps : 0;
}

/** Model day of the last record that any stream of a run holds; the day it begins on before there is one. */
export function lastRecordDay(run: Run): number {
  const { frames, sections, moorings, budget } = run.progress.records;
  const { frameIntervalDays: frame, sectionIntervalDays: section, mooringIntervalDays: mooring } = run.setup.output;
  // Frame 0 is the state it begins with; record k of a series closes interval k.
  const reached = Math.max(0, (frames - 1) * frame, Math.max(sections, budget) * section, moorings * mooring);
  return startDay(run) + reached;
}

/** A run and its data, kept up to date for as long as somebody looks. Made by `RunFollowers`; `close` ends it. */
export class RunFollower {
  private readonly known = signal<Followed | null>(null);
  /** The whole run, null until it has been read. */
  readonly run = computed<Run | null>(() => {
    const run = this.known();
    return run && 'setup' in run ? run : null;
  });
  readonly summary = computed<RunSummary | null>(() => this.known());
  readonly progress = computed<Progress | null>(() => this.known()?.progress ?? null);
  readonly error = signal<unknown>(null);

  private readonly lines = new Map<string, GrowingSlice>();
  private readonly seriesRead = new Map<SeriesStream, GrowingSlice>();
  private readonly maps = new Map<string, Promise<Slice>>();
  private readonly subscriptions = new Subscription();
  private waiting: HalfdeepEvent[] = [];
  private readonly frame = oncePerFrame(() => this.applyWaiting());

  constructor(
    readonly id: string,
    initial: RunSummary | null,
    private readonly api: Api,
    private readonly slices: SliceClient,
    events: RunEvents,
  ) {
    if (initial) this.known.set(initial);
    this.subscriptions.add(
      events.watch(id).subscribe((event) => {
        this.waiting.push(event);
        this.frame.ask();
      }),
    );
    const asks: Observable<unknown> = initial ? events.reopened : merge(of(null), events.reopened);
    this.subscriptions.add(
      asks
        .pipe(
          observeOn(asapScheduler),
          switchMap(() => from(this.refresh())),
        )
        .subscribe(),
    );
  }

  /** Asks for the run as it stands now. */
  async refresh(): Promise<void> {
    try {
      const answer = await firstValueFrom(this.api.get(`/api/runs/${this.id}`, runSchema));
      this.set(answer); // preflight crosses the wire unchecked: it is shown, never computed with
      this.error.set(null);
    } catch (error) {
      this.error.set(error);
    }
  }

  /** Takes a newer summary, of a list or of an answer to stop, resume and the like. */
  adopt(summary: RunSummary): void {
    const before = this.known();
    this.set(before && 'setup' in before ? { ...before, ...summary } : summary);
  }

  /** Space-time slice of the row or column nearest to `atDeg`. */
  hovmoller(variable: string, along: LineAlong, atDeg: number): GrowingSlice {
    const key = `${variable} ${along} ${atDeg}`;
    const held = this.lines.get(key);
    if (held) {
      this.lines.delete(key);
      this.lines.set(key, held);
      return held;
    }
    const grid = this.known()?.grid;
    const width = (along === 'latitude' ? grid?.nx : grid?.ny) ?? 240;
    const line = new GrowingSlice(
      (first, last) => this.slices.hovmoller(this.id, variable, along, atDeg, first, last),
      width,
    );
    this.lines.set(key, line);
    const oldest = this.lines.keys().next().value;
    if (this.lines.size > LINES_KEPT && oldest !== undefined) {
      this.lines.get(oldest)?.close();
      this.lines.delete(oldest);
    }
    this.tellSoon();
    return line;
  }

  series(stream: SeriesStream): GrowingSlice {
    const held = this.seriesRead.get(stream);
    if (held) return held;
    const series = new GrowingSlice((first, last) => this.slices.series(this.id, stream, first, last), 40);
    this.seriesRead.set(stream, series);
    this.tellSoon();
    return series;
  }

  /** The map of one record. A failed read is forgotten, so that the next ask tries again. */
  map(variable: string, record: number): Promise<Slice> {
    const key = `${variable} ${record}`;
    const held = this.maps.get(key);
    if (held) return held;
    const map = firstValueFrom(
      this.slices
        .map(this.id, record, variable)
        .pipe(switchMap((slice) => (slice.data.length ? of(slice) : throwError(() => new Error('The map is empty.'))))),
    );
    this.maps.set(key, map);
    map.catch(() => this.maps.delete(key));
    const oldest = this.maps.keys().next().value;
    if (this.maps.size > MAPS_KEPT && oldest !== undefined) this.maps.delete(oldest);
    return map;
  }

  close(): void {
    this.subscriptions.unsubscribe();
    this.frame.cancel();
    for (const slice of [...this.lines.values(), ...this.seriesRead.values()]) slice.close();
  }

  private applyWaiting(): void {
    const events = this.waiting;
    this.waiting = [];
    for (const event of events) {
      const now = this.known();
      if (event.type === 'state') this.adopt(event.run);
      else if (now && event.type === 'progress') this.known.set({ ...now, progress: event.progress });
      else if (now && event.type === 'records')
        this.known.set({ ...now, progress: { ...now.progress, records: event.records } });
    }
    this.tell();
  }

  private set(run: Followed): void {
    this.known.set(run);
    this.tell();
  }

  /** Lines and series are asked for while templates are evaluated, where no signal may be written. */
  private tellSoon(): void {
    queueMicrotask(() => this.tell());
  }

  private tell(): void {
    const run = this.known();
    if (!run) return;
    const interval = frameIntervalDays(run);
    const frames: Watermark = {
      available: run.progress.records.frames,
      firstDay: startDay(run),
      intervalDays: interval,
    };
    for (const line of this.lines.values()) line.want(frames);
    if (!('setup' in run)) return;
    const { sectionIntervalDays, mooringIntervalDays } = run.setup.output;
    const days: Record<SeriesStream, number> = {
      sections: sectionIntervalDays,
      budget: sectionIntervalDays,
      moorings: mooringIntervalDays,
    };
    for (const [stream, series] of this.seriesRead)
      series.want({
        available: run.progress.records[stream],
        firstDay: startDay(run) + days[stream],
        intervalDays: days[stream],
      });
  }
}

/** Makes followers. A page or a strip makes one and closes it when it goes. */
@Injectable({ providedIn: 'root' })
export class RunFollowers {
  private readonly api = inject(Api);
  private readonly slices = inject(SliceClient);
  private readonly events = inject(RunEvents);

  follow(id: string, initial: RunSummary | null = null): RunFollower {
    return new RunFollower(id, initial, this.api, this.slices, this.events);
  }
}
