// Short names for what every row does.

// @ts-ignore: decorator
@inline
export function int(base: usize, at: usize): usize {
  return load<u32>(base + at);
}

// @ts-ignore: decorator
@inline
export function num(base: usize, at: usize): f64 {
  return load<f64>(base + at);
}

/** Lanes (b, c) of (a, b), (c, d): the pair one column on from the first. */
// @ts-ignore: decorator
@inline
export function between(first: v128, second: v128): v128 {
  return v128.shuffle<f64>(first, second, 1, 2);
}

// @ts-ignore: decorator
@inline
export function add(a: v128, b: v128): v128 {
  return f64x2.add(a, b);
}

// @ts-ignore: decorator
@inline
export function sub(a: v128, b: v128): v128 {
  return f64x2.sub(a, b);
}

// @ts-ignore: decorator
@inline
export function mul(a: v128, b: v128): v128 {
  return f64x2.mul(a, b);
}

// @ts-ignore: decorator
@inline
export function div(a: v128, b: v128): v128 {
  return f64x2.div(a, b);
}

// @ts-ignore: decorator
@inline
export function splat(a: f64): v128 {
  return f64x2.splat(a);
}

/** Lane 0 plus lane 1. */
// @ts-ignore: decorator
@inline
export function both(a: v128): f64 {
  return f64x2.extract_lane(a, 0) + f64x2.extract_lane(a, 1);
}

/** Zeroes lane 1: what lies behind the end of a run of odd length. */
// @ts-ignore: decorator
@inline
export function first(a: v128): v128 {
  return f64x2.replace_lane(a, 1, 0);
}
