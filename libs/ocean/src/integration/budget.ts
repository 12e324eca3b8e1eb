import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import type { Column } from '../integration-types';
import type { Model } from '../stepper/model';
import type { StepWork } from '../stepper/step';

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
  add(work: StepWork): void {
    const { dt, density, restThickness, reducedGravity, rayleigh, damping } = this.#model;
    const kinetic = density * restThickness * dt;
    const potential = density * reducedGravity * dt;
    const { slots } = this;
    addTo(slots, SLOT.wind, kinetic * work.wind);
    addTo(slots, SLOT.rayleigh, -kinetic * rayleigh * work.speedSquared);
    addTo(slots, SLOT.viscous, kinetic * work.viscous);
    addTo(slots, SLOT.damping, -potential * damping * work.etaSquared);
    addTo(slots, SLOT.numerical, kinetic * (work.kinetic - reducedGravity * work.potential));
    if (damping > 0) {
      let volume = 0;
      for (let j = 0; j < work.etaByRow.length; j++) volume += work.etaByRow[j];
      addTo(slots, SLOT.massSource, -density * damping * dt * volume);
    }
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

/** ∫η dA over cell rows j0 and north of it, m³: compensated, fixed order. */
export function volumeNorthOf(model: Model, j0: number): number {
  const { grid, cells } = model;
  const eta = model.eta.now;
  const sums = new Float64Array(SUM_SLOTS);
  for (let j = j0; j < grid.ny; j++) {
    let row = 0;
    for (let s = cells.rowStart[j]; s < cells.rowStart[j + 1]; s++)
      for (let k = cells.bounds[2 * s]; k < cells.bounds[2 * s + 1]; k++) row += eta[k];
    addTo(sums, 0, row * (grid.dxC[j] * grid.dy));
  }
  return sumAt(sums, 0);
}

/** Kinetic energy ½ ρ0 H ∫(u² + v²) and available potential energy ½ ρ0 g′ ∫η², J; numerics.md §8. */
export function energyOf(model: Model): { kinetic: number; potential: number } {
  const { grid, density, restThickness, reducedGravity } = model;
  const sums = new Float64Array(2 * SUM_SLOTS);
  const squares = (data: Float64Array, spans: Model['cells'], j: number) => {
    let row = 0;
    for (let s = spans.rowStart[j]; s < spans.rowStart[j + 1]; s++)
      for (let k = spans.bounds[2 * s]; k < spans.bounds[2 * s + 1]; k++) row += data[k] * data[k];
    return row;
  };
  for (let j = 0; j < grid.ny; j++) {
    const area = grid.dxC[j] * grid.dy;
    addTo(sums, 0, squares(model.u.now, model.uPoints, j) * area);
    addTo(sums, 0, squares(model.v.now, model.vPoints, j) * (grid.dxV[j] * grid.dy));
    addTo(sums, SUM_SLOTS, squares(model.eta.now, model.cells, j) * area);
  }
  return {
    kinetic: 0.5 * density * restThickness * sumAt(sums, 0),
    potential: 0.5 * density * reducedGravity * sumAt(sums, SUM_SLOTS),
  };
}
