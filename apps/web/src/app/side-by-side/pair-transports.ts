import { ChangeDetectionStrategy, Component, computed, input, linkedSignal, signal, viewChild } from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { formatLatitude, formatLongitude, formatNumber, formatQuantity, formatSeasonDay } from '../core/format';
import { type RunFollower, lastRecordDay, startDay } from '../core/run-follower';
import { type Curve, CurvePlot } from '../shared/plate/curve-plot';
import { Plate, type PlateSource } from '../shared/plate/plate';
import { YEAR } from '../shared/plate/ticks';
import { annualCycle } from './annual-cycle';
import { commonSections, pairCurves, within } from './pair-series';

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
      [remark]="span() === 'last' ? 'last three years that both have' : 'whole length of both'"
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
        @if (lastYears()) {
          <label class="choice">
            <span class="visually-hidden">Time range</span>
            <select (change)="chooseSpan($event)">
              <option value="last" [selected]="span() === 'last'">last three years</option>
              <option value="whole" [selected]="span() === 'whole'">whole length</option>
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
    @if (season(); as season) {
      <div class="scroll" tabindex="0" role="region" aria-label="The season of the two">
        <table class="numbers">
          <thead>
            <tr>
              <th scope="col">{{ season.years }}</th>
              <th scope="col">A</th>
              <th scope="col">B</th>
              <th scope="col">B / A</th>
            </tr>
          </thead>
          <tbody>
            <tr>
              <td>amplitude of the annual harmonic</td>
              <td>{{ shown(season.a.amplitude) }}</td>
              <td>{{ shown(season.b.amplitude) }}</td>
              <td class="strong">{{ ratio(season.b.amplitude / season.a.amplitude) }}</td>
            </tr>
            <tr>
              <td>its peak</td>
              <td>{{ dayWords(season.a.peakDay) }}</td>
              <td>{{ dayWords(season.b.peakDay) }}</td>
              <td>{{ later(season.a.peakDay, season.b.peakDay) }}</td>
            </tr>
            <tr>
              <td>mean</td>
              <td>{{ asFineAs(season.a.mean, season.a.amplitude) }}</td>
              <td>{{ asFineAs(season.b.mean, season.b.amplitude) }}</td>
              <td></td>
            </tr>
          </tbody>
        </table>
      </div>
    }
  `,
  styleUrls: ['../shared/plate/plate-controls.scss', './pair-transports.scss'],
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

  /** The last three years that both have, once both have four: then the spin-up no longer sets the scale. */
  protected readonly lastYears = computed<[number, number] | null>(() => {
    const ends = [this.a(), this.b()].map(lastRecordDay);
    const first = Math.max(startDay(this.a()), startDay(this.b()));
    const last = Math.min(...ends);
    return last - first >= 4 * YEAR ? [last - 3 * YEAR, last] : null;
  });
  private readonly spanChosen = signal<'last' | 'whole'>('last');
  protected readonly span = computed(() => (this.lastYears() ? this.spanChosen() : 'whole'));
  protected readonly curves = computed(() => {
    const range = this.span() === 'last' ? this.lastYears() : null;
    return range ? this.allCurves().map((curve) => within(curve, range)) : this.allCurves();
  });
  /** Over as many whole years at the end of both as there are, three at most. */
  protected readonly season = computed(() => {
    const [curveA, curveB] = this.allCurves();
    if (!curveA || !curveB) return null;
    const last = Math.min(...[curveA, curveB].map(({ x }) => x[x.length - 1] ?? NaN));
    const first = Math.max(startDay(this.a()), startDay(this.b()));
    const count = Math.min(3, Math.floor((last - first) / YEAR + 1e-9));
    if (!(count >= 1)) return null;
    const range: [number, number] = [last - count * YEAR, last];
    const cycle = (run: Run, { x, y }: Curve) => annualCycle(x, y, range, run.setup.output.sectionIntervalDays);
    const [a, b] = [cycle(this.a(), curveA), cycle(this.b(), curveB)];
    const years = `days ${formatNumber(range[0])} to ${formatNumber(range[1])}`;
    return a && b ? { years, a, b } : null;
  });
  private readonly allCurves = computed(() => {
    const section = this.section();
    if (!section) return [];
    const column = (series: ReturnType<typeof this.seriesA>, k: number) =>
      series.head()?.columns?.findIndex(({ name }) => name === `${k}.${this.quantity().id}`) ?? -1;
    const [a, b] = [this.seriesA(), this.seriesB()];
    return pairCurves(a, b, column(a, section.a), column(b, section.b));
  });
  protected readonly xFull = computed<[number, number]>(() => {
    const range = this.span() === 'last' ? this.lastYears() : null;
    if (range) return range;
    return [
      Math.min(startDay(this.a()), startDay(this.b())),
      Math.max(this.a().progress.totalDays, this.b().progress.totalDays),
    ];
  });
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

  protected shown(value: number): string {
    return formatQuantity(value, this.quantity().unit, { significant: 3 });
  }
  /** With the decimals that three digits of `scale` have: a mean that is nothing beside the season reads as nothing. */
  protected asFineAs(value: number, scale: number): string {
    const decimals = Math.min(6, Math.max(0, 2 - Math.floor(Math.log10(scale || 1))));
    const rounded = Math.round(value * 10 ** decimals) / 10 ** decimals;
    return formatQuantity(rounded === 0 ? 0 : rounded, this.quantity().unit, { decimals });
  }
  protected ratio(value: number): string {
    return formatNumber(value, { significant: 4 });
  }
  protected dayWords(day: number): string {
    return formatSeasonDay(Math.round(day));
  }
  /** "1.2 d later": by how much the peak of B follows that of A, the short way round the year. */
  protected later(a: number, b: number): string {
    const gap = ((((b - a + YEAR / 2) % YEAR) + YEAR) % YEAR) - YEAR / 2;
    if (Math.abs(gap) < 0.05) return 'same day';
    return `${formatQuantity(Math.abs(gap), 'd', { decimals: 1 })} ${gap > 0 ? 'later' : 'earlier'}`;
  }

  protected chooseSpan(event: Event): void {
    this.spanChosen.set((event.target as HTMLSelectElement).value === 'whole' ? 'whole' : 'last');
  }
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
