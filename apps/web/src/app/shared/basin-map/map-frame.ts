/** Pixel geometry of a map: where degrees land, and how its frame is graduated. */
export interface MapFrame {
  /** Plot area inside the frame, px. */
  x: number;
  y: number;
  width: number;
  height: number;
  west: number;
  east: number;
  south: number;
  north: number;
  /** Degrees between labels. */
  tickX: number;
  tickY: number;
  /** False where a very long or very tall basin had to be drawn out of scale. */
  equalDegrees: boolean;
}

const STEPS = [0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 30, 60, 90];
/** Beyond one to eight a picture in true proportion would be a line. */
const MOST_ELONGATED = 8;

/** The smallest round step whose labels stand at least `apartPx` from each other. */
export function tickStep(pxPerDegree: number, apartPx: number): number {
  return STEPS.find((step) => step * pxPerDegree >= apartPx) ?? 90;
}

/** Ticks from `low` to `high` that are whole multiples of `step`. */
export function ticks(low: number, high: number, step: number): number[] {
  const first = Math.ceil(low / step - 1e-9);
  const last = Math.floor(high / step + 1e-9);
  return Array.from({ length: Math.max(0, last - first + 1) }, (_, k) => (first + k) * step);
}

/** Fits a basin into a box of `boxWidth` by at most `boxHeight` px, margins for the labels included. */
export function mapFrame(
  basin: { westDeg: number; eastDeg: number; southDeg: number; northDeg: number },
  boxWidth: number,
  boxHeight: number,
): MapFrame {
  const margin = { left: 46, right: 14, top: 10, bottom: 26 };
  const dLon = Math.max(1e-6, basin.eastDeg - basin.westDeg);
  const dLat = Math.max(1e-6, basin.northDeg - basin.southDeg);
  const [maxWidth, maxHeight] = [
    Math.max(40, boxWidth - margin.left - margin.right),
    boxHeight - margin.top - margin.bottom,
  ];
  const elongation = Math.max(dLon / dLat, dLat / dLon);
  const equalDegrees = elongation <= MOST_ELONGATED;
  const scale = Math.min(maxWidth / dLon, maxHeight / dLat);
  const width = equalDegrees ? dLon * scale : dLon > dLat ? maxWidth : maxHeight / MOST_ELONGATED;
  const height = equalDegrees ? dLat * scale : dLon > dLat ? maxWidth / MOST_ELONGATED : maxHeight;
  return {
    x: margin.left + (maxWidth - width) / 2,
    y: margin.top,
    width,
    height,
    west: basin.westDeg,
    east: basin.eastDeg,
    south: basin.southDeg,
    north: basin.northDeg,
    tickX: tickStep(width / dLon, 56),
    tickY: tickStep(height / dLat, 34),
    equalDegrees,
  };
}

export const pxX = (frame: MapFrame, longitude: number) =>
  frame.x + ((longitude - frame.west) / (frame.east - frame.west)) * frame.width;
export const pxY = (frame: MapFrame, latitude: number) =>
  frame.y + ((frame.north - latitude) / (frame.north - frame.south)) * frame.height;

/** Stretches of a graduated rule: from, to and whether it is inked; they change at each whole `step` of the axis. */
export function graduation(low: number, high: number, step: number): { from: number; to: number; inked: boolean }[] {
  const edges = [low, ...ticks(low, high, step).filter((tick) => tick > low + 1e-9 && tick < high - 1e-9), high];
  return edges.slice(1).map((to, k) => {
    const from = edges[k] ?? low;
    return { from, to, inked: Math.abs(Math.floor((from + to) / 2 / step)) % 2 === 0 };
  });
}
