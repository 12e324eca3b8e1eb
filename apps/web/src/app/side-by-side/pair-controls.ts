import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { VARIABLE_CHOICES, isVariable } from '../shared/plate/variables';
import { type SharedPlace } from './shared-place';

/** What is drawn of the two runs: maps or space and time, which variable, along which line. */
@Component({
  selector: 'app-pair-controls',
  template: `
    <div class="modes" role="group" aria-label="What is drawn">
      <button type="button" [attr.aria-pressed]="place().mode === 'map'" (click)="look.emit({ mode: 'map' })">
        Map
      </button>
      <button
        type="button"
        [attr.aria-pressed]="place().mode === 'hovmoller'"
        (click)="look.emit({ mode: 'hovmoller' })"
      >
        Space and time
      </button>
    </div>
    <label class="choice">
      <span class="visually-hidden">Variable</span>
      <select (change)="chooseVariable($event)">
        @for (choice of variables; track choice.id) {
          <option [value]="choice.id" [selected]="choice.id === place().variable">{{ choice.label }}</option>
        }
      </select>
    </label>
    @if (place().mode === 'hovmoller') {
      <label class="choice">
        along
        <select (change)="chooseAlong($event)">
          <option value="latitude" [selected]="onLatitude()">latitude</option>
          <option value="longitude" [selected]="!onLatitude()">longitude</option>
        </select>
      </label>
      <label class="choice">
        <span class="visually-hidden">{{ onLatitude() ? 'Latitude, degrees north' : 'Longitude, degrees east' }}</span>
        <input
          type="number"
          [value]="at()"
          [min]="range()[0]"
          [max]="range()[1]"
          [step]="step()"
          (change)="chooseAt($event)"
        />
        {{ onLatitude() ? '° N' : '° E' }}
      </label>
    }
  `,
  styleUrls: ['../shared/plate/plate-controls.scss', './pair-controls.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PairControls {
  readonly place = input.required<SharedPlace>();
  /** Degrees of the line that is drawn. */
  readonly at = input.required<number>();
  readonly basin = input.required<Run['setup']['basin']>();
  readonly numerics = input.required<Run['setup']['numerics']>();
  readonly look = output<Partial<SharedPlace>>();

  protected readonly variables = VARIABLE_CHOICES;
  protected readonly onLatitude = computed(() => this.place().along === 'latitude');
  protected readonly range = computed<[number, number]>(() => {
    const { southDeg, northDeg, westDeg, eastDeg } = this.basin();
    return this.onLatitude() ? [southDeg, northDeg] : [westDeg, eastDeg];
  });
  protected readonly step = computed(() =>
    this.onLatitude() ? this.numerics().spacingLatitudeDeg : this.numerics().spacingLongitudeDeg,
  );

  protected chooseVariable(event: Event): void {
    const { value } = event.target as HTMLSelectElement;
    if (isVariable(value)) this.look.emit({ variable: value });
  }
  protected chooseAlong(event: Event): void {
    const along = (event.target as HTMLSelectElement).value === 'longitude' ? 'longitude' : 'latitude';
    this.look.emit({ along, at: null });
  }
  protected chooseAt(event: Event): void {
    const field = event.target as HTMLInputElement;
    const [low, high] = this.range();
    // An empty or unreadable field goes back to the line that is shown; beyond the basin means its edge.
    const at = Number.isNaN(field.valueAsNumber) ? this.at() : Math.min(high, Math.max(low, field.valueAsNumber));
    field.value = String(at);
    this.look.emit({ at });
  }
}
