import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { VerificationPlate } from '@halfdeep/contracts';
import { formatNumber } from '../core/format';
import { drawPlate, PLOT, type Tick } from './verification-plot';

/** One small figure of the verification report: what was found, what was expected, the slope of the expected order. */
@Component({
  selector: 'app-verification-figure',
  template: `
    <figure>
      <svg [attr.viewBox]="'0 0 ' + plot.width + ' ' + plot.height" role="img" [attr.aria-label]="alternative()">
        <rect class="frame" [attr.x]="plot.left" [attr.y]="plot.top" [attr.width]="inner.w" [attr.height]="inner.h" />
        @for (tick of drawn().xTicks; track tick.value) {
          <line
            class="tick"
            [attr.x1]="tick.at"
            [attr.x2]="tick.at"
            [attr.y1]="inner.bottom"
            [attr.y2]="inner.bottom + 4"
          />
          <text [attr.x]="tick.at" [attr.y]="inner.bottom + 16" text-anchor="middle">{{ words(tick) }}</text>
        }
        @for (tick of drawn().yTicks; track tick.value) {
          <line class="tick" [attr.x1]="plot.left - 4" [attr.x2]="plot.left" [attr.y1]="tick.at" [attr.y2]="tick.at" />
          <text [attr.x]="plot.left - 7" [attr.y]="tick.at + 3.5" text-anchor="end">{{ words(tick) }}</text>
        }
        <text class="axis" [attr.x]="plot.left + inner.w / 2" [attr.y]="plot.height - 4" text-anchor="middle">
          {{ plate().x.label }}
        </text>
        @for (series of drawn().series; track $index) {
          <path [attr.class]="'line ' + series.role" [attr.d]="series.path" />
          @for (mark of series.marks; track $index) {
            @if (series.role === 'found') {
              <circle class="mark" [attr.cx]="mark.x" [attr.cy]="mark.y" r="3" />
            } @else {
              <rect class="mark expected" [attr.x]="mark.x - 3" [attr.y]="mark.y - 3" width="6" height="6" />
            }
          }
        }
      </svg>
      <figcaption>
        <b>{{ plate().y.label }}.</b> {{ plate().caption }}
        <span class="key">
          @for (series of plate().series; track $index) {
            <span [class]="series.role"><i aria-hidden="true"></i>{{ series.name }}</span>
          }
        </span>
      </figcaption>
    </figure>
  `,
  styles: `
    figure {
      margin: 0;
      padding: 10px 12px 12px;
      background: var(--hd-sheet);
    }
    svg {
      display: block;
      width: 100%;
      max-width: 420px;
    }
    text {
      font: 10.5px var(--hd-font);
      fill: var(--hd-text-2);
    }
    .frame {
      fill: none;
      stroke: var(--hd-outline);
    }
    .tick {
      stroke: var(--hd-outline);
    }
    .line {
      fill: none;
      stroke: var(--hd-series-1);
      stroke-width: 1.5;
    }
    .line.expected {
      stroke: var(--hd-series-2);
      stroke-dasharray: 6 3;
    }
    .line.slope {
      stroke: var(--hd-series-3);
      stroke-dasharray: 2 3;
    }
    .mark {
      fill: var(--hd-series-1);
    }
    .mark.expected {
      fill: var(--hd-sheet);
      stroke: var(--hd-series-2);
    }
    figcaption {
      margin-top: 6px;
      font: var(--hd-note);
      color: var(--hd-text-2);
      text-wrap: pretty;
    }
    b {
      font-weight: 500;
      color: var(--hd-text);
    }
    .key {
      display: flex;
      flex-wrap: wrap;
      gap: 2px 14px;
      margin-top: 4px;
    }
    i {
      display: inline-block;
      width: 20px;
      margin-right: 6px;
      border-top: 2px solid var(--hd-series-1);
      vertical-align: 3px;
    }
    .expected i {
      border-top: 2px dashed var(--hd-series-2);
    }
    .slope i {
      border-top: 2px dotted var(--hd-series-3);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class VerificationFigure {
  readonly plate = input.required<VerificationPlate>();
  protected readonly plot = PLOT;
  protected readonly inner = {
    w: PLOT.width - PLOT.left - PLOT.right,
    h: PLOT.height - PLOT.top - PLOT.bottom,
    bottom: PLOT.height - PLOT.bottom,
  };
  protected readonly drawn = computed(() => drawPlate(this.plate()));
  protected readonly alternative = computed(() => {
    const { caption, x, y, series } = this.plate();
    const points = series
      .filter(({ role, points: all }) => role === 'found' && all.length <= 12)
      .flatMap(({ points: all }) => all.map(([a, b]) => `${formatNumber(a, { significant: 3 })}: ${formatNumber(b, { significant: 3 })}`)); // prettier-ignore
    return [`${y.label} against ${x.label}. ${caption}`, ...(points.length ? [points.join('; ')] : [])].join(' ');
  });

  protected words({ value }: Tick): string {
    return Math.abs(value) < 1e-3 || Math.abs(value) >= 1e5
      ? formatNumber(value, { significant: 1 })
      : formatNumber(value);
  }
}
