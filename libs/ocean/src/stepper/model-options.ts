import type { Forcing } from '../forcing/forcing';
import type { Grid } from '../grid/grid';

/** What a model is made of; SI units. The core takes any finite step and any grid. */
export interface ModelOptions {
  grid: Grid;
  /** Default: linear. */
  equations?: 'linear' | 'nonlinear';
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
  /** A, m²/s; where `viscosityMap` is given it takes A's place. */
  viscosity?: number;
  viscosityMap?: ViscosityMap | null;
  /** κ, 1/s. */
  damping?: number;
  sponge?: SpongeRates | null;
  slip?: 'free' | 'none';
  forcing?: Forcing;
  /** Nonlinear: hmin, m; 0: no limiter and no clipping. Default 0. */
  minimumThickness?: number;
  /** Nonlinear: w_e = (H_e − h)²/(t_e H_e) where h < H_e. */
  entrainment?: EntrainmentOptions | null;
  /** Nonlinear: h_s, m: the wind acceleration is τ/(ρ0 max(h, h_s)). Default 0. */
  stressFloor?: number;
  /** u columns at which every step's eastward flux is summed for a recorder. */
  meridians?: readonly number[];
  /**
   * Gives a compiled kernel's memory for `bytes` bytes, zeroed, from `byteOffset` on a line of 64 bytes on; null: it
   * cannot. The model takes memory of its own then, and when this is left out.
   */
  allocate?: (bytes: number) => { buffer: ArrayBufferLike; byteOffset: number; memory: WebAssembly.Memory } | null;
  /** How many threads may step the model in that memory. Default 1. */
  threads?: number;
}

export interface EntrainmentOptions {
  /** H_e, m. */
  onsetThickness: number;
  /** t_e, s. */
  timescale: number;
  /** What was taken up in a step is given back evenly over the water in the next. */
  detrainment: 'none' | 'uniform';
}

/** A at cell centres [ny][nx] and at corners [ny + 1][nx + 1], m²/s. */
export interface ViscosityMap {
  cell: Float64Array;
  corner: Float64Array;
}

/** Rates added to r at u points [ny][nx + 1] and v points [ny + 1][nx] and to κ at cells [ny][nx], 1/s. */
export interface SpongeRates {
  u: Float64Array;
  v: Float64Array;
  cell: Float64Array;
}

/** Throws RangeError naming the first coefficient that is not a number the equations can take. */
export function refuseBadOptions(options: ModelOptions): void {
  const { grid, entrainment, sponge, viscosityMap, forcing } = options;
  const positive: [string, number, string][] = [
    ['The time step', options.dt, 's'],
    ['Reduced gravity', options.reducedGravity, 'm/s²'],
    ['Thickness at rest', options.restThickness, 'm'],
    ['Density', options.density ?? 1025, 'kg/m³'],
  ];
  if (entrainment)
    positive.push(
      ['The thickness at which entrainment sets in', entrainment.onsetThickness, 'm'],
      ['The timescale of entrainment', entrainment.timescale, 's'],
    );
  for (const [label, value, unit] of positive)
    if (!(Number.isFinite(value) && value > 0))
      throw new RangeError(`${label} must be a positive finite number in ${unit}; ${value} arrived.`);
  const notNegative: [string, number, string][] = [
    ['Rayleigh drag', options.rayleigh ?? 0, '1/s'],
    ['Viscosity', options.viscosity ?? 0, 'm²/s'],
    ['Interface damping', options.damping ?? 0, '1/s'],
    ['The minimum thickness', options.minimumThickness ?? 0, 'm'],
    ['The stress floor', options.stressFloor ?? 0, 'm'],
  ];
  for (const [label, value, unit] of notNegative)
    if (!(Number.isFinite(value) && value >= 0))
      throw new RangeError(`${label} must be 0 or a positive finite number in ${unit}; ${value} arrived.`);
  const { nx, ny } = grid;
  if (sponge) {
    refuseBadField('Sponge rates at u points', sponge.u, [ny, nx + 1], '1/s');
    refuseBadField('Sponge rates at v points', sponge.v, [ny + 1, nx], '1/s');
    refuseBadField('Sponge rates at cells', sponge.cell, [ny, nx], '1/s');
  }
  if (viscosityMap) {
    refuseBadField('Viscosities at cells', viscosityMap.cell, [ny, nx], 'm²/s');
    refuseBadField('Viscosities at corners', viscosityMap.corner, [ny + 1, nx + 1], 'm²/s');
  }
  forcing?.bases.forEach((basis, b) => {
    for (const [name, values] of Object.entries(basis) as [string, Float64Array | null][]) {
      const bad = values?.findIndex((value) => !Number.isFinite(value)) ?? -1;
      if (values && bad >= 0)
        throw new RangeError(`Forcing ${b + 1} has ${name} = ${values[bad]} at index ${bad}; it must be finite.`);
    }
  });
}

function refuseBadField(what: string, values: Float64Array, [rows, columns]: [number, number], unit: string): void {
  if (values.length !== rows * columns)
    throw new RangeError(`${what} must be ${rows} × ${columns} numbers; ${values.length} arrived.`);
  const bad = values.findIndex((value) => !(Number.isFinite(value) && value >= 0));
  if (bad >= 0)
    throw new RangeError(
      `${what} must be 0 or positive finite numbers in ${unit}; ${values[bad]} arrived in row ${Math.floor(bad / columns)}, column ${bad % columns}.`,
    );
}
