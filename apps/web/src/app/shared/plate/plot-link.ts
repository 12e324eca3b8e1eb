import { type WritableSignal, signal } from '@angular/core';

/**
 * What plots that belong together share: the place of the cursor and the part that is zoomed to, in data coordinates.
 * Null ranges are the whole. Plots on one link move together.
 */
export class PlotLink {
  readonly cursor = signal<{ x: number; y: number } | null>(null);
  readonly xZoom: WritableSignal<[number, number] | null>;
  readonly yZoom = signal<[number, number] | null>(null);

  /** Links that are given one signal for x share their zoom along it and nothing else. */
  constructor(xZoom: WritableSignal<[number, number] | null> = signal(null)) {
    this.xZoom = xZoom;
  }

  /** Zooms by `factor` (below 1 comes closer) about a place, never beyond the whole. */
  zoom(factor: number, about: { x: number; y: number }, xFull: [number, number], yFull: [number, number]): void {
    this.xZoom.set(zoomed(this.xZoom() ?? xFull, factor, about.x, xFull));
    this.yZoom.set(zoomed(this.yZoom() ?? yFull, factor, about.y, yFull));
  }

  whole(): void {
    this.xZoom.set(null);
    this.yZoom.set(null);
  }
}

/** A range scaled about a value and kept inside the whole; null when it would be the whole. */
export function zoomed(
  range: [number, number],
  factor: number,
  about: number,
  full: [number, number],
): [number, number] | null {
  const span = Math.max((range[1] - range[0]) * factor, (full[1] - full[0]) / 500);
  if (span >= full[1] - full[0]) return null;
  const share = (about - range[0]) / (range[1] - range[0]);
  const low = Math.min(Math.max(about - share * span, full[0]), full[1] - span);
  return [low, low + span];
}
