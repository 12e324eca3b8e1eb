import { cos, exp, sin } from '../exact/elementary';
import type { WaveMode } from '../setup';

/** An equatorial wave at t = 0: η in m, u and v in m/s, at x, y in metres, y from the equator. */
export interface WaveFields {
  eta: (x: number, y: number) => number;
  u: (x: number, y: number) => number;
  v: (x: number, y: number) => number;
  /** Angular frequency for e^{i(kx − ωt)}, 1/s: negative for westward phase. */
  omega: number;
  /** Zonal wavenumber, 1/m. */
  k: number;
}

const MERIDIONAL: Record<Exclude<WaveMode, 'kelvin'>, number> = {
  rossby1: 1,
  rossby2: 2,
  mixedWest: 0,
  mixedEast: 0,
  gravity1West: 1,
  gravity1East: 1,
};

/**
 * Root ω of ω² − k² − k/ω = 2n + 1 (Matsuno 1966) for a mode, in units of T = 1/√(βc) and L = √(c/β); k > 0.
 * Arithmetic and √ only, so the same bits everywhere.
 */
export function modeFrequency(mode: WaveMode, k: number): number {
  if (mode === 'kelvin') return k;
  const n = MERIDIONAL[mode];
  const square = k * k + 2 * n + 1;
  // n = 0: the factor ω + k is spurious, what remains is quadratic.
  if (n === 0) return k / 2 + (mode === 'mixedEast' ? 1 : -1) * Math.sqrt((k * k) / 4 + 1);
  let omega = mode === 'gravity1East' ? Math.sqrt(square) : mode === 'gravity1West' ? -Math.sqrt(square) : -k / square;
  // Newton on ω³ − (k² + 2n + 1) ω − k = 0 from the asymptotic root; a dozen rounds are plenty.
  for (let round = 0; round < 12; round++)
    omega -= (omega * omega * omega - square * omega - k) / (3 * omega * omega - square);
  return omega;
}

/**
 * Fields of an equatorial mode whose largest |η| is |amplitude| (its sign counts), with a crest at x = crest.
 * c: √(g′H), m/s. beta: 1/(m s). H: m. wavelength, crest: m.
 */
export function waveMode(
  mode: WaveMode,
  wave: { amplitude: number; wavelength: number; crest: number; c: number; beta: number; H: number },
): WaveFields {
  const { amplitude, wavelength, crest, c, beta, H } = wave;
  const L = Math.sqrt(c / beta);
  const kMetres = (2 * Math.PI) / wavelength;
  const k = kMetres * L;
  const omega = modeFrequency(mode, k);
  const shape = structure(mode, k, omega);
  const scale = amplitude / largest(shape.p);
  const phase = (x: number) => kMetres * (x - crest);
  const speed = (scale * c) / H;
  return {
    eta: (x, y) => scale * shape.p(y / L) * cos(phase(x)),
    u: (x, y) => speed * shape.u(y / L) * cos(phase(x)),
    v: (x, y) => (mode === 'kelvin' ? 0 : -speed * shape.v(y / L) * sin(phase(x))),
    omega: omega * Math.sqrt(beta * c),
    k: kMetres,
  };
}

interface Structure {
  p: (y: number) => number;
  u: (y: number) => number;
  v: (y: number) => number;
}

/** v = ψn, p + u = √(2n + 2) ψn+1/(i(k − ω)), p − u = √(2n) ψn−1/(i(k + ω)); the factor 1/i is the quarter phase. */
function structure(mode: WaveMode, k: number, omega: number): Structure {
  if (mode === 'kelvin') return { p: (y) => hermite(0, y), u: (y) => hermite(0, y), v: () => 0 };
  const n = MERIDIONAL[mode];
  const plus = (y: number) => (Math.sqrt(2 * n + 2) * hermite(n + 1, y)) / (k - omega);
  const minus = (y: number) => (n === 0 ? 0 : (Math.sqrt(2 * n) * hermite(n - 1, y)) / (k + omega));
  return {
    p: (y) => 0.5 * (plus(y) + minus(y)),
    u: (y) => 0.5 * (plus(y) - minus(y)),
    v: (y) => hermite(n, y),
  };
}

const PI_TO_MINUS_QUARTER = 1 / Math.sqrt(Math.sqrt(Math.PI));

/** Normalised Hermite function ψn(y) by upward recurrence. */
export function hermite(n: number, y: number): number {
  let previous = 0;
  let present = PI_TO_MINUS_QUARTER * exp(-0.5 * y * y);
  for (let m = 0; m < n; m++) {
    const next = Math.sqrt(2 / (m + 1)) * y * present - Math.sqrt(m / (m + 1)) * previous;
    previous = present;
    present = next;
  }
  return present;
}

/** The value of largest size of a structure, with its sign: on the equator and north of it (the rest is its mirror image). */
function largest(p: (y: number) => number): number {
  let best = 0;
  for (let step = 0; step <= 8000; step++) {
    const value = p(step / 1000);
    if (Math.abs(value) > Math.abs(best)) best = value;
  }
  return best;
}
