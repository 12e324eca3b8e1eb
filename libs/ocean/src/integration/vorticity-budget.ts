import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import type { Column } from '../integration-types';
import { isWet } from '../grid/grid';
import { valueAt } from '../stepper/fields';
import { forRuns, type Model } from '../stepper/model';
import { NONE } from '../stepper/statics';
import type { LastStep } from '../terms/last-step';
import { createRowTerms, meridionalTerms, zonalTerms, type RowTerms } from '../terms/momentum-terms';
import { TermSums, type BudgetTerm } from './term-sums';

/**
 * Absolute circulation Σ A_q (f + ζ_q) over the interior corners (water on all four sides) and what changes it: the curl
 * of every term of the momentum equations, made with the scheme's own operators and added up every step (numerics.md
 * §8, §9). It is the integral of h q, q the potential vorticity. Gradients (pressure, kinetic energy) have no curl
 * there: what round-off leaves of them is in the residual.
 */
export class VorticityBudget {
  readonly columns: Column[];
  readonly #model: Model;
  readonly #sums: TermSums<Torque>;
  readonly #row: RowTerms;
  /** What u and v at a point add to the circulation, m: by row, of the logical shapes of u and v. */
  readonly #weightU: Float64Array[];
  readonly #weightV: Float64Array[];
  readonly #planetary: number;

  constructor(model: Model) {
    const { grid } = model;
    this.#model = model;
    this.#row = createRowTerms(grid.nx);
    const inside = interiorCorners(model);
    this.#weightU = Array.from({ length: grid.ny }, (_, j) =>
      Float64Array.from({ length: grid.nx + 1 }, (_, i) => grid.dxC[j] * (inside[j + 1][i] - inside[j][i])),
    );
    this.#weightV = Array.from({ length: grid.ny + 1 }, (_, j) =>
      Float64Array.from({ length: grid.nx }, (_, i) => grid.dy * (inside[j][i] - inside[j][i + 1])),
    );
    const columns = grid.periodic ? grid.nx : grid.nx + 1;
    this.#planetary = inside.reduce(
      (sum, row, j) =>
        sum + grid.f[j] * grid.dxV[j] * grid.dy * row.subarray(0, columns).reduce((n, one) => n + one, 0),
      0,
    );
    this.#sums = new TermSums(
      { prefix: 'vorticity', what: 'absolute circulation', unit: 'm²/s²', perUnit: 1, dt: model.dt },
      torquesOf(model),
      this.#circulation(),
    );
    this.columns = [
      { name: 'absoluteCirculation', label: 'Absolute circulation', unit: 'm²/s', kind: 'instant' },
      ...this.#sums.columns,
    ];
  }

  /** Everything that a checkpoint keeps. */
  get slots(): Float64Array {
    return this.#sums.slots;
  }

  /** Adds the curl of every term in the step that `last` holds. */
  add(last: LastStep): void {
    const { grid, spans } = this.#model;
    const row = this.#row;
    const total: Record<Torque, number> = { ...NO_TORQUE };
    const addRow = (weights: Float64Array, points: Model['spans']['uPoints'], j: number) => {
      for (const torque of TORQUES) {
        const values = row[torque];
        let sum = 0;
        forRuns(points, j, (first, end) => {
          for (let i = first; i < end; i++) sum += weights[i] * values[i];
        });
        total[torque] += sum;
      }
    };
    for (let j = 0; j <= grid.ny; j++) {
      // Away from the coasts neighbouring corners take away from each other all that a velocity gives.
      if (this.#weightV[j].some((weight) => weight !== 0)) {
        meridionalTerms(last, j, row);
        addRow(this.#weightV[j], spans.vPoints, j);
      }
      if (j === grid.ny || this.#weightU[j].every((weight) => weight === 0)) continue;
      zonalTerms(last, j, row);
      addRow(this.#weightU[j], spans.uPoints, j);
    }
    this.#sums.add(total);
  }

  /** Absolute circulation, then means over the interval in the order of `columns`; begins the next. */
  take(): number[] {
    const relative = this.#circulation();
    return [this.#planetary + relative, ...this.#sums.take(relative)];
  }

  /** Σ A_q ζ_q of the present state, m²/s: compensated, fixed order. */
  #circulation(): number {
    const { grid, spans } = this.#model;
    const sums = new Float64Array(SUM_SLOTS);
    const addRow = (variable: 'u' | 'v', weights: Float64Array, j: number) => {
      let sum = 0;
      forRuns(variable === 'u' ? spans.uPoints : spans.vPoints, j, (first, end) => {
        for (let i = first; i < end; i++) sum += weights[i] * valueAt(this.#model, variable, i, j);
      });
      addTo(sums, 0, sum);
    };
    for (let j = 0; j <= grid.ny; j++) {
      addRow('v', this.#weightV[j], j);
      if (j < grid.ny) addRow('u', this.#weightU[j], j);
    }
    return sumAt(sums, 0);
  }
}

const TORQUES = ['wind', 'coriolis', 'vorticity', 'viscosity', 'rayleigh', 'sponge', 'entrainment'] as const;
type Torque = (typeof TORQUES)[number];
const NO_TORQUE = Object.fromEntries(TORQUES.map((torque) => [torque, 0])) as Record<Torque, number>;

const LABELS: Record<Torque, string> = {
  wind: 'Curl of the wind',
  coriolis: 'Flux of planetary vorticity',
  vorticity: 'Flux of relative vorticity',
  viscosity: 'Curl of viscosity',
  rayleigh: 'Curl of Rayleigh drag',
  sponge: 'Curl of the drag of sponges',
  entrainment: 'Curl of the drag of entrained water',
};

/** The torques that a model's equations and coefficients can have. */
function torquesOf({ equations, statics, entrainment }: Model): BudgetTerm<Torque>[] {
  const has: Record<Torque, boolean> = {
    wind: true,
    coriolis: true,
    vorticity: equations === 'nonlinear',
    viscosity: true,
    rayleigh: true,
    sponge: statics.spongeU !== NONE,
    entrainment: equations === 'nonlinear' && entrainment !== null,
  };
  return TORQUES.filter((torque) => has[torque]).map((name) => ({ name, label: LABELS[name] }));
}

/** 1 at corners with water on all four sides, else 0: rows 0 … ny, columns 0 … nx. */
function interiorCorners({ grid }: Model): Float64Array[] {
  return Array.from({ length: grid.ny + 1 }, (_, j) =>
    Float64Array.from({ length: grid.nx + 1 }, (_, i) =>
      isWet(grid, i - 1, j - 1) && isWet(grid, i, j - 1) && isWet(grid, i - 1, j) && isWet(grid, i, j) ? 1 : 0,
    ),
  );
}
