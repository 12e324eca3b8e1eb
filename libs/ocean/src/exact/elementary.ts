/**
 * sin, cos and exp in pure arithmetic: the same bits on every engine (numerics.md §7). Everything that reaches the
 * state goes through these; Math.sin and its like may differ between engines.
 */
import stdlibCos from '@stdlib/math-base-special-cos';
import stdlibExp from '@stdlib/math-base-special-exp';
import stdlibSin from '@stdlib/math-base-special-sin';

/** sin x, x in rad. */
export const sin: (x: number) => number = stdlibSin;
/** cos x, x in rad. */
export const cos: (x: number) => number = stdlibCos;
/** e to the power x. */
export const exp: (x: number) => number = stdlibExp;

/** Radians in a degree. */
export const RADIANS_PER_DEGREE = Math.PI / 180;
