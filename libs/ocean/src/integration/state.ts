import { float64Bytes, sha256Hex } from '../exact/bytes';
import type { Grid } from '../grid/grid';
import type { Setup } from '../setup';
import { copyHistory, type Model } from '../stepper/model';
import { pack, unpack } from './container';
import { nineArrays, setNineArrays } from './levels';
import { CORE_VERSION } from './version';

/** Head of the bytes of a last state. */
interface StateHead {
  kind: 'state';
  coreVersion: string;
  step: number;
  stepsPerDay: number;
  restThicknessM: number;
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
  setNineArrays(model, arrays);
  shiftRestThickness(model, state.restThicknessM);
  if (state.stepsPerDay !== setup.numerics.stepsPerDay)
    for (const levels of [model.eta, model.u, model.v]) copyHistory(levels);
}

/** η of the same h = H + η about this model's H; untouched, to the last bit, when H is the same. */
function shiftRestThickness(model: Model, from: number): void {
  const shift = from - model.restThickness;
  if (shift === 0) return;
  const { bounds } = model.cells;
  for (const data of [model.eta.now, model.eta.previous, model.eta.before])
    for (let s = 0; s < bounds.length; s += 2) for (let k = bounds[s]; k < bounds[s + 1]; k++) data[k] += shift;
}
