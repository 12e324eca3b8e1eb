import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { formatLatitude, formatLongitude, formatModelDay, formatModelYear, formatQuantity } from '../../core/format';
import { type PlotTable } from './csv';
import { traceIsoline } from './isolines';
import { type LandOutline, landStretches } from './land';
import { type ColourLimits, isolineLevels } from './limits';
import { type Growth, type OverlayModel, type TheoryLine } from './overlay';
import { type Palette, colourScale } from './palette';
import { type PlotBox, nearestIndex } from './plot-box';
import { type Emit, type Place, PlotSurface } from './plot-surface';
import { type PlotTrace } from './plotly';
import { type AxisTicks, degreeTicks, timeTicks } from './ticks';

export type AxisKind = 'longitude' | 'latitude' | 'time';

/** A field on points: rows[j][i] at (x[i], y[j]), in stored units; land NaN. Shown value = stored × factor. */
export interface Field {
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  rows: readonly ArrayLike<number>[];
  xKind: AxisKind;
  yKind: AxisKind;
  factor: number;
  unit: string;
  scale: 'diverging' | 'sequential';
  /** Bumped when the arrays hold something new: they grow in place. */
  version: number;
}

/** A long narrow channel is drawn at least so tall, px. */
const LEAST_MAP = 72;
const MARGIN = { left: 56, right: 16, top: 14, bottom: 30 };
/** A row or column of a space-time plot wants at least this much of a px; what is finer is skipped when drawing. */
const LEAST_PX = 0.6;

/** A map or a space-time diagram drawn from typed arrays. */
@Component({
  selector: 'app-field-plot',
  templateUrl: './plot-surface.html',
  styleUrl: './plot-surface.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class FieldPlot extends PlotSurface {
  /** Null while nothing has come: frame and blank paper. */
  readonly field = input.required<Field | null>();
  readonly axes = input.required<{ x: AxisKind; y: AxisKind }>();
  readonly xFull = input.required<[number, number]>();
  readonly yFull = input.required<[number, number]>();
  readonly limits = input.required<ColourLimits>();
  readonly growth = input<Growth | null>(null);
  readonly land = input<LandOutline | null>(null);
  readonly theory = input<TheoryLine[]>([]);
  readonly seaName = input('');
  readonly sections = input<OverlayModel['sections']>([]);
  readonly moorings = input<OverlayModel['moorings']>([]);
  /** Height of a space-time plot, px; a map takes its height from equal degrees. */
  readonly wantedHeight = input(440);
  readonly tallestMap = input(470);
  /** Height over width of the map that a space-time plot stands beside, and the px below it: both then end on one line. */
  readonly besideMap = input<{ ratio: number; below: number } | null>(null);
  /** False: land bands of a space-time plot are not drawn, because NaN means something else there. */
  readonly blankIsLand = input(true);

  protected override makeBox(width: number): PlotBox {
    const axes = this.axes();
    const x = this.link().xZoom() ?? this.xFull();
    const y = this.link().yZoom() ?? this.yFull();
    this.equalDegrees = axes.x === 'longitude' && axes.y === 'latitude';
    const room = Math.max(40, width - MARGIN.left - MARGIN.right);
    let w = room;
    let h = Math.max(40, this.wantedHeight() - MARGIN.top - MARGIN.bottom);
    const beside = this.besideMap();
    if (beside) h = Math.min(Math.max(room * beside.ratio, LEAST_MAP) + beside.below, this.tallestMap() + beside.below);
    if (this.equalDegrees) {
      const [xFull, yFull] = [this.xFull(), this.yFull()];
      const ratio = (yFull[1] - yFull[0]) / (xFull[1] - xFull[0]);
      h = room * ratio;
      if (h > this.tallestMap()) [w, h] = [this.tallestMap() / ratio, this.tallestMap()];
      // A long narrow channel keeps a least height: degrees are then no longer equal, but it can be read.
      h = Math.max(h, LEAST_MAP);
    }
    return {
      width,
      height: h + MARGIN.top + MARGIN.bottom,
      left: MARGIN.left,
      top: MARGIN.top,
      w,
      h,
      x,
      y,
      xTicks: ticksOf(axes.x, x, w, 'x'),
      yTicks: ticksOf(axes.y, y, h, 'y'),
    };
  }

  protected override readInputs(): void {
    this.field();
    this.limits();
    this.growth();
    this.land();
    this.theory();
    this.seaName();
    this.sections();
    this.moorings();
    this.blankIsLand();
  }

  protected override emptyHeight(): number {
    return this.wantedHeight();
  }

  protected override traces(box: PlotBox, palette: Palette): PlotTrace[] {
    const field = this.field();
    const limits = this.limits();
    if (!field || field.rows.length === 0) return [];
    const { x, y, rows } = this.thinned(field, box);
    return [
      {
        type: 'heatmap',
        x,
        y,
        z: rows,
        zsmooth: rows.length > 1 ? 'fast' : false,
        zmin: limits.min,
        zmax: limits.max,
        colorscale: colourScale(field.scale === 'diverging' ? palette.diverging : palette.sequential),
        showscale: false,
        hoverinfo: 'skip',
      },
    ];
  }

  /** Only what is in view and can be seen: rows outside the range, and rows or columns finer than a pixel, are skipped. */
  private thinned(
    field: Field,
    box: PlotBox,
  ): { x: ArrayLike<number>; y: ArrayLike<number>; rows: ArrayLike<number>[] } {
    const [j0, j1] = inView(field.y, box.y);
    const [i0, i1] = inView(field.x, box.x);
    const jStep = Math.max(1, Math.ceil(((j1 - j0 + 1) * LEAST_PX) / box.h));
    const iStep = Math.max(1, Math.ceil(((i1 - i0 + 1) * LEAST_PX) / box.w));
    if (j0 === 0 && j1 === field.rows.length - 1 && jStep === 1 && iStep === 1)
      return { x: field.x, y: field.y, rows: field.rows as ArrayLike<number>[] };
    const js = range(j0, j1, jStep);
    if (iStep === 1) return { x: field.x, y: js.map((j) => field.y[j] ?? 0), rows: js.map((j) => field.rows[j] ?? []) };
    const is = range(i0, i1, iStep);
    return {
      x: is.map((i) => field.x[i] ?? 0),
      y: js.map((j) => field.y[j] ?? 0),
      rows: js.map((j) => Float32Array.from(is, (i) => field.rows[j]?.[i] ?? NaN)),
    };
  }

  protected override isolines(heavy: boolean, emit: Emit): void {
    const field = this.field();
    if (!field || field.scale !== 'diverging' || field.rows.length < 2) return;
    const grid = { x: field.x, y: field.y, rows: field.rows };
    const step = (this.limits().max - this.limits().min) / 8;
    for (const level of isolineLevels(this.limits())) {
      const isZero = Math.abs(level) < step / 2;
      if (isZero === heavy) traceIsoline(grid, isZero ? 0 : level, emit);
    }
  }

  protected override overlay(box: PlotBox): OverlayModel {
    const field = this.field();
    const axes = this.axes();
    const bands: OverlayModel['landBands'] = [];
    if (field && axes.x !== axes.y && this.blankIsLand()) {
      if (axes.y === 'time') {
        for (const band of landStretches(field.x, sample(field.rows))) bands.push({ axis: 'x', ...band });
      } else if (axes.x === 'time') {
        const columns = sample(Array.from({ length: field.x.length }, (_, i) => i)).map((i) =>
          field.rows.map((row) => row[i] ?? NaN),
        );
        for (const band of landStretches(field.y, columns)) bands.push({ axis: 'y', ...band });
      }
    }
    return {
      box,
      growth: this.growth(),
      land: this.land(),
      landBands: bands,
      theory: this.theory(),
      seaName: this.seaName(),
      sections: this.sections(),
      moorings: this.moorings(),
    };
  }

  protected override snap(at: Place): Place | null {
    const field = this.field();
    if (!field || field.rows.length === 0) return null;
    const i = nearestIndex(field.x, at.x);
    const j = nearestIndex(field.y, at.y);
    const growth = this.growth();
    if (growth && (growth.axis === 'x' ? at.x : at.y) > growth.upTo) return null;
    return i < 0 || j < 0 ? null : { x: field.x[i] ?? 0, y: field.y[j] ?? 0 };
  }

  protected override step(from: Place, dx: number, dy: number): Place {
    const field = this.field();
    if (!field) return from;
    const i = clamp(nearestIndex(field.x, from.x) + dx, field.x.length);
    const j = clamp(nearestIndex(field.y, from.y) + dy, field.rows.length);
    return { x: field.x[i] ?? from.x, y: field.y[j] ?? from.y };
  }

  protected override tag(at: Place): string {
    const field = this.field();
    if (!field) return '';
    const value = field.rows[nearestIndex(field.y, at.y)]?.[nearestIndex(field.x, at.x)] ?? NaN;
    if (Number.isNaN(value)) return this.blankIsLand() ? 'land' : 'not defined';
    return formatFieldValue(value, field, this.limits());
  }

  protected override placeName(at: Place): string {
    const axes = this.axes();
    return `${nameOf(axes.x, at.x)}, ${nameOf(axes.y, at.y)}`;
  }

  /** All values as a table: a column for each x, a row for each y. */
  table(notes: string[]): PlotTable {
    const field = this.field();
    if (!field) return { columns: [], rows: 0, row: () => [], notes };
    const head = `${axisTitle(field.yKind)} \\ ${axisTitle(field.xKind)}`;
    return {
      columns: [head, ...Array.from({ length: field.x.length }, (_, i) => String(round9(field.x[i] ?? 0)))],
      rows: field.rows.length,
      row: (j) => [
        round9(field.y[j] ?? NaN),
        ...Array.from({ length: field.x.length }, (_, i) => (field.rows[j]?.[i] ?? NaN) * field.factor),
      ],
      notes,
    };
  }
}

/** A stored value in the unit that is shown, with the decimals that the colour scale can tell apart. */
export function formatFieldValue(
  value: number,
  field: Pick<Field, 'factor' | 'unit' | 'scale'>,
  limits: ColourLimits,
): string {
  const end = Math.max(Math.abs(limits.min), Math.abs(limits.max)) * field.factor;
  const decimals = Math.min(6, Math.max(0, 2 - Math.floor(Math.log10(end || 1))));
  return formatQuantity(value * field.factor, field.unit, { decimals, signed: field.scale === 'diverging' });
}

function ticksOf(kind: AxisKind, range: [number, number], px: number, axis: 'x' | 'y'): AxisTicks {
  if (kind === 'time') return timeTicks(range[0], range[1], px, axis === 'x' ? 48 : 34);
  return degreeTicks(kind, range[0], range[1], px);
}

function nameOf(kind: AxisKind, value: number): string {
  if (kind === 'time') return `${formatModelDay(value)}, ${formatModelYear(value)}`;
  return kind === 'latitude' ? formatLatitude(value, 2) : formatLongitude(value, 2);
}

function axisTitle(kind: AxisKind): string {
  if (kind === 'time') return 'model day';
  return kind === 'latitude' ? 'latitude (° N)' : 'longitude (° E)';
}

/** First and last index in view, one beyond on each side so that the picture reaches the frame. */
function inView(positions: ArrayLike<number>, [low, high]: [number, number]): [number, number] {
  const last = positions.length - 1;
  return [clamp(nearestIndex(positions, low) - 1, last + 1), clamp(nearestIndex(positions, high) + 1, last + 1)];
}

function range(first: number, last: number, step: number): number[] {
  return Array.from({ length: Math.floor((last - first) / step) + 1 }, (_, k) => first + k * step);
}

/** A dozen of many, first and last among them: enough to tell land from water. */
function sample<T>(items: readonly T[]): T[] {
  if (items.length <= 12) return [...items];
  return Array.from({ length: 12 }, (_, k) => items[Math.round((k * (items.length - 1)) / 11)]);
}

function clamp(index: number, length: number): number {
  return Math.min(Math.max(index, 0), Math.max(0, length - 1));
}

function round9(value: number): number {
  return Number(value.toPrecision(9));
}
