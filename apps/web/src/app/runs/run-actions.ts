import { Injectable, inject } from '@angular/core';
import {
  BUNDLE_ENDING,
  BUNDLE_MEDIA,
  type Run,
  type RunSummary,
  runSummarySchema,
  setupFileStem,
} from '@halfdeep/contracts';
import { type Observable, map } from 'rxjs';
import { Api, newIdempotencyKey } from '../core/api';
import { download } from '../core/download';

/** What a person does to a run; each answers the run as it then stands. */
@Injectable({ providedIn: 'root' })
export class RunActions {
  private readonly api = inject(Api);

  stop(id: string): Observable<RunSummary> {
    return this.api.post(`/api/runs/${id}/stop`, {}, runSummarySchema);
  }

  resume(id: string): Observable<RunSummary> {
    return this.api.post(`/api/runs/${id}/resume`, {}, runSummarySchema);
  }

  /** A new run of the same setup: its fingerprint must come out the same. */
  repeat(id: string): Observable<RunSummary> {
    return this.api.post(`/api/runs/${id}/repeat`, {}, runSummarySchema, { idempotencyKey: newIdempotencyKey() });
  }

  /** Saves the setup as a file, with the state it starts from where it starts from one; answers the file's name. */
  exportSetup({ id, label, setup }: Pick<Run, 'id' | 'label' | 'setup'>): Observable<string> {
    const [ending, media] =
      setup.start.kind === 'state' ? [BUNDLE_ENDING, BUNDLE_MEDIA] : ['.setup.json', 'application/json'];
    const name = `${setupFileStem(label)}${ending}`;
    return this.api.bytes(`/api/runs/${id}/setup`).pipe(
      map((bytes) => {
        download(name, bytes, media);
        return name;
      }),
    );
  }

  delete(id: string): Observable<void> {
    return this.api.send('DELETE', `/api/runs/${id}`);
  }
}
