import { E0, E1, E2 } from '../stepper/coefficients';
import { fieldOf } from '../stepper/fields';
import { WEST } from '../stepper/layout';
import { forRuns, type Model } from '../stepper/model';
import { uniformDetrainment } from '../stepper/nonlinear/half-level';
import { wrap, type LastStep } from './last-step';

/**
 * What a nonlinear step worked with besides (numerics.md §3, §6), made again like the fields of `LastStep` and laid out
 * alike: thickness at n + ½ as clipped, limited fluxes, entrainment, kinetic energy, and the products q V and q U at
 * corners, split into the part that f makes and the part that ζ makes.
 */
export class NonlinearFields {
  /** ht, m. */
  readonly ht: Float64Array;
  /** Limited U and V per metre of the face, m²/s. */
  readonly fluxU: Float64Array;
  readonly fluxV: Float64Array;
  /** The same before they were limited: turning takes these. */
  readonly turningU: Float64Array;
  readonly turningV: Float64Array;
  /** w_e, m/s, and what is given back evenly, m/s. */
  readonly entrained: Float64Array;
  detrained = 0;
  /** K, m²/s². */
  readonly kinetic: Float64Array;
  /** h_q at corners, m. */
  readonly cornerThickness: Float64Array;
  /** f/h_q (V_W + V_E), f/h_q (U_S + U_N) and the same of ζ, m/s². */
  readonly planetaryV: Float64Array;
  readonly planetaryU: Float64Array;
  readonly relativeV: Float64Array;
  readonly relativeU: Float64Array;
  readonly #last: LastStep;
  readonly #limit: Float64Array;
  readonly #perWet: Float64Array;

  constructor(last: LastStep) {
    const plane = () => new Float64Array(last.ut.length);
    this.#last = last;
    this.ht = plane();
    this.fluxU = plane();
    this.fluxV = plane();
    this.turningU = plane();
    this.turningV = plane();
    this.entrained = plane();
    this.kinetic = plane();
    this.cornerThickness = plane();
    this.planetaryV = plane();
    this.planetaryU = plane();
    this.relativeV = plane();
    this.relativeU = plane();
    this.#limit = plane();
    this.#perWet = perWetPlane(last.model, plane());
  }

  /** Makes the fields of the step whose velocities `LastStep` has just made. */
  update(): void {
    this.#thickness();
    this.#fluxes();
    // Turning takes the fluxes as they are; the limiter acts on continuity alone (nonlinear-step.ts).
    this.#corners();
    this.turningV.set(this.fluxV);
    this.turningU.set(this.fluxU);
    if (this.#last.model.minimumThickness > 0) this.#limitFluxes();
    this.#kinetics();
  }

  /** h_u at column i of row j, m: mean of ht. */
  zonalThickness(i: number, j: number): number {
    const k = this.#last.at(j) + i;
    return 0.5 * (this.ht[k - 1] + this.ht[k]);
  }

  /** h_v at column i of row j, m: mean of ht by area. */
  meridionalThickness(i: number, j: number): number {
    const { rows } = this.#last.model;
    const k = this.#last.at(j) + i;
    return 0.5 * (rows.shareSouth[j] * this.ht[k - this.#last.pitch] + rows.shareNorth[j] * this.ht[k]);
  }

  /** w_e at column i of row j, m/s. */
  entrainedAt(i: number, j: number): number {
    return this.entrained[this.#last.at(j) + i];
  }

  /** div(U, V) of a cell, m/s. */
  outflow(i: number, j: number): number {
    const { rows } = this.#last.model;
    const { fluxU, fluxV } = this;
    const k = this.#last.at(j) + i;
    const zonal = (fluxU[k + 1] - fluxU[k]) * rows.perDxC[j];
    return zonal + (fluxV[k + this.#last.pitch] * rows.divNorth[j] - fluxV[k] * rows.divSouth[j]);
  }

  #thickness(): void {
    const { model } = this.#last;
    const { grid, data, layout, spans, minimumThickness, entrainment } = model;
    const [h0, h1, h2] = (['previous', 'before', 'next'] as const).map((role) => fieldOf(model, 'h', role).offset);
    this.ht.fill(0);
    this.entrained.fill(0);
    for (let j = 0; j < grid.ny; j++) {
      const row = this.#last.at(j);
      forRuns(spans.cells, j, (first, end) => {
        for (let i = first; i < end; i++) {
          const k = j * layout.record + i;
          const raw = E0 * data[h0 + k] + E1 * data[h1 + k] + E2 * data[h2 + k];
          const ht = minimumThickness > 0 ? Math.max(raw, minimumThickness) : raw;
          this.ht[row + i] = ht;
          if (!entrainment) continue;
          const lack = Math.max(entrainment.onsetThickness - ht, 0);
          this.entrained[row + i] = (lack * lack) / (entrainment.timescale * entrainment.onsetThickness);
        }
      });
      if (grid.periodic) for (const plane of [this.ht, this.entrained]) wrap(plane, row, grid.nx);
    }
    // The stepper's own sum, over the levels as they were before the step.
    this.detrained = uniformDetrainment({ ...model, phase: (model.phase + 3) & 3 });
  }

  #fluxes(): void {
    const { ut, vt, model } = this.#last;
    const { nx, ny, periodic } = model.grid;
    for (let j = 0; j <= ny; j++) {
      const row = this.#last.at(j);
      for (let i = 0; i <= nx; i++) {
        this.fluxU[row + i] = ut[row + i] * this.zonalThickness(i, j);
        this.fluxV[row + i] = vt[row + i] * this.meridionalThickness(i, j);
      }
      if (periodic) for (const plane of [this.fluxU, this.fluxV]) wrap(plane, row, nx);
    }
  }

  /** Flux limiter of numerics.md §6: every flux times R of the cell that it comes from. */
  #limitFluxes(): void {
    const { model, pitch } = this.#last;
    const { grid, data, rows, spans, dt, minimumThickness } = model;
    const { fluxU, fluxV } = this;
    const limit = this.#limit;
    const h = fieldOf(model, 'h', 'previous');
    for (let j = 0; j < grid.ny; j++) {
      const row = this.#last.at(j);
      forRuns(spans.cells, j, (first, end) => {
        for (let i = first; i < end; i++) {
          const k = row + i;
          const zonal = (Math.max(fluxU[k + 1], 0) - Math.min(fluxU[k], 0)) * rows.perDxC[j];
          const meridional =
            Math.max(fluxV[k + pitch], 0) * rows.divNorth[j] - Math.min(fluxV[k], 0) * rows.divSouth[j];
          const supply = Math.max(data[h.offset + j * h.rowStride + i] - minimumThickness, 0) / dt;
          limit[k] = zonal + meridional > supply ? supply / (zonal + meridional) : 1;
        }
      });
      if (grid.periodic) wrap(limit, row, grid.nx);
    }
    for (let j = 0; j < grid.ny; j++) {
      const row = this.#last.at(j);
      forRuns(spans.uPoints, j, (first, end) => {
        for (let k = row + first; k < row + end; k++) fluxU[k] *= fluxU[k] > 0 ? limit[k - 1] : limit[k];
      });
      forRuns(spans.vPoints, j, (first, end) => {
        for (let k = row + first; k < row + end; k++) fluxV[k] *= fluxV[k] > 0 ? limit[k - pitch] : limit[k];
      });
      if (grid.periodic) for (const plane of [fluxU, fluxV]) wrap(plane, row, grid.nx);
    }
  }

  #corners(): void {
    const { model, pitch } = this.#last;
    const { grid, rows } = model;
    const { ht, fluxU, fluxV } = this;
    for (let j = 0; j <= grid.ny; j++)
      for (let i = 0; i <= grid.nx; i++) {
        const k = this.#last.at(j) + i;
        const water =
          rows.shareSouth[j] * (ht[k - pitch - 1] + ht[k - pitch]) + rows.shareNorth[j] * (ht[k - 1] + ht[k]);
        const hq = this.#perWet[k] * water;
        const V = hq > 0 ? (fluxV[k - 1] + fluxV[k]) / hq : 0;
        const U = hq > 0 ? (fluxU[k - pitch] + fluxU[k]) / hq : 0;
        const zeta = this.#last.vorticity(i, j);
        this.cornerThickness[k] = hq;
        this.planetaryV[k] = grid.f[j] * V;
        this.planetaryU[k] = grid.f[j] * U;
        this.relativeV[k] = zeta * V;
        this.relativeU[k] = zeta * U;
      }
  }

  #kinetics(): void {
    const { ut, vt, pitch, model } = this.#last;
    const { nx, ny, periodic } = model.grid;
    for (let j = 0; j < ny; j++) {
      const row = this.#last.at(j);
      for (let k = row; k < row + nx; k++)
        this.kinetic[k] = 0.25 * (ut[k] ** 2 + ut[k + 1] ** 2 + (vt[k] ** 2 + vt[k + pitch] ** 2));
      if (periodic) wrap(this.kinetic, row, nx);
    }
  }
}

/** 1 over the number of water cells around a corner; 0 where there is none. */
function perWetPlane(model: Model, plane: Float64Array): Float64Array {
  const { grid, spans, coastCorners, layout } = model;
  for (let j = 0; j <= grid.ny; j++) {
    const row = (j + 1) * layout.pitch;
    forRuns(spans.corners, j, (first, end) => plane.fill(0.25, row + WEST + first, row + WEST + end));
    for (let c = coastCorners.rowStart[j]; c < coastCorners.rowStart[j + 1]; c++)
      plane[row + coastCorners.columns[c]] = coastCorners.perWet[c];
  }
  return plane;
}
