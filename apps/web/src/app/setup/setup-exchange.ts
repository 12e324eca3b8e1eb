import { Injectable, inject } from '@angular/core';
import {
  BUNDLE_ENDING,
  BUNDLE_MEDIA,
  runSchema,
  setupFileStem,
  setupSchema,
  setupText,
  writeBundle,
} from '@halfdeep/contracts';
import type { Setup, Start } from '@halfdeep/ocean';
import { firstValueFrom } from 'rxjs';
import { Api } from '../core/api';
import { download } from '../core/download';
import { formatCount, sentenceStart } from '../core/format';
import { type ApiProblem, toApiProblem } from '../core/problem';

/** What was done with a setup and a file, in sentences. */
export interface ExchangeNotice {
  text: string;
  refused: boolean;
}
type StateStart = Extract<Start, { kind: 'state' }>;

/** Takes a setup out of the form as a file, with the state it starts from, and says what an opened one can do here. */
@Injectable({ providedIn: 'root' })
export class SetupExchange {
  private readonly api = inject(Api);

  /**
   * Saves the setup as it stands in the form; as a bundle when it starts from the last state of a run. `value` may hold
   * fields that cannot be read yet: the form opens such a file again.
   */
  async save(value: Setup, label: string): Promise<ExchangeNotice> {
    const stem = setupFileStem(label);
    const parsed = setupSchema.safeParse(value);
    const setup = parsed.data;
    if (setup?.start.kind === 'state') return this.saveBundle(setup, setup.start, label, `${stem}${BUNDLE_ENDING}`);
    const name = `${stem}.setup.json`;
    download(name, setupText(setup ?? value), 'application/json');
    if (setup) return { text: `The setup is in “${name}”.`, refused: false };
    const fields = sentenceStart(formatCount(parsed.error?.issues.length ?? 0, 'field'));
    return {
      text: `The setup is in “${name}”. ${fields} cannot be read yet: this form opens it, but nothing can compute it.`,
      refused: false,
    };
  }

  private async saveBundle(setup: Setup, start: StateStart, label: string, name: string): Promise<ExchangeNotice> {
    let state: Uint8Array;
    try {
      state = new Uint8Array(await firstValueFrom(this.api.bytes(`/api/runs/${start.runId}/state`)));
    } catch (error) {
      const { detail } = toApiProblem(error);
      return { text: `The setup was not exported, since its start state cannot be had. ${detail}`, refused: true };
    }
    const pieces: BlobPart[] = [];
    await writeBundle({ label, setup }, [state], (piece) => void pieces.push(piece.slice()));
    download(name, new Blob(pieces), BUNDLE_MEDIA);
    return { text: `The setup is in “${name}”, together with the state it starts from.`, refused: false };
  }

  /** What a setup that starts from a run's state can do here; null for any other start. */
  async whatStartCanDo({ start }: Setup): Promise<string | null> {
    if (start.kind !== 'state') return null;
    const elsewhere =
      'It starts from the last state of a run that is not here: give it another start to queue it, or compute it as it is with npm run integrate.';
    try {
      const run = await firstValueFrom(this.api.get(`/api/runs/${start.runId}`, runSchema));
      if (run.lastState?.stateSha256 !== start.stateSha256) return elsewhere;
      return `It starts from the last state of “${run.label}”, which is here: it can be queued.`;
    } catch (error) {
      const problem = toApiProblem(error);
      if (problem.status === 404) return elsewhere;
      return `Whether the state it starts from is here is not known: ${sentence(problem)}`;
    }
  }
}

const sentence = (problem: ApiProblem) => problem.detail || problem.title;
