import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  type ElementRef,
  afterNextRender,
  computed,
  effect,
  inject,
  input,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { type RunSummary } from '@halfdeep/contracts';
import { oncePerFrame } from '../../core/frame-scheduler';
import { formatLongitude, formatModelTime } from '../../core/format';
import { type RowStore } from '../../core/growing-rows';
import { RunEvents } from '../../core/run-events';
import { type RunFollower, RunFollowers, startDay } from '../../core/run-follower';
import { landStretches } from '../plate/land';
import { type ColourLimits, extremes, fittedLimits, grownLimits } from '../plate/limits';
import { type Growth, drawOverlay, svg } from '../plate/overlay';
import { type Palette, Palettes, colourTable } from '../plate/palette';
import { type PlotBox, toPxX, toPxY } from '../plate/plot-box';
import { YEAR, degreeTicks, timeTicks } from '../plate/ticks';

const FONT = '400 11px "Inter Variable", Inter, sans-serif';
/** A picture has no use for more columns than this; the rest is skipped. */
const MOST_COLUMNS = 2400;
let counter = 0;

/**
 * The run's thickness anomaly along its middle meridian, latitude up and its whole length to the right: the picture is the
 * progress. It grows by itself while the run goes on. `miniature`: 168 × 64, without labels, for what has ended.
 */
@Component({
  selector: 'app-strip',
  template: `
    <div #frame class="frame" role="img" [attr.aria-label]="label()" [style.height.px]="height()">
      <canvas #field></canvas>
      <svg #over></svg>
      @if (waiting(); as text) {
        <p>{{ text }}</p>
      }
    </div>
  `,
  styles: `
    :host {
      display: block;
      min-width: 0;
    }
    .frame {
      position: relative;
      width: 100%;
    }
    :host(.miniature) .frame {
      max-width: 168px;
    }
    canvas,
    svg {
      position: absolute;
      inset: 0;
      width: 100%;
      height: 100%;
      overflow: visible;
    }
    p {
      position: absolute;
      inset: 0 0 20px;
      display: grid;
      place-content: center;
      font: var(--hd-small);
      color: var(--hd-text-2);
    }
    :host(.miniature) p {
      inset: 0;
      font: var(--hd-note);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class.miniature]': 'miniature()' },
})
export class Strip {
  private readonly followers = inject(RunFollowers);
  private readonly events = inject(RunEvents);
  private readonly palettes = inject(Palettes);
  private readonly frame = viewChild.required<ElementRef<HTMLElement>>('frame');
  private readonly canvas = viewChild.required<ElementRef<HTMLCanvasElement>>('field');
  private readonly over = viewChild.required<ElementRef<SVGSVGElement>>('over');

  readonly run = input.required<RunSummary>();
  readonly miniature = input(false);

  private readonly id = `strip${counter++}`;
  private readonly width = signal(0);
  private readonly follower = signal<RunFollower | null>(null);
  private held: ColourLimits | null = null;
  private readonly image = document.createElement('canvas');
  private readonly drawing = oncePerFrame(() => this.draw());

  protected readonly height = computed(() => (this.miniature() ? 64 : 136));
  private readonly now = computed(() => this.follower()?.summary() ?? this.run());
  private readonly basin = computed(() => this.follower()?.run()?.setup.basin ?? null);
  /** The meridian through the middle of the basin, degrees east. */
  private readonly longitude = computed(() => {
    const basin = this.basin();
    return basin ? (basin.westDeg + basin.eastDeg) / 2 : null;
  });
  /** Model day by which preflight expected the run to be spun up; null where no wind has to be forgotten from. */
  private readonly spunUp = computed(() => {
    const run = this.follower()?.run();
    return run?.preflight.checks.find(({ id }) => id === 'length')?.limit ?? null;
  });
  private readonly slice = computed(() => {
    const [follower, longitude] = [this.follower(), this.longitude()];
    return follower && longitude !== null ? untracked(() => follower.hovmoller('eta', 'longitude', longitude)) : null;
  });
  protected readonly waiting = computed(() => {
    const [run, slice, follower] = [this.now(), this.slice(), this.follower()];
    if (slice?.error() || follower?.error())
      return this.miniature() ? 'not read' : 'The strip could not be read; the run itself is safe.';
    if (this.miniature()) return '';
    if (run.progress.records.frames > 0 && (!slice || slice.rows.count === 0)) {
      slice?.version();
      return 'Reading';
    }
    return run.state === 'queued' ? 'blank until it starts' : '';
  });
  protected readonly label = computed(() => {
    const { label, state, progress } = this.now();
    const where = this.longitude() === null ? '' : ` along ${formatLongitude(this.longitude() ?? 0)}`;
    return `${label}, ${state}, ${formatModelTime(progress.day, progress.totalDays)}: thickness anomaly${where} against time`;
  });

  constructor() {
    const destroy = inject(DestroyRef);
    const runId = computed(() => this.run().id);
    effect((onCleanup) => {
      const id = runId();
      const follower = untracked(() => this.followers.follow(id));
      this.held = null;
      this.follower.set(follower);
      onCleanup(() => follower.close());
    });
    effect(() => {
      const [run, follower] = [this.run(), this.follower()];
      untracked(() => {
        if (follower?.summary() && follower.id === run.id && run.state !== follower.summary()?.state)
          follower.adopt(run);
      });
    });
    effect(() => {
      this.slice()?.version();
      this.now();
      this.width();
      this.palettes.theme();
      this.events.connection();
      this.drawing.ask();
    });
    afterNextRender(() => {
      const element = this.frame().nativeElement;
      const observer = new ResizeObserver(() => this.width.set(Math.round(element.clientWidth)));
      observer.observe(element);
      destroy.onDestroy(() => observer.disconnect());
    });
    destroy.onDestroy(() => this.drawing.cancel());
  }

  private box(width: number): PlotBox {
    const small = this.miniature();
    const { totalDays } = this.now().progress;
    const x: [number, number] = [startDay(this.now()), Math.max(totalDays, startDay(this.now()) + 1)];
    const basin = this.basin();
    const y: [number, number] = basin ? [basin.southDeg, basin.northDeg] : [-1, 1];
    const [left, right, top, bottom] = small ? [5, 5, 5, 5] : [50, 8, 12, 28];
    const [w, h] = [Math.max(20, width - left - right), this.height() - top - bottom];
    const xTicks = timeTicks(x[0], x[1], w, width < 560 ? 70 : 44);
    return {
      width,
      height: this.height(),
      left,
      top,
      w,
      h,
      x,
      y,
      xTicks,
      yTicks: degreeTicks('latitude', ...y, h, 24),
    };
  }

  private draw(): void {
    untracked(() => {
      const width = this.width();
      if (width === 0) return;
      const palette = this.palettes.of(this.palettes.theme());
      const box = this.box(width);
      const rows = this.slice()?.rows;
      const latitudes = this.slice()?.head()?.axes[1]?.values ?? [];
      this.drawField(box, palette, rows ?? null, latitudes);
      const run = this.now();
      const lost = this.events.connection() === 'lost';
      const growing =
        run.state === 'running' || run.state === 'queued' || run.state === 'stopped' || run.state === 'failed';
      // While its picture is being read the pen stands where the run is, not at the beginning.
      const last = rows && rows.count > 0 ? rows.day(rows.count - 1) : run.progress.day;
      const growth: Growth = {
        axis: 'x',
        upTo: run.state === 'finished' ? box.x[1] : last,
        pen: run.state === 'running' && growing ? (lost ? 'lost' : 'live') : 'none',
      };
      const sampled = rows
        ? [0, rows.count >> 1, rows.count - 1].filter((k) => k >= 0 && k < rows.count).map((k) => rows.row(k))
        : [];
      const landBands = landStretches(latitudes, sampled).map((band) => ({ axis: 'y' as const, ...band }));
      const yTicks = { ...box.yTicks, stops: [] };
      const none = { land: null, theory: [], seaName: '', sections: [], moorings: [] };
      const over = this.over().nativeElement;
      drawOverlay(over, { box: { ...box, yTicks }, growth, landBands, ...none }, palette, this.id);
      if (!this.miniature()) drawLabels(over, box, palette, this.spunUp());
    });
  }

  private drawField(box: PlotBox, palette: Palette, rows: RowStore | null, latitudes: readonly number[]): void {
    const canvas = this.canvas().nativeElement;
    const ratio = window.devicePixelRatio || 1;
    const [width, height] = [Math.round(box.width * ratio), Math.round(box.height * ratio)];
    if (canvas.width !== width || canvas.height !== height) [canvas.width, canvas.height] = [width, height];
    const context = canvas.getContext('2d');
    if (!context) return;
    context.setTransform(ratio, 0, 0, ratio, 0, 0);
    context.clearRect(0, 0, box.width, box.height);
    if (!rows || rows.count === 0 || latitudes.length < 2) return;
    const picked = pick(rows.count, Math.ceil(rows.count / MOST_COLUMNS));
    this.held = grownLimits(this.held, fittedLimits(extremes(picked.map((k) => rows.row(k))), 'diverging', 1));
    paint(
      this.image,
      picked.map((k) => rows.row(k)),
      colourTable(palette.diverging),
      this.held,
    );
    const first = rows.day(0);
    const last = rows.day(picked.at(-1) ?? 0);
    const halfStep = picked.length > 1 ? (last - first) / (picked.length - 1) / 2 : 0.5;
    const halfLatitude = ((latitudes[1] ?? 0) - (latitudes[0] ?? 0)) / 2;
    const [x0, x1] = [toPxX(box, first - halfStep), toPxX(box, last + halfStep)];
    const [y0, y1] = [
      toPxY(box, (latitudes.at(-1) ?? 0) + halfLatitude),
      toPxY(box, (latitudes[0] ?? 0) - halfLatitude),
    ];
    context.save();
    context.beginPath();
    context.rect(box.left, box.top, box.w, box.h);
    context.clip();
    context.imageSmoothingEnabled = true;
    context.imageSmoothingQuality = 'high';
    context.drawImage(this.image, x0, y0, x1 - x0, y1 - y0);
    context.restore();
  }
}

function pick(count: number, step: number): number[] {
  return Array.from({ length: Math.floor((count - 1) / step) + 1 }, (_, k) => k * step);
}

/** One pixel a value, time to the right, latitude up; land stays clear. */
function paint(
  image: HTMLCanvasElement,
  columns: ArrayLike<number>[],
  table: Uint8ClampedArray,
  limits: ColourLimits,
): void {
  const height = columns[0]?.length ?? 0;
  if (height === 0) return;
  image.width = columns.length;
  image.height = height;
  const context = image.getContext('2d');
  if (!context) return;
  const pixels = context.createImageData(columns.length, height);
  const scale = 255 / (limits.max - limits.min);
  columns.forEach((column, k) => {
    for (let j = 0; j < height; j++) {
      const value = column[j] ?? NaN;
      if (Number.isNaN(value)) continue;
      const entry = 3 * Math.min(255, Math.max(0, Math.round((value - limits.min) * scale)));
      const at = 4 * ((height - 1 - j) * columns.length + k);
      pixels.data[at] = table[entry] ?? 0;
      pixels.data[at + 1] = table[entry + 1] ?? 0;
      pixels.data[at + 2] = table[entry + 2] ?? 0;
      pixels.data[at + 3] = 255;
    }
  });
  context.putImageData(pixels, 0, 0);
}

function drawLabels(target: SVGElement, box: PlotBox, palette: Palette, spunUp: number | null): void {
  const text = (x: number, y: number, anchor: string, words: string) =>
    svg('text', { x, y, 'text-anchor': anchor, fill: palette.colour['text-2'], style: `font: ${FONT}` }, words);
  box.yTicks.values.forEach((value, k) => {
    target.append(text(box.left - 10, toPxY(box, value) + 4, 'end', box.yTicks.labels[k] ?? ''));
  });
  const wholeYears = box.x[1] - box.x[0] >= YEAR;
  box.xTicks.values.forEach((value, k) => {
    const anchor = wholeYears && value === box.x[1] ? 'end' : 'middle';
    target.append(text(toPxX(box, value), box.top + box.h + 20, anchor, box.xTicks.labels[k] ?? ''));
  });
  if (spunUp !== null && spunUp > box.x[0] && spunUp < box.x[1]) {
    const x = toPxX(box, spunUp);
    const [y1, y2] = [box.top, box.top + box.h];
    // A halo on both: the line goes over the picture once the run has come so far.
    target.append(
      svg('line', { x1: x, x2: x, y1, y2, stroke: palette.colour.sheet, 'stroke-width': 3, 'stroke-opacity': 0.6 }),
      svg('line', { x1: x, x2: x, y1, y2, stroke: palette.colour.text, 'stroke-dasharray': '2 3' }),
    );
    const words = 'spun up by here';
    const fits = box.left + box.w - x > 100;
    if (box.w >= 400) {
      const label = text(x + (fits ? 6 : -6), y1 + 14, fits ? 'start' : 'end', words);
      const halo = {
        fill: palette.colour.text,
        stroke: palette.colour.sheet,
        'stroke-width': '3',
        'paint-order': 'stroke',
      };
      for (const [name, value] of Object.entries(halo)) label.setAttribute(name, value);
      target.append(label);
    }
  }
}
