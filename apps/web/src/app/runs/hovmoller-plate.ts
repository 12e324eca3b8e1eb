import {
  ChangeDetectionStrategy,
  Component,
  computed,
  input,
  linkedSignal,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { type Variable, buildGrid } from '@halfdeep/ocean';
import { formatLatitude, formatLongitude, formatModelDay, formatQuantity, sentenceStart } from '../core/format';
import { type RunFollower, frameIntervalDays, startDay } from '../core/run-follower';
import { type LineAlong } from '../core/slices';
import { ColourBar } from '../shared/plate/colour-bar';
import { type Field, FieldPlot } from '../shared/plate/field-plot';
import { hovmollerField } from '../shared/plate/hovmoller-field';
import { type ColourLimits, fittedLimits, grownLimits, isolineWords, typicalSpan } from '../shared/plate/limits';
import { type Growth } from '../shared/plate/overlay';
import { Plate, type PlateSource } from '../shared/plate/plate';
import { PlotLink } from '../shared/plate/plot-link';
import { SCALE_CHOICES, type ScaleChoice, chosenLimits } from '../shared/plate/scale-choice';
import { hasEquatorialTheory, theoryLines } from '../shared/plate/theory-lines';
import { YEAR } from '../shared/plate/ticks';
import { VARIABLE_CHOICES, VARIABLE_VIEWS, isVariable } from '../shared/plate/variables';
import { plateAbout } from './plate-about';
import { sameGrowth, sameRange, sameSetup } from './same-setup';

/** A basin that is flatter still leaves the diagram tall enough to follow a wave in it. */
const FLATTEST = 0.55;
/** The slider, its gap, and nothing else. */
const SLIDER_PX = 44;
/** Share of the time axis that must be drawn before theory is drawn over it. */
const LEAST_THEORY = 0.25;
type Span = 'whole' | 'last1' | 'last2' | 'last4';
const SPAN_YEARS: Record<Span, number> = { whole: Infinity, last1: 1, last2: 2, last4: 4 };

/** Space and time: any variable along any latitude or longitude, chosen in place, growing at the pen. */
@Component({
  selector: 'app-hovmoller-plate',
  imports: [ColourBar, FieldPlot, Plate],
  templateUrl: './hovmoller-plate.html',
  styleUrls: ['../shared/plate/plate-controls.scss', './plates.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class HovmollerPlate {
  readonly run = input.required<Run>();
  readonly follower = input.required<RunFollower>();
  readonly pen = input.required<'live' | 'lost' | 'none'>();

  protected readonly variables = VARIABLE_CHOICES;
  protected readonly scales = SCALE_CHOICES;
  protected readonly link = new PlotLink();
  private readonly plot = viewChild(FieldPlot);
  private readonly setup = computed(() => this.run().setup, { equal: sameSetup });
  private readonly grid = computed(() => buildGrid(this.setup()));

  protected readonly variable = signal<Variable>('eta');
  protected readonly along = signal<LineAlong>('latitude');
  protected readonly at = linkedSignal<{ along: LineAlong; setup: Run['setup'] }, number>({
    source: () => ({ along: this.along(), setup: this.setup() }),
    computation: ({ along, setup }) => {
      const { southDeg, northDeg, westDeg, eastDeg } = setup.basin;
      if (along === 'longitude') return (westDeg + eastDeg) / 2;
      return southDeg < 0 && northDeg > 0 ? 0 : (southDeg + northDeg) / 2;
    },
  });
  protected readonly span = linkedSignal<Span>(() => (this.lengthDays() >= 3 * YEAR ? 'last2' : 'whole'));
  protected readonly scale = signal<ScaleChoice>('fitted');
  protected readonly theoryWanted = signal(true);

  private readonly firstDay = computed(() => startDay(this.run()));
  private readonly lastDay = computed(() => this.run().progress.totalDays);
  private readonly lengthDays = computed(() => this.lastDay() - this.firstDay());
  protected readonly spans = computed(() =>
    [
      { id: 'whole', label: 'whole run', years: 0 },
      { id: 'last4', label: 'last four years', years: 4 },
      { id: 'last2', label: 'last two years', years: 2 },
      { id: 'last1', label: 'last year', years: 1 },
    ].filter(({ years }) => years * YEAR < this.lengthDays()),
  );
  protected readonly slice = computed(() => {
    const [follower, variable, along, at] = [this.follower(), this.variable(), this.along(), this.at()];
    return untracked(() => follower.hovmoller(variable, along, at));
  });
  protected readonly field = computed<Field | null>(() => hovmollerField(this.slice(), this.along(), this.variable()));

  protected readonly axes = computed(() =>
    this.along() === 'latitude' ? ({ x: 'longitude', y: 'time' } as const) : ({ x: 'time', y: 'latitude' } as const),
  );
  /** The end of the axis grows by whole years, so that the plot does not shift while it is being read. */
  private readonly timeRange = computed<[number, number]>(
    () => {
      const years = SPAN_YEARS[this.span()];
      if (!Number.isFinite(years)) return [this.firstDay(), this.lastDay()];
      const reached = Math.ceil(Math.max(this.run().progress.day, 1) / YEAR) * YEAR;
      const end = Math.min(this.lastDay(), reached);
      return [Math.max(this.firstDay(), end - years * YEAR), end];
    },
    { equal: sameRange },
  );
  /** What stands below the map's frame beside this one and not below this one: its slider. */
  protected readonly besideMap = computed(() => {
    const { lonFace, latFace } = this.grid();
    const span = (faces: ArrayLike<number>) => (faces[faces.length - 1] ?? 1) - (faces[0] ?? 0);
    return { ratio: Math.max(span(latFace) / span(lonFace), FLATTEST), below: SLIDER_PX };
  });
  private readonly placeRange = computed<[number, number]>(() => {
    const { lonFace, latFace } = this.grid();
    const faces = this.along() === 'latitude' ? lonFace : latFace;
    return [faces[0] ?? 0, faces[faces.length - 1] ?? 1];
  });
  protected readonly xFull = computed(() => (this.along() === 'latitude' ? this.placeRange() : this.timeRange()));
  protected readonly yFull = computed(() => (this.along() === 'latitude' ? this.timeRange() : this.placeRange()));
  protected readonly atRange = computed<[number, number]>(() => {
    const { southDeg, northDeg, westDeg, eastDeg } = this.setup().basin;
    return this.along() === 'latitude' ? [southDeg, northDeg] : [westDeg, eastDeg];
  });
  protected readonly atStep = computed(() => {
    const { spacingLatitudeDeg, spacingLongitudeDeg } = this.setup().numerics;
    return this.along() === 'latitude' ? spacingLatitudeDeg : spacingLongitudeDeg;
  });

  private readonly fitted = linkedSignal<{ key: string; field: Field | null }, { key: string; limits: ColourLimits }>({
    source: () => ({ key: `${this.variable()} ${this.along()} ${this.at()}`, field: this.field() }),
    computation: ({ key, field }, before) => {
      const { scale, factor } = VARIABLE_VIEWS[this.variable()];
      const fitted = fittedLimits(typicalSpan(field?.rows ?? []), scale, factor);
      const held =
        before?.value.key === key && (before.source.field?.rows.length ?? 0) > 0 ? before.value.limits : null;
      return { key, limits: grownLimits(held, fitted) };
    },
  });
  protected readonly limits = computed(() => chosenLimits(this.fitted().limits, this.scale()));
  protected readonly bar = computed(() => ({ ...VARIABLE_VIEWS[this.variable()], limits: this.limits() }));

  protected readonly growth = computed<Growth>(
    () => {
      const { rows } = this.slice();
      this.slice().version();
      const axis = this.along() === 'latitude' ? 'y' : 'x';
      const upTo =
        this.run().state === 'finished' && rows.count >= this.run().progress.records.frames
          ? this.lastDay()
          : rows.day(rows.count - 1);
      return { axis, upTo: rows.count === 0 ? this.firstDay() : upTo, pen: this.pen() };
    },
    { equal: sameGrowth },
  );
  protected readonly theoryPossible = computed(
    () => this.along() === 'latitude' && hasEquatorialTheory(this.setup(), this.at()),
  );
  protected readonly theory = computed(() => {
    if (!this.theoryPossible() || !this.theoryWanted()) return [];
    const [low, high] = this.link.yZoom() ?? this.timeRange();
    const [west, east] = this.placeRange();
    const upTo = Math.min(high, this.growth().upTo);
    // Lines over blank paper, or squeezed into its first few lines, would only be in the way.
    if (this.field() === null || upTo - low < LEAST_THEORY * (high - low)) return [];
    return theoryLines(this.setup(), west, east, low, upTo);
  });

  protected readonly name = computed(() => {
    const line = this.slice().head()?.line;
    const at = line?.atDeg ?? this.at();
    if (this.along() === 'longitude') return `Along ${formatLongitude(at)}`;
    return at === 0 ? 'Along the equator' : `Along ${formatLatitude(at)}`;
  });
  protected readonly remark = computed(() => {
    const line = this.slice().head()?.line;
    if (!line || Math.abs(line.atDeg - line.askedDeg) < 1e-9) return '';
    const format = this.along() === 'latitude' ? formatLatitude : formatLongitude;
    return `nearest to ${format(line.askedDeg)}`;
  });
  protected readonly caption = computed(() => {
    const { label, scale, factor, unit } = VARIABLE_VIEWS[this.variable()];
    const every = formatQuantity(frameIntervalDays(this.run()), 'd');
    const isolines =
      scale === 'diverging' ? ` Isolines every ${isolineWords(this.limits(), factor, unit)}, zero heavier.` : '';
    const rest =
      this.variable() === 'eta'
        ? `, thickness less its rest value H = ${formatQuantity(this.setup().layer.restThicknessM, 'm')}`
        : '';
    const theory = this.theory().length ? ' Lines are theory, not fits: where they begin is free.' : '';
    return `${label.charAt(0).toUpperCase()}${label.slice(1)}${rest}, every ${every}.${isolines}${theory}`;
  });
  protected readonly plotLabel = computed(() => `${this.name()}: ${this.caption()}`);
  protected readonly about = computed(() => plateAbout(this.run()));
  protected readonly state = computed(() => {
    const slice = this.slice();
    if (slice.error() !== null && this.field() === null) return 'error';
    if (this.field() !== null || slice.reading() !== null) return 'ready';
    return this.run().progress.records.frames === 0 ? 'empty' : 'ready';
  });
  protected readonly stateHeading = computed(() =>
    this.run().state === 'queued' ? 'When it has started' : 'From the first frame',
  );
  protected readonly stateAbout = computed(
    () =>
      `${sentenceStart(VARIABLE_VIEWS[this.variable()].label)} in space and time, a line every ${formatQuantity(frameIntervalDays(this.run()), 'd')}.`,
  );
  protected readonly busy = computed(() => {
    const slice = this.slice();
    const reading = slice.reading();
    if (!reading || (this.field() !== null && reading.of <= 1)) return '';
    return reading.of > 1 ? `Reading, ${reading.done} of ${reading.of} pieces` : 'Reading';
  });
  protected readonly partial = computed(() => {
    const slice = this.slice();
    if (slice.error() === null || this.field() === null) return '';
    return `Not read beyond ${formatModelDay(slice.rows.day(slice.rows.count - 1))}; what is drawn is good.`;
  });
  protected readonly lastGood = computed(() => {
    const { state, progress } = this.run();
    return `${state === 'running' ? 'The run goes on. ' : 'The run is safe. '}Last record: ${formatModelDay(progress.day)}.`;
  });

  protected readonly source: PlateSource = {
    panels: async () => {
      const plot = this.plot();
      return plot ? [{ figure: await plot.figure(), title: this.name(), bar: this.bar() }] : [];
    },
    table: (notes) =>
      this.plot()?.table([...notes, `Values in ${this.bar().unit}.`]) ?? { columns: [], rows: 0, row: () => [], notes },
  };

  protected chooseVariable(event: Event): void {
    const { value } = event.target as HTMLSelectElement;
    if (isVariable(value)) this.variable.set(value);
  }
  protected chooseAlong(event: Event): void {
    this.link.whole();
    this.along.set((event.target as HTMLSelectElement).value === 'longitude' ? 'longitude' : 'latitude');
  }
  protected chooseAt(event: Event): void {
    const field = event.target as HTMLInputElement;
    const [low, high] = this.atRange();
    // An empty or unreadable field goes back to the line that is shown; beyond the basin means its edge.
    const value = Number.isNaN(field.valueAsNumber) ? this.at() : Math.min(high, Math.max(low, field.valueAsNumber));
    field.value = String(value);
    this.at.set(value);
  }
  protected chooseSpan(event: Event): void {
    this.link.whole();
    this.span.set((event.target as HTMLSelectElement).value as Span);
  }
  protected chooseScale(event: Event): void {
    this.scale.set((event.target as HTMLSelectElement).value as ScaleChoice);
  }
}
