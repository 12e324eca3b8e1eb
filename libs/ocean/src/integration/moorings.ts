import { isWet, type Grid } from '../grid/grid';
import type { Column } from '../integration-types';
import type { Mooring } from '../setup';
import { etaAt, valueAt } from '../stepper/fields';
import type { Model } from '../stepper/model';

/** A mooring on the grid: the water cell that holds it. */
export interface SnappedMooring {
  mooring: Mooring;
  i: number;
  j: number;
  /** Centre of the cell, degrees. */
  longitudeDeg: number;
  latitudeDeg: number;
}

/** The cell that holds a mooring. Throws RangeError when it lies outside the basin or on land. */
export function snapMooring(grid: Grid, mooring: Mooring): SnappedMooring {
  const i = cellOf(grid.lonFace, mooring.longitudeDeg);
  const j = cellOf(grid.latFace, mooring.latitudeDeg);
  const where = `The mooring “${mooring.name}” at ${mooring.longitudeDeg}° E, ${mooring.latitudeDeg}° N`;
  if (i < 0 || j < 0) throw new RangeError(`${where} lies outside the basin; move it into the water.`);
  if (!isWet(grid, i, j)) throw new RangeError(`${where} lies on land; move it into the water.`);
  return { mooring, i, j, longitudeDeg: grid.lonCentre[i], latitudeDeg: grid.latCentre[j] };
}

function cellOf(faces: Float64Array, degrees: number): number {
  const last = faces.length - 2;
  const spacing = faces[1] - faces[0];
  const index = Math.floor((degrees - faces[0]) / spacing);
  // A point on the far edge, or within half a cell beyond an edge that snapping moved, belongs to the edge cell.
  if (index === -1 && degrees > faces[0] - spacing / 2) return 0;
  if (index === last + 1 && degrees <= faces[last + 1] + spacing / 2) return last;
  return index >= 0 && index <= last ? index : -1;
}

/** Instants of η and of the velocities averaged to the cell centre. */
export class MooringRecorder {
  readonly columns: Column[];
  readonly #model: Model;
  readonly #snapped: SnappedMooring[];

  constructor(model: Model, moorings: readonly Mooring[]) {
    this.#model = model;
    this.#snapped = moorings.map((mooring) => snapMooring(model.grid, mooring));
    this.columns = moorings.flatMap(({ name }, k): Column[] => [
      { name: `${k}.eta`, label: `${name}: η`, unit: 'm', kind: 'instant' },
      { name: `${k}.uCentre`, label: `${name}: eastward velocity`, unit: 'm/s', kind: 'instant' },
      { name: `${k}.vCentre`, label: `${name}: northward velocity`, unit: 'm/s', kind: 'instant' },
    ]);
  }

  /** Values now, in the order of `columns`. */
  take(): Float64Array {
    const model = this.#model;
    const values = this.#snapped.flatMap(({ i, j }) => [
      etaAt(model, i, j),
      0.5 * (valueAt(model, 'u', i, j) + valueAt(model, 'u', i + 1, j)),
      0.5 * (valueAt(model, 'v', i, j) + valueAt(model, 'v', i, j + 1)),
    ]);
    return Float64Array.from(values);
  }
}
