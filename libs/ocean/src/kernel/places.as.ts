// Where things lie in the memory that TypeScript has filled (kernel-tables.ts writes what is read here; the two are kept
// alike by hand, and the specs that compare bits fail when they are not). Addresses are bytes.
import { PITCH } from './pitch.as';

/** Bytes of a plane of a row; a row record of the state is h, u, v. */
export const PLANE: usize = PITCH * 8;
export const H: usize = 0;
export const U: usize = PLANE;
export const V: usize = 2 * PLANE;
export const RECORD: usize = 3 * PLANE;
/** Column of cell 0, bytes. */
export const WEST: usize = 16;

// Planes of the linear ring.
export const UT: usize = 0;
export const VT: usize = PLANE;
export const DIV: usize = 2 * PLANE;
export const HEAD: usize = 3 * PLANE;
export const SPIN: usize = 4 * PLANE;
export const LINEAR_RING: usize = 5 * PLANE;

// The header: i32 first, then f64.
export const NY: usize = 4;
export const PERIODIC: usize = 8;
export const TURNING: usize = 12;
export const SPONGES: usize = 16;
export const ROWS: usize = 20;
export const BASES: usize = 24;
export const BASIS_TABLE: usize = 28;
export const MERIDIANS: usize = 32;
export const MERIDIAN_TABLE: usize = 36;
export const SUM_ROW: usize = 40;
export const CELL_A: usize = 44;
export const CORNER_A: usize = 48;
export const SPONGE_U: usize = 52;
export const SPONGE_V: usize = 56;
export const SPONGE_H: usize = 60;
export const LEVELS: usize = 64;
export const EAST: usize = 80;
export const FACTORS: usize = 84;
export const SUMS: usize = 88;
export const SUM_STRIDE: usize = 92;
export const CONTEXTS: usize = 96;
export const CONTEXT_STRIDE: usize = 100;
export const FIELDS_X: usize = 104;
export const FIELDS_Y: usize = 108;
export const PHASE: usize = 112;
export const STEPS: usize = 116;
export const RECORDING: usize = 120;

export const KEEP_H: usize = 256;
export const DRAIN: usize = 264;
export const W1: usize = 272;
export const W0: usize = 280;
export const WM1: usize = 288;
export const WM2: usize = 296;
export const VISCOSITY: usize = 304;
/** 0 where a map takes the place of A. */
export const HEAD_VISCOSITY: usize = 312;
export const KEEP: usize = 320;
export const PUSH: usize = 328;
export const PER_DY: usize = 336;
export const SLIP: usize = 344;
export const PER_MASS: usize = 352;
export const DT: usize = 360;
export const HALF_DT: usize = 368;
export const DT_REST: usize = 376;
export const DAMPING: usize = 384;
export const RAYLEIGH: usize = 392;

// A row of the table: row factors, then pairs of addresses (first, end) of its runs, then flags.
export const ROW: usize = 192;
export const PER_DX_C: usize = 0;
export const PER_DX_V: usize = 8;
export const DIV_NORTH: usize = 16;
export const DIV_SOUTH: usize = 24;
export const CURL_NORTH: usize = 32;
export const CURL_SOUTH: usize = 40;
export const CORIOLIS_SOUTH: usize = 48;
export const CORIOLIS_NORTH: usize = 56;
export const CORIOLIS_V: usize = 64;
export const TURN_SOUTH: usize = 72;
export const TURN_NORTH: usize = 80;
export const SHARE_SOUTH: usize = 88;
export const SHARE_NORTH: usize = 96;
export const SWEEP_RUNS: usize = 104;
export const CELL_RUNS: usize = 112;
export const U_RUNS: usize = 120;
export const V_RUNS: usize = 128;
export const CORNER_RUNS: usize = 136;
export const FRESH_RUNS: usize = 144;
export const COAST: usize = 152;
export const SPONGE_ROW: usize = 160;

// A context: what one step in flight (or one thread) works with; its ring and scratch rows follow.
export const C_NOW: usize = 0;
export const C_PREVIOUS: usize = 4;
export const C_BEFORE: usize = 8;
export const C_NEXT: usize = 12;
export const C_FACTORS: usize = 16;
/** 0: no sums. */
export const C_SUMS: usize = 20;
export const C_STRESS: usize = 64;
export const C_SCRATCH: usize = 64 + PLANE;
export const C_RING: usize = 64 + PLANE + RECORD;

// Weights of the scheme: coefficients.ts.
export const E0: f64 = 1.781105;
export const E1: f64 = -1.06221;
export const E2: f64 = 0.281105;

// Header, continued: how many steps are in flight at once, and the bands of threads.
export const BLOCK: usize = 124;
export const THREADS: usize = 128;
export const BANDS: usize = 132;
// Planes of the nonlinear ring.
export const N_UT: usize = 0;
export const N_VT: usize = PLANE;
export const N_HT: usize = 2 * PLANE;
export const N_FLUX_U: usize = 3 * PLANE;
export const N_FLUX_V: usize = 4 * PLANE;
export const N_LIMIT: usize = 5 * PLANE;
export const N_ENTRAINED: usize = 6 * PLANE;
export const N_DIV: usize = 7 * PLANE;
export const N_OUT: usize = 8 * PLANE;
export const N_HEAD: usize = 9 * PLANE;
export const N_SPIN: usize = 10 * PLANE;
export const N_TURN_U: usize = 11 * PLANE;
export const N_TURN_V: usize = 12 * PLANE;
export const NONLINEAR_RING: usize = 13 * PLANE;

// The nonlinear step's own part of header, rows and contexts.
export const NONLINEAR: usize = 136;
export const ENTRAINS: usize = 140;
export const LIMITS: usize = 144;
export const PUSH_THICKNESS: usize = 408;
export const MINIMUM: usize = 416;
export const PER_DT: usize = 424;
export const ONSET: usize = 432;
export const PER_ONSET: usize = 440;
export const STRESS_FLOOR: usize = 448;
export const GRAVITY: usize = 456;
export const REST: usize = 464;
export const DETRAINED: usize = 472;
export const F: usize = 168;
export const PER_WET: usize = 176;
/** 1 where row j of the ring has cells that give less than their outflow; four of them. */
export const C_LIMITED: usize = 32;
