import type { Grid } from '../grid/grid';
import type { Model } from '../stepper/model';
import { NONE } from '../stepper/statics';
import type { LinearTerm, NonlinearTerm, StepSums } from '../stepper/sums';

/** Work, J, that each term did in one step: positive when it adds energy to the layer. */
export const WORKS = [
  'wind',
  'rayleigh',
  'viscous',
  'damping',
  'sponge',
  'entrainment',
  'detrainment',
  'numerical',
] as const;
/** Mass, kg, that each term added in one step. */
export const SOURCES = ['massDamping', 'massSponge', 'massEntrainment', 'massDetrainment'] as const;
/** Cells in which the step held the layer up. */
export const COUNTS = ['limitedCells', 'clippedCells'] as const;
export type Work = (typeof WORKS)[number];
export type Source = (typeof SOURCES)[number];
export type Count = (typeof COUNTS)[number];
export type StepBudget = Record<Work | Source | Count, number>;

/** Which terms a model has; the others are 0 and are not recorded. */
export function termsOf(model: Model): { works: Work[]; sources: Source[]; counts: Count[] } {
  const sponge = model.statics.spongeCell !== NONE;
  const { entrainment, equations } = model;
  const has: Partial<Record<Work | Source | Count, boolean>> = {
    sponge,
    massSponge: sponge,
    entrainment: entrainment !== null,
    massEntrainment: entrainment !== null,
    detrainment: entrainment?.detrainment === 'uniform',
    massDetrainment: entrainment?.detrainment === 'uniform',
    limitedCells: equations === 'nonlinear' && model.minimumThickness > 0,
    clippedCells: equations === 'nonlinear' && model.minimumThickness > 0,
  };
  return {
    works: WORKS.filter((work) => has[work] ?? true),
    sources: SOURCES.filter((source) => has[source] ?? true),
    counts: COUNTS.filter((count) => has[count] ?? true),
  };
}

/** Budget of the step whose row sums these are; what is derived in linear-sums and nonlinear-sums is put together here. */
export function stepBudget(model: Model, sums: StepSums): StepBudget {
  return model.equations === 'linear' ? linearBudget(model, sums) : nonlinearBudget(model, sums);
}

const NOTHING: StepBudget = Object.fromEntries(
  [...WORKS, ...SOURCES, ...COUNTS].map((term) => [term, 0]),
) as StepBudget;

function linearBudget(model: Model, sums: StepSums): StepBudget {
  const { grid, dt, density, restThickness, reducedGravity, rayleigh, damping } = model;
  const kinetic = density * restThickness * dt;
  const potential = density * reducedGravity * dt;
  const total = totalsOf(grid, sums);
  return {
    ...NOTHING,
    wind: kinetic * total.wind,
    rayleigh: -kinetic * rayleigh * total.square,
    viscous: kinetic * total.viscous,
    damping: -potential * damping * total.etaSquared,
    sponge: -(kinetic * total.sponge + potential * total.spongeEtaSquared),
    numerical: kinetic * (total.kinetic - reducedGravity * total.potential),
    massDamping: -density * dt * damping * total.eta,
    massSponge: -density * dt * total.spongeEta,
  };
}

function nonlinearBudget(model: Model, sums: StepSums): StepBudget {
  const { grid, spans, dt, density, rayleigh, damping } = model;
  const terms = sums.terms as Record<NonlinearTerm, Float64Array>;
  const budget = { ...NOTHING };
  const unit = density * dt;
  for (let j = 0; j < grid.ny; j++) {
    const cell = unit * (grid.dxC[j] * grid.dy);
    const face = unit * (grid.dxV[j] * grid.dy);
    const both = (u: Float64Array, v: Float64Array) => face * v[j] + cell * u[j];
    const detrained = terms.detrained[j];
    budget.wind += both(terms.windU, terms.windV);
    budget.rayleigh -= rayleigh * both(terms.squareU, terms.squareV);
    budget.viscous += both(terms.viscousU, terms.viscousV);
    budget.damping -= damping * (cell * terms.bernoulliEta[j]);
    budget.sponge -= both(terms.spongeU, terms.spongeV) + cell * terms.bernoulliSpongeEta[j];
    budget.entrainment += cell * terms.bernoulliEntrained[j] - both(terms.dilutedU, terms.dilutedV);
    budget.detrainment -= detrained * (cell * terms.bernoulli[j]);
    budget.numerical += both(terms.kineticU, terms.kineticV) - cell * terms.bernoulliOutflow[j];
    budget.massDamping -= damping * (cell * terms.eta[j]);
    budget.massSponge -= cell * terms.spongeEta[j];
    budget.massEntrainment += cell * terms.entrained[j];
    budget.massDetrainment -= detrained * (cell * wetCellsOf(spans.cells, j));
    budget.limitedCells += terms.limited[j];
    budget.clippedCells += terms.clipped[j];
  }
  return budget;
}

/** Volume that damping and sponges, and that entrainment less detrainment, added to cell row j in a step, m³/s. */
export function volumeRates(model: Model, sums: StepSums, j: number): { damped: number; entrained: number } {
  const { terms } = sums;
  const area = model.grid.dxC[j] * model.grid.dy;
  const damped = -area * (model.damping * terms['eta'][j] + terms['spongeEta'][j]);
  if (model.equations === 'linear') return { damped, entrained: 0 };
  const returned = terms['detrained'][j] * wetCellsOf(model.spans.cells, j);
  return { damped, entrained: area * (terms['entrained'][j] - returned) };
}

function wetCellsOf({ bounds, rowStart }: Model['spans']['cells'], j: number): number {
  let cells = 0;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) cells += bounds[2 * s + 1] - bounds[2 * s];
  return cells;
}

/** Sums of a linear step over the basin: Σ A × each row sum, u and v points together; numerics.md §9. */
export interface LinearTotals {
  wind: number;
  square: number;
  sponge: number;
  viscous: number;
  kinetic: number;
  potential: number;
  etaSquared: number;
  eta: number;
  spongeEtaSquared: number;
  spongeEta: number;
}

/** Adds the row sums of a linear step up, row by row from the south. */
export function totalsOf(grid: Grid, sums: StepSums): LinearTotals {
  const terms = sums.terms as Record<LinearTerm, Float64Array>;
  const total: LinearTotals = {
    wind: 0,
    square: 0,
    sponge: 0,
    viscous: 0,
    kinetic: 0,
    potential: 0,
    etaSquared: 0,
    eta: 0,
    spongeEtaSquared: 0,
    spongeEta: 0,
  };
  for (let j = 0; j < grid.ny; j++) {
    const areaV = grid.dxV[j] * grid.dy;
    const area = grid.dxC[j] * grid.dy;
    total.wind += areaV * terms.windV[j] + area * terms.windU[j];
    total.square += areaV * terms.squareV[j] + area * terms.squareU[j];
    total.sponge += areaV * terms.spongeV[j] + area * terms.spongeU[j];
    total.viscous += areaV * terms.viscousV[j] + area * terms.viscousU[j];
    total.kinetic += areaV * terms.kineticV[j] + area * terms.kineticU[j];
    total.potential += area * terms.potential[j];
    total.etaSquared += area * terms.etaSquared[j];
    total.eta += area * terms.eta[j];
    total.spongeEtaSquared += area * terms.spongeEtaSquared[j];
    total.spongeEta += area * terms.spongeEta[j];
  }
  return total;
}
