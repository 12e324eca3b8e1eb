import type { Variable } from '../setup';

/** Where the values of a variable lie on the C-grid. */
export type Points = 'centre' | 'u' | 'v' | 'corner';

/** What a plate writes beside a variable, and where its values lie. */
export interface VariableInfo {
  label: string;
  symbol: string;
  unit: string;
  /** Diverging about 0, or from the smallest to the largest value. */
  scale: 'diverging' | 'sequential';
  points: Points;
}

const diverging = (label: string, symbol: string, unit: string, points: Points): VariableInfo => ({
  label,
  symbol,
  unit,
  scale: 'diverging',
  points,
});

/** Names, units and points of every variable. Vorticity and potential vorticity stay on the corners where they are exact. */
export const VARIABLE_INFO: Readonly<Record<Variable, VariableInfo>> = {
  eta: diverging('Thickness anomaly', 'η', 'm', 'centre'),
  h: { label: 'Layer thickness', symbol: 'h', unit: 'm', scale: 'sequential', points: 'centre' },
  u: diverging('Eastward velocity', 'u', 'm/s', 'u'),
  v: diverging('Northward velocity', 'v', 'm/s', 'v'),
  uCentre: diverging('Eastward velocity at cell centres', 'u', 'm/s', 'centre'),
  vCentre: diverging('Northward velocity at cell centres', 'v', 'm/s', 'centre'),
  speed: { label: 'Speed', symbol: '|u|', unit: 'm/s', scale: 'sequential', points: 'centre' },
  vorticity: diverging('Relative vorticity', 'ζ', '1/s', 'corner'),
  pv: diverging('Potential vorticity', 'q', '1/(m s)', 'corner'),
  taux: diverging('Eastward wind stress', 'τx', 'N/m²', 'centre'),
  tauy: diverging('Northward wind stress', 'τy', 'N/m²', 'centre'),
  ekmanPumping: diverging('Ekman pumping', 'wE', 'm/s', 'centre'),
};

/** Longitudes and latitudes, degrees, of the points of a variable. */
export function axesOf(
  variable: Variable,
  grid: { lonCentre: Float64Array; lonFace: Float64Array; latCentre: Float64Array; latFace: Float64Array },
): { lonDeg: Float64Array; latDeg: Float64Array } {
  const { points } = VARIABLE_INFO[variable];
  return {
    lonDeg: points === 'centre' || points === 'v' ? grid.lonCentre : grid.lonFace,
    latDeg: points === 'centre' || points === 'u' ? grid.latCentre : grid.latFace,
  };
}
