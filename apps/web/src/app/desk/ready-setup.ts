import { ChangeDetectionStrategy, Component, computed, inject, output, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { type Preset, experimentSchema, presetSchema, runSummarySchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import * as z from 'zod';
import { Api, newIdempotencyKey } from '../core/api';
import { DAYS_PER_YEAR, formatLatitude, formatLongitude, formatModelLength, formatQuantity } from '../core/format';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { Session } from '../core/session';
import { DataState } from '../shared/data-state/data-state';
import { ProblemMessage } from '../shared/problem-message/problem-message';

/** Of the ready setups, the one that answers soonest is the first to meet. */
const FIRST_TO_MEET = 'first-look';

/** An empty desk: a ready setup drawn as a blank strip, queued in one click as the control of a new experiment. */
@Component({
  selector: 'app-ready-setup',
  imports: [DataState, MatButton, ProblemMessage, RouterLink],
  templateUrl: './ready-setup.html',
  styleUrl: './ready-setup.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ReadySetup {
  private readonly api = inject(Api);
  protected readonly session = inject(Session);
  readonly queued = output();

  protected readonly preset = signal<Preset | null>(null);
  /** Why the ready setups could not be read. */
  protected readonly unread = signal<ApiProblem | null>(null);
  protected readonly refused = signal<ApiProblem | null>(null);
  protected readonly busy = signal(false);
  /** Kept between tries, so that a refused run does not leave one experiment a try behind. */
  private experimentId: string | null = null;
  private readonly idempotencyKey = newIdempotencyKey();

  protected readonly facts = computed(() => {
    const setup = this.preset()?.setup;
    if (!setup) return [];
    const { basin, layer, length } = setup;
    return [
      `${formatLongitude(basin.westDeg)} to ${formatLongitude(basin.eastDeg)}, ${formatLatitude(basin.southDeg)} to ${formatLatitude(basin.northDeg)}`,
      `layer of ${formatQuantity(layer.restThicknessM, 'm')}`,
      formatModelLength(length.days),
    ];
  });
  /** Ticks of the blank strip: years, as shares of its length. */
  protected readonly years = computed(() => {
    const years = (this.preset()?.setup.length.days ?? 0) / DAYS_PER_YEAR;
    const step = Math.max(1, Math.ceil(years / 12));
    const count = Math.floor(years / step);
    return Array.from({ length: count + 1 }, (_, k) => ({ name: String(k * step), percent: (100 * k * step) / years }));
  });

  constructor() {
    void this.read();
  }

  protected async read(): Promise<void> {
    this.unread.set(null);
    try {
      const presets = await firstValueFrom(this.api.get('/api/presets', z.array(presetSchema)));
      this.preset.set(presets.find((preset) => preset.id === FIRST_TO_MEET) ?? presets[0] ?? null);
    } catch (error) {
      this.unread.set(toApiProblem(error));
    }
  }

  protected async queue(preset: Preset): Promise<void> {
    if (this.busy()) return;
    this.busy.set(true);
    this.refused.set(null);
    try {
      this.experimentId ??= await this.newExperiment(preset);
      const body = { label: 'Control', setup: preset.setup };
      const path = `/api/experiments/${this.experimentId}/runs`;
      await firstValueFrom(this.api.post(path, body, runSummarySchema, { idempotencyKey: this.idempotencyKey }));
      this.queued.emit();
    } catch (error) {
      this.refused.set(toApiProblem(error));
    } finally {
      this.busy.set(false);
    }
  }

  private async newExperiment(preset: Preset): Promise<string> {
    const body = { question: `What does the setup “${preset.name}” show?`, notes: preset.about };
    return (await firstValueFrom(this.api.post('/api/experiments', body, experimentSchema.pick({ id: true })))).id;
  }
}
