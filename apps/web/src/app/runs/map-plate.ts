import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  input,
  linkedSignal,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { type Variable, buildGrid } from '@halfdeep/ocean';
import { formatModelDay, formatModelYear, formatSeasonDay, sentenceStart } from '../core/format';
import { MapReader } from '../core/map-reader';
import { type RunFollower, frameIntervalDays, startDay } from '../core/run-follower';
import { ColourBar } from '../shared/plate/colour-bar';
import { type Field, FieldPlot } from '../shared/plate/field-plot';
import { LandOutline } from '../shared/plate/land';
import { type ColourLimits, fittedLimits, grownLimits, isolineWords, typicalSpan } from '../shared/plate/limits';
import { mapField } from '../shared/plate/map-field';
import { type OverlayModel } from '../shared/plate/overlay';
import { Plate, type PlateSource } from '../shared/plate/plate';
import { PlotLink } from '../shared/plate/plot-link';
import { SCALE_CHOICES, type ScaleChoice, chosenLimits } from '../shared/plate/scale-choice';
import { VARIABLE_CHOICES, VARIABLE_VIEWS, isVariable } from '../shared/plate/variables';
import { TimeSlider } from '../shared/time-slider/time-slider';
import { plateAbout } from './plate-about';
import { sameSetup } from './same-setup';

/** The basin at one moment: stepped, played, or going along with the pen. */
@Component({
  selector: 'app-map-plate',
  imports: [ColourBar, FieldPlot, Plate, TimeSlider],
  templateUrl: './map-plate.html',
  styleUrls: ['../shared/plate/plate-controls.scss', './plates.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MapPlate {
  readonly run = input.required<Run>();
  readonly follower = input.required<RunFollower>();

  protected readonly variables = VARIABLE_CHOICES;
  protected readonly scales = SCALE_CHOICES;
  protected readonly link = new PlotLink();
  private readonly plot = viewChild(FieldPlot);
  protected readonly axes = { x: 'longitude', y: 'latitude' } as const;
  protected readonly noSections: OverlayModel['sections'] = [];
  protected readonly noMoorings: OverlayModel['moorings'] = [];
  protected readonly setup = computed(() => this.run().setup, {
    equal: sameSetup,
  });
  private readonly grid = computed(() => buildGrid(this.setup()));
  protected readonly land = computed(() => new LandOutline(this.grid()));
  protected readonly xFull = computed<[number, number]>(() => ends(this.grid().lonFace));
  protected readonly yFull = computed<[number, number]>(() => ends(this.grid().latFace));

  protected readonly variable = signal<Variable>('eta');
  protected readonly scale = signal<ScaleChoice>('fitted');
  protected readonly marksWanted = signal(false);
  protected readonly follows = signal(true);
  protected readonly count = computed(() => this.run().progress.records.frames);
  /** Opens at the last record there is. */
  protected readonly record = linkedSignal<string, number>({
    source: () => this.run().id,
    computation: () => Math.max(0, untracked(this.count) - 1),
  });
  protected readonly interval = computed(() => frameIntervalDays(this.run()));
  protected readonly dayOf = computed(() => {
    const [first, interval] = [startDay(this.run()), this.interval()];
    return (record: number) => first + record * interval;
  });

  protected readonly reader = computed(() => new MapReader(this.follower()));
  protected readonly shown = computed(() => this.reader().shown());
  protected readonly field = computed<Field | null>(() => {
    const shown = this.shown();
    if (!shown || shown.variable !== this.variable()) return null;
    return mapField(shown.slice, this.variable(), shown.record);
  });

  constructor() {
    effect(() => {
      const [reader, variable, count, record] = [this.reader(), this.variable(), this.count(), this.record()];
      if (count > 0) untracked(() => reader.want(variable, Math.min(record, count - 1)));
    });
  }

  private readonly fitted = linkedSignal<{ key: string; field: Field | null }, { key: string; limits: ColourLimits }>({
    source: () => ({ key: this.variable(), field: this.field() }),
    computation: ({ key, field }, before) => {
      const { scale, factor } = VARIABLE_VIEWS[this.variable()];
      const fitted = fittedLimits(typicalSpan(field?.rows ?? []), scale, factor);
      if (before?.value.key === key && !field) return before.value;
      const held = before?.value.key === key && before.source.field ? before.value.limits : null;
      return { key, limits: grownLimits(held, fitted) };
    },
  });
  protected readonly limits = computed(() => chosenLimits(this.fitted().limits, this.scale()));
  protected readonly bar = computed(() => ({ ...VARIABLE_VIEWS[this.variable()], limits: this.limits() }));

  /** Day of the map that is drawn, not of the one that is on its way. */
  private readonly day = computed(() => this.dayOf()(this.shown()?.record ?? this.record()));
  protected readonly name = computed(() => sentenceStart(formatModelDay(this.day())));
  protected readonly remark = computed(() => `${formatSeasonDay(this.day())}, ${formatModelYear(this.day())}`);
  protected readonly caption = computed(() => {
    const { label, scale, factor, unit } = VARIABLE_VIEWS[this.variable()];
    const isolines =
      scale === 'diverging' ? ` Isolines every ${isolineWords(this.limits(), factor, unit)}, zero heavier.` : '';
    const blank = this.variable() === 'ekmanPumping' ? ' Blank near the equator, where it is not defined.' : '';
    return `${sentenceStart(label)}.${isolines}${blank}`;
  });
  protected readonly plotLabel = computed(() => `Map, ${this.name()}: ${this.caption()}`);
  protected readonly about = computed(() => plateAbout(this.run()));
  protected readonly state = computed(() => {
    if (this.count() === 0) return 'empty';
    return this.reader().error() !== null && !this.shown() ? 'error' : 'ready';
  });
  protected readonly partial = computed(() => {
    const shown = this.shown();
    if (this.reader().error() === null || !shown) return '';
    return `${sentenceStart(formatModelDay(this.dayOf()(this.record())))} was not read; on show is ${formatModelDay(this.dayOf()(shown.record))}.`;
  });
  protected readonly lastGood = computed(() => {
    const shown = this.shown();
    const safe = this.run().state === 'running' ? 'The run goes on.' : 'The run is safe.';
    return shown ? `${safe} Last map read: ${formatModelDay(this.dayOf()(shown.record))}.` : safe;
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
  protected chooseScale(event: Event): void {
    this.scale.set((event.target as HTMLSelectElement).value as ScaleChoice);
  }
}

function ends(values: ArrayLike<number>): [number, number] {
  return [values[0] ?? 0, values[values.length - 1] ?? 1];
}
