import {
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  inject,
  linkedSignal,
  signal,
  viewChild,
} from '@angular/core';
import { MatButton } from '@angular/material/button';
import { buildGrid, type NativeVariable, type SketchLine } from '@halfdeep/ocean';
import { formatDuration, formatLatitude, formatLongitude, formatModelTime, formatNumber, formatQuantity } from '../../core/format'; // prettier-ignore
import { ColourBar } from '../../shared/plate/colour-bar';
import { type Field, FieldPlot } from '../../shared/plate/field-plot';
import { spaceTimeField } from '../../shared/plate/hovmoller-field';
import { type ColourLimits, fittedLimits, grownLimits, isolineWords, typicalSpan } from '../../shared/plate/limits';
import { type Growth } from '../../shared/plate/overlay';
import { Plate, type PlateSource } from '../../shared/plate/plate';
import { PlotLink } from '../../shared/plate/plot-link';
import { PlotlyLoader } from '../../shared/plate/plotly';
import { VARIABLE_VIEWS } from '../../shared/plate/variables';
import { VerdictSign } from '../../shared/verdict/verdict';
import { unbroken } from '../preflight/check-words';
import { SectionFrame } from '../sections/section-frame';
import { SetupDraft } from '../setup-draft';
import { lineChoices } from './sketch-lines';
import { SketchRunner } from './sketch-runner';

/** Once the form stands, ms. */
const PREPARE_AFTER_MS = 2000;
const NATIVES: readonly NativeVariable[] = ['eta', 'u', 'v'];

/** A coarse version of the setup being written, drawn as it is integrated, before anything is queued. */
@Component({
  selector: 'app-sketch-section',
  imports: [ColourBar, FieldPlot, MatButton, Plate, SectionFrame, VerdictSign],
  templateUrl: './sketch-section.html',
  styleUrls: ['../../shared/plate/plate-controls.scss', './sketch-section.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class.begun]': "runner.state() !== 'none'" },
})
export class SketchSection {
  private readonly draft = inject(SetupDraft);
  protected readonly runner = inject(SketchRunner);
  private readonly plot = viewChild(FieldPlot);
  protected readonly link = new PlotLink();

  protected readonly variables = NATIVES.map((id) => ({ id, label: VARIABLE_VIEWS[id].label }));
  protected readonly variable = signal<NativeVariable>('eta');
  /** Lines of what is sketched, before that of the form. */
  protected readonly lines = computed(() => lineChoices(this.runner.source() ?? this.draft.readable()));
  private readonly wanted = signal('');
  protected readonly place = computed(() => {
    const lines = this.lines();
    const [first] = lines;
    const found = lines.find(({ id }) => id === this.wanted()) ?? first;
    return found ?? { id: '', along: 'latitude' as const, askedDeg: 0, label: '' };
  });
  private readonly line = computed<SketchLine>(() => {
    const { along, askedDeg } = this.place();
    return { variable: this.variable(), along, askedDeg };
  });

  protected readonly whyNot = computed(() =>
    this.draft.setup() === null ? 'It can be sketched once every field can be read.' : '',
  );
  protected readonly words = computed(() => {
    const [plan, progress] = [this.runner.plan(), this.runner.progress()];
    const days = plan?.setup.length.days ?? 0;
    const far = progress ? formatModelTime(progress.day, days) : '';
    const after = progress ? formatDuration(Math.round(progress.seconds), 1) : '';
    switch (this.runner.state()) {
      case 'none':
        return 'A few seconds in this browser; what is drawn is kept nowhere.';
      case 'planning':
        return 'Choosing a coarse grid.';
      case 'running': {
        if (!progress || progress.seconds < 0.5) return `At ${far || 'the start'}.`;
        const left = (progress.seconds * (progress.totalSteps - progress.step)) / progress.step;
        return `At ${far} after ${after}, about ${formatDuration(Math.max(1, Math.round(left)), 1)} left.`;
      }
      case 'ended':
        return progress ? `Drawn to the end, ${formatModelTime(days, days)}, in ${progress.seconds < 1 ? 'less than 1 s' : after}.` : ''; // prettier-ignore
      case 'stopped':
        return `Stopped at ${far}.`;
      case 'failed':
        return progress ? `Drawn up to ${far}.` : '';
      case 'impossible':
        return '';
    }
  });

  private readonly grid = computed(() => {
    const setup = this.runner.plan()?.setup;
    return setup ? buildGrid(setup) : null;
  });
  private readonly drawing = computed(() => {
    const [version, drawing] = [this.runner.version(), this.runner.drawing()];
    return { version, drawing };
  });
  protected readonly field = computed<Field | null>(() => {
    const { version, drawing } = this.drawing();
    if (!drawing) return null;
    return spaceTimeField(drawing, drawing.placesDeg, version, drawing.line.along, drawing.line.variable);
  });
  protected readonly axes = computed(() =>
    this.line().along === 'latitude'
      ? ({ x: 'longitude', y: 'time' } as const)
      : ({ x: 'time', y: 'latitude' } as const),
  );
  private readonly placeRange = computed<[number, number]>(() => {
    const grid = this.grid();
    const faces = grid && (this.line().along === 'latitude' ? grid.lonFace : grid.latFace);
    return [faces?.[0] ?? 0, faces?.[faces.length - 1] ?? 1];
  });
  private readonly timeRange = computed<[number, number]>(() => [0, this.runner.plan()?.setup.length.days ?? 1]);
  protected readonly xFull = computed(() => (this.line().along === 'latitude' ? this.placeRange() : this.timeRange()));
  protected readonly yFull = computed(() => (this.line().along === 'latitude' ? this.timeRange() : this.placeRange()));
  /** Limits grow with what comes; another line, variable or sketch begins anew. */
  protected readonly limits = linkedSignal<
    { of: unknown; field: Field | null; variable: NativeVariable },
    ColourLimits
  >({
    source: () => ({ of: this.runner.drawing(), field: this.field(), variable: this.variable() }),
    computation: ({ of, field, variable }, before) => {
      const { scale, factor } = VARIABLE_VIEWS[variable];
      const fitted = fittedLimits(typicalSpan(field?.rows ?? []), scale, factor);
      const goesOn = before?.source.of === of && this.seen(before?.source.field ?? null);
      return grownLimits(goesOn ? (before?.value ?? null) : null, fitted);
    },
  });
  protected readonly bar = computed(() => ({ ...VARIABLE_VIEWS[this.variable()], limits: this.limits() }));
  protected readonly growth = computed<Growth>(() => {
    const axis = this.line().along === 'latitude' ? 'y' : 'x';
    const days = this.drawing().drawing?.days() ?? [];
    return { axis, upTo: days[days.length - 1] ?? 0, pen: this.runner.busy() ? 'live' : 'none' };
  });

  protected readonly name = computed(() => {
    const { along, askedDeg } = this.line();
    const at = this.drawing().drawing?.atDeg ?? askedDeg;
    const found = Number((Number.isNaN(at) ? askedDeg : at).toFixed(2));
    if (along === 'longitude') return `Sketch along ${formatLongitude(found)}`;
    return found === 0 ? 'Sketch along the equator' : `Sketch along ${formatLatitude(found)}`;
  });
  protected readonly remark = computed(() => {
    const { along, askedDeg } = this.line();
    const at = this.drawing().drawing?.atDeg ?? NaN;
    if (!(Math.abs(at - askedDeg) > 1e-9)) return '';
    return `nearest to ${(along === 'latitude' ? formatLatitude : formatLongitude)(Number(askedDeg.toFixed(2)))}`;
  });
  protected readonly caption = computed(() => {
    const { label, factor, unit } = VARIABLE_VIEWS[this.variable()];
    const plan = this.runner.plan();
    if (!plan) return '';
    const grid = this.grid();
    const size = grid ? ` on ${formatNumber(grid.nx)} × ${formatNumber(grid.ny)} cells` : '';
    const every = formatQuantity(plan.setup.output.frameIntervalDays, 'd');
    return `${label.charAt(0).toUpperCase()}${label.slice(1)}${size}, every ${every}. Isolines every ${isolineWords(this.limits(), factor, unit)}, zero heavier.`;
  });
  protected readonly notes = computed(() => this.runner.plan()?.notes.map(unbroken) ?? []);
  protected readonly about = computed(() => [
    `Sketch of ${this.draft.label() || 'a run without a label'}`,
    'A coarse version integrated in the browser, not a run.',
    ...this.notes(),
  ]);
  protected readonly source: PlateSource = {
    panels: async () => {
      const plot = this.plot();
      return plot ? [{ figure: await plot.figure(), title: this.name(), bar: this.bar() }] : [];
    },
    table: (notes) =>
      this.plot()?.table([...notes, `Values in ${this.bar().unit}.`]) ?? { columns: [], rows: 0, row: () => [], notes },
  };

  constructor() {
    const loader = inject(PlotlyLoader);
    // A sketch takes a few seconds: the plotting library is not to be waited for then. If it cannot be had, the plot says so.
    const wait = setTimeout(() => void loader.load().catch(() => undefined), PREPARE_AFTER_MS);
    inject(DestroyRef).onDestroy(() => clearTimeout(wait));
  }

  /** Also for the button beside the form. */
  start(): void {
    this.link.whole();
    this.runner.start(() => this.line());
  }

  protected chooseVariable(event: Event): void {
    const { value } = event.target as HTMLSelectElement;
    const variable = NATIVES.find((native) => native === value);
    if (!variable) return;
    this.variable.set(variable);
    this.runner.choose(this.line());
  }

  protected chooseLine(event: Event): void {
    this.wanted.set((event.target as HTMLSelectElement).value);
    this.link.whole();
    this.runner.choose(this.line());
  }

  /** Whether a field shows anything but the motionless start. */
  private seen(field: Field | null): boolean {
    return field?.rows.some((row) => Array.from(row).some((value) => value !== 0 && !Number.isNaN(value))) ?? false;
  }
}
