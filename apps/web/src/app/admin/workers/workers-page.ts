import { ChangeDetectionStrategy, Component, DestroyRef, inject } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { RouterLink } from '@angular/router';
import { type WorkerInfo, workerInfoSchema } from '@halfdeep/contracts';
import { timer } from 'rxjs';
import * as z from 'zod';
import { Api } from '../../core/api';
import { NO_VALUE, formatBytes, formatCellSteps, formatDuration, formatMoment } from '../../core/format';
import { Reading } from '../../core/reading';
import { DataState } from '../../shared/data-state/data-state';
import { ProblemMessage } from '../../shared/problem-message/problem-message';

/** Workers have no events of their own: they are asked for this often. */
const LOOK_AGAIN_MS = 2000;

/** The processes that integrate: what each computes, and how it fares. */
@Component({
  selector: 'app-workers-page',
  imports: [DataState, ProblemMessage, RouterLink],
  templateUrl: './workers-page.html',
  styles: '.title { margin-bottom: 18px; } app-problem-message { display: block; margin-bottom: 12px; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class WorkersPage {
  private readonly api = inject(Api);
  protected readonly reading = new Reading(() => this.api.get('/api/admin/workers', z.array(workerInfoSchema)));

  protected readonly started = (worker: WorkerInfo) => formatMoment(worker.startedAt);
  protected readonly heard = (worker: WorkerInfo) =>
    `${formatDuration(Math.max(0, (Date.now() - Date.parse(worker.lastHeardAt)) / 1000))} ago`;
  protected readonly memory = ({ residentBytes }: WorkerInfo) =>
    residentBytes === null ? NO_VALUE : formatBytes(residentBytes);
  protected readonly cpu = ({ cpuSeconds }: WorkerInfo) =>
    cpuSeconds === null ? NO_VALUE : formatDuration(cpuSeconds);
  protected readonly speed = ({ cellStepsPerSecond }: WorkerInfo) =>
    cellStepsPerSecond === null ? NO_VALUE : formatCellSteps(cellStepsPerSecond);

  constructor() {
    timer(LOOK_AGAIN_MS, LOOK_AGAIN_MS)
      .pipe(takeUntilDestroyed(inject(DestroyRef)))
      .subscribe(() => {
        if (document.visibilityState === 'visible' && !this.reading.pending()) this.reading.again();
      });
  }
}
