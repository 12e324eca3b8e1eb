import type { Column } from '../integration-types';
import type { Output } from '../setup';
import type { Model } from '../stepper/model';
import { LastStep } from '../terms/last-step';
import { MomentumBudget } from './momentum-budget';
import { VorticityBudget } from './vorticity-budget';

/**
 * The budgets of momentum and vorticity that a setup asks for. Their terms are made again from the stored levels, so they
 * need every step by itself: `add` after each.
 */
export class TermBudgets {
  readonly #budgets: readonly (MomentumBudget | VorticityBudget)[];
  readonly #last: LastStep | null;

  constructor(model: Model, { momentumBudget, vorticityBudget }: Pick<Output, 'momentumBudget' | 'vorticityBudget'>) {
    const budgets: (MomentumBudget | VorticityBudget)[] = [];
    if (momentumBudget) budgets.push(new MomentumBudget(model));
    if (vorticityBudget) budgets.push(new VorticityBudget(model));
    this.#budgets = budgets;
    this.#last = budgets.length > 0 ? new LastStep(model) : null;
  }

  /** Whether there is anything to add after a step. */
  get wanted(): boolean {
    return this.#last !== null;
  }

  get columns(): Column[] {
    return this.#budgets.flatMap(({ columns }) => columns);
  }

  /** Sums that a checkpoint keeps, one array a budget. */
  get slots(): Float64Array[] {
    return this.#budgets.map(({ slots }) => slots);
  }

  /** Adds the terms of the step that the model has just completed. */
  add(): void {
    if (!this.#last) return;
    this.#last.update();
    for (const budget of this.#budgets) budget.add(this.#last);
  }

  /** Values in the order of `columns`; begins the next interval. */
  take(): number[] {
    return this.#budgets.flatMap((budget) => budget.take());
  }
}
