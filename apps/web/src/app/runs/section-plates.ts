import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { formatLatitude, formatLongitude, formatQuantity } from '../core/format';
import { type GrowingSlice } from '../core/growing-rows';
import { type PlotLink } from '../shared/plate/plot-link';
import { columnIndex } from './energy-closure';
import { sameSetup } from './same-setup';
import { type CurveSpec, SeriesPlate } from './series-plate';

/** Curves that still can be told apart on one plate. */
const CURVES_A_PLATE = 4;

interface SectionPlate {
  name: string;
  unit: string;
  caption: string;
  specs: CurveSpec[];
}

/** Volume and heat transport through the sections of a run: the total through each. */
@Component({
  selector: 'app-section-plates',
  imports: [SeriesPlate],
  template: `
    @for (plate of plates(); track plate.name) {
      <app-series-plate
        [run]="run()"
        [slice]="slice()"
        [pen]="pen()"
        [name]="plate.name"
        remark="total through each section"
        [caption]="plate.caption"
        [unit]="plate.unit"
        [specs]="plate.specs"
        [link]="links()($index)"
        emptyHeading="From the first interval"
        emptyAbout="Volume and heat through each section, means over the interval."
      />
    }
  `,
  styles: `
    :host {
      display: contents;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SectionPlates {
  readonly run = input.required<Run>();
  readonly slice = input.required<GrowingSlice>();
  readonly pen = input.required<'live' | 'lost' | 'none'>();
  /** Link of the n-th plate: all share their time. */
  readonly links = input.required<(plate: number) => PlotLink>();

  private readonly setup = computed(() => this.run().setup, { equal: sameSetup });
  protected readonly plates = computed<SectionPlate[]>(() => {
    const slice = this.slice();
    slice.head();
    const { sections, sectionIntervalDays } = this.setup().output;
    const every = formatQuantity(sectionIntervalDays, 'd');
    const numbered = sections.map((section, k) => ({ ...section, k }));
    return (['latitude', 'longitude'] as const).flatMap((along) => {
      const those = numbered.filter((section) => section.along === along);
      const towards = along === 'latitude' ? 'Northward' : 'Eastward';
      return chunks(those, CURVES_A_PLATE).flatMap((group, part, all) => {
        const more = all.length > 1 ? `, ${part + 1} of ${all.length}` : '';
        const specs = (quantity: string) =>
          group.map((section, n): CurveSpec => ({
            name: section.name,
            columns: [columnIndex(slice, `${section.k}.${quantity}`)],
            factor: 1,
            series: (n + 1) as CurveSpec['series'],
          }));
        return [
          {
            name: `${towards} volume transport${more}`,
            unit: 'Sv',
            caption: `${towards} positive, means over ${every}, from the fluxes that move the layer: ${group.map(nameOf).join(', ')}.`,
            specs: specs('transport'),
          },
          {
            name: `${towards} heat transport${more}`,
            unit: 'PW',
            caption: `${towards} positive, means over ${every}: volume transport returned at depth, ${formatQuantity(this.setup().layer.temperatureStepK, 'K')} colder.`,
            specs: specs('heat'),
          },
        ];
      });
    });
  });
}

function nameOf(section: { name: string; along: 'latitude' | 'longitude'; atDeg: number }): string {
  const place = section.along === 'latitude' ? formatLatitude(section.atDeg) : formatLongitude(section.atDeg);
  return section.name === place ? place : `${section.name} at ${place}`;
}

export function chunks<T>(items: readonly T[], size: number): T[][] {
  return Array.from({ length: Math.ceil(items.length / size) }, (_, k) => items.slice(k * size, (k + 1) * size));
}
