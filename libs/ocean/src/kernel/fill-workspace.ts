import { isWet } from '../grid/grid';
import { P0, P1, PM1, PM2 } from '../stepper/coefficients';
import { WEST } from '../stepper/layout';
import type { Model } from '../stepper/model';
import type { Spans } from '../stepper/spans';
import { NONE } from '../stepper/statics';
import { ROW_BYTES, type Workspace } from './workspace';

/** Addresses in the header: places.as.ts names the same. */
const HEADER = {
  ny: 4,
  periodic: 8,
  turning: 12,
  sponges: 16,
  rows: 20,
  bases: 24,
  basisTable: 28,
  meridians: 32,
  meridianTable: 36,
  sumRow: 40,
  cellA: 44,
  cornerA: 48,
  spongeU: 52,
  spongeV: 56,
  spongeH: 60,
  levels: 64,
  east: 80,
  factors: 84,
  sums: 88,
  sumStride: 92,
  contexts: 96,
  contextStride: 100,
  fieldsX: 104,
  fieldsY: 108,
  phase: 112,
  steps: 116,
  recording: 120,
  block: 124,
  threads: 128,
  bands: 132,
  nonlinear: 136,
  entrains: 140,
  limits: 144,
  dismissed: 148,
} as const;

const CONSTANTS = 256;
const SOURCES = 472;
const ROW_RUNS = 104;
const ROW_COAST = 152;
const ROW_SPONGE = 160;
const ROW_F = 168;
const ROW_PER_WET = 176;

/** Header of a model's workspace: written once by `fillWorkspace`, and before every call by `ask`. */
export class KernelHeader {
  readonly address: number;
  private readonly ints: Int32Array;

  constructor(
    private readonly model: Model,
    private readonly workspace: Workspace,
  ) {
    this.address = addressOf(model, workspace.header);
    this.ints = new Int32Array(model.data.buffer);
  }

  /** What the next call is to do. `block`: steps in flight at once. */
  ask(steps: number, recording: boolean, block: number): void {
    this.set('steps', steps);
    this.set('phase', this.model.phase);
    this.set('recording', recording ? 1 : 0);
    this.set('block', block);
  }

  set(name: keyof typeof HEADER, value: number): void {
    this.ints[(this.address + HEADER[name]) / 4] = value;
  }

  /** What is given back evenly over the water in the coming steps, m/s. */
  detrain(rate: number): void {
    this.model.data.set(this.sources(rate), this.workspace.header + SOURCES / 8);
  }

  private sources(detrained: number): [detrained: number, source: number] {
    const { damping, restThickness } = this.model;
    return [detrained, damping * restThickness - detrained];
  }

  /** Writes everything that does not change between calls. */
  fill(): void {
    const { model, workspace } = this;
    const { grid, layout, statics, viscosity, sumsPlace, forcing } = model;
    const plane = (offset: number) => (offset === NONE ? 0 : addressOf(model, offset));
    this.set('ny', grid.ny);
    this.set('periodic', grid.periodic ? 1 : 0);
    this.set('turning', viscosity === 0 && statics.viscosityCorner === NONE ? 0 : 1);
    this.set('rows', addressOf(model, workspace.rows));
    this.set('bases', forcing.bases.length);
    this.set('basisTable', addressOf(model, workspace.basisTable));
    this.set('meridians', sumsPlace.meridians.length);
    this.set('meridianTable', addressOf(model, workspace.meridians));
    this.set('sumRow', 8 * sumsPlace.rowLength);
    this.set('cellA', plane(statics.viscosityCell));
    this.set('cornerA', plane(statics.viscosityCorner));
    this.set('spongeU', plane(statics.spongeU));
    this.set('spongeV', plane(statics.spongeV));
    this.set('spongeH', plane(statics.spongeCell));
    layout.levels.forEach(
      (offset, k) => (this.ints[(this.address + HEADER.levels) / 4 + k] = addressOf(model, offset)),
    );
    this.set('east', 8 * (WEST + grid.nx));
    this.set('factors', addressOf(model, workspace.factors));
    this.set('sums', addressOf(model, workspace.sums));
    this.set('sumStride', 8 * workspace.sumStride);
    this.set('contexts', addressOf(model, workspace.contexts));
    this.set('contextStride', 8 * workspace.contextStride);
    this.set('fieldsX', statics.tauX.some((offset) => offset !== NONE) ? 1 : 0);
    this.set('fieldsY', statics.tauY.some((offset) => offset !== NONE) ? 1 : 0);
    this.set('bands', addressOf(model, workspace.bands));
    this.set('nonlinear', model.equations === 'nonlinear' ? 1 : 0);
    this.set('entrains', model.entrainment ? 1 : 0);
    this.set('limits', model.minimumThickness > 0 ? 1 : 0);
    const constants = [...linearConstants(model), ...nonlinearConstants(model), ...this.sources(0)];
    model.data.set(constants, workspace.header + CONSTANTS / 8);
    fillRows(model, workspace, this.ints);
    fillBases(model, workspace, this.ints);
    fillMeridians(model, workspace, this.ints);
  }
}

/** Address in the memory of an offset of the model's data. */
export function addressOf(model: Model, offset: number): number {
  return model.data.byteOffset + 8 * offset;
}

/** In the order of places.as.ts; the same expressions as in stepper/linear. */
function linearConstants(model: Model): number[] {
  const { dt, damping, rayleigh, restThickness, reducedGravity, viscosity, density, statics, grid, slip } = model;
  const nonlinear = model.equations === 'nonlinear';
  return [
    (1 - 0.5 * damping * dt) / (1 + 0.5 * damping * dt),
    (dt * restThickness) / (1 + 0.5 * damping * dt),
    reducedGravity * P1,
    reducedGravity * P0,
    reducedGravity * PM1,
    reducedGravity * PM2,
    viscosity,
    statics.viscosityCell === NONE ? viscosity : 0,
    (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt),
    dt / (1 + 0.5 * rayleigh * dt),
    1 / grid.dy,
    slip === 'free' ? 0 : 2,
    nonlinear ? 1 / density : 1 / (density * restThickness),
    dt,
    0.5 * dt,
    dt * restThickness,
    damping,
    rayleigh,
  ];
}

/** In the order of places.as.ts; the same expressions as in stepper/nonlinear. */
function nonlinearConstants(model: Model): number[] {
  const { dt, damping, minimumThickness, entrainment, stressFloor, reducedGravity, restThickness } = model;
  const half = 0.5 * dt;
  return [
    (1 - half * damping) / (1 + half * damping),
    dt / (1 + half * damping),
    minimumThickness,
    1 / dt,
    entrainment?.onsetThickness ?? 0,
    entrainment ? 1 / (entrainment.timescale * entrainment.onsetThickness) : 0,
    stressFloor,
    reducedGravity,
    restThickness,
  ];
}

function fillRows(model: Model, workspace: Workspace, ints: Int32Array): void {
  const { grid, rows, spans, coastCorners, statics, data } = model;
  const factors = [
    rows.perDxC,
    rows.perDxV,
    rows.divNorth,
    rows.divSouth,
    rows.curlNorth,
    rows.curlSouth,
    rows.coriolisSouth,
    rows.coriolisNorth,
    rows.coriolisV,
    rows.turnSouth,
    rows.turnNorth,
    rows.shareSouth,
    rows.shareNorth,
  ];
  let free = addressOf(model, workspace.runs) / 4;
  /** Copies columns as bytes; answers where they start. */
  const copy = (columns: Int32Array) => {
    const start = free;
    for (let k = 0; k < columns.length; k++) ints[free + k] = 8 * columns[k];
    free += columns.length;
    return 4 * start;
  };
  const runs: Spans[] = [spans.sweep, spans.cells, spans.uPoints, spans.vPoints, spans.corners, workspace.fresh];
  const starts = runs.map(({ bounds }) => copy(bounds));
  const coast = copy(coastCorners.columns);
  data.set(coastCorners.perWet, workspace.perWet);
  for (let j = 0; j <= grid.ny; j++) {
    factors.forEach((values, k) => (data[workspace.rows + (j * ROW_BYTES) / 8 + k] = values[j]));
    const row = (addressOf(model, workspace.rows) + j * ROW_BYTES) / 4;
    runs.forEach(({ rowStart }, k) => {
      // Rows beyond the last one of a kind have no runs.
      const [first, end] = j + 1 < rowStart.length ? [rowStart[j], rowStart[j + 1]] : [0, 0];
      ints[row + ROW_RUNS / 4 + 2 * k] = starts[k] + 8 * first;
      ints[row + ROW_RUNS / 4 + 2 * k + 1] = starts[k] + 8 * end;
    });
    ints[row + ROW_COAST / 4] = coast + 4 * coastCorners.rowStart[j];
    ints[row + ROW_COAST / 4 + 1] = coast + 4 * coastCorners.rowStart[j + 1];
    ints[row + ROW_SPONGE / 4] = statics.spongeRows[j];
    ints[row + ROW_PER_WET / 4] = addressOf(model, workspace.perWet + coastCorners.rowStart[j]);
    data[workspace.rows + (j * ROW_BYTES + ROW_F) / 8] = grid.f[j];
  }
}

/** Of each basis: addresses of its row values and of its fields, x and y; 0 where it has none. */
function fillBases(model: Model, workspace: Workspace, ints: Int32Array): void {
  const { forcing, statics, data, grid } = model;
  const rowLength = grid.ny + 1;
  const table = addressOf(model, workspace.basisTable) / 4;
  forcing.bases.forEach(({ tauxRow, tauyRow }, b) => {
    [tauxRow, tauyRow].forEach((values, component) => {
      const place = workspace.basisRows + (2 * b + component) * rowLength;
      if (values) data.set(values, place);
      ints[table + 4 * b + component] = values ? addressOf(model, place) : 0;
    });
    [statics.tauX[b], statics.tauY[b]].forEach((plane, component) => {
      ints[table + 4 * b + 2 + component] = plane === NONE ? 0 : addressOf(model, plane);
    });
  });
}

/** Of each row and asked column: the column in bytes, 0 where the face is closed. */
function fillMeridians({ grid, sumsPlace, data }: Model, workspace: Workspace, ints: Int32Array): void {
  const { meridians } = sumsPlace;
  const table = (data.byteOffset + 8 * workspace.meridians) / 4;
  for (let j = 0; j < grid.ny; j++)
    meridians.forEach((column, k) => {
      const open = isWet(grid, column - 1, j) && isWet(grid, column, j);
      ints[table + j * meridians.length + k] = open ? 8 * (WEST + column) : 0;
    });
}
