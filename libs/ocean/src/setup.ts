/**
 * A setup: everything that determines a run. Plain data; `libs/contracts` holds the zod schema of the same shape.
 * Angles are degrees here (this is what a person types), everything else is SI unless the name says otherwise.
 */
export interface Setup {
  schemaVersion: 1;
  constants: Constants;
  basin: Basin;
  layer: Layer;
  wind: Wind;
  start: Start;
  friction: Friction;
  numerics: Numerics;
  length: { days: number };
  output: Output;
}

/** Physical constants written into every setup, so that a run stays repeatable when a default changes. */
export interface Constants {
  earthRadiusM: number;
  rotationRatePerS: number;
  gravityMS2: number;
  /** ρ0, kg/m³. */
  densityKgM3: number;
  /** ρ0 cp, J/(m³ K). */
  heatCapacityJM3K: number;
}

export type Geometry = 'equatorial' | 'midlatitude' | 'fplane' | 'spherical';

export interface Basin {
  /** A name of the water for the map; may be empty. */
  name: string;
  geometry: Geometry;
  /** Edges, degrees; east > west, north > south. */
  westDeg: number;
  eastDeg: number;
  southDeg: number;
  northDeg: number;
  /** Mid-latitude and f-plane: latitude φ0 at which the plane touches, degrees; null: the middle of the basin. */
  referenceLatitudeDeg: number | null;
  /** Coriolis parameter at φ0 set by hand, 1/s; null: 2Ω sin φ0. Not used on the equatorial plane and on a sphere. */
  f0PerS: number | null;
  /** β set by hand, 1/(m s); null: from the constants. Not used on an f-plane and on a sphere. */
  betaPerMS: number | null;
  zonallyPeriodic: boolean;
  westernCoast: WesternCoast;
  islands: Island[];
  /** At most one at each edge. */
  sponges: Sponge[];
  /**
   * Spacing of the grid on which coast and islands are turned into land cells; null: the run's own. Coarser by a whole
   * factor: each land cell is divided; finer: a cell is land when at least half of the finer cells in it are.
   */
  coastSpacing: { longitudeDeg: number; latitudeDeg: number } | null;
}

/** A layer along an edge in which motion and interface anomaly are damped alike, at rate peak · s², s = 0 … 1 into it. */
export interface Sponge {
  edge: 'west' | 'east' | 'south' | 'north';
  widthDeg: number;
  /** r_max, 1/s; null: 6.9 c/W, which reflects 1 % of a normally incident wave. */
  peakRatePerS: number | null;
  /** The wind falls to 0 as cos²(π s/2) inside. */
  tapersWind: boolean;
}

/** A slanting coast is a straight line in longitude and latitude from the south edge to the north edge of the basin. */
export type WesternCoast = { kind: 'rectangular' } | { kind: 'slanting'; atSouthDeg: number; atNorthDeg: number };

export type Island =
  | { kind: 'box'; name: string; westDeg: number; eastDeg: number; southDeg: number; northDeg: number }
  /** Ring of [longitude, latitude] in degrees, three points or more, closed by itself. */
  | { kind: 'polygon'; name: string; points: [number, number][] };

export interface Layer {
  /** g′, m/s². */
  reducedGravityMS2: number;
  /** H, m. */
  restThicknessM: number;
  /** κ, Newtonian damping of the interface, 1/s. */
  dampingPerS: number;
  /** T1 − T2, K: turns volume into heat transport. */
  temperatureStepK: number;
  /** hmin, m: the fluxes of the nonlinear equations never thin the layer below it. Not used by the linear ones. */
  minimumThicknessM: number;
  /** Water taken up from below where the nonlinear layer is thin; null: none. Not used by the linear equations. */
  entrainment: Entrainment | null;
}

/** w_e = (H_e − h)²/(t_e H_e) where h < H_e, else 0. */
export interface Entrainment {
  /** H_e, m. */
  onsetThicknessM: number;
  /** t_e, days. */
  timescaleDays: number;
  /** 'uniform': what is taken up is given back evenly over the basin, so that the total stays. */
  detrainment: 'none' | 'uniform';
}

export interface Wind {
  components: WindComponent[];
  /** s: a factor on the yearly harmonics of all components, not on steady or switch-on parts. */
  seasonalStrength: number;
  /** h_s, m: the nonlinear wind acceleration is τ/(ρ0 max(h, h_s)). Not used by the linear equations. */
  stressFloorM: number;
}

/** One component: a pattern in space times a season in time. */
export interface WindComponent {
  name: string;
  pattern: WindPattern;
  season: Season;
}

export type StressDirection = 'eastward' | 'northward';

export type WindPattern =
  | { kind: 'uniform'; eastwardNM2: number; northwardNM2: number }
  /** amplitude · exp(−(φ − latitude)² / (2 width²)). */
  | { kind: 'zonalBelt'; direction: StressDirection; amplitudeNM2: number; latitudeDeg: number; widthDeg: number }
  /** amplitude · exp(−(λ − longitude)²/(2 widthLon²) − (φ − latitude)²/(2 widthLat²)). */
  | {
      kind: 'gaussianPatch';
      direction: StressDirection;
      amplitudeNM2: number;
      longitudeDeg: number;
      latitudeDeg: number;
      widthLongitudeDeg: number;
      widthLatitudeDeg: number;
    }
  /**
   * Linear cross-equatorial shear: τx = a y T(φ), y = earth radius × latitude, a = stress over distance.
   * T = 1 within `fullWithinDeg`, cos²(π/2 · (|φ| − full)/(zero − full)) to `zeroBeyondDeg`, 0 beyond.
   */
  | {
      kind: 'linearShear';
      stressNM2: number;
      overDistanceKm: number;
      fullWithinDeg: number;
      zeroBeyondDeg: number;
    };

/**
 * The factor on a pattern: mean · ramp(t) + s · (annual + semiannual), s the seasonal strength,
 * ramp(t) = sin²(π/2 · t/switchOnDays) up to switchOnDays after day 0, then 1 (1 throughout when switchOnDays is 0),
 * annual = amplitude · cos(2π (t − peakDay)/365 d), semiannual = amplitude · cos(4π (t − peakDay)/365 d).
 */
export interface Season {
  mean: number;
  switchOnDays: number;
  annual: Harmonic;
  semiannual: Harmonic;
}

/** Amplitude: a factor on the pattern. peakDay: model day of the (first) maximum, 0 = 1 January 00:00. */
export interface Harmonic {
  amplitude: number;
  peakDay: number;
}

export type Start =
  | { kind: 'rest' }
  /** η = amplitude · exp(−(λ−λ0)²/(2 wλ²) − (φ−φ0)²/(2 wφ²)), u = v = 0. */
  | {
      kind: 'bump';
      amplitudeM: number;
      longitudeDeg: number;
      latitudeDeg: number;
      widthLongitudeDeg: number;
      widthLatitudeDeg: number;
    }
  /** η = −amplitude north of the latitude, +amplitude south of it, 0 on it; u = v = 0. */
  | { kind: 'step'; amplitudeM: number; latitudeDeg: number }
  /** An equatorial wave of the setup's own c and β (Matsuno 1966): amplitude is the largest |η|, m. */
  | { kind: 'mode'; mode: WaveMode; amplitudeM: number; wavelengthDeg: number; crestLongitudeDeg: number }
  /** The last state of a finished run; `stateSha256` names the nine arrays, copied into the new run when it is queued. */
  | { kind: 'state'; runId: string; fingerprint: string; stateSha256: string; startStep: number; stepsPerDay: number };

export type WaveMode = 'kelvin' | 'rossby1' | 'rossby2' | 'mixedWest' | 'mixedEast' | 'gravity1West' | 'gravity1East';

export interface Friction {
  /** r, Rayleigh drag, 1/s. */
  rayleighPerS: number;
  /** A, Laplacian viscosity, m²/s. */
  viscosityM2S: number;
  /** Places of other viscosity: Gaussian patches added to A. */
  viscosityPatches: ViscosityPatch[];
  slip: 'free' | 'none';
}

/** Viscosity added around a place: added · exp(−(λ − longitude)²/(2 widthLon²) − (φ − latitude)²/(2 widthLat²)). */
export interface ViscosityPatch {
  name: string;
  addedM2S: number;
  longitudeDeg: number;
  latitudeDeg: number;
  widthLongitudeDeg: number;
  widthLatitudeDeg: number;
}

export interface Numerics {
  equations: 'linear' | 'nonlinear';
  /** Grid spacing, degrees of longitude and of latitude. */
  spacingLongitudeDeg: number;
  spacingLatitudeDeg: number;
  /** n, a multiple of 4; the step is 86 400 s / n. */
  stepsPerDay: number;
}

export interface Output {
  sections: Section[];
  moorings: Mooring[];
  /** Whole numbers of 6 hours. */
  frameIntervalDays: number;
  sectionIntervalDays: number;
  mooringIntervalDays: number;
  /** Zonal momentum and vorticity of the basin with every term, added up every step (they cost a good part of a step). */
  momentumBudget: boolean;
  vorticityBudget: boolean;
}

/** A latitude section snaps to a row of v points, a longitude section to a column of u points. */
export interface Section {
  name: string;
  along: 'latitude' | 'longitude';
  /** Where the line lies, degrees. */
  atDeg: number;
}

export interface Mooring {
  name: string;
  longitudeDeg: number;
  latitudeDeg: number;
}

/** Variables that a map, a space-time slice or a plate can show. */
export const VARIABLES = [
  'eta',
  'h',
  'u',
  'v',
  'uCentre',
  'vCentre',
  'speed',
  'vorticity',
  'pv',
  'taux',
  'tauy',
  'ekmanPumping',
] as const;
export type Variable = (typeof VARIABLES)[number];

/** Range, default and reason of a numeric field: the form, the API and the core read the same table. */
export interface Limit {
  label: string;
  unit: string;
  min: number;
  max: number;
  default: number;
  /** Why the field matters, one line. */
  why: string;
  /** Only whole numbers, or whole multiples of this. */
  multipleOf?: number;
}
