import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import type { Column } from '../integration-types';
import type { Grid } from '../grid/grid';
import { forRuns, type Model } from '../stepper/model';
import type { Spans } from '../stepper/spans';
import { fieldOf, type StateVariable } from '../stepper/fields';
import type { LinearTerm, StepSums } from '../stepper/sums';

const JOULES_PER_PJ = 1e15;
const KG_PER_GT = 1e12;

// Slots of the accumulator: compensated sums first, then plain values.
const TERMS = ['wind', 'rayleigh', 'viscous', 'damping', 'numerical', 'massSource'] as const;
const SLOT = Object.fromEntries(TERMS.map((term, k) => [term, SUM_SLOTS * k])) as Record<
  (typeof TERMS)[number],
  number
>;
const START = SUM_SLOTS * TERMS.length;
const START_MASS = START;
const START_ENERGY = START + 1;
export const BUDGET_SLOTS = START + 2;

/**
 * Mass and energy of the basin and the work of each term, added up every step over an interval (numerics.md §9).
 * The residuals are differences of independent sums: the end values come from the fields, the terms from the steps.
 */
export class BasinBudget {
  /** Everything that a checkpoint keeps. */
  readonly slots = new Float64Array(BUDGET_SLOTS);
  readonly #model: Model;

  constructor(model: Model) {
    this.#model = model;
    this.#open(massAnomaly(model), energyOf(model));
  }

  /** Adds the work of one step. */
  add(sums: StepSums): void {
    const { dt, density, restThickness, reducedGravity, rayleigh, damping, grid } = this.#model;
    const kinetic = density * restThickness * dt;
    const potential = density * reducedGravity * dt;
    const { slots } = this;
    const total = totalsOf(grid, sums);
    addTo(slots, SLOT.wind, kinetic * total.wind);
    addTo(slots, SLOT.rayleigh, -kinetic * (rayleigh * total.square + total.sponge));
    addTo(slots, SLOT.viscous, kinetic * total.viscous);
    addTo(slots, SLOT.damping, -potential * (damping * total.etaSquared + total.spongeEtaSquared));
    addTo(slots, SLOT.numerical, kinetic * (total.kinetic - reducedGravity * total.potential));
    let rate = 0;
    for (let j = 0; j < grid.ny; j++) rate += dampedVolumeRate(this.#model, sums, j);
    if (rate !== 0) addTo(slots, SLOT.massSource, density * dt * rate);
  }

  /** Values in the order of `BUDGET_COLUMNS`; begins the next interval. */
  take(): Float64Array {
    const { slots } = this;
    const mass = massAnomaly(this.#model);
    const { kinetic, potential } = energyOf(this.#model);
    const massChange = mass - slots[START_MASS];
    const massSource = sumAt(slots, SLOT.massSource);
    const energyChange = kinetic + potential - slots[START_ENERGY];
    const works = (['wind', 'rayleigh', 'viscous', 'damping', 'numerical'] as const).map((t) => sumAt(slots, SLOT[t]));
    const sum = works.reduce((total, work) => total + work, 0);
    this.#open(mass, { kinetic, potential });
    return Float64Array.of(
      mass / KG_PER_GT,
      massChange / KG_PER_GT,
      massSource / KG_PER_GT,
      (massChange - massSource) / KG_PER_GT,
      kinetic / JOULES_PER_PJ,
      potential / JOULES_PER_PJ,
      energyChange / JOULES_PER_PJ,
      ...works.map((work) => work / JOULES_PER_PJ),
      (energyChange - sum) / JOULES_PER_PJ,
    );
  }

  #open(mass: number, energy: { kinetic: number; potential: number }): void {
    this.slots.fill(0);
    this.slots[START_MASS] = mass;
    this.slots[START_ENERGY] = energy.kinetic + energy.potential;
  }
}

/** Columns of the budget stream. Work is positive when it adds energy to the layer. */
export const BUDGET_COLUMNS: readonly Column[] = [
  { name: 'massAnomaly', label: 'Mass anomaly', unit: 'Gt', kind: 'instant' },
  { name: 'massChange', label: 'Change of mass', unit: 'Gt', kind: 'integral' },
  { name: 'massDamping', label: 'Mass added by interface damping', unit: 'Gt', kind: 'integral' },
  { name: 'massResidual', label: 'Mass residual', unit: 'Gt', kind: 'integral' },
  { name: 'kineticEnergy', label: 'Kinetic energy', unit: 'PJ', kind: 'instant' },
  { name: 'availablePotentialEnergy', label: 'Available potential energy', unit: 'PJ', kind: 'instant' },
  { name: 'energyChange', label: 'Change of energy', unit: 'PJ', kind: 'integral' },
  { name: 'windWork', label: 'Work of the wind', unit: 'PJ', kind: 'integral' },
  { name: 'rayleighWork', label: 'Work of Rayleigh drag', unit: 'PJ', kind: 'integral' },
  { name: 'viscousWork', label: 'Work of viscosity', unit: 'PJ', kind: 'integral' },
  { name: 'dampingWork', label: 'Work of interface damping', unit: 'PJ', kind: 'integral' },
  { name: 'numericalWork', label: 'Numerical sink', unit: 'PJ', kind: 'integral' },
  { name: 'energyResidual', label: 'Energy residual', unit: 'PJ', kind: 'integral' },
];

/** ρ0 ∫η dA, kg. */
export function massAnomaly(model: Model): number {
  return model.density * volumeNorthOf(model, 0);
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
  spongeEtaSquared: number;
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
    spongeEtaSquared: 0,
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
    total.spongeEtaSquared += area * terms.spongeEtaSquared[j];
  }
  return total;
}

/** Volume that damping and sponges added to cell row j in a step, m³/s. */
export function dampedVolumeRate(model: Model, { terms }: StepSums, j: number): number {
  const { grid, damping } = model;
  return -(grid.dxC[j] * grid.dy) * (damping * terms['eta'][j] + terms['spongeEta'][j]);
}

/** ∫η dA over cell rows j0 and north of it, m³: compensated, fixed order. */
export function volumeNorthOf(model: Model, j0: number): number {
  const { grid, spans } = model;
  const { data, offset, rowStride } = fieldOf(model, 'h');
  const sums = new Float64Array(SUM_SLOTS);
  for (let j = j0; j < grid.ny; j++) {
    let row = 0;
    forRuns(spans.cells, j, (first, end) => {
      for (let k = offset + j * rowStride + first; k < offset + j * rowStride + end; k++) row += data[k];
    });
    addTo(sums, 0, row * (grid.dxC[j] * grid.dy));
  }
  return sumAt(sums, 0);
}

/** Kinetic energy ½ ρ0 H ∫(u² + v²) and available potential energy ½ ρ0 g′ ∫η², J; numerics.md §8. */
export function energyOf(model: Model): { kinetic: number; potential: number } {
  const { grid, density, restThickness, reducedGravity, spans } = model;
  const sums = new Float64Array(2 * SUM_SLOTS);
  const squares = (variable: StateVariable, points: Spans, j: number) => {
    const { data, offset, rowStride } = fieldOf(model, variable);
    let row = 0;
    forRuns(points, j, (first, end) => {
      for (let k = offset + j * rowStride + first; k < offset + j * rowStride + end; k++) row += data[k] * data[k];
    });
    return row;
  };
  for (let j = 0; j < grid.ny; j++) {
    const area = grid.dxC[j] * grid.dy;
    addTo(sums, 0, squares('u', spans.uPoints, j) * area);
    addTo(sums, 0, squares('v', spans.vPoints, j) * (grid.dxV[j] * grid.dy));
    addTo(sums, SUM_SLOTS, squares('h', spans.cells, j) * area);
  }
  return {
    kinetic: 0.5 * density * restThickness * sumAt(sums, 0),
    potential: 0.5 * density * reducedGravity * sumAt(sums, SUM_SLOTS),
  };
}
