import { deriveColumn, deriveRow, neededColumns, neededRows, type NeededLines } from '../derive/derive';
import { axesOf } from '../derive/variable-info';
import type { Grid } from '../grid/grid';
import type { Fingerprint, Frame } from '../integration-types';
import { Integration } from '../integration/integration';
import { shapeOf, type NativeVariable } from '../integration/levels';
import { recordSteps } from '../integration/schedule';
import type { Setup } from '../setup';
import type { StepperOptions } from '../stepper/stepper';

/** A variable along a latitude or a longitude. */
export interface SketchLine {
  variable: NativeVariable;
  along: 'latitude' | 'longitude';
  askedDeg: number;
}

/** Rows [first, first + days.length) of a space-time diagram, row-major, land NaN. */
export interface SketchRows {
  first: number;
  /** Model day of each row. */
  days: Float64Array;
  /** Where the values of a row lie, degrees. */
  placesDeg: Float64Array;
  /** Where the line lies, degrees. */
  atDeg: number;
  values: Float32Array;
}

/** Cell-steps between two looks at the clock: some hundredths of a second. */
const SLICE = 1e6;

/** A sketch on its way: it keeps its frames, so that another line can be drawn of what was computed already. */
export class SketchRun {
  readonly #setup: Setup;
  readonly #run: Integration;
  readonly #every: number;
  readonly #slice: number;
  readonly #frames: Frame[] = [];

  /** At step 0. Throws RangeError when the setup cannot be integrated. */
  constructor(setup: Setup, options: StepperOptions = {}) {
    this.#setup = setup;
    this.#run = Integration.start(setup, undefined, options);
    this.#every = recordSteps(setup).frames;
    this.#slice = Math.max(1, Math.floor(SLICE / (this.grid.nx * this.grid.ny)));
    this.#frames.push(this.#run.frame());
  }

  get grid(): Grid {
    return this.#run.grid;
  }
  get step(): number {
    return this.#run.step;
  }
  get totalSteps(): number {
    return this.#run.totalSteps;
  }
  /** Model day now. */
  get day(): number {
    return this.#run.day;
  }
  /** Rows that can be drawn. */
  get rows(): number {
    return this.#frames.length;
  }
  get ended(): boolean {
    return this.step === this.totalSteps;
  }

  /** Goes on by some hundredths of a second of work, at most to the next row. Throws IntegrationFailure. */
  advance(): void {
    const left = Math.min(this.#every - (this.step % this.#every), this.totalSteps - this.step);
    if (left <= 0) return;
    this.#run.advance(Math.min(left, this.#slice));
    // The end is a row too, where the last interval is a short one.
    if (this.step % this.#every === 0 || this.ended) this.#frames.push(this.#run.frame());
  }

  /** The rows of a line from `first` on, as the plates of a run would show them. */
  rowsOf({ variable, along, askedDeg }: SketchLine, first = 0): SketchRows {
    const { grid } = this;
    const latitude = along === 'latitude';
    const needed = (latitude ? neededRows : neededColumns)(variable, grid, askedDeg);
    const { latDeg, lonDeg } = axesOf(variable, grid);
    const placesDeg = latitude ? lonDeg : latDeg;
    const frames = this.#frames.slice(first);
    const values = new Float32Array(frames.length * placesDeg.length);
    frames.forEach((frame, k) => {
      const lines = { day: frame.day, [variable]: this.#line(frame, variable, needed, latitude) };
      const derive = latitude ? deriveRow : deriveColumn;
      values.set(derive(variable, grid, this.#setup, needed, lines), k * placesDeg.length);
    });
    const days = Float64Array.from(frames, ({ day }) => day);
    return { first, days, placesDeg: Float64Array.from(placesDeg), atDeg: needed.atDeg, values };
  }

  fingerprint(): Fingerprint {
    return this.#run.fingerprint();
  }

  #line(frame: Frame, variable: NativeVariable, needed: NeededLines, latitude: boolean): Float32Array {
    const [rows, columns] = shapeOf(this.grid, variable);
    const [from, to] = needed[variable] ?? [0, 0];
    const field = frame[variable];
    if (latitude) return field.subarray(from * columns, to * columns);
    const out = new Float32Array(rows * (to - from));
    for (let j = 0; j < rows; j++)
      for (let i = from; i < to; i++) out[j * (to - from) + i - from] = field[j * columns + i];
    return out;
  }
}
