import { Injectable, inject } from '@angular/core';
import { type RunSummary, runSummarySchema } from '@halfdeep/contracts';
import { type Observable } from 'rxjs';
import { Api, newIdempotencyKey } from '../core/api';

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

  delete(id: string): Observable<void> {
    return this.api.send('DELETE', `/api/runs/${id}`);
  }
}
