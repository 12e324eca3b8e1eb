import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { formatNumber, formatQuantity } from '../core/format';
import { type GrowingSlice } from '../core/growing-rows';
import { type PlotLink } from '../shared/plate/plot-link';
import { VerdictSign } from '../shared/verdict/verdict';
import { CLOSES_BELOW, columnIndex, energyClosure, largestMassResidual } from './energy-closure';
import { restMassGt } from './rest-mass';
import { sameSetup } from './same-setup';
import { type CurveSpec, SeriesPlate } from './series-plate';

const SECONDS_PER_DAY = 86_400;
/** PJ an interval to GW; Gt an interval to thousands of tonnes a second. */
const GW_PER_PJ_A_SECOND = 1e6;
const KT_PER_GT = 1e6;

/** Work that only some runs have, drawn together with friction. */
const OTHER_WORK = [
  { name: 'damping', columns: ['dampingWork'] },
  { name: 'sponges', columns: ['spongeWork'] },
  { name: 'entrainment', columns: ['entrainmentWork', 'detrainmentWork'] },
];

interface MassTerm {
  name: string;
  columns: string[];
  series: CurveSpec['series'];
}
const MASS_SOURCES: (MassTerm & { words: string })[] = [
  { name: 'damping', columns: ['massDamping'], series: 3, words: 'interface damping' },
  { name: 'sponges', columns: ['massSponge'], series: 2, words: 'sponges' },
  {
    name: 'entrainment',
    columns: ['massEntrainment', 'massDetrainment'],
    series: 5,
    words: 'water taken up from below and given back',
  },
];

/** "a", "a and b", "a, b and c". */
function listed(words: string[]): string {
  return words.join(', ').replace(/, ([^,]*)$/, ' and $1');
}

/** Energy and mass of the basin: what goes in, what comes out, and what is not accounted for. */
@Component({
  selector: 'app-budget-plates',
  imports: [SeriesPlate, VerdictSign],
  template: `
    <app-series-plate
      [run]="run()"
      [slice]="slice()"
      [pen]="pen()"
      name="Energy budget"
      [caption]="energyCaption()"
      unit="GW"
      [specs]="energy()"
      [link]="links()(0)"
      emptyHeading="From the first interval"
      emptyAbout="Work of the wind and of friction, the change of energy, and what is left over."
    >
      @if (hasRows()) {
        <app-verdict [verdict]="closes() ? 'pass' : 'caution'" [text]="closes() ? 'closes' : 'does not close'" />
      }
    </app-series-plate>
    <app-series-plate
      [run]="run()"
      [slice]="slice()"
      [pen]="pen()"
      name="Mass budget"
      [caption]="massCaption()"
      unit="kt/s"
      [specs]="mass()"
      [link]="links()(1)"
      emptyHeading="From the first interval"
      emptyAbout="Change of mass, what adds or takes it, and what is left over."
    >
      @if (hasRows()) {
        <app-verdict
          [verdict]="massCloses() ? 'pass' : 'caution'"
          [text]="massCloses() ? 'closes' : 'does not close'"
        />
      }
    </app-series-plate>
  `,
  styles: `
    :host {
      display: contents;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class BudgetPlates {
  readonly run = input.required<Run>();
  readonly slice = input.required<GrowingSlice>();
  readonly pen = input.required<'live' | 'lost' | 'none'>();
  readonly links = input.required<(plate: number) => PlotLink>();

  private readonly setup = computed(() => this.run().setup, { equal: sameSetup });
  private readonly seconds = computed(() => this.setup().output.sectionIntervalDays * SECONDS_PER_DAY);
  private readonly closure = computed(() => energyClosure(this.slice()));
  protected readonly hasRows = computed(() => {
    this.slice().version();
    return this.slice().rows.count > 0;
  });
  protected readonly closes = computed(() => this.closure().share < CLOSES_BELOW);

  protected readonly energy = computed<CurveSpec[]>(() => {
    const slice = this.slice();
    slice.head();
    const factor = GW_PER_PJ_A_SECOND / this.seconds();
    const kept = (columns: string[]) => columns.filter((column) => columnIndex(slice, column) >= 0);
    const others = OTHER_WORK.filter(({ columns }) => kept(columns).length > 0);
    const sinks = ['rayleighWork', 'viscousWork', ...others.flatMap(({ columns }) => kept(columns))];
    const spec = (name: string, columns: string[], series: CurveSpec['series']): CurveSpec => ({
      name,
      columns: columns.map((column) => columnIndex(slice, column)),
      factor,
      series,
    });
    return [
      spec('wind', ['windWork'], 1),
      spec(['friction', ...others.map(({ name }) => name)].join(', '), sinks, 3),
      spec('stored', ['energyChange'], 2),
      spec('numerical', ['numericalWork'], 5),
      spec('residual', ['energyResidual'], 4),
    ];
  });
  protected readonly energyCaption = computed(() => {
    const { residual, share, against } = this.closure();
    if (Number.isNaN(share)) return 'Basin integral; work that adds energy is positive.';
    const held = against === 'wind work' ? 'the largest work of the wind' : 'the largest energy, as no wind blows';
    return `Basin integral, work that adds energy is positive. Largest residual ${formatQuantity(residual, 'PJ', { significant: 2 })} an interval, ${formatNumber(share, { significant: 1 })} of ${held}.`;
  });

  /** Mass of the layer at rest is what a residual of mass is held against, Gt. */
  private readonly restMass = computed(() => restMassGt(this.setup()));
  private readonly massResidual = computed(() => largestMassResidual(this.slice()));
  protected readonly massCloses = computed(() => this.massResidual() / this.restMass() < CLOSES_BELOW);
  /** What adds or takes mass in this run: the terms that its budget keeps. */
  private readonly massSources = computed(() => {
    const slice = this.slice();
    slice.head();
    return MASS_SOURCES.filter(({ columns }) => columns.some((column) => columnIndex(slice, column) >= 0));
  });
  protected readonly mass = computed<CurveSpec[]>(() => {
    const slice = this.slice();
    slice.head();
    const factor = KT_PER_GT / this.seconds();
    const spec = ({ name, columns, series }: MassTerm): CurveSpec => ({
      name,
      columns: columns.map((column) => columnIndex(slice, column)).filter((index) => index >= 0),
      factor,
      series,
    });
    return [
      spec({ name: 'change', columns: ['massChange'], series: 1 }),
      ...this.massSources().map(spec),
      spec({ name: 'residual', columns: ['massResidual'], series: 4 }),
    ];
  });
  protected readonly massCaption = computed(() => {
    const residual = this.massResidual();
    const sources = this.massSources().map(({ words }) => words);
    const rule =
      sources.length > 0
        ? `Change of mass is what ${listed(sources)} together add.`
        : 'Nothing adds or takes mass: what is drawn is round-off.';
    if (Number.isNaN(residual)) return rule;
    return `${rule} Largest residual ${formatQuantity(residual, 'Gt', { significant: 2 })} an interval.`;
  });
}
