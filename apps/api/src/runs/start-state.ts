import { type FieldError } from '@halfdeep/contracts';
import { buildGrid, type Grid, type Setup, type Start } from '@halfdeep/ocean';
import { adoptStartState, Run, runPaths, StateFileError } from '@halfdeep/store';
import { ConflictError, InputError } from '../http/errors';

type StateStart = Extract<Start, { kind: 'state' }>;

/** The start that goes on from the last state of a finished run. Throws ConflictError for one that has not finished. */
export function startFrom(parent: Run): StateStart {
  if (parent.state !== 'finished' || !parent.fingerprint || !parent.stateSha256 || parent.lastStep === null)
    throw new ConflictError(
      `“${parent.label}” is ${parent.state}; only a finished run has a last state to go on from.`,
    );
  return {
    kind: 'state',
    runId: parent.id,
    fingerprint: parent.fingerprint.sha256,
    stateSha256: parent.stateSha256,
    startStep: parent.lastStep,
    stepsPerDay: parent.setup.numerics.stepsPerDay,
  };
}

/**
 * Holds a start of kind `state` against the run it names: there, finished, with this fingerprint, state, step and grid.
 * Returns that run. Throws InputError (422) naming each field that does not fit; pointers start with `prefix`.
 */
export async function verifyStart(setup: Setup, start: StateStart, prefix: string): Promise<Run> {
  const refuse = (errors: FieldError[]): never => {
    throw new InputError(`The start state does not fit: ${errors.map((error) => error.detail).join(' ')}`, errors, 422);
  };
  const at = (field: string, detail: string): FieldError => ({ pointer: `${prefix}/start/${field}`, detail });
  const parent = await Run.findByPk(start.runId);
  if (!parent) return refuse([at('runId', `There is no run ${start.runId}.`)]);
  if (parent.state !== 'finished')
    return refuse([at('runId', `“${parent.label}” is ${parent.state}; a start state comes from a finished run.`)]);
  const known = startFrom(parent);
  const errors = (['fingerprint', 'stateSha256', 'startStep', 'stepsPerDay'] as const)
    .filter((field) => known[field] !== start[field])
    .map((field) => at(field, `“${parent.label}” has ${field} ${known[field]}; ${start[field]} arrived.`));
  const difference = gridDifference(buildGrid(parent.setup), buildGrid(setup));
  if (difference) errors.push({ pointer: `${prefix}/numerics/spacingLongitudeDeg`, detail: difference });
  return errors.length > 0 ? refuse(errors) : parent;
}

/** A sentence when two grids do not have the same cells, coast and latitudes; null when they do. */
function gridDifference(from: Grid, to: Grid): string | null {
  if (from.nx !== to.nx || from.ny !== to.ny)
    return `The state has ${from.nx} × ${from.ny} cells, this grid ${to.nx} × ${to.ny}; a start state keeps its grid.`;
  const same = (a: Float64Array, b: Float64Array) => a.every((value, k) => Math.abs(value - b[k]) < 1e-9);
  if (!same(from.lonFace, to.lonFace) || !same(from.latFace, to.latFace) || from.periodic !== to.periodic)
    return 'The edges of this basin are not those of the state; a start state keeps its grid.';
  if (!from.mask.every((wet, k) => wet === to.mask[k]))
    return 'The coast or the islands are not those of the state; a start state keeps its grid.';
  return null;
}

/**
 * Copies the state that a new run starts from beside it: the last state of the run that its setup names, or, for a
 * repeat, the start state of the run that it repeats, so that the first of them may be gone. Throws ConflictError when
 * the file is missing or is not what it should be; nothing is left then.
 */
export async function copyStart(varDir: string, start: StateStart, runId: string, repeatOf?: string): Promise<void> {
  const from = runPaths(varDir, repeatOf ?? start.runId);
  try {
    await adoptStartState(from, runPaths(varDir, runId), start.stateSha256, repeatOf ? 'start' : 'last');
  } catch (error) {
    if (error instanceof StateFileError) throw new ConflictError(`${error.message} Compute that run again.`);
    throw error;
  }
}
