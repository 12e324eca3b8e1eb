import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { formatNumber, formatQuantity } from '../core/format';
import { type GrowingSlice } from '../core/growing-rows';
import { type PlotLink } from '../shared/plate/plot-link';
import { VerdictSign } from '../shared/verdict/verdict';
import { columnIndex } from './energy-closure';
import { budgetClosures } from './evidence/budget-closures';
import { sameSetup } from './same-setup';
import { type CurveSpec, SeriesPlate } from './series-plate';

/** A curve of a budget: the columns that it adds up; those that a run does not have are left out. */
interface TermCurve {
  name: string;
  columns: string[];
  series: CurveSpec['series'];
}

/** Five curves at most: each series has a colour and a dash of its own. */
const MOMENTUM: TermCurve[] = [
  { name: 'wind', columns: ['momentumWind'], series: 1 },
  { name: 'coasts', columns: ['momentumPressure'], series: 2 },
  { name: 'friction', columns: ['momentumViscosity', 'momentumRayleigh', 'momentumSponge'], series: 3 },
  {
    name: 'turning, advection',
    columns: ['momentumCoriolis', 'momentumAdvection', 'momentumDamping', 'momentumEntrainment'],
    series: 5,
  },
  { name: 'residual', columns: ['momentumResidual'], series: 4 },
];
const VORTICITY: TermCurve[] = [
  { name: 'wind', columns: ['vorticityWind'], series: 1 },
  { name: 'flux of vorticity', columns: ['vorticityCoriolis', 'vorticityVorticity'], series: 2 },
  {
    name: 'friction',
    columns: ['vorticityViscosity', 'vorticityRayleigh', 'vorticitySponge', 'vorticityEntrainment'],
    series: 3,
  },
  { name: 'change', columns: ['vorticityTendency'], series: 5 },
  { name: 'residual', columns: ['vorticityResidual'], series: 4 },
];

/** The budgets of every term that a setup may ask for: zonal momentum and absolute circulation of the basin. */
@Component({
  selector: 'app-term-budget-plates',
  imports: [SeriesPlate, VerdictSign],
  template: `
    @for (plate of plates(); track plate.name; let k = $index) {
      <app-series-plate
        [run]="run()"
        [slice]="slice()"
        [pen]="pen()"
        [name]="plate.name"
        [caption]="plate.caption"
        [unit]="plate.unit"
        [specs]="plate.specs"
        [link]="links()(2 + k)"
        emptyHeading="From the first interval"
        [emptyAbout]="plate.about"
      >
        @if (plate.closure; as closure) {
          <app-verdict
            [verdict]="closure.closes ? 'pass' : 'caution'"
            [text]="closure.closes ? 'closes' : 'does not close'"
          />
        }
      </app-series-plate>
    }
  `,
  styles: `
    :host {
      display: contents;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class TermBudgetPlates {
  readonly run = input.required<Run>();
  readonly slice = input.required<GrowingSlice>();
  readonly pen = input.required<'live' | 'lost' | 'none'>();
  readonly links = input.required<(plate: number) => PlotLink>();

  private readonly setup = computed(() => this.run().setup, { equal: sameSetup });
  private readonly closures = computed(() => budgetClosures(this.slice(), NaN));

  protected readonly plates = computed(() => {
    const { output, numerics } = this.setup();
    const linear = numerics.equations === 'linear';
    return [
      ...(output.momentumBudget
        ? [
            this.plate({
              name: 'Zonal momentum budget',
              of: 'Zonal momentum',
              unit: 'GN',
              curves: MOMENTUM.map((curve) => (linear && curve.series === 5 ? { ...curve, name: 'Coriolis' } : curve)),
              rule: 'Basin integral, a force is positive that pushes east; the momentum changes by the sum.',
              about: 'Force of the wind, pressure on the coasts, friction, Coriolis force, and what is left over.',
            }),
          ]
        : []),
      ...(output.vorticityBudget
        ? [
            this.plate({
              name: 'Vorticity budget',
              of: 'Absolute circulation',
              unit: 'm²/s²',
              curves: VORTICITY,
              rule: 'Absolute circulation over the interior corners of the grid; it changes by the sum of the others.',
              about: 'Curl of the wind, flux of vorticity, friction, the change of circulation, and what is left over.',
            }),
          ]
        : []),
    ];
  });

  private plate(of: { name: string; of: string; unit: string; curves: TermCurve[]; rule: string; about: string }) {
    const slice = this.slice();
    const closure = this.closures().find(({ name }) => name === of.of) ?? null;
    const held = closure
      ? ` Largest residual ${formatQuantity(closure.residual, of.unit, { significant: 2 })}, ${formatNumber(closure.share, { significant: 1 })} of the largest term, ${closure.referenceName}.`
      : '';
    return {
      name: of.name,
      unit: of.unit,
      about: of.about,
      caption: of.rule + held,
      closure,
      specs: of.curves.map(({ name, columns, series }): CurveSpec => {
        const found = columns.map((column) => columnIndex(slice, column)).filter((index) => index >= 0);
        // None at all: an index that is no column, so that the curve is left out rather than drawn as 0.
        return { name, columns: found.length > 0 ? found : [-1], factor: 1, series };
      }),
    };
  }
}
