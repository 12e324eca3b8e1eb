import type { Basin, Island } from '../setup';

/**
 * Land mask [ny][nx] of a basin, 1 water: a cell is land when its centre lies west of the slanting coast or on an island.
 * lonCentre, latCentre: cell centres, degrees.
 */
export function landMask(basin: Basin, lonCentre: Float64Array, latCentre: Float64Array): Uint8Array {
  const nx = lonCentre.length;
  const ny = latCentre.length;
  const mask = new Uint8Array(nx * ny).fill(1);
  for (let j = 0; j < ny; j++) {
    const coast = coastLongitude(basin, latCentre[j]);
    for (let i = 0; i < nx && lonCentre[i] < coast; i++) mask[j * nx + i] = 0;
  }
  for (const island of basin.islands) {
    const { westDeg, eastDeg, southDeg, northDeg } = boundingBox(island);
    const first = lonCentre.findIndex((longitude) => longitude >= westDeg);
    if (first < 0) continue;
    for (let j = 0; j < ny; j++) {
      const latitude = latCentre[j];
      if (latitude < southDeg || latitude > northDeg) continue;
      const crossings = island.kind === 'polygon' ? crossingsOf(island.points, latitude) : null;
      let passed = 0;
      for (let i = first; i < nx && lonCentre[i] <= eastDeg; i++) {
        // Even-odd rule: inside while an odd number of crossings lies farther east.
        while (crossings && passed < crossings.length && lonCentre[i] >= crossings[passed]) passed++;
        if (!crossings || (crossings.length - passed) % 2 === 1) mask[j * nx + i] = 0;
      }
    }
  }
  return mask;
}

/** Longitude of the western coast at a latitude, degrees: a straight line from the south edge to the north edge. */
export function coastLongitude(basin: Basin, latitudeDeg: number): number {
  const coast = basin.westernCoast;
  if (coast.kind === 'rectangular') return basin.westDeg;
  const along = (latitudeDeg - basin.southDeg) / (basin.northDeg - basin.southDeg);
  return coast.atSouthDeg + (coast.atNorthDeg - coast.atSouthDeg) * along;
}

/** Longitudes at which a closed ring crosses a latitude, west to east: one pass over the ring for a whole row of cells. */
function crossingsOf(ring: readonly [number, number][], latitude: number): number[] {
  const crossings: number[] = [];
  for (let k = 0, previous = ring.length - 1; k < ring.length; previous = k++) {
    const [x1, y1] = ring[previous];
    const [x2, y2] = ring[k];
    if (y1 > latitude === y2 > latitude) continue;
    crossings.push(x1 + ((latitude - y1) / (y2 - y1)) * (x2 - x1));
  }
  return crossings.sort((a, b) => a - b);
}

function boundingBox(island: Island): { westDeg: number; eastDeg: number; southDeg: number; northDeg: number } {
  if (island.kind === 'box') return island;
  const longitudes = island.points.map((point) => point[0]);
  const latitudes = island.points.map((point) => point[1]);
  return {
    westDeg: Math.min(...longitudes),
    eastDeg: Math.max(...longitudes),
    southDeg: Math.min(...latitudes),
    northDeg: Math.max(...latitudes),
  };
}
