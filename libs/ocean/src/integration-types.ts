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
  cause: 'non-finite';
  /** First step whose result is bad, as far as it is known; -1 when only the interval is known. */
  step: number;
  day: number;
  /** The first bad cell, or null when only the interval is known. */
  cell: { i: number; j: number; longitudeDeg: number; latitudeDeg: number; variable: 'eta' | 'u' | 'v' } | null;
  /** A sentence: the watched limits at that time and the likely cause. */
  message: string;
}
