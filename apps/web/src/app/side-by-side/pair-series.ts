import { type Run } from '@halfdeep/contracts';
import { type GrowingSlice } from '../core/growing-rows';
import { type Curve } from '../shared/plate/curve-plot';

/** A section that both runs keep on the same line. */
export interface CommonSection {
  key: string;
  name: string;
  along: 'latitude' | 'longitude';
  atDeg: number;
  a: number;
  b: number;
}

/** Sections on the same line in both setups, whatever they are called; named as in A. */
export function commonSections(a: Run['setup'], b: Run['setup']): CommonSection[] {
  return a.output.sections.flatMap((section, k) => {
    const other = b.output.sections.findIndex(
      (s) => s.along === section.along && Math.abs(s.atDeg - section.atDeg) < 1e-9,
    );
    const { name, along, atDeg } = section;
    return other < 0 ? [] : [{ key: `${along} ${atDeg}`, name, along, atDeg, a: k, b: other }];
  });
}

/** Transport of A, of B, and B − A where both have a record of the same day. */
export function pairCurves(a: GrowingSlice, b: GrowingSlice, columnA: number, columnB: number): Curve[] {
  a.version();
  b.version();
  if (columnA < 0 || columnB < 0 || a.rows.count === 0 || b.rows.count === 0) return [];
  const days: number[] = [];
  const gaps: number[] = [];
  for (let i = 0, k = 0; i < a.rows.count && k < b.rows.count;) {
    const [dayA, dayB] = [Math.round(4 * a.rows.day(i)), Math.round(4 * b.rows.day(k))];
    if (dayA === dayB) {
      days.push(dayA / 4);
      gaps.push(b.rows.value(k, columnB) - a.rows.value(i, columnA));
    }
    if (dayA <= dayB) i++;
    if (dayB <= dayA) k++;
  }
  return [
    { name: 'A', series: 1, x: a.rows.days(), y: a.rows.column(columnA) },
    { name: 'B', series: 3, x: b.rows.days(), y: b.rows.column(columnB) },
    { name: 'B − A', series: 2, x: days, y: gaps },
  ];
}

/** The part of a curve that lies in a range of days. */
export function within(curve: Curve, [first, last]: [number, number]): Curve {
  const kept = Array.from({ length: curve.x.length }, (_, k) => k).filter((k) => {
    const day = curve.x[k] ?? NaN;
    return day >= first - 1e-6 && day <= last + 1e-6;
  });
  const part = (values: ArrayLike<number>) => kept.map((k) => values[k] ?? NaN);
  return { ...curve, x: part(curve.x), y: part(curve.y) };
}
