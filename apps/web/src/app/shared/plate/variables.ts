import { type Variable } from '@halfdeep/ocean';

/** How a variable is shown: its name, its kind of colour scale, and the unit in which people read it. */
export interface VariableView {
  label: string;
  scale: 'diverging' | 'sequential';
  /** Shown value = stored value × factor. */
  factor: number;
  unit: string;
}

export const VARIABLE_VIEWS: Record<Variable, VariableView> = {
  eta: { label: 'thickness anomaly', scale: 'diverging', factor: 1, unit: 'm' },
  h: { label: 'thickness', scale: 'sequential', factor: 1, unit: 'm' },
  u: { label: 'eastward current', scale: 'diverging', factor: 1, unit: 'm/s' },
  v: { label: 'northward current', scale: 'diverging', factor: 1, unit: 'm/s' },
  uCentre: { label: 'eastward current at centres', scale: 'diverging', factor: 1, unit: 'm/s' },
  vCentre: { label: 'northward current at centres', scale: 'diverging', factor: 1, unit: 'm/s' },
  speed: { label: 'speed', scale: 'sequential', factor: 1, unit: 'm/s' },
  vorticity: { label: 'relative vorticity', scale: 'diverging', factor: 1e6, unit: '10⁻⁶ 1/s' },
  pv: { label: 'potential vorticity', scale: 'diverging', factor: 1e9, unit: '10⁻⁹ 1/(m s)' },
  taux: { label: 'eastward wind stress', scale: 'diverging', factor: 1, unit: 'N/m²' },
  tauy: { label: 'northward wind stress', scale: 'diverging', factor: 1, unit: 'N/m²' },
  ekmanPumping: { label: 'Ekman pumping', scale: 'diverging', factor: 86_400, unit: 'm/d' },
};

export function isVariable(text: string | null | undefined): text is Variable {
  return text != null && Object.hasOwn(VARIABLE_VIEWS, text);
}
