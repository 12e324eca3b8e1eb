import {
  DestroyRef,
  Directive,
  type ElementRef,
  afterNextRender,
  computed,
  effect,
  inject,
  input,
  output,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { oncePerFrame } from '../../core/frame-scheduler';
import { type OverlayModel, drawCursor, drawOverlay, svg } from './overlay';
import { type Palette, Palettes } from './palette';
import { PlotLink } from './plot-link';
import { type PlotBox, toDataX, toDataY, toPxX, toPxY } from './plot-box';
import { PLOT_CONFIG, type PlotLayout, type PlotTrace, PlotlyLoader, type PlotlyStatic } from './plotly';

export interface Place {
  x: number;
  y: number;
}
export type Emit = (x0: number, y0: number, x1: number, y1: number) => void;

const DRAG_PX = 6;
let counter = 0;

/**
 * What every plot does: it draws through the plotting library, lays the graduated frame over it, follows the cursor of
 * its link, zooms, and is one stop of the keyboard (Enter goes in; arrows, Shift, + − 0, Space, Escape).
 */
@Directive()
export abstract class PlotSurface {
  private readonly loader = inject(PlotlyLoader);
  protected readonly palettes = inject(Palettes);

  /** Says what the plot shows: its text alternative. */
  readonly label = input.required<string>();
  readonly link = input(new PlotLink());
  /** What is being read, while it is: "Reading, 4 of 12 pieces". */
  readonly busy = input('');
  readonly playPressed = output();

  private readonly frameRef = viewChild.required<ElementRef<HTMLElement>>('frame');
  private readonly target = viewChild.required<ElementRef<HTMLElement>>('target');
  private readonly lines = viewChild.required<ElementRef<HTMLCanvasElement>>('lines');
  private readonly over = viewChild.required<ElementRef<SVGSVGElement>>('over');
  private readonly hairs = viewChild.required<ElementRef<SVGSVGElement>>('hairs');

  protected readonly width = signal(0);
  protected readonly seen = signal(false);
  protected readonly box = computed(() => (this.width() > 0 ? this.makeBox(this.width()) : null));
  protected readonly height = computed(() => this.box()?.height ?? this.emptyHeight());
  protected readonly inside = signal(false);
  protected readonly problem = signal('');
  protected readonly spoken = signal('');
  private readonly id = `plot${counter++}`;
  private plotly: PlotlyStatic | null = null;
  private drawn = false;
  private dragFrom: Place | null = null;
  private readonly drawing = oncePerFrame(() => this.draw());

  protected abstract makeBox(width: number): PlotBox;
  protected abstract emptyHeight(): number;
  protected abstract traces(box: PlotBox, palette: Palette): PlotTrace[];
  protected abstract overlay(box: PlotBox): OverlayModel;
  /** Reads every signal that `traces` and `overlay` depend on, and computes nothing. */
  protected abstract readInputs(): void;
  /** The nearest place that holds a value, or null. */
  protected abstract snap(at: Place): Place | null;
  protected abstract step(from: Place, dx: number, dy: number): Place;
  /** Value with its unit at a place; empty when there is none. */
  protected abstract tag(at: Place): string;
  /** The place in words. */
  protected abstract placeName(at: Place): string;
  abstract readonly xFull: () => [number, number];
  abstract readonly yFull: () => [number, number];
  protected gridlines = false;
  protected equalDegrees = false;
  /** Isolines, thin then heavy; none by default. */
  protected isolines(_heavy: boolean, _emit: Emit): void {
    // Curves have none.
  }
  /** Whatever else belongs over the plot. */
  protected decorate(_target: SVGElement, _box: PlotBox, _palette: Palette): void {
    // Fields need nothing more.
  }

  constructor() {
    const destroy = inject(DestroyRef);
    afterNextRender(() => {
      const element = this.frameRef().nativeElement;
      const observer = new ResizeObserver(() => this.width.set(Math.round(element.clientWidth)));
      observer.observe(element);
      const viewed = new IntersectionObserver((entries) => this.seen.set(entries.at(-1)?.isIntersecting ?? false), {
        rootMargin: '200px',
      });
      viewed.observe(element);
      destroy.onDestroy(() => {
        observer.disconnect();
        viewed.disconnect();
      });
      this.width.set(Math.round(element.clientWidth));
      void this.load();
    });
    effect(() => {
      const box = this.box();
      this.palettes.theme();
      if (!box) return;
      this.readInputs();
      // A plate that nobody sees is drawn when it comes into view.
      if (this.seen()) untracked(() => this.drawing.ask());
    });
    effect(() => {
      const at = this.link().cursor();
      const box = this.box();
      if (box) this.drawHairs(box, at);
    });
    destroy.onDestroy(() => {
      this.drawing.cancel();
      if (this.plotly && this.drawn) this.plotly.purge(this.target().nativeElement);
    });
  }

  protected loadAgain(): void {
    void this.load();
  }

  private async load(): Promise<void> {
    this.problem.set('');
    try {
      this.plotly = await this.loader.load();
      if (this.seen()) this.drawing.ask();
    } catch (error) {
      this.problem.set(error instanceof Error ? error.message : 'The plotting library could not be fetched.');
    }
  }

  private draw(): void {
    const box = untracked(this.box);
    const plotly = this.plotly;
    if (!box) return;
    untracked(() => {
      const palette = this.palettes.of(this.palettes.theme());
      // The frame stands at once, while the plotting library is still on its way.
      if (plotly) {
        const traces = this.traces(box, palette);
        void plotly.react(this.target().nativeElement, traces, this.layout(box, palette), PLOT_CONFIG);
        this.drawn = true;
      }
      this.drawIsolines(box, palette);
      const over = this.over().nativeElement;
      drawOverlay(over, this.overlay(box), palette, this.id);
      this.decorate(over, box, palette);
      this.drawHairs(box, this.link().cursor());
    });
  }

  private drawIsolines(box: PlotBox, palette: Palette): void {
    const canvas = this.lines().nativeElement;
    const ratio = window.devicePixelRatio || 1;
    const [width, height] = [Math.round(box.width * ratio), Math.round(box.height * ratio)];
    if (canvas.width !== width || canvas.height !== height) [canvas.width, canvas.height] = [width, height];
    const context = canvas.getContext('2d');
    if (!context) return;
    context.setTransform(ratio, 0, 0, ratio, 0, 0);
    context.clearRect(0, 0, box.width, box.height);
    context.save();
    context.beginPath();
    context.rect(box.left, box.top, box.w, box.h);
    context.clip();
    context.strokeStyle = palette.colour.text;
    for (const heavy of [false, true]) {
      context.lineWidth = heavy ? 0.9 : 0.45;
      context.beginPath();
      this.isolines(heavy, (x0, y0, x1, y1) => {
        context.moveTo(toPxX(box, x0), toPxY(box, y0));
        context.lineTo(toPxX(box, x1), toPxY(box, y1));
      });
      context.stroke();
    }
    context.restore();
  }

  private drawHairs(box: PlotBox, at: Place | null): void {
    const snapped = at ? this.snap(at) : null;
    const palette = this.palettes.of(this.palettes.theme());
    drawCursor(this.hairs().nativeElement, box, snapped, snapped ? this.tag(snapped) : '', palette);
  }

  private layout(box: PlotBox, palette: Palette): PlotLayout {
    const axis = {
      fixedrange: true,
      zeroline: false,
      showgrid: false,
      showline: false,
      ticks: 'outside',
      ticklen: 8,
      tickcolor: 'rgba(0,0,0,0)',
      tickangle: 0,
      automargin: false,
    };
    return {
      width: box.width,
      height: box.height,
      margin: { l: box.left, t: box.top, r: box.width - box.left - box.w, b: box.height - box.top - box.h },
      paper_bgcolor: 'rgba(0,0,0,0)',
      plot_bgcolor: palette.colour.sheet,
      showlegend: false,
      font: { family: '"Inter Variable", Inter, sans-serif', size: 11, color: palette.colour['text-2'] },
      xaxis: { ...axis, range: [...box.x], tickvals: box.xTicks.values, ticktext: box.xTicks.labels },
      yaxis: {
        ...axis,
        range: [...box.y],
        tickvals: box.yTicks.values,
        ticktext: box.yTicks.labels,
        showgrid: this.gridlines,
        gridcolor: palette.colour.hair,
        zeroline: this.gridlines,
        zerolinecolor: palette.colour.outline,
        zerolinewidth: 1,
      },
    };
  }

  /** The plot as one SVG element in the paper theme, by default as wide as on screen but not below 640 px. For saving. */
  async figure(widthPx = Math.max(640, this.width())): Promise<SVGSVGElement> {
    const plotly = await this.loader.load();
    const palette = this.palettes.of('paper');
    const box = this.makeBox(widthPx);
    const { width, height } = box;
    const figure = { data: this.traces(box, palette), layout: this.layout(box, palette), config: PLOT_CONFIG };
    const url = await plotly.toImage(figure, { format: 'svg', width, height });
    const text = decodeURIComponent(url.slice(url.indexOf(',') + 1));
    const root = new DOMParser().parseFromString(text, 'image/svg+xml').documentElement as unknown as SVGSVGElement;
    const clip = `${this.id}-saved`;
    const rect = svg('rect', { x: box.left, y: box.top, width: box.w, height: box.h });
    root.append(svg('clipPath', { id: clip }, rect));
    for (const heavy of [false, true]) {
      let d = '';
      this.isolines(heavy, (x0, y0, x1, y1) => {
        d += `M${toPxX(box, x0).toFixed(1)} ${toPxY(box, y0).toFixed(1)}L${toPxX(box, x1).toFixed(1)} ${toPxY(box, y1).toFixed(1)}`;
      });
      const stroke = { fill: 'none', stroke: palette.colour.text, 'stroke-width': heavy ? 0.9 : 0.45 };
      if (d) root.append(svg('path', { d, ...stroke, 'clip-path': `url(#${clip})` }));
    }
    const over = svg('g');
    drawOverlay(over, this.overlay(box), palette, `${this.id}-paper`);
    this.decorate(over, box, palette);
    root.append(over);
    return root;
  }

  // ---- cursor and zoom ----

  private placeOf(event: PointerEvent | WheelEvent): Place | null {
    const box = this.box();
    if (!box) return null;
    const rect = this.frameRef().nativeElement.getBoundingClientRect();
    const px = event.clientX - rect.left;
    const py = event.clientY - rect.top;
    if (px < box.left || px > box.left + box.w || py < box.top || py > box.top + box.h) return null;
    return { x: toDataX(box, px), y: toDataY(box, py) };
  }

  protected movePointer(event: PointerEvent): void {
    const at = this.placeOf(event);
    if (this.dragFrom && at) this.drawRubber(this.dragFrom, at);
    else this.link().cursor.set(at);
  }

  protected startDrag(event: PointerEvent): void {
    if (event.pointerType === 'mouse' && event.button === 0) this.dragFrom = this.placeOf(event);
    else this.link().cursor.set(this.placeOf(event));
  }

  protected endDrag(event: PointerEvent): void {
    const [from, to, box] = [this.dragFrom, this.placeOf(event), this.box()];
    this.dragFrom = null;
    if (!from || !to || !box) return;
    const wide = Math.abs(toPxX(box, to.x) - toPxX(box, from.x));
    const tall = Math.abs(toPxY(box, to.y) - toPxY(box, from.y));
    if (wide < DRAG_PX || tall < DRAG_PX) return;
    let x: [number, number] = [Math.min(from.x, to.x), Math.max(from.x, to.x)];
    let y: [number, number] = [Math.min(from.y, to.y), Math.max(from.y, to.y)];
    if (this.equalDegrees) {
      // The frame keeps its shape, so the shorter side of the rectangle is widened about its middle.
      const ratio = (box.x[1] - box.x[0]) / (box.y[1] - box.y[0]);
      x = widened(x, (y[1] - y[0]) * ratio, this.xFull());
      y = widened(y, (x[1] - x[0]) / ratio, this.yFull());
    }
    this.link().xZoom.set(x);
    this.link().yZoom.set(y);
  }

  protected cancelDrag(): void {
    this.dragFrom = null;
    this.link().cursor.set(null);
  }

  protected leavePointer(event: PointerEvent): void {
    if (!this.inside() && event.pointerType === 'mouse') this.cancelDrag();
  }

  protected turnWheel(event: WheelEvent): void {
    // The page scrolls unless the plot was entered or Control is held.
    if (!event.ctrlKey && !this.inside()) return;
    event.preventDefault();
    const at = this.placeOf(event);
    if (at) this.link().zoom(event.deltaY > 0 ? 1.25 : 0.8, at, this.xFull(), this.yFull());
  }

  protected pressKey(event: KeyboardEvent): void {
    const box = this.box();
    if (!box || event.altKey || event.metaKey || event.ctrlKey) return;
    if (event.key === ' ') {
      event.preventDefault();
      this.playPressed.emit();
      return;
    }
    if (!this.inside()) {
      if (event.key !== 'Enter') return;
      event.preventDefault();
      this.inside.set(true);
      this.put(this.link().cursor() ?? { x: (box.x[0] + box.x[1]) / 2, y: (box.y[0] + box.y[1]) / 2 });
      return;
    }
    const at = this.link().cursor() ?? { x: (box.x[0] + box.x[1]) / 2, y: (box.y[0] + box.y[1]) / 2 };
    const far = event.shiftKey ? 10 : 1;
    const moves: Record<string, [number, number]> = {
      ArrowLeft: [-far, 0],
      ArrowRight: [far, 0],
      ArrowUp: [0, far],
      ArrowDown: [0, -far],
    };
    const move = moves[event.key];
    if (move) this.put(this.step(at, ...move));
    else if (event.key === '+' || event.key === '=') this.link().zoom(0.8, at, this.xFull(), this.yFull());
    else if (event.key === '-' || event.key === '−') this.link().zoom(1.25, at, this.xFull(), this.yFull());
    else if (event.key === '0') this.link().whole();
    else if (event.key === 'Escape') this.leave();
    else return;
    event.preventDefault();
  }

  protected leave(): void {
    if (!this.inside()) return;
    this.inside.set(false);
    this.link().cursor.set(null);
    this.spoken.set('');
  }

  private put(at: Place): void {
    const snapped = this.snap(at) ?? at;
    this.link().cursor.set(snapped);
    this.spoken.set(`${this.placeName(snapped)}: ${this.tag(snapped) || 'no value'}`);
  }

  private drawRubber(from: Place, to: Place): void {
    const box = this.box();
    if (!box) return;
    const [x0, x1] = [toPxX(box, from.x), toPxX(box, to.x)];
    const [y0, y1] = [toPxY(box, from.y), toPxY(box, to.y)];
    const rect = { x: Math.min(x0, x1), y: Math.min(y0, y1), width: Math.abs(x1 - x0), height: Math.abs(y1 - y0) };
    const stroke = this.palettes.of(this.palettes.theme()).colour.text;
    this.hairs().nativeElement.replaceChildren(
      svg('rect', { ...rect, fill: 'none', stroke, 'stroke-dasharray': '4 3', 'stroke-width': 1 }),
    );
  }
}

function widened(range: [number, number], span: number, full: [number, number]): [number, number] {
  const wanted = Math.min(span, full[1] - full[0]);
  if (range[1] - range[0] >= wanted) return range;
  const middle = (range[0] + range[1]) / 2;
  const low = Math.min(Math.max(middle - wanted / 2, full[0]), full[1] - wanted);
  return [low, low + wanted];
}
