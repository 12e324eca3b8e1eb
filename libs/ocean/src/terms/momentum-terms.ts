import { fieldOf, type StateVariable } from '../stepper/fields';
import { WEST } from '../stepper/layout';
import { forRuns } from '../stepper/model';
import { NONE, type Plane } from '../stepper/statics';
import type { LastStep } from './last-step';

/**
 * What changed a velocity in the last step, m/s², each with the sign that it has in the tendency:
 * wind τ/(ρ0 H) or τ/(ρ0 max(h, h_s)); coriolis, the part of the flux q V that f makes; vorticity, the part that ζ makes;
 * pressure −g′∇p; kinetic −∇K; viscosity; rayleigh −r ū and sponge −r_s ū; entrainment −(w_e/h) ū, the momentum that water
 * without any takes up. ū is the Crank–Nicolson mean (u(n) + u(n + 1))/2. A linear step leaves vorticity, kinetic and
 * entrainment 0.
 */
export const MOMENTUM_TERMS = [
  'wind',
  'coriolis',
  'vorticity',
  'pressure',
  'kinetic',
  'viscosity',
  'rayleigh',
  'sponge',
  'entrainment',
] as const;
export type MomentumTerm = (typeof MOMENTUM_TERMS)[number];

/** Terms of one row by column, [nx + 1]; `tendency` is (u(n + 1) − u(n))/dt. Points that are not stepped hold 0. */
export type RowTerms = Record<MomentumTerm | 'tendency', Float64Array>;

/** Empty terms of a row of nx cells. */
export function createRowTerms(nx: number): RowTerms {
  const names = ['tendency', ...MOMENTUM_TERMS] as const;
  return Object.fromEntries(names.map((name) => [name, new Float64Array(nx + 1)])) as RowTerms;
}

/** Terms at the u points of row j, 0 … ny − 1. On a periodic grid the face at nx, which is that at 0, is left 0. */
export function zonalTerms(last: LastStep, j: number, out: RowTerms): void {
  const { model, pitch, vt, pressure, stretching, spin, nonlinear } = last;
  const { rows, grid, spans, stressFloor } = model;
  for (const values of Object.values(out)) values.fill(0);
  const stress = stressAt(last, j, 'x');
  const perDx = rows.perDxC[j];
  const perDy = 1 / grid.dy;
  forRuns(spans.uPoints, j, (first, end) => {
    for (let i = first; i < end; i++) {
      const k = last.at(j) + i;
      if (nonlinear) {
        const { planetaryV, relativeV, kinetic } = nonlinear;
        out.wind[i] = stress(i) / Math.max(nonlinear.zonalThickness(i, j), stressFloor);
        out.coriolis[i] = rows.turnSouth[j] * planetaryV[k] + rows.turnNorth[j] * planetaryV[k + pitch];
        out.vorticity[i] = rows.turnSouth[j] * relativeV[k] + rows.turnNorth[j] * relativeV[k + pitch];
        out.kinetic[i] = (kinetic[k - 1] - kinetic[k]) * perDx;
      } else {
        out.wind[i] = stress(i) / model.restThickness;
        out.coriolis[i] =
          rows.coriolisSouth[j] * (vt[k - 1] + vt[k]) + rows.coriolisNorth[j] * (vt[k + pitch - 1] + vt[k + pitch]);
      }
      out.pressure[i] = (pressure[k - 1] - pressure[k]) * perDx;
      out.viscosity[i] = (stretching[k] - stretching[k - 1]) * perDx - (spin[k + pitch] - spin[k]) * perDy;
    }
  });
  addDrag(last, j, 'u', out);
}

/** Terms at the v points of row j, 0 … ny (the walls hold none). */
export function meridionalTerms(last: LastStep, j: number, out: RowTerms): void {
  const { model, pitch, ut, pressure, stretching, spin, nonlinear } = last;
  const { rows, grid, spans, stressFloor } = model;
  for (const values of Object.values(out)) values.fill(0);
  const stress = stressAt(last, j, 'y');
  const perDx = rows.perDxV[j];
  const perDy = 1 / grid.dy;
  forRuns(spans.vPoints, j, (first, end) => {
    for (let i = first; i < end; i++) {
      const k = last.at(j) + i;
      if (nonlinear) {
        const { planetaryU, relativeU, kinetic } = nonlinear;
        out.wind[i] = stress(i) / Math.max(nonlinear.meridionalThickness(i, j), stressFloor);
        out.coriolis[i] = -0.25 * (planetaryU[k] + planetaryU[k + 1]);
        out.vorticity[i] = -0.25 * (relativeU[k] + relativeU[k + 1]);
        out.kinetic[i] = (kinetic[k - pitch] - kinetic[k]) * perDy;
      } else {
        out.wind[i] = stress(i) / model.restThickness;
        out.coriolis[i] = -rows.coriolisV[j] * (ut[k - pitch] + ut[k] + (ut[k - pitch + 1] + ut[k + 1]));
      }
      out.pressure[i] = (pressure[k - pitch] - pressure[k]) * perDy;
      out.viscosity[i] = (stretching[k] - stretching[k - pitch]) * perDy + (spin[k + 1] - spin[k]) * perDx;
    }
  });
  addDrag(last, j, 'v', out);
}

/** Tendency and what is proportional to ū: Rayleigh drag, sponges, and water that was taken up without momentum. */
function addDrag(last: LastStep, j: number, variable: 'u' | 'v', out: RowTerms): void {
  const { model, pitch } = last;
  const { data, dt, rayleigh, spans, statics } = model;
  const plane: Plane = variable === 'u' ? statics.spongeU : statics.spongeV;
  const sponge = plane === NONE ? NONE : plane + j * pitch + WEST;
  const dilution = dilutionOf(last, j, variable);
  const now = rowOf(last, variable, 'now', j);
  const previous = rowOf(last, variable, 'previous', j);
  forRuns(variable === 'u' ? spans.uPoints : spans.vPoints, j, (first, end) => {
    for (let i = first; i < end; i++) {
      const mean = 0.5 * (data[now + i] + data[previous + i]);
      out.tendency[i] = (data[now + i] - data[previous + i]) / dt;
      out.rayleigh[i] = -rayleigh * mean;
      if (sponge !== NONE) out.sponge[i] = -data[sponge + i] * mean;
      if (dilution) out.entrainment[i] = -dilution(i) * mean;
    }
  });
}

/** Index of column 0 of row j of a state field in the model's memory. */
export function rowOf(last: LastStep, variable: StateVariable, role: 'now' | 'previous', j: number): number {
  const { offset, rowStride } = fieldOf(last.model, variable, role);
  return offset + j * rowStride;
}

/** w_e/h at a velocity point, 1/s; null where nothing is entrained. */
function dilutionOf(last: LastStep, j: number, variable: 'u' | 'v'): ((i: number) => number) | null {
  const { model, nonlinear, pitch } = last;
  const { rows, entrainment } = model;
  if (!nonlinear || !entrainment) return null;
  const { entrained } = nonlinear;
  const row = last.at(j);
  if (variable === 'u')
    return (i) => (0.5 * (entrained[row + i - 1] + entrained[row + i])) / nonlinear.zonalThickness(i, j);
  return (i) =>
    (0.5 * (rows.shareSouth[j] * entrained[row - pitch + i] + rows.shareNorth[j] * entrained[row + i])) /
    nonlinear.meridionalThickness(i, j);
}

/** τ/ρ0 at column i of row j in the last step, m²/s². */
function stressAt(last: LastStep, j: number, component: 'x' | 'y'): (i: number) => number {
  const { model, factors, pitch } = last;
  const { forcing, statics, data, density } = model;
  let uniform = 0;
  forcing.bases.forEach(({ tauxRow, tauyRow }, b) => {
    uniform += factors[b] * ((component === 'x' ? tauxRow : tauyRow)?.[j] ?? 0);
  });
  const fields = (component === 'x' ? statics.tauX : statics.tauY).map((plane) =>
    plane === NONE ? NONE : plane + j * pitch + WEST,
  );
  return (i) => {
    let tau = uniform;
    for (let b = 0; b < fields.length; b++) if (fields[b] !== NONE) tau += factors[b] * data[fields[b] + i];
    return tau / density;
  };
}
