import { readableLatitude, readableLongitude } from '../describe/numbers';
import type { Caution, FailureReport } from '../integration-types';
import { valueAt } from '../stepper/fields';
import { levelOffset } from '../stepper/layout';
import type { Model } from '../stepper/model';
import { NATIVE_VARIABLES, shapeOf, type NativeVariable } from './levels';
import { stabilityNumbers } from './stability';
import { FLOW_CAUTION, FLOW_STOP, flowNumber, watchState, type Watch } from './watch';

/** Thrown by `Integration.advance` when a run cannot go on: the report says why and where. */
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
    ? `${cell.variable} at ${placeOf(cell)} is not finite after step ${step} (day ${round(day)})`
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

/**
 * Report of a nonlinear run whose flow has become too fast or whose layer too thick for the step. `exact`: the step before was
 * within the limit.
 */
export function stepLimitReport(model: Model, stepsPerDay: number, watch: Watch, exact: boolean): FailureReport {
  const { step, dt } = model;
  const value = flowNumber(model, watch);
  const cell = cellAt(model, watch.fastest.variable, watch.fastest.i, watch.fastest.j);
  // A multiple of four, as a setup needs, with some room below the caution.
  const needed = 4 * Math.ceil((stepsPerDay * value) / FLOW_CAUTION / 4);
  return {
    cause: 'step limit',
    step: exact ? step : -1,
    day: step / stepsPerDay,
    cell,
    message:
      `S(1 + 2Fr) = ${round(value)} after step ${step} (day ${round(step / stepsPerDay)}), more than the ${FLOW_STOP} up to which the scheme is stable: ` +
      `a flow of ${round(watch.fastest.value)} m/s at ${placeOf(cell)} and a layer of up to ${round(watch.thickest.value)} m are too fast for a step of ${round(dt)} s. ` +
      `Use at least ${needed} steps a day, or more friction or less wind.`,
  };
}

/** Report of a nonlinear layer that reached its minimum thickness in step `step` with nothing to protect it. */
export function outcropReport(model: Model, stepsPerDay: number, step: number): FailureReport {
  const watch = watchState(model);
  const cell = cellAt(model, 'eta', watch.thinnest.i, watch.thinnest.j);
  const exact = step === model.step;
  const flow = flowNumber(model, watch);
  const fast = flow > FLOW_CAUTION ? ` The flow is near the limit of the step, too: S(1 + 2Fr) = ${round(flow)}.` : '';
  return {
    cause: 'outcropping',
    step,
    day: step / stepsPerDay,
    cell: exact ? cell : null,
    message:
      `The layer reached its minimum thickness of ${round(model.minimumThickness)} m in step ${step} (day ${round(step / stepsPerDay)})${exact ? `, at ${placeOf(cell)}` : ''}: ` +
      `the wind thins it until the layer below comes to the surface, and on water so thin it would drive a flow without bound.${fast} ` +
      `Turn entrainment on, or give the stress a floor together with a viscosity A of at least |u| dx/13, or use less wind or a thicker layer.`,
  };
}

/** What a run is told that comes near the limit of its step. */
export function flowCaution(model: Model, stepsPerDay: number, watch: Watch): Caution {
  const value = flowNumber(model, watch);
  const { longitudeDeg, latitudeDeg } = cellAt(model, watch.fastest.variable, watch.fastest.i, watch.fastest.j);
  return {
    step: model.step,
    day: model.step / stepsPerDay,
    value,
    longitudeDeg,
    latitudeDeg,
    message: `S(1 + 2Fr) reached ${round(value)} with a flow of ${round(watch.fastest.value)} m/s at ${placeOf({ longitudeDeg, latitudeDeg })}; the run stops at ${FLOW_STOP}. More steps a day would make room.`,
  };
}

function placeOf({ longitudeDeg, latitudeDeg }: { longitudeDeg: number; latitudeDeg: number }): string {
  return `${readableLongitude(longitudeDeg)}, ${readableLatitude(latitudeDeg)}`;
}

function likelyCause(model: Model): string {
  const factors = new Float64Array(model.forcing.bases.length);
  model.forcing.factors(model.step - 1, factors);
  const bad = factors.findIndex((factor) => !Number.isFinite(factor));
  if (bad >= 0)
    return `Part ${bad + 1} of the wind has a factor of ${factors[bad]} in that step: look at its season, which must give finite numbers.`;
  const c = Math.sqrt(model.reducedGravity * model.restThickness);
  const { gravity, coriolis, viscous, combined } = stabilityNumbers(model.grid, c, model.dt, model.largestViscosity);
  const numbers = `S = ${round(gravity)} (limit 0.89), F = ${round(coriolis)} (0.786), νS = ${round(viscous)} (0.16), together ${round(combined)} (1)`;
  if (combined > 1 || coriolis > 0.786)
    return `The time step of ${round(model.dt)} s is too long: ${numbers}. Use more steps a day${viscous > 0.16 ? ' or less viscosity' : ''}.`;
  if (model.equations === 'nonlinear')
    return (
      `The time step is within the limits of a layer at rest (${numbers}), so the flow became too fast for it or a thin layer was driven without bound: ` +
      `look at S(1 + 2Fr) and at the thinnest places, and use more steps a day, more viscosity, entrainment or a stress floor.`
    );
  return `The time step is within its limits (${numbers}), so look at the wind and the start state: a value so large that the arithmetic overflows.`;
}

function round(value: number): string {
  return String(Number(value.toPrecision(4)));
}
