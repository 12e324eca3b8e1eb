/**
 * Threads that step one model together on shared memory. The core asks for them and does not make them: threads are the
 * host's (worker_threads in Node.js). `threads` counts the caller too.
 */
export interface ThreadTeam {
  readonly threads: number;
  /** The compiled stepper for shared memory, by pitch; null where there is none. */
  module(pitch: number): WebAssembly.Module | null;
  /**
   * Starts the helpers: helper k (1 … threads − 1) is to instantiate `module` on `memory` and to call `shareSteps` with its
   * exports, the memory as Int32Array, `header`, k and true, which returns when the team is dismissed.
   */
  enlist(job: { module: WebAssembly.Module; memory: WebAssembly.Memory; header: number }): void;
}
