import type { Forcing } from '../forcing/forcing';
import { WEST, type Arena, type Layout } from './layout';
import type { ModelOptions } from './model-options';

/** A plane of fixed values behind the levels: value (row j, column i) at offset + j · pitch + WEST + i, ny + 1 rows. */
export type Plane = number;
/** No such plane. */
export const NONE: Plane = -1;

/** Offsets of what does not change in time and varies along a row; NONE where a row number or a constant says all. */
export interface Statics {
  /** Stress of each forcing basis at u and v points, N/m². */
  tauX: Plane[];
  tauY: Plane[];
  /** A at cells and corners (slip factor not included). */
  viscosityCell: Plane;
  viscosityCorner: Plane;
  /** Sponge rates at u, v, cells; `spongeRows[j]` is 1 where row j of any of them has one that is not 0. */
  spongeU: Plane;
  spongeV: Plane;
  spongeCell: Plane;
  spongeRows: Uint8Array;
}

/** A plane to be filled when the memory is there. */
export interface PlaneFill {
  offset: Plane;
  values: Float64Array;
  rows: number;
  columns: number;
}

/** Reserves the planes that a model needs; `fills` say what goes where. */
export function reserveStatics(
  arena: Arena,
  layout: Layout,
  options: Pick<ModelOptions, 'sponge' | 'viscosityMap'>,
  forcing: Forcing,
): { statics: Statics; fills: PlaneFill[] } {
  const { nx, ny, pitch } = layout;
  const fills: PlaneFill[] = [];
  const plane = (values: Float64Array | null | undefined, rows: number, columns: number): Plane => {
    if (!values) return NONE;
    const offset = arena.reserve((ny + 1) * pitch);
    fills.push({ offset, values, rows, columns });
    return offset;
  };
  const { sponge, viscosityMap } = options;
  const spongeRows = new Uint8Array(ny + 1);
  if (sponge)
    for (let j = 0; j <= ny; j++) {
      const some = (values: Float64Array, columns: number) =>
        values.subarray(j * columns, (j + 1) * columns).some((rate) => rate > 0);
      spongeRows[j] = some(sponge.u, nx + 1) || some(sponge.v, nx) || some(sponge.cell, nx) ? 1 : 0;
    }
  return {
    statics: {
      tauX: forcing.bases.map(({ tauxField }) => plane(tauxField, ny, nx + 1)),
      tauY: forcing.bases.map(({ tauyField }) => plane(tauyField, ny + 1, nx)),
      viscosityCell: plane(viscosityMap?.cell, ny, nx),
      viscosityCorner: plane(viscosityMap?.corner, ny + 1, nx + 1),
      spongeU: plane(sponge?.u, ny, nx + 1),
      spongeV: plane(sponge?.v, ny + 1, nx),
      spongeCell: plane(sponge?.cell, ny, nx),
      spongeRows,
    },
    fills,
  };
}

/** Copies the fixed values into a model's memory. */
export function fillStatics(
  data: Float64Array,
  { pitch, nx }: Layout,
  periodic: boolean,
  fills: readonly PlaneFill[],
): void {
  for (const { offset, values, rows, columns } of fills)
    for (let j = 0; j < rows; j++) {
      const row = offset + j * pitch + WEST;
      data.set(values.subarray(j * columns, (j + 1) * columns), row);
      if (!periodic) continue;
      data[row - 1] = data[row + nx - 1];
      if (columns === nx) data[row + nx] = data[row];
    }
}
