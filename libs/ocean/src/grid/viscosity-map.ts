import { exp } from '../exact/elementary';
import type { Friction, Setup } from '../setup';
import type { ViscosityMap } from '../stepper/model-options';
import type { Grid } from './grid';

/** A at a place, m²/s: the basin's own and what each place of other viscosity adds there. */
export function viscosityAt(friction: Friction, longitudeDeg: number, latitudeDeg: number): number {
  let total = friction.viscosityM2S;
  for (const patch of friction.viscosityPatches)
    total +=
      patch.addedM2S *
      bell(longitudeDeg, patch.longitudeDeg, patch.widthLongitudeDeg) *
      bell(latitudeDeg, patch.latitudeDeg, patch.widthLatitudeDeg);
  return total;
}

/** A at cell centres [ny][nx] and corners [ny + 1][nx + 1], m²/s; null where it is the same everywhere. */
export function viscosityMaps(setup: Pick<Setup, 'friction'>, grid: Grid): ViscosityMap | null {
  const { friction } = setup;
  if (friction.viscosityPatches.every(({ addedM2S }) => addedM2S === 0)) return null;
  const field = (longitudes: Float64Array, latitudes: Float64Array) => {
    const values = new Float64Array(longitudes.length * latitudes.length).fill(friction.viscosityM2S);
    for (const {
      addedM2S,
      longitudeDeg,
      latitudeDeg,
      widthLongitudeDeg,
      widthLatitudeDeg,
    } of friction.viscosityPatches) {
      const along = longitudes.map((longitude) => bell(longitude, longitudeDeg, widthLongitudeDeg));
      for (let j = 0, k = 0; j < latitudes.length; j++) {
        const across = bell(latitudes[j], latitudeDeg, widthLatitudeDeg);
        // The order of the factors is that of viscosityAt: the same bits.
        for (const factor of along) values[k++] += addedM2S * factor * across;
      }
    }
    return values;
  };
  return { cell: field(grid.lonCentre, grid.latCentre), corner: field(grid.lonFace, grid.latFace) };
}

/** exp(−(x − centre)²/(2 width²)). */
function bell(x: number, centre: number, width: number): number {
  const distance = (x - centre) / width;
  return exp(-0.5 * distance * distance);
}
