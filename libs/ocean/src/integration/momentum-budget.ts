import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import type { Column } from '../integration-types';
import { fieldOf, valueAt } from '../stepper/fields';
import { forRuns, type Model } from '../stepper/model';
import { WEST } from '../stepper/layout';
import { NONE } from '../stepper/statics';
import type { LastStep } from '../terms/last-step';
import type { NonlinearFields } from '../terms/nonlinear-fields';
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
  /** Mean thickness of the step in the cells −1 … nx − 1 of a row. */
  readonly #thickness: Float64Array;

  constructor(model: Model) {
    this.#model = model;
    this.#row = createRowTerms(model.grid.nx);
    this.#thickness = new Float64Array(model.grid.nx + 1);
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
    const { grid } = this.#model;
    const total: Forces = { ...NO_FORCE };
    for (let j = 0; j < grid.ny; j++) {
      zonalTerms(last, j, this.#row);
      const sums = last.nonlinear ? this.#nonlinearRow(last.nonlinear, j) : this.#linearRow(j);
      const massPerMetre = this.#model.density * grid.dxC[j] * grid.dy;
      for (const force of FORCES) total[force] += massPerMetre * sums[force];
    }
    this.#sums.add(total);
  }

  /** Σ H × term of a row, m²/s². */
  #linearRow(j: number): Forces {
    const sums: Forces = { ...NO_FORCE };
    const { restThickness, spans } = this.#model;
    for (const force of DIRECT_FORCES) {
      const values = this.#row[force];
      let sum = 0;
      forRuns(spans.uPoints, j, (first, end) => {
        for (let i = first; i < end; i++) sum += values[i];
      });
      sums[force] = restThickness * sum;
    }
    return sums;
  }

  /**
   * Of a nonlinear row: Δ(h_u u) = h̄_u Δu + ū Δh_u, h̄ and ū means of the step's two ends. What changes h_u is the
   * outflow, κ with the sponges, and entrainment.
   */
  #nonlinearRow(fields: NonlinearFields, j: number): Forces {
    const sums: Forces = { ...NO_FORCE };
    const row = this.#row;
    const { spans, data } = this.#model;
    const [h1, h0, u1, u0] = (['h', 'u'] as const).flatMap((variable) =>
      (['now', 'previous'] as const).map((role) => {
        const { offset, rowStride } = fieldOf(this.#model, variable, role);
        return offset + j * rowStride;
      }),
    );
    const thickness = this.#thickness;
    for (let i = -1; i < this.#model.grid.nx; i++) thickness[i + 1] = 0.5 * (data[h1 + i] + data[h0 + i]);
    for (const force of DIRECT_FORCES) {
      const values = row[force];
      let sum = 0;
      forRuns(spans.uPoints, j, (first, end) => {
        for (let i = first; i < end; i++) sum += 0.5 * (thickness[i] + thickness[i + 1]) * values[i];
      });
      sums[force] = sum;
    }
    let [advection, damping, entrainment] = [0, 0, 0];
    forRuns(spans.uPoints, j, (first, end) => {
      for (let i = first; i < end; i++) {
        const west = this.#cell(i - 1);
        const h = 0.5 * (thickness[i] + thickness[i + 1]);
        const u = 0.5 * (data[u1 + i] + data[u0 + i]);
        const outflow = 0.5 * (fields.outflow(west, j) + fields.outflow(i, j));
        advection += h * (row.vorticity[i] + row.kinetic[i]) - u * outflow;
        damping -= u * 0.5 * (this.#damped(thickness[i], west, j) + this.#damped(thickness[i + 1], i, j));
        const entrained = 0.5 * (fields.entrainedAt(i - 1, j) + fields.entrainedAt(i, j)) - fields.detrained;
        entrainment += h * row.entrainment[i] + u * entrained;
      }
    });
    return { ...sums, advection, damping, entrainment };
  }

  /** The cell at column i, or that on the other side of the seam. */
  #cell(i: number): number {
    return i < 0 ? this.#model.grid.nx - 1 : i;
  }

  /** (κ + κ_s)(h − H) of a cell, m/s. */
  #damped(h: number, i: number, j: number): number {
    const { damping, restThickness, statics, data, layout } = this.#model;
    const plane = statics.spongeCell;
    const sponge = plane === NONE ? 0 : data[plane + j * layout.pitch + WEST + i];
    return (damping + sponge) * (h - restThickness);
  }

  /** Means over the interval in the order of `columns`, GN; begins the next. */
  take(): number[] {
    return this.#sums.take(zonalMomentum(this.#model));
  }
}

/** Forces that are a term of the velocity equation times the thickness. */
const DIRECT_FORCES = ['wind', 'coriolis', 'pressure', 'viscosity', 'rayleigh', 'sponge'] as const;
const FORCES = [...DIRECT_FORCES, 'advection', 'damping', 'entrainment'] as const;
type ZonalForce = (typeof FORCES)[number];
type Forces = Record<ZonalForce, number>;
const NO_FORCE = Object.fromEntries(FORCES.map((force) => [force, 0])) as Forces;

const LABELS: Record<ZonalForce, string> = {
  wind: 'Force of the wind',
  coriolis: 'Coriolis force',
  pressure: 'Pressure on the coasts',
  viscosity: 'Viscosity and its stress on the walls',
  rayleigh: 'Rayleigh drag',
  sponge: 'Drag of the sponges',
  advection: 'Advection of momentum',
  damping: 'Momentum of water added by damping',
  entrainment: 'Momentum of entrained water',
};

/** The forces that a model's equations and coefficients can have. */
function forcesOf({ equations, statics, damping, entrainment }: Model): BudgetTerm<ZonalForce>[] {
  const nonlinear = equations === 'nonlinear';
  const sponges = statics.spongeU !== NONE;
  const has: Record<ZonalForce, boolean> = {
    wind: true,
    coriolis: true,
    pressure: true,
    viscosity: true,
    rayleigh: true,
    sponge: sponges,
    advection: nonlinear,
    damping: nonlinear && (damping > 0 || sponges),
    entrainment: nonlinear && entrainment !== null,
  };
  return FORCES.filter((force) => has[force]).map((name) => ({ name, label: LABELS[name] }));
}

/** ρ0 Σ A_u h_u u over the present state (H in linear mode), kg m/s: compensated, fixed order. */
export function zonalMomentum(model: Model): number {
  const { grid, spans, density, restThickness } = model;
  const thickness = (i: number, j: number) =>
    model.equations === 'linear' ? restThickness : 0.5 * (valueAt(model, 'h', i - 1, j) + valueAt(model, 'h', i, j));
  const sums = new Float64Array(SUM_SLOTS);
  for (let j = 0; j < grid.ny; j++) {
    let row = 0;
    forRuns(spans.uPoints, j, (first, end) => {
      for (let i = first; i < end; i++) row += thickness(i, j) * valueAt(model, 'u', i, j);
    });
    addTo(sums, 0, row * (density * grid.dxC[j] * grid.dy));
  }
  return sumAt(sums, 0);
}
