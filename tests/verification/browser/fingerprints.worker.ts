import { Integration, type Setup } from '@halfdeep/ocean';

/** What a page is asked: a setup and the code that makes the steps. */
export interface Question {
  setup: Setup;
  kernel: 'reference' | 'simd';
}
export type Answer = { sha256: string } | { failure: string };

/** Integrates a setup to its end. */
export function fingerprint({ setup, kernel }: Question): string {
  const run = Integration.start(setup, undefined, { kernel });
  run.advance(run.totalSteps);
  return run.fingerprint().sha256;
}

/** The part of a worker's own scope that is used; Node has none of it. */
interface WorkerScope {
  onmessage: (event: { data: Question }) => void;
  postMessage(answer: Answer): void;
}

const scope = globalThis as unknown as WorkerScope;
scope.onmessage = ({ data }) => {
  try {
    scope.postMessage({ sha256: fingerprint(data) });
  } catch (error) {
    scope.postMessage({ failure: String(error) });
  }
};
