import { ChangeDetectionStrategy, Component, computed, input, linkedSignal, viewChild } from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { formatLatitude, formatLongitude } from '../core/format';
import { type RunFollower, startDay } from '../core/run-follower';
import { CurvePlot } from '../shared/plate/curve-plot';
import { Plate, type PlateSource } from '../shared/plate/plate';
import { commonSections, pairCurves } from './pair-series';

const QUANTITIES = [
  { id: 'transport', label: 'volume transport', unit: 'Sv' },
  { id: 'heat', label: 'heat transport', unit: 'PW' },
] as const;

/** Transport of A, B and B − A through a section that both keep. */
@Component({
  selector: 'app-pair-transports',
  imports: [CurvePlot, Plate],
  template: `
    <app-plate
      [name]="name()"
      remark="whole length of both"
      [caption]="caption()"
      [state]="state()"
      [stateHeading]="sections().length ? 'From the first interval' : 'No section in common'"
      [stateAbout]="
        sections().length
          ? 'Transport of A, of B, and their difference.'
          : 'The two setups keep no section on the same line.'
      "
      [error]="error()"
      [source]="source"
      [about]="[a().label + ' beside ' + b().label, 'A: run ' + a().id, 'B: run ' + b().id]"
      (again)="again()"
    >
      <ng-container plateControls>
        @if (sections().length > 1) {
          <label class="choice">
            <span class="visually-hidden">Section</span>
            <select (change)="chooseSection($event)">
              @for (choice of sections(); track choice.key) {
                <option [value]="choice.key" [selected]="choice.key === section()?.key">{{ choice.name }}</option>
              }
            </select>
          </label>
        }
        <label class="choice">
          <span class="visually-hidden">Quantity</span>
          <select (change)="chooseQuantity($event)">
            @for (choice of quantities; track choice.id) {
              <option [value]="choice.id" [selected]="choice.id === quantity().id">{{ choice.label }}</option>
            }
          </select>
        </label>
      </ng-container>
      <app-curve-plot
        [label]="name() + ' of A, B and B minus A'"
        [curves]="curves()"
        [unit]="quantity().unit"
        [xFull]="xFull()"
        [wantedHeight]="270"
      />
    </app-plate>
  `,
  styleUrl: '../shared/plate/plate-controls.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PairTransports {
  readonly a = input.required<Run>();
  readonly b = input.required<Run>();
  readonly followerA = input.required<RunFollower>();
  readonly followerB = input.required<RunFollower>();
  private readonly plot = viewChild(CurvePlot);

  protected readonly quantities = QUANTITIES;
  protected readonly sections = computed(() => commonSections(this.a().setup, this.b().setup));
  /** The equator first, when both keep it. */
  private readonly sectionKey = linkedSignal(() => {
    const sections = this.sections();
    return (sections.find(({ along, atDeg }) => along === 'latitude' && atDeg === 0) ?? sections[0])?.key ?? '';
  });
  protected readonly section = computed(() => this.sections().find(({ key }) => key === this.sectionKey()) ?? null);
  protected readonly quantity = linkedSignal<(typeof QUANTITIES)[number]>(() => QUANTITIES[0]);
  private readonly seriesA = computed(() => this.followerA().series('sections'));
  private readonly seriesB = computed(() => this.followerB().series('sections'));

  protected readonly curves = computed(() => {
    const section = this.section();
    if (!section) return [];
    const column = (series: ReturnType<typeof this.seriesA>, k: number) =>
      series.head()?.columns?.findIndex(({ name }) => name === `${k}.${this.quantity().id}`) ?? -1;
    const [a, b] = [this.seriesA(), this.seriesB()];
    return pairCurves(a, b, column(a, section.a), column(b, section.b));
  });
  protected readonly xFull = computed<[number, number]>(() => [
    Math.min(startDay(this.a()), startDay(this.b())),
    Math.max(this.a().progress.totalDays, this.b().progress.totalDays),
  ]);
  protected readonly error = computed(() => this.seriesA().error() ?? this.seriesB().error());
  protected readonly state = computed(() => {
    if (this.curves().length > 0) return 'ready';
    if (this.error() !== null) return 'error';
    return this.seriesA().reading() || this.seriesB().reading() ? 'loading' : 'empty';
  });
  protected readonly name = computed(() => {
    const section = this.section();
    if (!section) return 'Transport';
    const line = section.along === 'latitude' ? formatLatitude(section.atDeg) : formatLongitude(section.atDeg);
    const words = this.quantity().label;
    return `${words.charAt(0).toUpperCase()}${words.slice(1)} across ${line}`;
  });
  protected readonly caption = computed(() => {
    const towards = this.section()?.along === 'longitude' ? 'Eastward' : 'Northward';
    return `${towards} positive, means over the interval of each run; the difference on days that both have.`;
  });
  protected readonly source: PlateSource = {
    panels: async () => {
      const plot = this.plot();
      return plot ? [{ figure: await plot.figure(), title: this.name(), bar: null }] : [];
    },
    table: (notes) => this.plot()?.table(notes) ?? { columns: [], rows: 0, row: () => [], notes },
  };

  protected again(): void {
    this.seriesA().again();
    this.seriesB().again();
  }
  protected chooseSection(event: Event): void {
    this.sectionKey.set((event.target as HTMLSelectElement).value);
  }
  protected chooseQuantity(event: Event): void {
    const { value } = event.target as HTMLSelectElement;
    this.quantity.set(QUANTITIES.find(({ id }) => id === value) ?? QUANTITIES[0]);
  }
}
