import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import type { Column } from '../integration-types';
import type { Model } from '../stepper/model';
import type { StepSums } from '../stepper/sums';
import { energyOf, massAnomaly } from './energy';
import { stepBudget, termsOf, type Count, type Source, type Work } from './step-budget';

const JOULES_PER_PJ = 1e15;
const KG_PER_GT = 1e12;

/**
 * Mass and energy of the basin and the work of each term, added up every step over an interval (numerics.md §9).
 * The residuals are differences of independent sums: the end values come from the fields, the terms from the steps.
 */
export class BasinBudget {
  /** Everything that a checkpoint keeps: compensated sums of the terms, mass and energy at the start, the step count. */
  readonly slots: Float64Array;
  /** Columns of the budget stream. Work is positive when it adds energy to the layer. */
  readonly columns: Column[];
  readonly #model: Model;
  readonly #works: Work[];
  readonly #sources: Source[];
  readonly #counts: Count[];
  readonly #startMass: number;

  constructor(model: Model) {
    this.#model = model;
    const { works, sources, counts } = termsOf(model);
    [this.#works, this.#sources, this.#counts] = [works, sources, counts];
    this.#startMass = SUM_SLOTS * (works.length + sources.length + counts.length);
    this.slots = new Float64Array(this.#startMass + 3);
    this.columns = [
      ...MASS_HEAD,
      ...sources.map((source): Column => ({ name: source, label: LABELS[source], unit: 'Gt', kind: 'integral' })),
      MASS_RESIDUAL,
      ...ENERGY_HEAD,
      ...works.map((work): Column => ({ name: `${work}Work`, label: LABELS[work], unit: 'PJ', kind: 'integral' })),
      ENERGY_RESIDUAL,
      ...counts.map((count): Column => ({ name: count, label: LABELS[count], unit: 'cells', kind: 'mean' })),
    ];
    this.#open(massAnomaly(model), energyOf(model));
  }

  /** Adds the work of one step. */
  add(sums: StepSums): void {
    const budget = stepBudget(this.#model, sums);
    let slot = 0;
    for (const term of [...this.#works, ...this.#sources, ...this.#counts]) {
      addTo(this.slots, slot, budget[term]);
      slot += SUM_SLOTS;
    }
    this.slots[this.#startMass + 2] += 1;
  }

  /** Values in the order of `columns`; begins the next interval. */
  take(): Float64Array {
    const mass = massAnomaly(this.#model);
    const { kinetic, potential } = energyOf(this.#model);
    const [startMass, startEnergy, steps] = this.slots.subarray(this.#startMass);
    const sums = Array.from({ length: this.#startMass / SUM_SLOTS }, (_, k) => sumAt(this.slots, SUM_SLOTS * k));
    const works = sums.splice(0, this.#works.length);
    const sources = sums.splice(0, this.#sources.length);
    const total = (parts: number[]) => parts.reduce((sum, part) => sum + part, 0);
    const massChange = mass - startMass;
    const energyChange = kinetic + potential - startEnergy;
    this.#open(mass, { kinetic, potential });
    const inGt = [mass, massChange, ...sources, massChange - total(sources)];
    const inPJ = [kinetic, potential, energyChange, ...works, energyChange - total(works)];
    return Float64Array.of(
      ...inGt.map((value) => value / KG_PER_GT),
      ...inPJ.map((value) => value / JOULES_PER_PJ),
      ...sums.map((count) => count / steps),
    );
  }

  #open(mass: number, energy: { kinetic: number; potential: number }): void {
    this.slots.fill(0);
    this.slots[this.#startMass] = mass;
    this.slots[this.#startMass + 1] = energy.kinetic + energy.potential;
  }
}

const MASS_HEAD: readonly Column[] = [
  { name: 'massAnomaly', label: 'Mass anomaly', unit: 'Gt', kind: 'instant' },
  { name: 'massChange', label: 'Change of mass', unit: 'Gt', kind: 'integral' },
];
const MASS_RESIDUAL: Column = { name: 'massResidual', label: 'Mass residual', unit: 'Gt', kind: 'integral' };
const ENERGY_HEAD: readonly Column[] = [
  { name: 'kineticEnergy', label: 'Kinetic energy', unit: 'PJ', kind: 'instant' },
  { name: 'availablePotentialEnergy', label: 'Available potential energy', unit: 'PJ', kind: 'instant' },
  { name: 'energyChange', label: 'Change of energy', unit: 'PJ', kind: 'integral' },
];
const ENERGY_RESIDUAL: Column = { name: 'energyResidual', label: 'Energy residual', unit: 'PJ', kind: 'integral' };

const LABELS: Record<Work | Source | Count, string> = {
  massDamping: 'Mass added by interface damping',
  massSponge: 'Mass added by sponges',
  massEntrainment: 'Mass entrained from below',
  massDetrainment: 'Mass given back below',
  wind: 'Work of the wind',
  rayleigh: 'Work of Rayleigh drag',
  viscous: 'Work of viscosity',
  damping: 'Work of interface damping',
  sponge: 'Work of sponges',
  entrainment: 'Work of entrainment',
  detrainment: 'Work of detrainment',
  numerical: 'Numerical sink',
  limitedCells: 'Cells with limited outflow, a step',
  clippedCells: 'Cells held at the minimum thickness, a step',
};
