import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal, signal } from '@angular/core';
import { rxResource } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { type Run, type RunSummary, experimentSchema } from '@halfdeep/contracts';
import { type Setup, buildGrid, describeSetup } from '@halfdeep/ocean';
import { firstValueFrom } from 'rxjs';
import { Api } from '../core/api';
import {
  formatBytes,
  formatChange,
  formatLatitude,
  formatLongitude,
  formatModelLength,
  formatNumber,
  formatQuantity,
  formatTimestamp,
} from '../core/format';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { DataState } from '../shared/data-state/data-state';
import { ProblemMessage } from '../shared/problem-message/problem-message';
import { StateSign } from '../shared/state-sign/state-sign';
import { RunActions } from './run-actions';
import { sameSetup } from './same-setup';

interface Row {
  name: string;
  value: string;
}

/** What determines this run, where it comes from, what came from it, and the proof of its last state. */
@Component({
  selector: 'app-run-setup',
  imports: [DataState, MatButton, ProblemMessage, RouterLink, StateSign],
  templateUrl: './run-setup.html',
  styleUrl: './run-setup.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RunSetup {
  private readonly api = inject(Api);
  private readonly actions = inject(RunActions);
  readonly run = input.required<Run>();

  protected readonly exporting = signal(false);
  /** What became of the last export; it belongs to the run that it was about. */
  protected readonly exported = linkedSignal<string, string>({
    source: () => this.run().id,
    computation: () => '',
  });
  protected readonly exportProblem = linkedSignal<string, ApiProblem | null>({
    source: () => this.run().id,
    computation: () => null,
  });

  private readonly setup = computed(() => this.run().setup, { equal: sameSetup });
  protected readonly words = computed<Row[]>(() => {
    const setup = this.setup();
    const { basin, layer, season } = describeSetup(setup);
    return [
      { name: 'Basin', value: `${setup.basin.name ? `${setup.basin.name}: ` : ''}${basin}` },
      { name: 'Layer', value: layer },
      { name: 'Wind', value: season },
      { name: 'Start', value: startWords(setup) },
      { name: 'Friction', value: frictionWords(setup) },
      { name: 'Grid', value: gridWords(setup) },
      { name: 'Length', value: formatModelLength(setup.length.days) },
      { name: 'Output', value: outputWords(setup) },
      { name: 'Sections', value: setup.output.sections.map(sectionWords).join('; ') || 'none' },
      { name: 'Moorings', value: setup.output.moorings.map((m) => m.name).join(', ') || 'none' },
    ];
  });
  protected readonly facts = computed<Row[]>(() => {
    const { owner, createdAt, startedAt, endedAt, diskBytes, fingerprint } = this.run();
    return [
      { name: 'Queued by', value: `${owner.name}, ${formatTimestamp(createdAt)}` },
      { name: 'Started', value: startedAt ? formatTimestamp(startedAt) : 'not yet' },
      { name: 'Ended', value: endedAt ? formatTimestamp(endedAt) : 'not yet' },
      { name: 'Disk', value: diskBytes === null ? 'nothing yet' : formatBytes(diskBytes) },
      { name: 'Core', value: fingerprint ? `version ${fingerprint.coreVersion}` : 'named when it has finished' },
    ];
  });
  protected readonly derived = computed(() =>
    (this.run().preflight?.derived ?? []).map(({ id, label, symbol, value, unit }) => ({
      id,
      label,
      symbol,
      value: formatQuantity(value, unit, { significant: 4 }),
    })),
  );
  protected readonly gridNotes = computed(() => buildGrid(this.setup()).notes);

  protected readonly relatives = rxResource({
    params: () => ({ id: this.run().experimentId, state: this.run().state }),
    stream: ({ params }) => this.api.get(`/api/experiments/${params.id}`, experimentSchema),
  });
  protected readonly relativesProblem = computed(() =>
    this.relatives.error() ? toApiProblem(this.relatives.error()) : null,
  );
  protected readonly children = computed<RunSummary[]>(() =>
    this.relatives.hasValue() ? this.relatives.value().runList.filter((run) => run.parentRunId === this.run().id) : [],
  );
  protected readonly parent = computed<RunSummary | null>(() =>
    this.relatives.hasValue()
      ? (this.relatives.value().runList.find((run) => run.id === this.run().parentRunId) ?? null)
      : null,
  );

  protected async exportSetup(): Promise<void> {
    const run = this.run();
    this.exporting.set(true);
    this.exported.set('');
    this.exportProblem.set(null);
    try {
      const name = await firstValueFrom(this.actions.exportSetup(run));
      const together = run.setup.start.kind === 'state' ? ', together with the state it starts from' : '';
      this.exported.set(`The setup is in “${name}”${together}.`);
    } catch (error) {
      this.exportProblem.set(toApiProblem(error));
    } finally {
      this.exporting.set(false);
    }
  }

  protected changesOf(run: RunSummary): string {
    if (run.descent === 'extension') return 'goes on from the last state';
    const shown = run.changes
      .slice(0, 2)
      .map(({ label, from, to, unit }) => `${label} ${formatChange(from, to, unit)}`);
    const more = run.changes.length - shown.length;
    return `${shown.join(', ')}${more > 0 ? ` and ${more} more` : ''}` || 'the same setup once more';
  }
}

function startWords({ start }: Setup): string {
  switch (start.kind) {
    case 'rest':
      return 'rest';
    case 'bump':
      return `a bump of ${formatQuantity(start.amplitudeM, 'm')} at ${formatLongitude(start.longitudeDeg)}, ${formatLatitude(start.latitudeDeg)}`;
    case 'step':
      return `a step of ${formatQuantity(start.amplitudeM, 'm')} at ${formatLatitude(start.latitudeDeg)}`;
    case 'mode':
      return `a ${start.mode} wave of ${formatQuantity(start.amplitudeM, 'm')}`;
    case 'state':
      return `the last state of another run, step ${formatNumber(start.startStep)}`;
  }
}

function frictionWords({ friction }: Setup): string {
  const drag = formatQuantity(friction.rayleighPerS, '1/s', { significant: 3 });
  const viscosity = formatQuantity(friction.viscosityM2S, 'm²/s', { significant: 4 });
  return `Rayleigh ${drag}, Laplacian ${viscosity}, ${friction.slip === 'free' ? 'free slip' : 'no slip'}`;
}

function gridWords(setup: Setup): string {
  const { nx, ny } = buildGrid(setup);
  const { spacingLongitudeDeg, spacingLatitudeDeg, stepsPerDay, equations } = setup.numerics;
  const step = formatQuantity(86_400 / stepsPerDay, 's', { significant: 5 });
  return `${nx} × ${ny} cells of ${formatNumber(spacingLongitudeDeg)}° × ${formatNumber(spacingLatitudeDeg)}°, ${equations}, ${stepsPerDay} steps a day of ${step}`;
}

function outputWords({ output }: Setup): string {
  const every = (days: number) => formatQuantity(days, 'd');
  return `frames every ${every(output.frameIntervalDays)}, sections and budgets ${every(output.sectionIntervalDays)}, moorings ${every(output.mooringIntervalDays)}`;
}

function sectionWords(section: Setup['output']['sections'][number]): string {
  const place = section.along === 'latitude' ? formatLatitude(section.atDeg) : formatLongitude(section.atDeg);
  return section.name === place ? place : `${section.name} at ${place}`;
}
