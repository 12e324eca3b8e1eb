import { E0, E1, E2, P0, P1, PM1, PM2 } from '../stepper/coefficients';
import { fieldOf, type StateVariable } from '../stepper/fields';
import { WEST, type Role } from '../stepper/layout';
import type { Model } from '../stepper/model';
import { NONE } from '../stepper/statics';
import { NonlinearFields } from './nonlinear-fields';

/**
 * The fields that the last step of a model worked with, made again from the four levels that its memory still holds (the
 * newest, and the three that the step read). With them every term of the step can be named: `zonalTerms`,
 * `meridionalTerms`. Planes are laid out like the model's: value (row j, column i) at (j + 1) · pitch + WEST + i, rows
 * −1 … ny + 1, columns −1 … nx + 1 (halos filled on a periodic grid, else 0).
 */
export class LastStep {
  readonly model: Model;
  readonly pitch: number;
  /** Velocities at n + ½, m/s. */
  readonly ut: Float64Array;
  readonly vt: Float64Array;
  /** g′ times the time-weighted thickness (or η), m²/s². */
  readonly pressure: Float64Array;
  /** A D at cells and A s ζ at corners, m²/s². */
  readonly stretching: Float64Array;
  readonly spin: Float64Array;
  /** Factors of the forcing bases in that step. */
  readonly factors: Float64Array;
  /** What a nonlinear step has besides; null for a linear one. */
  readonly nonlinear: NonlinearFields | null;
  readonly #slip: Float64Array;

  constructor(model: Model) {
    this.model = model;
    this.pitch = model.layout.pitch;
    const plane = () => new Float64Array((model.grid.ny + 3) * this.pitch);
    this.ut = plane();
    this.vt = plane();
    this.pressure = plane();
    this.stretching = plane();
    this.spin = plane();
    this.factors = new Float64Array(model.forcing.bases.length);
    this.#slip = slipPlane(model, plane());
    this.nonlinear = model.equations === 'nonlinear' ? new NonlinearFields(this) : null;
  }

  /** Index of row j, column 0 of a plane. */
  at(j: number): number {
    return (j + 1) * this.pitch + WEST;
  }

  /** Makes the planes of the step that the model has just completed. Throws RangeError before the first step. */
  update(): void {
    const { model, ut, vt, pressure, stretching } = this;
    const { grid, rows, statics, data, viscosity, reducedGravity } = model;
    const { nx, ny, periodic } = grid;
    model.forcing.factors(model.step - 1, this.factors);
    const u = threeLevels(model, 'u');
    const v = threeLevels(model, 'v');
    const h = (['now', 'previous', 'before', 'next'] as const).map((role) => fieldOf(model, 'h', role).offset);
    const { record } = model.layout;
    const w = [P1, P0, PM1, PM2].map((weight) => reducedGravity * weight);
    for (let j = 0; j <= ny; j++) {
      const row = this.at(j);
      for (let i = -1; i <= nx; i++) {
        const k = j * record + i;
        ut[row + i] = E0 * data[u[0] + k] + E1 * data[u[1] + k] + E2 * data[u[2] + k];
        vt[row + i] = E0 * data[v[0] + k] + E1 * data[v[1] + k] + E2 * data[v[2] + k];
        pressure[row + i] =
          w[0] * data[h[0] + k] + w[1] * data[h[1] + k] + (w[2] * data[h[2] + k] + w[3] * data[h[3] + k]);
      }
    }
    for (let j = 0; j < ny; j++) {
      const row = this.at(j);
      const A = statics.viscosityCell === NONE ? NONE : statics.viscosityCell + j * this.pitch + WEST;
      for (let i = 0; i < nx; i++) {
        const k = row + i;
        const D =
          (ut[k + 1] - ut[k]) * rows.perDxC[j] + (vt[k + this.pitch] * rows.divNorth[j] - vt[k] * rows.divSouth[j]);
        stretching[k] = (A === NONE ? viscosity : data[A + i]) * D;
      }
      if (periodic) wrap(stretching, row, nx);
    }
    for (let j = 0; j <= ny; j++) this.#spinRow(j);
    this.nonlinear?.update();
  }

  /** s ζ at corner (i, j), 1/s. */
  vorticity(i: number, j: number): number {
    const { ut, vt, pitch } = this;
    const { rows } = this.model;
    const k = this.at(j) + i;
    const raw = (vt[k] - vt[k - 1]) * rows.perDxV[j] - (ut[k] * rows.curlNorth[j] - ut[k - pitch] * rows.curlSouth[j]);
    return this.#slip[k] * raw;
  }

  #spinRow(j: number): void {
    const { model, spin, pitch } = this;
    const { grid, statics, data, viscosity } = model;
    const row = this.at(j);
    const A = statics.viscosityCorner === NONE ? NONE : statics.viscosityCorner + j * pitch + WEST;
    for (let i = 0; i <= grid.nx; i++) spin[row + i] = (A === NONE ? viscosity : data[A + i]) * this.vorticity(i, j);
  }
}

/** Offsets of the three levels that the last step extrapolated from. */
function threeLevels(model: Model, variable: StateVariable): [number, number, number] {
  const at = (role: Role) => fieldOf(model, variable, role).offset;
  return [at('previous'), at('before'), at('next')];
}

/** s_q of numerics.md §3: 1 where all four cells are water, the slip factor at corners of a coast, 0 elsewhere. */
function slipPlane(model: Model, plane: Float64Array): Float64Array {
  const { grid, spans, coastCorners, layout } = model;
  const { rowStart, bounds } = spans.corners;
  for (let j = 0; j <= grid.ny; j++) {
    const row = (j + 1) * layout.pitch;
    for (let s = rowStart[j]; s < rowStart[j + 1]; s++) plane.fill(1, row + bounds[2 * s], row + bounds[2 * s + 1]);
    for (let c = coastCorners.rowStart[j]; c < coastCorners.rowStart[j + 1]; c++)
      plane[row + coastCorners.columns[c]] = model.slip === 'free' ? 0 : 2;
  }
  return plane;
}

/** Periodic copies into the halo columns of a row. */
export function wrap(plane: Float64Array, row: number, nx: number): void {
  plane[row - 1] = plane[row + nx - 1];
  plane[row + nx] = plane[row];
}
