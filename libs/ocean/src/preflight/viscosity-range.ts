import { exp } from '../exact/elementary';
import type { GridLayout } from '../grid/grid-layout';
import type { Setup } from '../setup';

/** Lines along an axis on which a map of viscosity is looked at, besides those through the centres of its patches. */
const LINES = 120;

/**
 * Smallest and largest viscosity over the basin, m²/s, on a lattice of at most 120 lines each way that runs through the
 * centre of every patch. A millisecond at most.
 */
export function viscosityRange(setup: Pick<Setup, 'friction'>, layout: GridLayout): { least: number; most: number } {
  const { viscosityM2S, viscosityPatches } = setup.friction;
  const patches = viscosityPatches.filter(({ addedM2S }) => addedM2S > 0);
  if (patches.length === 0) return { least: viscosityM2S, most: viscosityM2S };
  const { zonal, meridional } = layout;
  const longitudes = lines(zonal, patches.map(({ longitudeDeg }) => longitudeDeg)); // prettier-ignore
  const latitudes = lines(meridional, patches.map(({ latitudeDeg }) => latitudeDeg)); // prettier-ignore
  const along = patches.map((patch) => bells(longitudes, patch.longitudeDeg, patch.widthLongitudeDeg));
  const across = patches.map((patch) => bells(latitudes, patch.latitudeDeg, patch.widthLatitudeDeg));
  let [least, most] = [Infinity, 0];
  for (let j = 0; j < latitudes.length; j++)
    for (let i = 0; i < longitudes.length; i++) {
      let total = viscosityM2S;
      for (let k = 0; k < patches.length; k++) total += patches[k].addedM2S * along[k][i] * across[k][j];
      least = Math.min(least, total);
      most = Math.max(most, total);
    }
  return { least, most };
}

function lines({ start, spacing, cells }: GridLayout['zonal'], centres: readonly number[]): number[] {
  const end = start + cells * spacing;
  const count = Math.min(LINES, cells);
  const even = Array.from({ length: count + 1 }, (_, k) => start + (k * (end - start)) / count);
  return [...even, ...centres.map((centre) => Math.min(end, Math.max(start, centre)))];
}

function bells(places: readonly number[], centre: number, width: number): number[] {
  return places.map((place) => {
    const distance = (place - centre) / width;
    return exp(-0.5 * distance * distance);
  });
}
