import { float64Bytes, sha256Hex } from '../exact/bytes';
import type { Grid } from '../grid/grid';
import type { Setup } from '../setup';
import { copyHistory, fieldOf, fillSeam } from '../stepper/fields';
import { forRuns, type Model } from '../stepper/model';
import { pack, unpack } from './container';
import { nineArrays, setNineArrays, shapeOf, STATE_VARIABLES } from './levels';
import { CORE_VERSION } from './version';

/** Head of the bytes of a last state. */
interface StateHead {
  kind: 'state';
  coreVersion: string;
  step: number;
  stepsPerDay: number;
  restThicknessM: number;
  /** Whether the arrays hold η or h; states before core version 2 are linear and do not say. */
  equations?: Model['equations'];
  nx: number;
  ny: number;
  gridSha256: string;
}

/** SHA-256 of where the points of a grid lie and which cells are water. */
export function gridHash(grid: Grid): string {
  const shape = Float64Array.of(grid.nx, grid.ny, grid.periodic ? 1 : 0);
  return sha256Hex(float64Bytes(shape), float64Bytes(grid.lonFace), float64Bytes(grid.latFace), grid.mask);
}

/** The nine arrays of a model as bytes, for extensions and for starts from this state. */
export function packState(model: Model, stepsPerDay: number): Uint8Array {
  const head: StateHead = {
    kind: 'state',
    coreVersion: CORE_VERSION,
    step: model.step,
    stepsPerDay,
    restThicknessM: model.restThickness,
    equations: model.equations,
    nx: model.grid.nx,
    ny: model.grid.ny,
    gridSha256: gridHash(model.grid),
  };
  return pack({ head: { ...head }, arrays: nineArrays(model) });
}

/**
 * Puts another run's last state into a model: h = H + η is kept, so η shifts when H differs; the two older levels are
 * rebuilt by copies when the step differs (numerics.md §7, §12).
 * Throws RangeError when the bytes are damaged, are not the state that the setup names, or lie on another grid.
 */
export function startFromState(model: Model, setup: Setup, bytes: Uint8Array): void {
  if (setup.start.kind !== 'state')
    throw new RangeError(`A state arrived, but the setup starts from “${setup.start.kind}”.`);
  const { stateSha256, startStep, stepsPerDay } = setup.start;
  const arrived = sha256Hex(bytes);
  if (arrived !== stateSha256)
    throw new RangeError(`The setup starts from state ${stateSha256}; the state that arrived is ${arrived}.`);
  const { head, arrays } = unpack(bytes, 'start state');
  const state = head as unknown as StateHead;
  if (state.kind !== 'state') throw new RangeError(`A start state is needed; a ${String(head['kind'])} arrived.`);
  if (state.step !== startStep || state.stepsPerDay !== stepsPerDay)
    throw new RangeError(
      `The setup starts at step ${startStep} of ${stepsPerDay} a day; the state lies at step ${state.step} of ${state.stepsPerDay} a day.`,
    );
  const { grid } = model;
  if (state.gridSha256 !== gridHash(grid))
    throw new RangeError(
      `The start state lies on another grid (${state.nx} × ${state.ny} cells) than this setup's (${grid.nx} × ${grid.ny}): extents, spacing, coast and islands must be the same.`,
    );
  const from = state.equations ?? 'linear';
  setNineArrays(model, arrays, from);
  shiftThickness(
    model,
    (from === 'linear' ? state.restThicknessM : 0) - (model.equations === 'linear' ? model.restThickness : 0),
  );
  refuseBadState(model);
  if (state.stepsPerDay !== setup.numerics.stepsPerDay) copyHistory(model);
}

/** Adds `shift` to h at every water cell of the three levels; untouched, to the last bit, when it is 0. */
function shiftThickness(model: Model, shift: number): void {
  if (shift === 0) return;
  for (const role of ['now', 'previous', 'before'] as const) {
    const { data, offset, rowStride } = fieldOf(model, 'h', role);
    for (let j = 0; j < model.grid.ny; j++)
      forRuns(model.spans.cells, j, (first, end) => {
        for (let i = first; i < end; i++) data[offset + j * rowStride + i] += shift;
      });
    fillSeam(model, 'h', role);
  }
}

/** Throws RangeError when a value of a start state is not finite, or the layer of a nonlinear model is not thicker than 0. */
function refuseBadState(model: Model): void {
  for (const role of ['now', 'previous', 'before'] as const)
    for (const variable of STATE_VARIABLES) {
      const [rows, columns] = shapeOf(model.grid, variable);
      const { data, offset, rowStride } = fieldOf(model, variable, role);
      for (let j = 0; j < rows; j++)
        for (let i = 0; i < columns; i++) {
          const value = data[offset + j * rowStride + i];
          if (!Number.isFinite(value))
            throw new RangeError(
              `The start state has ${variable} = ${value} at column ${i}, row ${j}; it must be finite.`,
            );
          const water = variable === 'h' && model.grid.mask[j * columns + i] === 1;
          if (water && model.equations === 'nonlinear' && !(value > 0))
            throw new RangeError(
              `The start state has a layer of ${value} m at column ${i}, row ${j}; the nonlinear equations need one thicker than 0.`,
            );
        }
    }
}
