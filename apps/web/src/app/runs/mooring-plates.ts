import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { formatLatitude, formatLongitude, formatQuantity } from '../core/format';
import { type GrowingSlice } from '../core/growing-rows';
import { type PlotLink } from '../shared/plate/plot-link';
import { columnIndex } from './energy-closure';
import { chunks } from './section-plates';
import { sameSetup } from './same-setup';
import { type CurveSpec, SeriesPlate } from './series-plate';

const CURVES_A_PLATE = 4;
const QUANTITIES = [
  { id: 'eta', label: 'thickness anomaly', unit: 'm' },
  { id: 'uCentre', label: 'eastward velocity', unit: 'm/s' },
  { id: 'vCentre', label: 'northward velocity', unit: 'm/s' },
] as const;
type Quantity = (typeof QUANTITIES)[number]['id'];

/** Series at the moorings of a run, four on a plate; many moorings are paged. */
@Component({
  selector: 'app-mooring-plates',
  imports: [SeriesPlate],
  template: `
    @for (plate of plates(); track plate.name) {
      <app-series-plate
        [run]="run()"
        [slice]="slice()"
        [pen]="pen()"
        [name]="plate.name"
        [caption]="plate.caption"
        [unit]="plate.unit"
        [specs]="plate.specs"
        [link]="links()($index)"
        emptyHeading="From the first record"
        emptyAbout="Thickness anomaly and currents at each mooring, instants."
      >
        @if (plate.choosable) {
          @if (groups() > 1) {
            <label class="choice">
              moorings
              <select (change)="chooseGroup($event)">
                @for (name of groupNames(); track $index) {
                  <option [value]="$index" [selected]="$index === group()">{{ name }}</option>
                }
              </select>
            </label>
          }
          <label class="choice">
            <span class="visually-hidden">Quantity</span>
            <select (change)="chooseQuantity($event)">
              @for (choice of quantities; track choice.id) {
                <option [value]="choice.id" [selected]="choice.id === quantity()">{{ choice.label }}</option>
              }
            </select>
          </label>
        }
      </app-series-plate>
    }
  `,
  styles: `
    :host {
      display: contents;
    }
  `,
  styleUrl: '../shared/plate/plate-controls.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MooringPlates {
  readonly run = input.required<Run>();
  readonly slice = input.required<GrowingSlice>();
  readonly pen = input.required<'live' | 'lost' | 'none'>();
  readonly links = input.required<(plate: number) => PlotLink>();
  protected readonly quantities = QUANTITIES;
  protected readonly quantity = signal<Quantity>('uCentre');
  protected readonly group = signal(0);

  private readonly setup = computed(() => this.run().setup, { equal: sameSetup });
  private readonly parts = computed(() =>
    chunks(
      this.setup().output.moorings.map((mooring, k) => ({ ...mooring, k })),
      CURVES_A_PLATE,
    ),
  );
  protected readonly groups = computed(() => this.parts().length);
  protected readonly groupNames = computed(() =>
    this.parts().map((part) => `${part[0]?.name ?? ''} to ${part.at(-1)?.name ?? ''}`),
  );

  protected readonly plates = computed(() => {
    const slice = this.slice();
    slice.head();
    const every = formatQuantity(this.setup().output.mooringIntervalDays, 'd');
    const moorings = this.parts()[Math.min(this.group(), this.groups() - 1)] ?? [];
    const places = moorings
      .map((m) => `${m.name} at ${formatLongitude(m.longitudeDeg)}, ${formatLatitude(m.latitudeDeg)}`)
      .join('; ');
    const ids = [...new Set<Quantity>(['eta', this.quantity()])];
    return ids.map((id, n) => {
      const { label, unit } = QUANTITIES.find((quantity) => quantity.id === id) ?? QUANTITIES[0];
      return {
        name: `${label.charAt(0).toUpperCase()}${label.slice(1)} at the moorings`,
        unit,
        choosable: n === ids.length - 1,
        caption: `Instants every ${every}. ${places}.`,
        specs: moorings.map((mooring, series): CurveSpec => ({
          name: mooring.name,
          columns: [columnIndex(slice, `${mooring.k}.${id}`)],
          factor: 1,
          series: (series + 1) as CurveSpec['series'],
        })),
      };
    });
  });

  protected chooseQuantity(event: Event): void {
    this.quantity.set((event.target as HTMLSelectElement).value as Quantity);
  }
  protected chooseGroup(event: Event): void {
    this.group.set(Number((event.target as HTMLSelectElement).value));
  }
}
