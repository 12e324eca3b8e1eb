import { SHARED_MODULES } from './generated/shared-modules';
import { compiledModule } from './modules';

/**
 * The compiled stepper for memory that threads share, by pitch; null where there is none. For hosts that have threads:
 * a browser's bundle leaves it out as long as nothing there calls it.
 */
export function sharedModule(pitch: number): WebAssembly.Module | null {
  return compiledModule(SHARED_MODULES, pitch);
}
