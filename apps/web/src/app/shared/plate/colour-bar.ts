import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  ElementRef,
  afterNextRender,
  computed,
  effect,
  inject,
  input,
  signal,
  viewChild,
} from '@angular/core';
import { formatQuantity } from '../../core/format';
import { type ColourLimits } from './limits';
import { svg } from './overlay';
import { type Palette, Palettes } from './palette';
import { tickNumber } from './ticks';

const FONT = '400 11px "Inter Variable", Inter, sans-serif';
let counter = 0;

/** What a colour bar says: its stops, ends, unit. */
export interface BarModel {
  scale: 'diverging' | 'sequential';
  limits: ColourLimits;
  factor: number;
  unit: string;
}

/** Draws a bar `width` px wide at (x, y): the stops, ticks at ends, half and middle, the unit at the right. */
export function drawColourBar(
  target: SVGElement,
  model: BarModel,
  palette: Palette,
  x: number,
  y: number,
  width: number,
  id: string,
): void {
  const stops = model.scale === 'diverging' ? palette.diverging : palette.sequential;
  const gradient = svg(
    'linearGradient',
    { id },
    ...stops.map((colour, k) => svg('stop', { offset: k / (stops.length - 1), 'stop-color': colour })),
  );
  target.append(
    svg('defs', {}, gradient),
    svg('rect', { x, y, width, height: 8, fill: `url(#${id})` }),
    svg('rect', { x: x - 0.5, y: y - 0.5, width: width + 1, height: 9, fill: 'none', stroke: palette.colour.text }),
  );
  for (const share of [0, 0.25, 0.5, 0.75, 1]) {
    const value = (model.limits.min + share * (model.limits.max - model.limits.min)) * model.factor;
    const at = x + share * width;
    target.append(
      svg('line', { x1: at, x2: at, y1: y + 8, y2: y + 12, stroke: palette.colour['text-2'] }),
      svg(
        'text',
        { x: at, y: y + 23, 'text-anchor': 'middle', fill: palette.colour['text-2'], style: `font: ${FONT}` },
        tickNumber(value, model.scale === 'diverging'),
      ),
    );
  }
  target.append(
    svg('text', { x: x + width + 16, y: y + 8, fill: palette.colour['text-2'], style: `font: ${FONT}` }, model.unit),
  );
}

/** The colour scale of a plot, under it. */
@Component({
  selector: 'app-colour-bar',
  template: `<svg #bar role="img" [attr.aria-label]="label()" [attr.width]="shown() + 90" height="26"></svg>`,
  styles: `
    :host {
      display: block;
      min-width: 0;
      overflow: hidden;
    }
    svg {
      display: block;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ColourBar {
  private readonly palettes = inject(Palettes);
  private readonly bar = viewChild.required<ElementRef<SVGSVGElement>>('bar');
  private readonly id = `bar${counter++}`;
  readonly model = input.required<BarModel>();
  /** The most it may take, px; where there is less room it is narrower. */
  readonly width = input(220);
  private readonly room = signal(Infinity);
  protected readonly shown = computed(() => Math.max(60, Math.min(this.width(), this.room() - 90)));

  protected readonly label = computed(() => {
    const { limits, factor, unit } = this.model();
    const end = (value: number) => formatQuantity(value * factor, unit, { significant: 3, signed: true });
    return `Colour scale from ${end(limits.min)} to ${end(limits.max)}`;
  });

  constructor() {
    effect(() => {
      const target = this.bar().nativeElement;
      target.replaceChildren();
      drawColourBar(target, this.model(), this.palettes.of(this.palettes.theme()), 22, 1, this.shown(), this.id);
    });
    const element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
    const destroy = inject(DestroyRef);
    afterNextRender(() => {
      const observer = new ResizeObserver(() => this.room.set(element.clientWidth));
      observer.observe(element);
      destroy.onDestroy(() => observer.disconnect());
    });
  }
}
