import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import type { Column } from '../integration-types';

/** One term of a budget: its column, and the number that scales its sum to the column's unit. */
export interface BudgetTerm<Name extends string> {
  name: Name;
  label: string;
}

/**
 * Sums over an interval of the terms that change one quantity of the basin, and the quantity at its begin. The residual
 * is a difference of independent sums: the tendency comes from the fields at both ends, the terms from every step.
 */
export class TermSums<Name extends string> {
  /** Everything that a checkpoint keeps: a compensated sum a term, steps, quantity at the begin of the interval. */
  readonly slots: Float64Array;
  readonly columns: Column[];
  readonly #terms: readonly BudgetTerm<Name>[];
  readonly #perUnit: number;
  readonly #dt: number;

  /** `prefix`: begins the columns' names; `perUnit`: SI units in one unit of the columns. */
  constructor(
    options: { prefix: string; what: string; unit: string; perUnit: number; dt: number },
    terms: readonly BudgetTerm<Name>[],
    quantity: number,
  ) {
    const { prefix, what, unit } = options;
    this.#terms = terms;
    this.#perUnit = options.perUnit;
    this.#dt = options.dt;
    this.slots = new Float64Array(SUM_SLOTS * terms.length + 2);
    this.slots[SUM_SLOTS * terms.length + 1] = quantity;
    const column = (name: string, label: string): Column => ({ name: prefix + name, label, unit, kind: 'mean' });
    this.columns = [
      column('Tendency', `Rate of change of ${what}`),
      ...terms.map(({ name, label }) => column(name.charAt(0).toUpperCase() + name.slice(1), label)),
      column('Residual', `Residual of ${what}`),
    ];
  }

  /** Adds what the terms did in one step: rates in SI units; names that the budget does not have are left out. */
  add(rates: Readonly<Record<Name, number>>): void {
    this.#terms.forEach(({ name }, k) => addTo(this.slots, SUM_SLOTS * k, rates[name]));
    this.slots[SUM_SLOTS * this.#terms.length] += 1;
  }

  /** Means over the interval in the order of `columns`; begins the next with `quantity`. NaN when no step was made. */
  take(quantity: number): number[] {
    const count = SUM_SLOTS * this.#terms.length;
    const steps = this.slots[count];
    const tendency = (quantity - this.slots[count + 1]) / (steps * this.#dt);
    const means = this.#terms.map((_term, k) => sumAt(this.slots, SUM_SLOTS * k) / steps);
    const residual = means.reduce((rest, mean) => rest - mean, tendency);
    this.slots.fill(0);
    this.slots[count + 1] = quantity;
    return [tendency, ...means, residual].map((rate) => rate / this.#perUnit);
  }
}
