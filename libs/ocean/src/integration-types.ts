/** Instant fields of one moment on their own points, land NaN, float32 for storage and drawing. */
export interface Frame {
  /** Completed steps since t_start. */
  step: number;
  /** Model day, step / stepsPerDay. */
  day: number;
  /** η = h − H, [ny][nx], m. */
  eta: Float32Array;
  /** [ny][nx + 1], m/s. */
  u: Float32Array;
  /** [ny + 1][nx], m/s. */
  v: Float32Array;
}

/** A column of a series stream; `kind` says whether it is an instant or a mean over the interval. */
export interface Column {
  name: string;
  label: string;
  unit: string;
  kind: 'instant' | 'mean' | 'integral';
}

export interface Fingerprint {
  /** SHA-256, 64 hex digits, as in numerics.md §7. */
  sha256: string;
  coreVersion: string;
  /** Rows and columns of u, v, h. */
  shape: [number, number, number, number, number, number];
}

/** Why an integration cannot go on: thrown as IntegrationFailure by `advance`. */
export interface FailureReport {
  /**
   * 'non-finite': the state holds a value that is no finite number. 'step limit': S(1 + 2Fr) of a nonlinear run passed
   * 0.91. 'outcropping': a nonlinear layer reached its minimum thickness with neither entrainment nor a stress floor.
   */
  cause: 'non-finite' | 'step limit' | 'outcropping';
  /** First step whose result is bad, as far as it is known; -1 when only the interval is known. */
  step: number;
  day: number;
  /** The first bad cell, or null when only the interval is known. */
  cell: { i: number; j: number; longitudeDeg: number; latitudeDeg: number; variable: 'eta' | 'u' | 'v' } | null;
  /** A sentence or two: the watched limits at that time, the likely cause and what would help. */
  message: string;
}

/** Something about a run that may spoil it and did not stop it. */
export interface Caution {
  /** Completed steps when it was seen first. */
  step: number;
  day: number;
  /** Largest S(1 + 2Fr) since then, and where the flow was fastest at that time. */
  value: number;
  longitudeDeg: number;
  latitudeDeg: number;
  message: string;
}
