import { DOCUMENT } from '@angular/common';
import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal, untracked } from '@angular/core';
import { windDiagram, type Setup } from '@halfdeep/ocean';
import { formatLatitude, formatLongitude, formatNumber } from '../../core/format';
import { tickStep, ticks } from '../basin-map/map-frame';
import { elementWidth } from '../element-width';
import { colourTable, Palettes } from '../plate/palette';
import { QuantityField } from '../quantity-field/quantity-field';
import { arrowPath, isolinePath, paintField, panelOf, poweredPanelOf, stressArrows } from './wind-panels';

const MONTH_STARTS = [0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334, 365];
const SECONDS_PER_DAY = 86_400;
const [LEFT, RIGHT, TOP, GAP, BOTTOM] = [46, 78, 10, 16, 24];
let diagrams = 0;

/** The wind as latitude against season: eastward stress with arrows, beneath it the curl and the Ekman pumping. */
@Component({
  selector: 'app-wind-diagram',
  imports: [QuantityField],
  templateUrl: './wind-diagram.html',
  styleUrl: './wind-diagram.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class WindDiagramPlate {
  private readonly document = inject(DOCUMENT);
  private readonly palettes = inject(Palettes);
  readonly setup = input.required<Setup>();
  private readonly width = elementWidth(480);
  protected readonly id = `wind-diagram-${++diagrams}`;

  /** What the diagram depends on, by content: other fields of the form leave it alone. */
  private readonly content = computed(() => {
    const { basin, constants, layer, wind, numerics } = this.setup();
    return JSON.stringify([basin, constants, layer, wind, numerics]);
  });
  /** Along a meridian that can be chosen where the wind depends on longitude. */
  protected readonly varies = computed(() =>
    this.setup().wind.components.some(({ pattern }) => pattern.kind === 'gaussianPatch'),
  );
  protected readonly longitude = linkedSignal<string, number | null>({
    source: () => `${this.setup().basin.westDeg} ${this.setup().basin.eastDeg}`,
    computation: () => (this.setup().basin.westDeg + this.setup().basin.eastDeg) / 2,
  });
  protected readonly diagram = computed(() => {
    this.content();
    const longitude = this.longitude();
    return windDiagram(
      untracked(this.setup),
      longitude !== null && Number.isFinite(longitude) ? { longitudeDeg: longitude } : {},
    );
  });

  protected readonly plot = computed(() => {
    const width = Math.max(160, this.width() - 32 - LEFT - RIGHT);
    return { x: LEFT, width, heights: [Math.min(200, width * 0.75), 92, 92] };
  });
  protected readonly size = computed(() => {
    const { width, heights } = this.plot();
    return { width: LEFT + width + RIGHT, height: TOP + heights.reduce((sum, h) => sum + h + GAP, 0) - GAP + BOTTOM };
  });
  /** Stops of the diverging scale of the theme on screen. */
  private readonly stops = computed(() => this.palettes.of(this.palettes.theme()).diverging);
  protected readonly gradient = computed(() =>
    this.stops().map((colour, k, all) => ({ colour, offset: k / (all.length - 1) })),
  );

  protected readonly panels = computed(() => {
    const diagram = this.diagram();
    const [rows, days] = diagram.shape;
    const { width, heights } = this.plot();
    const table = colourTable(this.stops());
    let top = TOP;
    return [
      panelOf('eastward stress', 'N/m²', diagram.taux),
      poweredPanelOf('curl', 'N/m³', diagram.curl),
      panelOf('Ekman pumping', 'm/d', diagram.pumping, SECONDS_PER_DAY),
    ].map((panel, k) => {
      const height = heights[k] ?? 92;
      const y = top;
      top += height + GAP;
      const pixels = paintField(panel, rows, days, table);
      const levels = k === 0 ? [-0.75, -0.5, -0.25, 0.25, 0.5, 0.75] : [];
      const line = (level: number) =>
        isolinePath(panel, { day: diagram.day, rows }, level * panel.limit, width, height);
      return {
        ...panel,
        y,
        height,
        image: this.picture(pixels, days, rows),
        isolines: levels.map(line).join(''),
        zero: line(0),
        arrows: k === 0 ? stressArrows(diagram, rows, days, width, height).map(arrowPath).join('') : '',
        ticks: this.latitudeTicks(height),
      };
    });
  });
  protected readonly months = computed(() => {
    const { width } = this.plot();
    const x = (day: number) => (day / 365) * width;
    return {
      stretches: MONTH_STARTS.slice(0, -1).flatMap((start, k) =>
        k % 2 === 0 ? [{ at: x(start), length: x(MONTH_STARTS[k + 1] ?? 365) - x(start) }] : [],
      ),
      labels: [
        { at: x(0), text: 'Jan' },
        { at: x(90), text: 'Apr' },
        { at: x(181), text: 'Jul' },
        { at: x(273), text: 'Oct' },
      ],
    };
  });
  /** Where pumping is not defined, px from the top of its panel. */
  protected readonly blank = computed(() => {
    const within = this.diagram().blankWithinDeg;
    const { geometry, southDeg, northDeg } = this.setup().basin;
    if (
      within === null ||
      (geometry !== 'equatorial' && geometry !== 'spherical') ||
      southDeg > within ||
      northDeg < -within
    )
      return null;
    const height = this.plot().heights[2] ?? 92;
    const y = (latitude: number) => height * Math.min(1, Math.max(0, (northDeg - latitude) / (northDeg - southDeg)));
    return { y: y(within), height: y(-within) - y(within), text: `${formatNumber(within, { decimals: 1 })}°` };
  });
  protected readonly calm = computed(() => this.panels().every(({ values }) => values.every((value) => !value)));
  protected readonly caption = computed(() => {
    const blank = this.blank();
    const where = this.varies() ? ` Along ${formatLongitude(this.diagram().longitudeDeg, 1)}.` : '';
    const near = blank ? ` Ekman pumping is not defined within ${blank.text} of the equator.` : '';
    return `Positive: stress eastward, curl ∂τy/∂x − ∂τx/∂y, pumping upward. Arrows: stress, after switch-on.${where}${near}`;
  });
  protected readonly spoken = computed(() => {
    if (this.calm()) return 'Diagram of the wind by latitude and season: no wind blows.';
    const parts = this.panels().map(({ title, limitText, unit }) => `${title} within ±${limitText} ${unit}`);
    return `Diagram of the wind by latitude and season: ${parts.join('; ')}.`;
  });

  private latitudeTicks(height: number) {
    const { southDeg, northDeg } = this.setup().basin;
    const span = northDeg - southDeg;
    const step = tickStep(height / span, 24);
    const y = (latitude: number) => ((northDeg - latitude) / span) * height;
    const edges = [southDeg, ...ticks(southDeg, northDeg, step / 2), northDeg];
    return {
      labels: ticks(southDeg, northDeg, step).map((latitude) => ({ at: y(latitude), text: formatLatitude(latitude) })),
      stretches: edges.slice(1).flatMap((to, k) => {
        const from = edges[k] ?? southDeg;
        const inked = Math.abs(Math.floor((from + to) / 2 / (step / 2))) % 2 === 0;
        return inked && to > from ? [{ at: y(to), length: y(from) - y(to) }] : [];
      }),
    };
  }

  /** The pixels as an address that an SVG image takes; '' where the browser draws nothing. */
  private picture(pixels: Uint8ClampedArray<ArrayBuffer>, width: number, height: number): string {
    const canvas = this.document.createElement('canvas');
    canvas.width = width;
    canvas.height = height;
    const context = canvas.getContext('2d');
    if (!context) return '';
    context.putImageData(new ImageData(pixels, width, height), 0, 0);
    return canvas.toDataURL();
  }
}
