import type { ModelOptions } from '../stepper/model-options';

const PAGE = 65_536;
/** Place of the model in the memory: addresses below serve no one, so that 0 can stand for “none”. */
const START = 4096;
/** What 32-bit addresses reach. */
const MOST_BYTES = 65_535 * PAGE;

/** Memory for a model in which the compiled stepper can step it; undefined where it would not fit or cannot be had. */
export function kernelMemory(shared: boolean): NonNullable<ModelOptions['allocate']> {
  return (bytes) => {
    const pages = Math.ceil((START + bytes) / PAGE);
    if (START + bytes > MOST_BYTES) return null;
    try {
      const memory = new WebAssembly.Memory({ initial: pages, maximum: pages, shared });
      return { buffer: memory.buffer, byteOffset: START, memory };
    } catch (error) {
      // No room for so much memory in one piece: the model takes its own, and the reference steps it.
      if (error instanceof RangeError) return null;
      throw error;
    }
  };
}
