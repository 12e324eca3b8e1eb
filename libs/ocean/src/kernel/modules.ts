import { PRIVATE_MODULES } from './generated/private-modules';

/** The compiled stepper for memory of one thread, by pitch; null where this machine has no SIMD or no such pitch exists. */
export function privateModule(pitch: number): WebAssembly.Module | null {
  return compiledModule(PRIVATE_MODULES, pitch);
}

const compiled = new WeakMap<object, Map<number, WebAssembly.Module | null>>();

/** Compiles the module of a pitch once; null where there is none, or this machine cannot run it. */
export function compiledModule(modules: Readonly<Record<number, string>>, pitch: number): WebAssembly.Module | null {
  let known = compiled.get(modules);
  if (!known) compiled.set(modules, (known = new Map<number, WebAssembly.Module | null>()));
  const found = known.get(pitch);
  if (found !== undefined) return found;
  const module = pitch in modules ? compile(modules[pitch]) : null;
  known.set(pitch, module);
  return module;
}

function compile(base64: string): WebAssembly.Module | null {
  if (typeof WebAssembly === 'undefined') return null;
  const bytes = Uint8Array.from(atob(base64), (letter) => letter.charCodeAt(0));
  // An engine without SIMD or threads finds the module invalid; that is no failure, the reference steps then.
  return WebAssembly.validate(bytes) ? new WebAssembly.Module(bytes) : null;
}
