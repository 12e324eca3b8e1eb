import { LiveAnnouncer } from '@angular/cdk/a11y';
import { CdkDrag, type CdkDragDrop, CdkDragHandle, CdkDropList, moveItemInArray } from '@angular/cdk/drag-drop';
import { ChangeDetectionStrategy, Component, Injector, afterNextRender, computed, inject, signal } from '@angular/core';
import { MatButton, MatIconButton } from '@angular/material/button';
import { MatIcon } from '@angular/material/icon';
import { MatSlideToggle } from '@angular/material/slide-toggle';
import { RouterLink } from '@angular/router';
import { type AdminQueue, type RunSummary, adminQueueSchema, runSummarySchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api } from '../../core/api';
import { formatCount, formatDuration, formatModelTime, sentenceStart } from '../../core/format';
import { type ApiProblem, toApiProblem } from '../../core/problem';
import { QueueStatus, placesInWords } from '../../core/queue-status';
import { Reading, watchRuns } from '../../core/reading';
import { Confirm } from '../../shared/confirm/confirm';
import { DataState } from '../../shared/data-state/data-state';
import { ProblemMessage } from '../../shared/problem-message/problem-message';
import { RunChanges } from '../../shared/run-changes/run-changes';
import { StateSign } from '../../shared/state-sign/state-sign';
import { CapForm, type CapChange } from './cap-form';

/** How many runs compute at once, what computes, and what waits in which order. Every change takes effect at once. */
@Component({
  selector: 'app-queue-page',
  imports: [
    CapForm,
    CdkDrag,
    CdkDragHandle,
    CdkDropList,
    DataState,
    MatButton,
    MatIcon,
    MatIconButton,
    MatSlideToggle,
    ProblemMessage,
    RouterLink,
    RunChanges,
    StateSign,
  ],
  templateUrl: './queue-page.html',
  styleUrl: './queue-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class QueuePage {
  private readonly api = inject(Api);
  private readonly confirm = inject(Confirm);
  private readonly status = inject(QueueStatus);
  private readonly announcer = inject(LiveAnnouncer);
  private readonly injectIn = { injector: inject(Injector) };

  protected readonly reading = new Reading<AdminQueue>(() => this.api.get('/api/admin/queue', adminQueueSchema));
  protected readonly queue = this.reading.value;
  protected readonly refused = signal<ApiProblem | null>(null);
  protected readonly busy = signal(false);
  /** Runs that were told to stop and have not answered yet. */
  protected readonly stopping = signal<ReadonlySet<string>>(new Set());

  protected readonly headline = computed(() => {
    const queue = this.queue();
    if (!queue) return '';
    const computing = placesInWords(queue.running.length, queue.cap);
    const wait = queue.waiting.length;
    const waiting = wait === 0 ? 'nothing waits' : `${formatCount(wait, 'run')} ${wait === 1 ? 'waits' : 'wait'}`;
    return `${sentenceStart(computing)}, ${waiting}${queue.paused ? ', intake paused' : ''}.`;
  });
  protected readonly modelTime = (run: RunSummary) => formatModelTime(run.progress.day, run.progress.totalDays);
  protected readonly timeLeft = (run: RunSummary) =>
    run.progress.secondsLeft === null ? '' : `${formatDuration(run.progress.secondsLeft)} left`;
  protected readonly share = ({ progress }: RunSummary) =>
    progress.totalSteps > progress.startStep
      ? (progress.step - progress.startStep) / (progress.totalSteps - progress.startStep)
      : 0;

  constructor() {
    const shown = computed(() =>
      [...(this.queue()?.running ?? []), ...(this.queue()?.waiting ?? [])].map(({ id }) => id),
    );
    watchRuns(shown, {
      onMoved: () => this.reading.again(),
      onEvent: (event) => {
        if (event.type !== 'progress') return;
        this.reading.update((queue) => ({
          ...queue,
          running: queue.running.map((run) => (run.id === event.runId ? { ...run, progress: event.progress } : run)),
        }));
      },
    });
  }

  protected setCap(change: CapChange): Promise<void> {
    return this.patch(change, `Now ${formatCount(change.cap, 'run')} can compute at once.`);
  }

  protected pause(paused: boolean): Promise<void> {
    return this.patch({ paused }, paused ? 'Intake is paused.' : 'Intake is open.');
  }

  protected drop({ previousIndex, currentIndex }: CdkDragDrop<unknown>): Promise<void> {
    return this.move(previousIndex, currentIndex);
  }

  /** Shows the new order at once; a refusal brings the server's order back. */
  protected async move(from: number, to: number): Promise<void> {
    const queue = this.queue();
    const moved = queue?.waiting[from];
    if (!queue || !moved || this.busy() || from === to || to < 0 || to >= queue.waiting.length) return;
    this.keepFocus();
    const waiting = [...queue.waiting];
    moveItemInArray(waiting, from, to);
    this.reading.update((value) => ({ ...value, waiting }));
    const order = waiting.map((run) => run.id);
    await this.patch({ order }, `${moved.label} is number ${to + 1} of ${order.length} now.`);
  }

  // A row that moves takes its buttons out of the page for a moment, and the focus would be lost with them.
  private keepFocus(): void {
    const held = document.activeElement;
    if (!(held instanceof HTMLElement)) return;
    afterNextRender(
      { write: () => held.isConnected && held !== document.activeElement && held.focus() },
      this.injectIn,
    );
  }

  protected async stop(run: RunSummary): Promise<void> {
    const sure = await this.confirm.ask({
      title: `Stop ${run.label}?`,
      text: `It belongs to ${run.owner.name}. What it has computed is kept, and it can be resumed from there.`,
      yes: 'Stop this run',
      ends: true,
    });
    if (!sure) return;
    this.stopping.update((ids) => new Set(ids).add(run.id));
    this.refused.set(null);
    try {
      await firstValueFrom(this.api.post(`/api/runs/${run.id}/stop`, {}, runSummarySchema));
      this.reading.again();
    } catch (error) {
      this.refused.set(toApiProblem(error));
    } finally {
      this.stopping.update((ids) => new Set([...ids].filter((id) => id !== run.id)));
    }
  }

  private async patch(change: object, done: string): Promise<void> {
    this.busy.set(true);
    this.refused.set(null);
    try {
      const queue = await firstValueFrom(this.api.patch('/api/admin/queue', change, adminQueueSchema));
      this.reading.set(queue);
      this.status.take({
        cap: queue.cap,
        paused: queue.paused,
        running: queue.running.length,
        waiting: queue.waiting.length,
      });
      void this.announcer.announce(done);
    } catch (error) {
      this.refused.set(toApiProblem(error));
      this.reading.again();
    } finally {
      this.busy.set(false);
    }
  }
}
