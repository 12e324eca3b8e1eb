import { once } from 'node:events';
import { BUNDLE_ENDING, BUNDLE_MEDIA, setupFileStem, setupText, writeBundle } from '@halfdeep/contracts';
import { readVerified, runPaths, StateFileError, type Run } from '@halfdeep/store';
import { type Response } from 'express';
import { ConflictError } from '../http/errors';
import { startFrom } from './start-state';

export const STATE_MEDIA = 'application/octet-stream';

/** What leaves the product so that another machine can compute the same: setups, bundles and states. */
export class RunExports {
  constructor(private readonly varDir: string) {}

  /**
   * Sends the setup of a run as a JSON file; as a bundle together with its start state when it starts from one. Throws
   * ConflictError when that state is missing or damaged.
   */
  async sendSetup(run: Pick<Run, 'id' | 'label' | 'setup'>, res: Response): Promise<void> {
    const { label, setup } = run;
    const stem = setupFileStem(label);
    if (setup.start.kind !== 'state') {
      res.attachment(`${stem}.setup.json`).type('json').send(setupText(setup));
      return;
    }
    const state = await this.read(runPaths(this.varDir, run.id).start, setup.start.stateSha256, 'start state');
    res.attachment(`${stem}${BUNDLE_ENDING}`).type(BUNDLE_MEDIA);
    await writeBundle({ label, setup }, [state], async (piece) => {
      if (!res.destroyed && !res.write(piece)) await Promise.race([once(res, 'drain'), once(res, 'close')]);
    });
    res.end();
  }

  /** Sends the last state of a finished run. Throws ConflictError when it has none, or its file is missing or damaged. */
  async sendState(run: Run, res: Response): Promise<void> {
    const { stateSha256 } = startFrom(run);
    const state = await this.read(runPaths(this.varDir, run.id).last, stateSha256, 'last state');
    res
      .attachment(`${setupFileStem(run.label)}.state.bin`)
      .type(STATE_MEDIA)
      .send(Buffer.from(state));
  }

  private async read(path: string, sha256: string, what: string): Promise<Uint8Array> {
    try {
      return await readVerified(path, sha256, `${what} of this run`);
    } catch (error) {
      if (error instanceof StateFileError) throw new ConflictError(`${error.message} Compute that run again.`);
      throw error;
    }
  }
}
