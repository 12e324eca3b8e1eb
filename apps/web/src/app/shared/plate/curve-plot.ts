import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { formatModelDay, formatModelYear, formatNumber, formatQuantity } from '../../core/format';
import { type PlotTable } from './csv';
import { niceCeiling } from './limits';
import { type Growth, type OverlayModel, svg } from './overlay';
import { type Palette } from './palette';
import { type PlotBox, nearestIndex, toPxY } from './plot-box';
import { type Place, PlotSurface } from './plot-surface';
import { type PlotTrace } from './plotly';
import { tickNumber, timeTicks, valueTicks } from './ticks';

/** A curve against model time. `series` 1–5 chooses colour and dash together, so that neither is the only sign. */
export interface Curve {
  name: string;
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  series: 1 | 2 | 3 | 4 | 5;
}

const DASHES: Record<Curve['series'], string> = {
  1: 'solid',
  2: '3px,3px',
  3: '7px,3px',
  4: '8px,3px,2px,3px',
  5: '1px,3px',
};
const WIDTHS: Record<Curve['series'], number> = { 1: 2, 2: 1.6, 3: 1.6, 4: 1.6, 5: 1.8 };
const MARGIN = { left: 56, top: 14, bottom: 30 };
const FONT = '400 11px "Inter Variable", Inter, sans-serif';

/** Curves against model time, each with its own dash and named at its end. */
@Component({
  selector: 'app-curve-plot',
  templateUrl: './plot-surface.html',
  styleUrl: './plot-surface.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class CurvePlot extends PlotSurface {
  readonly curves = input.required<Curve[]>();
  readonly unit = input.required<string>();
  /** Model days from begin to end of the axis. */
  readonly xFull = input.required<[number, number]>();
  readonly growth = input<Growth | null>(null);
  readonly wantedHeight = input(230);

  /** Grows with the data to round ends; zero is always in view, and symmetric when both signs occur. */
  readonly yFull = computed<[number, number]>(() => {
    let low = 0;
    let high = 0;
    for (const curve of this.curves())
      for (let k = 0; k < curve.y.length; k++) {
        const value = curve.y[k] ?? NaN;
        if (value < low) low = value;
        if (value > high) high = value;
      }
    if (low === 0 && high === 0) return [-1, 1];
    const end = niceCeiling(Math.max(-low, high) * 1.04);
    const wide = (side: number) => (side < 0.02 * end ? 0.05 * end : side < 0.5 * end ? 0.5 * end : end);
    return [-wide(-low), wide(high)];
  });
  /** Power of ten that the axis is read in: 0 unless its numbers would be too small or too large to write out. */
  private readonly power = computed(() => {
    const end = Math.max(...this.yFull().map(Math.abs));
    return end >= 1e-2 && end < 1e5 ? 0 : 3 * Math.floor(Math.log10(end) / 3);
  });
  private readonly axisUnit = computed(() => {
    if (this.power() === 0) return this.unit();
    // "1 × 10⁻¹²" without its "1 ×".
    const text = formatNumber(10 ** this.power(), { significant: 1 });
    return `${text.slice(text.indexOf('10'))} ${this.unit()}`;
  });
  protected override gridlines = true;

  protected override makeBox(width: number): PlotBox {
    const x = this.link().xZoom() ?? this.xFull();
    const y = this.link().yZoom() ?? this.yFull();
    const longest = Math.max(0, ...this.curves().map((curve) => curve.name.length));
    const w = Math.max(40, width - MARGIN.left - Math.min(0.4 * width, 44 + 6.2 * longest));
    const h = Math.max(40, this.wantedHeight() - MARGIN.top - MARGIN.bottom);
    return {
      width,
      height: this.wantedHeight(),
      left: MARGIN.left,
      top: MARGIN.top,
      w,
      h,
      x,
      y,
      xTicks: timeTicks(x[0], x[1], w, 48),
      yTicks: valueTicks(y[0], y[1], h, (value) => tickNumber(value / 10 ** this.power())),
    };
  }

  protected override readInputs(): void {
    this.curves();
    this.growth();
    this.axisUnit();
  }

  protected override emptyHeight(): number {
    return this.wantedHeight();
  }

  protected override traces(box: PlotBox, palette: Palette): PlotTrace[] {
    return this.curves().map((curve) => {
      const stride = Math.max(1, Math.floor(curve.x.length / (4 * box.w)));
      const thin = (values: ArrayLike<number>) =>
        stride === 1
          ? values
          : Float64Array.from(
              { length: Math.floor((values.length - 1) / stride) + 1 },
              (_, k) => values[k * stride] ?? NaN,
            );
      return {
        type: 'scatter',
        mode: 'lines',
        x: thin(curve.x),
        y: thin(curve.y),
        line: {
          color: palette.colour[`series-${curve.series}`],
          width: WIDTHS[curve.series],
          dash: DASHES[curve.series],
        },
        hoverinfo: 'skip',
        connectgaps: false,
      };
    });
  }

  protected override overlay(box: PlotBox): OverlayModel {
    const none = { land: null, landBands: [], theory: [], seaName: '', sections: [], moorings: [] };
    return { box, growth: this.growth(), ...none };
  }

  protected override decorate(target: SVGElement, box: PlotBox, palette: Palette): void {
    const ends = this.curves()
      .map((curve) => ({ curve, y: toPxY(box, lastFinite(curve.y)) }))
      .filter((end) => Number.isFinite(end.y))
      .map((end) => ({ ...end, y: Math.min(box.top + box.h, Math.max(box.top, end.y)) }))
      .sort((a, b) => a.y - b.y);
    spread(ends, 14);
    const x = box.left + box.w + 12;
    for (const { curve, y } of ends) {
      const stroke = palette.colour[`series-${curve.series}`];
      const dash = DASHES[curve.series];
      const line = { x1: x, x2: x + 18, y1: y, y2: y, stroke, 'stroke-width': WIDTHS[curve.series] };
      target.append(
        svg('line', dash === 'solid' ? line : { ...line, 'stroke-dasharray': dash.replaceAll('px', '') }),
        svg('text', { x: x + 23, y: y + 4, fill: palette.colour.text, style: `font: ${FONT}` }, curve.name),
      );
    }
    const halo = {
      stroke: palette.colour.sheet,
      'stroke-width': 5,
      'paint-order': 'stroke',
      'stroke-linejoin': 'round',
    };
    const place = { x: box.left + 8, y: box.top + 14, fill: palette.colour['text-2'], style: `font: ${FONT}` };
    target.append(svg('text', { ...place, ...halo }, this.axisUnit()));
  }

  protected override snap(at: Place): Place | null {
    const nearest = this.nearestCurve(at);
    if (!nearest) return null;
    return { x: nearest.curve.x[nearest.k] ?? 0, y: nearest.curve.y[nearest.k] ?? 0 };
  }

  protected override step(from: Place, dx: number, dy: number): Place {
    const nearest = this.nearestCurve(from);
    if (!nearest) return from;
    if (dy !== 0) {
      const at = this.curves()
        .map((curve) => curve.y[nearestIndex(curve.x, from.x)] ?? NaN)
        .filter((value) => Number.isFinite(value))
        .sort((a, b) => a - b);
      const next = dy > 0 ? at.find((value) => value > from.y) : at.findLast((value) => value < from.y);
      return { x: from.x, y: next ?? from.y };
    }
    const k = Math.min(Math.max(nearest.k + dx, 0), nearest.curve.x.length - 1);
    return { x: nearest.curve.x[k] ?? from.x, y: nearest.curve.y[k] ?? from.y };
  }

  protected override tag(at: Place): string {
    const nearest = this.nearestCurve(at);
    if (!nearest) return '';
    const value = nearest.curve.y[nearest.k] ?? NaN;
    return `${nearest.curve.name} ${formatQuantity(value, this.unit(), { significant: 4, signed: true })}`;
  }

  protected override placeName(at: Place): string {
    return `${formatModelDay(at.x)}, ${formatModelYear(at.x)}`;
  }

  private nearestCurve(at: Place): { curve: Curve; k: number } | null {
    let best: { curve: Curve; k: number } | null = null;
    let distance = Infinity;
    for (const curve of this.curves()) {
      const k = nearestIndex(curve.x, at.x);
      const away = Math.abs((curve.y[k] ?? NaN) - at.y);
      if (away < distance) [best, distance] = [{ curve, k }, away];
    }
    return best;
  }

  table(notes: string[]): PlotTable {
    const curves = this.curves();
    const first = curves[0];
    return {
      columns: ['model day', ...curves.map((curve) => `${curve.name} (${this.unit()})`)],
      rows: first?.x.length ?? 0,
      row: (k) => [first?.x[k] ?? NaN, ...curves.map((curve) => curve.y[k] ?? NaN)],
      notes,
    };
  }
}

function lastFinite(values: ArrayLike<number>): number {
  for (let k = values.length - 1; k >= 0; k--) {
    const value = values[k] ?? NaN;
    if (Number.isFinite(value)) return value;
  }
  return NaN;
}

/** Moves labels apart until neighbours stand at least `gap` px from each other. */
function spread(ends: { y: number }[], gap: number): void {
  for (let round = 0; round < 12; round++)
    for (let k = 1; k < ends.length; k++) {
      const [above, below] = [ends[k - 1], ends[k]];
      if (!above || !below || below.y - above.y >= gap) continue;
      const middle = (above.y + below.y) / 2;
      above.y = middle - gap / 2;
      below.y = middle + gap / 2;
    }
}
