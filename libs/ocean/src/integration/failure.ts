import type { FailureReport } from '../integration-types';
import { valueAt } from '../stepper/fields';
import { levelOffset } from '../stepper/layout';
import type { Model } from '../stepper/model';
import { NATIVE_VARIABLES, shapeOf, type NativeVariable } from './levels';
import { stabilityNumbers } from './stability';

/** Thrown by `Integration.advance` when the state is not finite any more. */
export class IntegrationFailure extends Error {
  override readonly name = 'IntegrationFailure';
  constructor(readonly report: FailureReport) {
    super(report.message);
  }
}

/** True while every value is finite: one sum over the state, which a single NaN or infinity spoils. */
export function isFinite(model: Model): boolean {
  const { data, layout, phase } = model;
  const first = levelOffset(layout, phase, 'now');
  const end = first + layout.levelLength;
  let sum = 0;
  for (let k = first; k < end; k++) sum += data[k];
  return Number.isFinite(sum);
}

/**
 * Report of a state that is not finite. `exact`: the step before was still finite, so this step and its first bad cell
 * can be named; otherwise only the interval of `every` steps is known.
 */
export function failureReport(model: Model, stepsPerDay: number, exact: boolean, every: number): FailureReport {
  const { step } = model;
  const day = step / stepsPerDay;
  const cell = exact ? firstBadCell(model) : null;
  const place = cell
    ? `${cell.variable} at ${round(cell.longitudeDeg)}° E, ${round(cell.latitudeDeg)}° N is not finite after step ${step} (day ${round(day)})`
    : `The state is not finite; it went wrong in the ${every} steps before step ${step} (day ${round(day)})`;
  return {
    cause: 'non-finite',
    step: exact ? step : -1,
    day,
    cell,
    message: `${place}. ${likelyCause(model)}`.replaceAll('-', '−'),
  };
}

/** First non-finite value in the order η, u, v, row by row; the largest one when the sum alone overflowed. */
function firstBadCell(model: Model): FailureReport['cell'] {
  let largest: { variable: NativeVariable; i: number; j: number; size: number } | null = null;
  for (const variable of NATIVE_VARIABLES) {
    const [rows, columns] = shapeOf(model.grid, variable);
    for (let j = 0; j < rows; j++)
      for (let i = 0; i < columns; i++) {
        const value = valueAt(model, variable === 'eta' ? 'h' : variable, i, j);
        if (!Number.isFinite(value)) return cellAt(model, variable, i, j);
        const size = Math.abs(value);
        if (!largest || size > largest.size) largest = { variable, i, j, size };
      }
  }
  return largest && cellAt(model, largest.variable, largest.i, largest.j);
}

function cellAt(model: Model, variable: NativeVariable, i: number, j: number): NonNullable<FailureReport['cell']> {
  const { lonCentre, lonFace, latCentre, latFace } = model.grid;
  return {
    i,
    j,
    longitudeDeg: variable === 'u' ? lonFace[i] : lonCentre[i],
    latitudeDeg: variable === 'v' ? latFace[j] : latCentre[j],
    variable,
  };
}

function likelyCause(model: Model): string {
  const c = Math.sqrt(model.reducedGravity * model.restThickness);
  const { gravity, coriolis, viscous, combined } = stabilityNumbers(model.grid, c, model.dt, model.viscosity);
  const numbers = `S = ${round(gravity)} (limit 0.89), F = ${round(coriolis)} (0.786), νS = ${round(viscous)} (0.16), together ${round(combined)} (1)`;
  if (combined > 1 || coriolis > 0.786)
    return `The time step of ${round(model.dt)} s is too long: ${numbers}. Use more steps a day${viscous > 0.16 ? ' or less viscosity' : ''}.`;
  return `The time step is within its limits (${numbers}), so look at the wind and the start state: a value so large that the arithmetic overflows.`;
}

function round(value: number): string {
  return String(Number(value.toPrecision(4)));
}
