import { Worker } from 'node:worker_threads';
import { sharedModule, shareSteps, type ThreadTeam } from '@halfdeep/ocean';

/**
 * What a helper thread does: it lends the compiled stepper its processor until the team is dismissed. Kept as text,
 * because a thread starts from a file of plain JavaScript or from text, and a bundle, a test and a script run by tsx have
 * no such file in one place.
 */
const HELPER = `
  const { workerData } = require('node:worker_threads');
  const { module, memory, header, thread } = workerData;
  const kernel = new WebAssembly.Instance(module, { env: { memory } }).exports;
  (${shareSteps.toString()})(kernel, new Int32Array(memory.buffer), header, thread, true);
`;

/** Threads of this process that step one model together. They end when the stepper dismisses them, or with the process. */
export class WorkerThreadTeam implements ThreadTeam {
  /** `threads`: how many step, the caller among them. */
  constructor(readonly threads: number) {
    if (!(Number.isInteger(threads) && threads >= 1))
      throw new RangeError(`A team has a whole number of threads from 1 on; ${threads} arrived.`);
  }

  module(pitch: number): WebAssembly.Module | null {
    return sharedModule(pitch);
  }

  enlist(job: { module: WebAssembly.Module; memory: WebAssembly.Memory; header: number }): void {
    for (let thread = 1; thread < this.threads; thread++) {
      const helper = new Worker(HELPER, {
        eval: true,
        workerData: { ...job, thread },
        // What the process itself was started with (a compiler of TypeScript, say) is of no use here.
        execArgv: [],
      });
      // A helper that fails leaves the others waiting for it: the process must not go on.
      helper.on('error', (error) => {
        throw new Error(`Helper thread ${thread} of the stepper failed.`, { cause: error });
      });
      helper.unref();
    }
  }
}
