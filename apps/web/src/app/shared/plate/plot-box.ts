import { type AxisTicks } from './ticks';

/** The plot area in px, the data range that it shows, and the ticks of both axes. y grows upward in data, downward in px. */
export interface PlotBox {
  width: number;
  height: number;
  left: number;
  top: number;
  w: number;
  h: number;
  x: [number, number];
  y: [number, number];
  xTicks: AxisTicks;
  yTicks: AxisTicks;
}

export const toPxX = (box: PlotBox, x: number) => box.left + ((x - box.x[0]) / (box.x[1] - box.x[0])) * box.w;
export const toPxY = (box: PlotBox, y: number) => box.top + box.h - ((y - box.y[0]) / (box.y[1] - box.y[0])) * box.h;
export const toDataX = (box: PlotBox, px: number) => box.x[0] + ((px - box.left) / box.w) * (box.x[1] - box.x[0]);
export const toDataY = (box: PlotBox, px: number) =>
  box.y[0] + ((box.top + box.h - px) / box.h) * (box.y[1] - box.y[0]);

/** Index of the value nearest to `wanted` in a list that ascends; −1 when it is empty. */
export function nearestIndex(values: ArrayLike<number>, wanted: number): number {
  if (values.length === 0) return -1;
  let low = 0;
  let high = values.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if ((values[middle] ?? 0) <= wanted) low = middle;
    else high = middle;
  }
  return Math.abs((values[low] ?? 0) - wanted) <= Math.abs((values[high] ?? 0) - wanted) ? low : high;
}
