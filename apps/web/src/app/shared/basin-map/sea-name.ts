/** A rectangle in px. */
export interface Box {
  x: number;
  y: number;
  width: number;
  height: number;
}

/** Whether two rectangles share any area. */
export const overlaps = (a: Box, b: Box): boolean =>
  a.x < b.x + b.width && b.x < a.x + a.width && a.y < b.y + b.height && b.y < a.y + a.height;

/**
 * Where a name of `width` by `height` px fits inside `area` without touching what is drawn there: the free place nearest
 * to two thirds east and a quarter down, as on charts. Its box, or null when no place is free.
 */
export function freePlace(area: Box, width: number, height: number, taken: readonly Box[]): Box | null {
  const [spanX, spanY] = [area.width - width, area.height - height];
  if (spanX < 0 || spanY < 0) return null;
  const tries = 24;
  let best: { box: Box; far: number } | null = null;
  for (let row = 0; row <= tries; row++)
    for (let column = 0; column <= tries; column++) {
      const box = { x: area.x + (spanX * column) / tries, y: area.y + (spanY * row) / tries, width, height };
      const dx = (box.x + width / 2 - area.x) / area.width - 2 / 3;
      const dy = (box.y + height / 2 - area.y) / area.height - 1 / 4;
      const far = dx * dx + dy * dy;
      if ((best === null || far < best.far) && !taken.some((other) => overlaps(box, other))) best = { box, far };
    }
  return best?.box ?? null;
}
