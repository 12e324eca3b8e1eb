import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  type ElementRef,
  inject,
  Injector,
  input,
  linkedSignal,
  resource,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { MatButton } from '@angular/material/button';
import { Router, RouterLink } from '@angular/router';
import { deskSchema, experimentSchema, runSchema, runSummarySchema } from '@halfdeep/contracts';
import { PRESETS, type Setup } from '@halfdeep/ocean';
import { firstValueFrom } from 'rxjs';
import { Api, newIdempotencyKey } from '../core/api';
import { formatChange, formatCount, formatMoment, sentenceStart } from '../core/format';
import { KeptDrafts, type DraftPlace } from '../core/kept-drafts';
import { PageTitle } from '../core/page-title';
import { type ApiProblem, toApiProblem } from '../core/problem';
import { Session } from '../core/session';
import { ChoiceField, type Choice } from '../shared/choice-field/choice-field';
import { DataState } from '../shared/data-state/data-state';
import { TextField } from '../shared/text-field/text-field';
import { blankSetup } from './blank-setup';
import { PreflightColumn } from './preflight/preflight-column';
import { PreflightRunner } from './preflight/preflight-runner';
import { RemedyActions } from './preflight/remedy-actions';
import { BasinSection } from './sections/basin-section';
import { ConstantsSection } from './sections/constants-section';
import { FrictionSection } from './sections/friction-section';
import { LayerSection } from './sections/layer-section';
import { NumericsSection } from './sections/numerics-section';
import { OutputSection } from './sections/output-section';
import { StartSection } from './sections/start-section';
import { WindSection } from './sections/wind-section';
import { SetupContents } from './setup-contents';
import { SetupDraft } from './setup-draft';
import { SketchRunner } from './sketch/sketch-runner';
import { SketchSection } from './sketch/sketch-section';
import { SetupExchange } from './setup-exchange';
import { hasShapeOfSetup, readSetupBytes } from './setup-file';

/** How long after the last key the form is kept. */
const KEEP_AFTER_MS = 300;

/** What happened to the form as a whole, with a way back. */
interface Notice {
  text: string;
  /** Lines beneath, for a file that was refused. */
  details: string[];
  refused: boolean;
  back: { label: string; setup: Setup; ownLabel: string | null } | null;
  /** It offers to forget what was typed. */
  discards?: boolean;
}

/** One form over everything in a setup, in the order of the physics, with preflight beside it. */
@Component({
  selector: 'app-setup-page',
  imports: [
    BasinSection,
    ChoiceField,
    ConstantsSection,
    DataState,
    FrictionSection,
    LayerSection,
    MatButton,
    NumericsSection,
    OutputSection,
    PreflightColumn,
    RouterLink,
    SetupContents,
    SketchSection,
    StartSection,
    TextField,
    WindSection,
  ],
  templateUrl: './setup-page.html',
  styleUrl: './setup-page.scss',
  providers: [SetupDraft, PreflightRunner, RemedyActions, SketchRunner],
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '(document:keydown.f6)': 'swap($event)', '(document:keydown.shift.f6)': 'swap($event)' },
})
export class SetupPage {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly router = inject(Router);
  private readonly storage = inject(KeptDrafts);
  private readonly runner = inject(PreflightRunner);
  private readonly injector = inject(Injector);
  private readonly exchange = inject(SetupExchange);
  protected readonly draft = inject(SetupDraft);
  /** Of the experiment; bound from the route. */
  readonly id = input.required<string>();
  /** The run that a sensitivity run is made from; from the address. */
  readonly from = input<string>();
  /** A ready setup to start from; from the address. */
  readonly preset = input<string>();

  protected readonly column = viewChild(PreflightColumn);
  private readonly form = viewChild<ElementRef<HTMLElement>>('form');
  /** Where F6 goes back to. */
  private lastInForm: HTMLElement | null = null;

  protected readonly experiment = resource({
    params: () => this.id(),
    loader: ({ params }) => firstValueFrom(this.api.get(`/api/experiments/${params}`, experimentSchema)),
  });
  protected readonly parent = resource({
    params: () => this.from(),
    loader: ({ params }) => firstValueFrom(this.api.get(`/api/runs/${params}`, runSchema)),
  });
  private readonly desk = resource({
    loader: () => firstValueFrom(this.api.get('/api/desk', deskSchema)),
  });
  protected readonly queue = computed(() => (this.desk.hasValue() ? this.desk.value().queue : null));
  protected readonly loadProblem = computed<ApiProblem | null>(() => {
    const error = this.experiment.error() ?? this.parent.error();
    return error ? toApiProblem(error.cause ?? error) : null;
  });
  /** True once experiment and parent are there and the form has been filled in. */
  protected readonly ready = signal(false);
  protected readonly notice = signal<Notice | null>(null);
  protected readonly sending = signal(false);
  protected readonly exporting = signal(false);
  protected readonly problem = signal<ApiProblem | null>(null);
  protected readonly notKept = signal(false);

  protected readonly presets: Choice[] = [
    { value: '', label: 'choose a ready setup', disabled: true },
    { value: 'blank', label: 'blank: a closed basin at rest' },
    ...PRESETS.map(({ id, name }) => ({ value: id, label: name })),
  ];
  protected readonly hindrance = computed(() => {
    if (this.experiment.hasValue() && !this.experiment.value().can.queueRuns)
      return 'Only the people of this experiment queue runs into it.';
    return '';
  });
  protected readonly changeWords = computed(() =>
    this.draft.changes().map(({ label, from, to, unit }) => ({ label, text: formatChange(from, to, unit) })),
  );
  private readonly place = computed<DraftPlace>(() => ({
    personId: this.session.me()?.id ?? 'nobody',
    experimentId: this.id(),
    parentRunId: this.from() ?? null,
  }));
  /** The same key for the same setup: a second press is not a second run. */
  private readonly idempotencyKey = linkedSignal(() => {
    this.draft.value();
    this.draft.label();
    return newIdempotencyKey();
  });

  constructor() {
    const title = inject(PageTitle);
    effect(() => title.set(this.draft.label() ? `${this.draft.label()}, setup` : 'Setup'));
    effect(() => {
      if (!this.experiment.hasValue() || (this.from() && !this.parent.hasValue())) return;
      untracked(() => this.fillFirst());
    });
    effect(() => {
      if (!this.desk.hasValue()) return;
      const { freeBytes, quotaBytes, usedBytes } = this.desk.value().disk;
      this.runner.context.set({ freeDiskBytes: freeBytes, quotaBytes: Math.max(0, quotaBytes - usedBytes) });
    });
    this.keepWhileTyping();
  }

  protected reload(): void {
    this.experiment.reload();
    if (this.from()) this.parent.reload();
  }

  /** Starts the form from a ready setup; what stood there can be had back. */
  protected choosePreset(id: string): void {
    const preset = PRESETS.find((candidate) => candidate.id === id);
    const setup = preset ? structuredClone(preset.setup) : blankSetup();
    this.replace(setup, null, `The form is filled in from “${preset?.name ?? 'blank'}”.`);
  }

  protected async openFile(event: Event): Promise<void> {
    const field = event.target as HTMLInputElement;
    const file = field.files?.[0];
    field.value = ''; // the same file can be opened again
    if (!file) return;
    const reading = readSetupBytes(new Uint8Array(await file.arrayBuffer()));
    if (reading.kind === 'refused') {
      this.notice.set({ text: `“${file.name}” was not opened.`, details: reading.reasons, refused: true, back: null });
      return;
    }
    const refused =
      reading.refusedFields > 0
        ? ` ${sentenceStart(formatCount(reading.refusedFields, 'field'))} cannot be read yet.`
        : '';
    const start = await this.exchange.whatStartCanDo(reading.setup);
    this.replace(
      reading.setup,
      reading.label,
      `The form is filled in from “${file.name}”.${refused}${start ? ` ${start}` : ''}`,
    );
  }

  /** The setup as it stands, as a file for the headless command, a colleague or this form. */
  protected async exportSetup(): Promise<void> {
    if (this.exporting()) return;
    this.exporting.set(true);
    try {
      const saved = await this.exchange.save(this.draft.value(), this.draft.label());
      this.notice.set({ ...saved, details: [], back: null });
    } finally {
      this.exporting.set(false);
    }
  }

  protected discard(): void {
    this.storage.remove(this.place());
    this.replace(structuredClone(this.draft.start()), null, 'What was typed is gone.');
  }

  protected undo(back: NonNullable<Notice['back']>): void {
    this.draft.fill(back.setup, back.ownLabel);
    this.notice.set(null);
  }

  protected async queueRun(): Promise<void> {
    const setup = this.draft.setup();
    if (!setup || this.sending()) return;
    this.sending.set(true);
    this.problem.set(null);
    try {
      const body = { label: this.draft.label().trim(), setup, parentRunId: this.from() ?? null };
      const run = await firstValueFrom(
        this.api.post(`/api/experiments/${this.id()}/runs`, body, runSummarySchema, {
          idempotencyKey: this.idempotencyKey(),
        }),
      );
      this.storage.remove(this.place());
      this.draft.start.set(this.draft.value());
      this.draft.setLabel(run.label);
      this.sent = true;
      await this.router.navigate(['/runs', run.id]);
    } catch (error) {
      const problem = toApiProblem(error);
      this.problem.set(problem);
      this.draft.refuse([...problem.fields].map(([pointer, detail]) => ({ pointer, detail })));
    } finally {
      this.sending.set(false);
    }
  }

  protected async keepAsDraft(): Promise<void> {
    this.keep();
    await this.router.navigate(['/experiments', this.id()]);
  }

  /** Begins a sketch and brings it into view; the focus stays on the button. */
  protected showSketch(sketch: SketchSection): void {
    sketch.start();
    afterNextRender(() => document.getElementById('sketch')?.scrollIntoView({ block: 'start' }), {
      injector: this.injector,
    });
  }

  /** F6: from the form to preflight and back to the field that was left. */
  protected swap(event: Event): void {
    const column = this.column();
    const form = this.form()?.nativeElement;
    if (!column || !form) return;
    event.preventDefault();
    const here = document.activeElement as HTMLElement | null;
    if (here && form.contains(here)) {
      this.lastInForm = here;
      column.focus();
    } else {
      const back = this.lastInForm?.isConnected ? this.lastInForm : form.querySelector<HTMLElement>('input, select');
      back?.focus();
    }
  }

  private sent = false;

  /** The parent, the ready setup of the address or a blank form; over it what was left here unsent. */
  private fillFirst(): void {
    if (this.ready()) return;
    const parent = this.from() && this.parent.hasValue() ? this.parent.value() : null;
    const preset = PRESETS.find(({ id }) => id === this.preset());
    const start = structuredClone(parent?.setup ?? preset?.setup ?? blankSetup());
    this.draft.parent.set(parent ? { id: parent.id, label: parent.label, setup: parent.setup } : null);
    this.draft.start.set(start);
    const kept = this.storage.read(this.place());
    const content = kept?.content;
    if (!kept || !hasShapeOfSetup(content)) this.draft.fill(start);
    else {
      this.draft.fill(content, kept.label);
      this.notice.set({
        text: `What you had typed here is back, from ${formatMoment(kept.savedAt)}.`,
        details: [],
        refused: false,
        back: null,
        discards: true,
      });
    }
    this.ready.set(true);
  }

  private replace(setup: Setup, label: string | null, text: string): void {
    const back = { label: 'Undo', setup: this.draft.value(), ownLabel: this.draft.ownLabel() };
    this.draft.fill(setup, label);
    this.problem.set(null);
    this.notice.set({ text, details: [], refused: false, back });
  }

  /** Nothing typed is lost: a moment after the last key, and when the page is left, the form is kept on this machine. */
  private keepWhileTyping(): void {
    let timer: ReturnType<typeof setTimeout> | undefined;
    effect(() => {
      this.draft.value();
      this.draft.ownLabel();
      clearTimeout(timer);
      if (this.ready()) timer = setTimeout(() => this.keep(), KEEP_AFTER_MS);
    });
    const leave = () => this.keep();
    addEventListener('pagehide', leave);
    inject(DestroyRef).onDestroy(() => {
      clearTimeout(timer);
      removeEventListener('pagehide', leave);
      this.keep();
    });
  }

  private keep(): void {
    if (!this.ready() || this.sent) return;
    if (this.draft.touched())
      this.notKept.set(
        !this.storage.save(this.place(), {
          label: this.draft.ownLabel(),
          shown: this.draft.label(),
          content: this.draft.value(),
        }),
      );
    else this.storage.remove(this.place());
  }
}
