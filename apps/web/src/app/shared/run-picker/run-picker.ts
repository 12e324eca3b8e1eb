import { ChangeDetectionStrategy, Component, Injectable, computed, inject, signal } from '@angular/core';
import { rxResource, toObservable, toSignal } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialog,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import { type RunSummary, pageSchema, runSummarySchema } from '@halfdeep/contracts';
import { debounceTime, distinctUntilChanged, firstValueFrom } from 'rxjs';
import { Api } from '../../core/api';
import { formatChange, formatModelTime } from '../../core/format';
import { toApiProblem } from '../../core/problem';
import { DataState } from '../data-state/data-state';
import { StateSign } from '../state-sign/state-sign';
import { TextField } from '../text-field/text-field';

export interface PickRequest {
  title: string;
  /** Runs that cannot be chosen, by id. */
  except: readonly string[];
}

const runPage = pageSchema(runSummarySchema);
const PAGE_SIZE = 12;

/** Choose one run out of all that may be read, by label or question. */
@Component({
  selector: 'app-run-picker-dialog',
  imports: [
    DataState,
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    StateSign,
    TextField,
  ],
  templateUrl: './run-picker.html',
  styleUrl: './run-picker.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RunPickerDialog {
  private readonly api = inject(Api);
  private readonly dialog = inject<MatDialogRef<RunPickerDialog, RunSummary>>(MatDialogRef);
  protected readonly request = inject<PickRequest>(MAT_DIALOG_DATA);
  protected readonly words = signal('');
  protected readonly page = signal(1);
  private readonly settled = toSignal(toObservable(this.words).pipe(debounceTime(200), distinctUntilChanged()), {
    initialValue: '',
  });

  protected readonly runs = rxResource({
    params: () => ({ q: this.settled().trim(), page: this.page(), pageSize: PAGE_SIZE }),
    stream: ({ params }) => this.api.get('/api/runs', runPage, params),
  });
  protected readonly problem = computed(() => (this.runs.error() ? toApiProblem(this.runs.error()) : null));
  protected readonly items = computed(() => {
    const runs = this.runs.hasValue() ? this.runs.value().items : [];
    return runs.filter((run) => !this.request.except.includes(run.id));
  });
  protected readonly pages = computed(() =>
    this.runs.hasValue() ? Math.max(1, Math.ceil(this.runs.value().total / PAGE_SIZE)) : 1,
  );

  protected search(words: string): void {
    this.words.set(words);
    this.page.set(1);
  }

  protected choose(run: RunSummary): void {
    this.dialog.close(run);
  }

  protected describe(run: RunSummary): string {
    const changes = run.changes
      .slice(0, 2)
      .map(({ label, from, to, unit }) => `${label} ${formatChange(from, to, unit)}`);
    const time = formatModelTime(run.progress.day, run.progress.totalDays);
    return [
      ...(run.parentLabel && changes.length ? [`from ${run.parentLabel}: ${changes.join(', ')}`] : []),
      time,
    ].join('; ');
  }
}

/** Opens the picker. */
@Injectable({ providedIn: 'root' })
export class RunPicker {
  private readonly dialog = inject(MatDialog);

  /** The run that was chosen, or null. */
  async pick(request: PickRequest): Promise<RunSummary | null> {
    const opened = this.dialog.open<RunPickerDialog, PickRequest, RunSummary>(RunPickerDialog, {
      data: request,
      width: '640px',
      maxWidth: '94vw',
    });
    return (await firstValueFrom(opened.afterClosed())) ?? null;
  }
}
