import { sha256Hex } from '../exact/bytes';
import { windForcing } from '../forcing/forcing';
import { spongeRates } from '../forcing/sponges';
import { SECONDS_PER_DAY } from '../forcing/season';
import { buildGrid } from '../grid/build-grid';
import { viscosityMaps } from '../grid/viscosity-map';
import { isWet, type Grid } from '../grid/grid';
import type { Caution, Column, Fingerprint, Frame } from '../integration-types';
import type { Setup } from '../setup';
import { analyticStart } from '../start/initial-state';
import { createModel, setState, type Model } from '../stepper/model';
import { createStepper, steppedBy, type Stepper, type StepperOptions } from '../stepper/stepper';
import type { StepRecorder, StepSums } from '../stepper/sums';
import { BasinBudget } from './budget';
import { pack, unpack } from './container';
import { failureReport, flowCaution, IntegrationFailure, isFinite, outcropReport, stepLimitReport } from './failure';
import { fingerprintOf } from './fingerprint';
import { nativeField, nineArrays, setNineArrays, shapeOf, type NativeVariable } from './levels';
import { MooringRecorder } from './moorings';
import { stepRange } from './schedule';
import { meridiansOf, SectionRecorder } from './sections';
import { setupSha256 } from './setup-hash';
import { packState, startFromState } from './state';
import { TermBudgets } from './term-budgets';
import { CORE_VERSION } from './version';
import { FLOW_CAUTION, FLOW_STOP, flowNumber, isUnprotected, watchState } from './watch';

const CHECK_EVERY = 20;
const MOST_CAUTIONS = 20;

/** Head of the bytes of a checkpoint. */
interface CheckpointHead {
  kind: 'checkpoint';
  coreVersion: string;
  setupSha256: string;
  step: number;
  cautions: Caution[];
  cautious: boolean;
}

/**
 * One run: the setup's model with everything that it records. A step is a pure function of state, setup and step
 * number, so a run is repeatable to the last bit, whatever its output intervals and however often it is interrupted.
 */
export class Integration {
  readonly setup: Setup;
  readonly grid: Grid;
  /** Absolute first step: 0, or the step of the state that the run starts from. */
  readonly startStep: number;
  /** Absolute step at which the run ends. */
  readonly totalSteps: number;
  readonly #model: Model;
  readonly #stepper: Stepper;
  readonly #recorder: StepRecorder;
  readonly #sections: SectionRecorder;
  readonly #moorings: MooringRecorder;
  #budget: BasinBudget;
  #termBudgets: TermBudgets;
  /** Step that the recorder saw last. */
  #recorded = 0;
  /** First step in which an unprotected layer reached its minimum thickness. */
  #outcropStep: number | null = null;
  #cautions: Caution[] = [];
  /** Whether S(1 + 2Fr) was beyond its caution when it was looked at last. */
  #cautious = false;

  private constructor(setup: Setup, options: StepperOptions) {
    const { layer, friction, constants, numerics } = setup;
    const { startStep, totalSteps } = stepRange(setup);
    this.setup = setup;
    this.startStep = startStep;
    this.totalSteps = totalSteps;
    this.grid = buildGrid(setup);
    this.#model = createModel({
      grid: this.grid,
      equations: numerics.equations,
      dt: SECONDS_PER_DAY / numerics.stepsPerDay,
      reducedGravity: layer.reducedGravityMS2,
      restThickness: layer.restThicknessM,
      density: constants.densityKgM3,
      rayleigh: friction.rayleighPerS,
      viscosity: friction.viscosityM2S,
      damping: layer.dampingPerS,
      slip: friction.slip,
      minimumThickness: layer.minimumThicknessM,
      entrainment: layer.entrainment && {
        onsetThickness: layer.entrainment.onsetThicknessM,
        timescale: layer.entrainment.timescaleDays * SECONDS_PER_DAY,
        detrainment: layer.entrainment.detrainment,
      },
      stressFloor: setup.wind.stressFloorM,
      forcing: windForcing(setup, this.grid),
      sponge: spongeRates(setup, this.grid),
      viscosityMap: viscosityMaps(setup, this.grid),
      meridians: meridiansOf(this.grid, setup.output.sections),
      ...steppedBy(options, this.grid.nx),
    });
    this.#model.step = startStep;
    this.#sections = new SectionRecorder(this.#model, setup);
    this.#moorings = new MooringRecorder(this.#model, setup.output.moorings);
    this.#budget = new BasinBudget(this.#model);
    this.#termBudgets = new TermBudgets(this.#model, setup.output);
    this.#stepper = createStepper(this.#model, options);
    const unprotected = isUnprotected(this.#model);
    this.#recorder = {
      add: (sums) => {
        this.#sections.add(sums);
        this.#budget.add(sums);
        this.#recorded += 1;
        if (unprotected && this.#outcropStep === null && holdsUp(sums)) this.#outcropStep = this.#recorded;
      },
    };
  }

  /**
   * A run at its first step. `state`: the bytes of `lastState` of the run that the setup names, when it starts from one.
   * Throws RangeError when the setup cannot be integrated (size, numbers, sections or moorings off the water) or the
   * state is missing, damaged, another one, or lies on another grid.
   */
  static start(setup: Setup, state?: Uint8Array, options: StepperOptions = {}): Integration {
    const run = new Integration(setup, options);
    if (setup.start.kind === 'state') {
      if (!state)
        throw new RangeError(
          `The setup starts from the last state of run ${setup.start.runId}, and that state (${setup.start.stateSha256}) is missing.`,
        );
      startFromState(run.#model, setup, state);
    } else {
      if (state) throw new RangeError(`A state arrived, but the setup starts from “${setup.start.kind}”.`);
      setState(run.#model, analyticStart(setup, run.grid, setup.start));
    }
    run.#budget = new BasinBudget(run.#model);
    run.#termBudgets = new TermBudgets(run.#model, setup.output);
    return run;
  }

  /**
   * The run as it was when `checkpoint` was taken, in the middle of an output interval or not; it goes on bit by bit as
   * if it had not been interrupted. Throws RangeError when the checkpoint is damaged, or of another setup or core.
   */
  static restore(setup: Setup, checkpoint: Uint8Array, options: StepperOptions = {}): Integration {
    const { head, arrays } = unpack(checkpoint, 'checkpoint');
    const saved = head as unknown as CheckpointHead;
    if (saved.kind !== 'checkpoint') throw new RangeError(`A checkpoint is needed; a ${String(head['kind'])} arrived.`);
    if (saved.coreVersion !== CORE_VERSION)
      throw new RangeError(
        `The checkpoint is of core version ${saved.coreVersion}; this is ${CORE_VERSION}, which cannot continue it to the same bits.`,
      );
    if (saved.setupSha256 !== setupSha256(setup)) throw new RangeError('The checkpoint belongs to another setup.');
    const run = new Integration(setup, options);
    setNineArrays(run.#model, arrays);
    run.#model.step = saved.step;
    run.#cautions = saved.cautions;
    run.#cautious = saved.cautious;
    for (const [name, slots] of run.#accumulators()) {
      if (arrays[name]?.length !== slots.length)
        throw new RangeError(
          `The checkpoint holds ${arrays[name]?.length ?? 0} values of “${name}”; ${slots.length} are needed.`,
        );
      slots.set(arrays[name]);
    }
    return run;
  }

  /** Completed steps, absolute. */
  get step(): number {
    return this.#model.step;
  }

  /** Model day, step / stepsPerDay. */
  get day(): number {
    return this.#model.step / this.setup.numerics.stepsPerDay;
  }

  /**
   * Makes `steps` steps. The state is checked every `checkEvery` steps (at most, and by default, 20) and at the end:
   * for finite values, and in nonlinear mode for S(1 + 2Fr) and for a layer that reaches its minimum thickness
   * unprotected; checkEvery: 1 names the first bad step and cell. Throws IntegrationFailure then, and RangeError when the
   * steps would lead beyond the end.
   */
  advance(steps: number, options: { checkEvery?: number } = {}): void {
    const every = Math.min(options.checkEvery ?? CHECK_EVERY, CHECK_EVERY);
    if (!(Number.isInteger(steps) && steps >= 0 && this.step + steps <= this.totalSteps))
      throw new RangeError(
        `The run ends at step ${this.totalSteps} and stands at ${this.step}: it can go on by a whole number of steps up to ${this.totalSteps - this.step}; ${steps} arrived.`,
      );
    if (!(Number.isInteger(every) && every >= 1))
      throw new RangeError(`checkEvery must be a whole number from 1 to ${CHECK_EVERY}; ${every} arrived.`);
    for (let left = steps; left > 0;) {
      // Looked at on whole multiples of 20 steps, however the run is cut into calls, so that it stops at the same step.
      const some = Math.min(left, every, CHECK_EVERY - (this.step % CHECK_EVERY));
      this.#make(some);
      left -= some;
      this.#check(some, every === 1);
    }
  }

  /** Throws IntegrationFailure when the run cannot go on after the last `made` steps. */
  #check(made: number, exact: boolean): void {
    const model = this.#model;
    const { stepsPerDay } = this.setup.numerics;
    if (!isFinite(model)) throw new IntegrationFailure(failureReport(model, stepsPerDay, exact, made));
    if (this.#outcropStep !== null) throw new IntegrationFailure(outcropReport(model, stepsPerDay, this.#outcropStep));
    const watched = exact || this.step % CHECK_EVERY === 0 || this.step === this.totalSteps;
    if (model.equations === 'linear' || !watched) return;
    const watch = watchState(model);
    const flow = flowNumber(model, watch);
    if (flow > FLOW_STOP) throw new IntegrationFailure(stepLimitReport(model, stepsPerDay, watch, exact));
    // Not in the middle of an interval, so that the list does not depend on how the run is cut into calls.
    if (this.step % CHECK_EVERY !== 0) return;
    if (flow > FLOW_CAUTION) this.#noteCaution(flowCaution(model, stepsPerDay, watch));
    else this.#cautious = false;
  }

  /** Begins a caution, or raises the value of the one that is still on. */
  #noteCaution(caution: Caution): void {
    const last = this.#cautions.at(-1);
    if (!this.#cautious || !last) {
      // The first ones say what there is to say.
      if (this.#cautions.length < MOST_CAUTIONS) this.#cautions.push(caution);
    } else if (caution.value > last.value) {
      this.#cautions[this.#cautions.length - 1] = { ...caution, step: last.step, day: last.day };
    }
    this.#cautious = true;
  }

  /** Lets the helper threads of its stepper go, if it has any; what is stepped afterwards, the caller steps alone. */
  dismissThreads(): void {
    this.#stepper.dismiss();
  }

  /** Times at which a nonlinear run came near the limit of its step, S(1 + 2Fr) > 0.8: the first twenty. */
  cautions(): Caution[] {
    return this.#cautions.map((caution) => ({ ...caution }));
  }

  /** Steps; budgets of every term need the levels after each. */
  #make(steps: number): void {
    this.#recorded = this.step;
    if (!this.#termBudgets.wanted) {
      this.#stepper.advance(steps, this.#recorder);
      return;
    }
    for (let n = 0; n < steps; n++) {
      this.#stepper.advance(1, this.#recorder);
      this.#termBudgets.add();
    }
  }

  /** The fields now, float32, land NaN; a face with water on one side only is a coast and holds 0. */
  frame(): Frame {
    return {
      step: this.step,
      day: this.day,
      eta: this.#snapshot('eta'),
      u: this.#snapshot('u'),
      v: this.#snapshot('v'),
    };
  }

  /** The fields now in double precision, logical shapes (η [ny][nx], u [ny][nx + 1], v [ny + 1][nx]), land 0; copies. */
  fields(): Record<NativeVariable, Float64Array> {
    const of = (variable: NativeVariable) => nativeField(this.#model, variable);
    return { eta: of('eta'), u: of('u'), v: of('v') };
  }

  sectionColumns(): Column[] {
    return this.#sections.columns;
  }

  mooringColumns(): Column[] {
    return this.#moorings.columns;
  }

  budgetColumns(): Column[] {
    return [...this.#budget.columns, ...this.#termBudgets.columns];
  }

  /** Closes the interval of the sections: its values in the order of `sectionColumns`. */
  takeSections(): Float64Array {
    return this.#sections.take();
  }

  /** The moorings now, in the order of `mooringColumns`. */
  takeMoorings(): Float64Array {
    return this.#moorings.take();
  }

  /** Closes the interval of the budget: its values in the order of `budgetColumns`. */
  takeBudget(): Float64Array {
    return Float64Array.of(...this.#budget.take(), ...this.#termBudgets.take());
  }

  /** Everything that `restore` needs, with a checksum. */
  checkpoint(): Uint8Array {
    const head: CheckpointHead = {
      kind: 'checkpoint',
      coreVersion: CORE_VERSION,
      setupSha256: setupSha256(this.setup),
      step: this.step,
      cautions: this.#cautions,
      cautious: this.#cautious,
    };
    return pack({
      head: { ...head },
      arrays: { ...nineArrays(this.#model), ...Object.fromEntries(this.#accumulators()) },
    });
  }

  /** The nine arrays of the present state, for extensions and starts from it. Its SHA-256 is the setup's stateSha256. */
  lastState(): Uint8Array {
    return packState(this.#model, this.setup.numerics.stepsPerDay);
  }

  /** SHA-256 that names the bytes of a last state: `stateSha256` of a setup that starts from it. */
  static stateSha256(state: Uint8Array): string {
    return sha256Hex(state);
  }

  /** Fingerprint of the present state (numerics.md §7). */
  fingerprint(): Fingerprint {
    return fingerprintOf(this.#model);
  }

  #accumulators(): [string, Float64Array][] {
    return [
      ['section sums', this.#sections.slots],
      ['budget sums', this.#budget.slots],
      ...this.#termBudgets.slots.map((slots, k): [string, Float64Array] => [`term sums ${k + 1}`, slots]),
    ];
  }

  #snapshot(variable: NativeVariable): Float32Array {
    const { grid } = this;
    const [rows, columns] = shapeOf(grid, variable);
    const values = nativeField(this.#model, variable);
    const out = new Float32Array(rows * columns);
    for (let j = 0; j < rows; j++)
      for (let i = 0; i < columns; i++)
        out[j * columns + i] = touchesWater(grid, variable, i, j) ? values[j * columns + i] : NaN;
    return out;
  }
}

/** True when the step had to hold the layer up somewhere: it reached hmin. */
function holdsUp({ terms }: StepSums): boolean {
  return terms['limited'].some((cells) => cells > 0) || terms['clipped'].some((cells) => cells > 0);
}

/** True for a water cell, and for a face with water on one side or both. */
function touchesWater(grid: Grid, variable: NativeVariable, i: number, j: number): boolean {
  if (variable === 'eta') return isWet(grid, i, j);
  return isWet(grid, i, j) || (variable === 'u' ? isWet(grid, i - 1, j) : isWet(grid, i, j - 1));
}
