import type { Forcing } from '../forcing/forcing';
import type { Grid } from '../grid/grid';

/** What a linear model is made of; SI units. The core takes any finite step and any grid. */
export interface ModelOptions {
  grid: Grid;
  /** Time step, s. */
  dt: number;
  /** g′, m/s². */
  reducedGravity: number;
  /** H, m. */
  restThickness: number;
  /** ρ0, kg/m³. */
  density?: number;
  /** r, 1/s. */
  rayleigh?: number;
  /** A, m²/s. */
  viscosity?: number;
  /** κ, 1/s. */
  damping?: number;
  slip?: 'free' | 'none';
  forcing?: Forcing;
}

/** Throws RangeError naming the first coefficient that is not a number the equations can take. */
export function refuseBadOptions(options: ModelOptions): void {
  const positive = {
    'The time step': [options.dt, 's'],
    'Reduced gravity': [options.reducedGravity, 'm/s²'],
    'Thickness at rest': [options.restThickness, 'm'],
    Density: [options.density ?? 1025, 'kg/m³'],
  } as const;
  for (const [label, [value, unit]] of Object.entries(positive))
    if (!(Number.isFinite(value) && value > 0))
      throw new RangeError(`${label} must be a positive finite number in ${unit}; ${value} arrived.`);
  const notNegative = {
    'Rayleigh drag': [options.rayleigh ?? 0, '1/s'],
    Viscosity: [options.viscosity ?? 0, 'm²/s'],
    'Interface damping': [options.damping ?? 0, '1/s'],
  } as const;
  for (const [label, [value, unit]] of Object.entries(notNegative))
    if (!(Number.isFinite(value) && value >= 0))
      throw new RangeError(`${label} must be 0 or a positive finite number in ${unit}; ${value} arrived.`);
}
