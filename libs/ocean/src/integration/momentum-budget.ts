import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import type { Column } from '../integration-types';
import { valueAt } from '../stepper/fields';
import { forRuns, type Model } from '../stepper/model';
import type { LastStep } from '../terms/last-step';
import { createRowTerms, zonalTerms, type RowTerms } from '../terms/momentum-terms';
import { TermSums, type BudgetTerm } from './term-sums';

const NEWTONS_PER_GN = 1e9;

/**
 * Zonal momentum of the basin, ρ0 Σ A_u h_u u (H in linear mode), and the force of every term on it, made with the
 * scheme's own operators and added up every step (numerics.md §8, §9). On a band the eastward direction turns from place
 * to place: the sum is that of the components.
 */
export class MomentumBudget {
  readonly #model: Model;
  readonly #sums: TermSums<ZonalForce>;
  readonly #row: RowTerms;

  constructor(model: Model) {
    this.#model = model;
    this.#row = createRowTerms(model.grid.nx);
    this.#sums = new TermSums(
      { prefix: 'momentum', what: 'zonal momentum', unit: 'GN', perUnit: NEWTONS_PER_GN, dt: model.dt },
      forcesOf(model),
      zonalMomentum(model),
    );
  }

  get columns(): Column[] {
    return this.#sums.columns;
  }

  /** Everything that a checkpoint keeps. */
  get slots(): Float64Array {
    return this.#sums.slots;
  }

  /** Adds the forces in the step that `last` holds. */
  add(last: LastStep): void {
    const { grid, spans, density, restThickness } = this.#model;
    const row = this.#row;
    const total: Record<ZonalForce, number> = { ...NO_FORCE };
    for (let j = 0; j < grid.ny; j++) {
      zonalTerms(last, j, row);
      const mass = density * restThickness * grid.dxC[j] * grid.dy;
      const sums: Record<ZonalForce, number> = { ...NO_FORCE };
      forRuns(spans.uPoints, j, (first, end) => {
        for (let i = first; i < end; i++) {
          sums.wind += row.wind[i];
          sums.coriolis += row.coriolis[i];
          sums.pressure += row.pressure[i];
          sums.viscosity += row.viscosity[i];
          sums.rayleigh += row.rayleigh[i];
          sums.sponge += row.sponge[i];
        }
      });
      for (const force of FORCES) total[force] += mass * sums[force];
    }
    this.#sums.add(total);
  }

  /** Means over the interval in the order of `columns`, GN; begins the next. */
  take(): number[] {
    return this.#sums.take(zonalMomentum(this.#model));
  }
}

const FORCES = ['wind', 'coriolis', 'pressure', 'viscosity', 'rayleigh', 'sponge'] as const;
type ZonalForce = (typeof FORCES)[number];
const NO_FORCE = Object.fromEntries(FORCES.map((force) => [force, 0])) as Record<ZonalForce, number>;

const LABELS: Record<ZonalForce, string> = {
  wind: 'Force of the wind',
  coriolis: 'Coriolis force',
  pressure: 'Pressure on the coasts',
  viscosity: 'Viscosity and its stress on the walls',
  rayleigh: 'Rayleigh drag',
  sponge: 'Drag of the sponges',
};

/** The forces that a model's equations and coefficients can have. */
function forcesOf(model: Model): BudgetTerm<ZonalForce>[] {
  const has: Record<ZonalForce, boolean> = {
    wind: true,
    coriolis: true,
    pressure: true,
    viscosity: true,
    rayleigh: true,
    sponge: model.statics.spongeU >= 0,
  };
  return FORCES.filter((force) => has[force]).map((name) => ({ name, label: LABELS[name] }));
}

/** ρ0 Σ A_u H u over the present state, kg m/s: compensated, fixed order. */
export function zonalMomentum(model: Model): number {
  const { grid, spans, density, restThickness } = model;
  const sums = new Float64Array(SUM_SLOTS);
  for (let j = 0; j < grid.ny; j++) {
    let row = 0;
    forRuns(spans.uPoints, j, (first, end) => {
      for (let i = first; i < end; i++) row += valueAt(model, 'u', i, j);
    });
    addTo(sums, 0, row * (density * restThickness * grid.dxC[j] * grid.dy));
  }
  return sumAt(sums, 0);
}
