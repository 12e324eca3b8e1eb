import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  computed,
  effect,
  inject,
  input,
  linkedSignal,
  output,
  signal,
  untracked,
  viewChild,
  viewChildren,
} from '@angular/core';
import { MatDialog } from '@angular/material/dialog';
import { type Run } from '@halfdeep/contracts';
import { buildGrid } from '@halfdeep/ocean';
import { formatLatitude, formatLongitude, formatModelDay, formatModelYear } from '../core/format';
import { MapReader } from '../core/map-reader';
import { toApiProblem } from '../core/problem';
import { type RunFollower, frameIntervalDays, startDay } from '../core/run-follower';
import { ColourBar } from '../shared/plate/colour-bar';
import { type PlotTable } from '../shared/plate/csv';
import { DataTableDialog } from '../shared/plate/data-table-dialog';
import { FieldPlot } from '../shared/plate/field-plot';
import { LandOutline } from '../shared/plate/land';
import { PlotLink } from '../shared/plate/plot-link';
import { FigureSaver, fileName } from '../shared/plate/save-figure';
import { VARIABLE_VIEWS } from '../shared/plate/variables';
import { DataState } from '../shared/data-state/data-state';
import { TimeSlider } from '../shared/time-slider/time-slider';
import { type PairFields, pairHovmollers, pairMaps, regriddingWords, sameGrid } from './pair-fields';
import { type FrameTimes, type MapMeasures, commonRecords, mapMeasures } from './pair-math';
import { PairControls } from './pair-controls';
import { PairHeads } from './pair-heads';
import { pairCaption, pairPanels } from './pair-panels';
import { type PairScales, blankScale, grownScales } from './pair-scales';
import { pairTable } from './pair-table';
import { type SharedPlace } from './shared-place';

/** The address follows the slider when it has rested for so long, so that playing does not fill the history. */
const REST_MS = 400;

/** A, B and B − A: one colour scale for two, one cursor and one view for three. */
@Component({
  selector: 'app-pair-plates',
  imports: [ColourBar, DataState, FieldPlot, PairControls, PairHeads, TimeSlider],
  templateUrl: './pair-plates.html',
  styleUrls: ['../shared/plate/plate-controls.scss', './pair-plates.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PairPlates {
  private readonly saver = inject(FigureSaver);
  private readonly dialog = inject(MatDialog);

  readonly a = input.required<Run>();
  readonly b = input.required<Run>();
  readonly followerA = input.required<RunFollower>();
  readonly followerB = input.required<RunFollower>();
  readonly place = input.required<SharedPlace>();
  readonly placeChange = output<SharedPlace>();
  readonly choose = output<'a' | 'b'>();
  readonly measured = output<{ day: number; variable: string; measures: MapMeasures } | null>();

  protected readonly link = new PlotLink();
  protected readonly saveProblem = signal('');
  private readonly plots = viewChildren(FieldPlot);
  private readonly slider = viewChild(TimeSlider);
  private rest: ReturnType<typeof setTimeout> | null = null;

  private readonly setupKey = computed(() => JSON.stringify([this.a().setup, this.b().setup]));
  private readonly grids = computed(() => {
    this.setupKey();
    return untracked(() => ({ a: buildGrid(this.a().setup), b: buildGrid(this.b().setup) }));
  });
  private readonly same = computed(() => sameGrid(this.grids().a, this.grids().b));
  private readonly lands = computed(() => ({ a: new LandOutline(this.grids().a), b: new LandOutline(this.grids().b) }));
  private readonly view = computed(() => VARIABLE_VIEWS[this.place().variable]);

  // ---- days ----

  protected readonly records = computed(() => commonRecords(framesOf(this.a()), framesOf(this.b())));
  /** The slider's place among the days that both have; begins at the day of the address, else at the last. */
  protected readonly index = linkedSignal<{ day: number | null; pair: string }, number>({
    source: () => ({ day: this.place().day, pair: `${this.a().id} ${this.b().id}` }),
    computation: ({ day }) => {
      const records = untracked(this.records);
      if (day === null) return Math.max(0, records.length - 1);
      const at = records.findIndex((record) => record.day >= day);
      return at < 0 ? Math.max(0, records.length - 1) : at;
    },
  });
  protected readonly dayOf = computed(() => {
    const records = this.records();
    return (record: number) => records[record]?.day ?? 0;
  });
  protected readonly interval = computed(() => {
    const [first, second] = this.records();
    return first && second ? second.day - first.day : 1;
  });

  // ---- maps and lines ----

  private readonly readers = computed(() => ({
    a: new MapReader(this.followerA()),
    b: new MapReader(this.followerB()),
  }));
  private readonly lines = computed(() => {
    const { variable, along } = this.place();
    const [followerA, followerB, at] = [this.followerA(), this.followerB(), this.at()];
    return untracked(() => ({
      a: followerA.hovmoller(variable, along, at),
      b: followerB.hovmoller(variable, along, at),
    }));
  });
  protected readonly behind = computed(() => this.readers().a.behind() || this.readers().b.behind());
  protected readonly readProblem = computed(() => {
    const { a, b } = this.place().mode === 'map' ? this.readers() : this.lines();
    const error = a.error() ?? b.error();
    return error === null ? null : toApiProblem(error);
  });
  /** The two maps that belong together: kept until both of the next day have come. */
  private readonly maps = linkedSignal<PairFields & { day: number | null }, PairFields & { day: number | null }>({
    source: () => {
      const [a, b] = [this.readers().a.shown(), this.readers().b.shown()];
      const variable = this.place().variable;
      const record = this.records().find((common) => common.a === a?.record && common.b === b?.record);
      if (!a || !b || !record || a.variable !== variable || b.variable !== variable)
        return { a: null, b: null, difference: null, day: null };
      return { ...pairMaps(a.slice, b.slice, variable, this.same(), record.day), day: record.day };
    },
    computation: (next, before) =>
      next.day === null && before?.value.a?.unit === this.view().unit ? before.value : next,
  });
  protected readonly fields = computed<PairFields>(() =>
    this.place().mode === 'map'
      ? this.maps()
      : pairHovmollers(this.lines().a, this.lines().b, this.place().along, this.place().variable),
  );

  private readonly scaleKey = computed(() => {
    const { mode, variable, along } = this.place();
    return [mode, variable, along, this.at(), this.a().id, this.b().id].join(' ');
  });
  private readonly fitted = linkedSignal<{ key: string; fields: PairFields }, PairScales & { key: string }>({
    source: () => ({ key: this.scaleKey(), fields: this.fields() }),
    computation: ({ key, fields }, before) => ({
      key,
      ...grownScales(before?.value.key === key ? before.value : null, fields, this.view()),
    }),
  });
  private readonly shared = computed(() => this.fitted().shared ?? blankScale(this.view()));
  private readonly apart = computed(() => this.fitted().apart ?? blankScale({ ...this.view(), scale: 'diverging' }));
  protected readonly sharedBar = computed(() => ({ ...this.view(), limits: this.shared() }));
  protected readonly differenceBar = computed(() => ({
    ...this.view(),
    scale: 'diverging' as const,
    limits: this.apart(),
  }));
  protected readonly sharedWidth = signal(window.innerWidth < 760 ? 220 : 400);

  protected readonly at = computed(() => {
    const { at, along } = this.place();
    if (at !== null) return at;
    const { southDeg, northDeg, westDeg, eastDeg } = this.a().setup.basin;
    if (along === 'longitude') return (westDeg + eastDeg) / 2;
    return southDeg < 0 && northDeg > 0 ? 0 : (southDeg + northDeg) / 2;
  });
  protected readonly axes = computed(() => {
    if (this.place().mode === 'map') return { x: 'longitude', y: 'latitude' } as const;
    return this.place().along === 'latitude'
      ? ({ x: 'longitude', y: 'time' } as const)
      : ({ x: 'time', y: 'latitude' } as const);
  });
  private readonly timeRange = computed<[number, number]>(() => [
    Math.min(startDay(this.a()), startDay(this.b())),
    Math.max(this.a().progress.totalDays, this.b().progress.totalDays),
  ]);
  protected readonly xFull = computed<[number, number]>(() =>
    this.axes().x === 'time' ? this.timeRange() : ends(this.grids().a.lonFace),
  );
  protected readonly yFull = computed<[number, number]>(() =>
    this.axes().y === 'time' ? this.timeRange() : ends(this.grids().a.latFace),
  );

  protected readonly panels = computed(() =>
    pairPanels({
      labels: { a: this.a().label, b: this.b().label },
      fields: this.fields(),
      what: `${this.view().label}, ${this.place().mode === 'map' ? this.dayWords() : this.lineWords()}`,
      limits: { shared: this.shared(), apart: this.apart() },
      lands: this.lands(),
      timeAxis: this.place().along === 'latitude' ? 'y' : 'x',
      firstDay: this.timeRange()[0],
    }),
  );

  protected readonly dayWords = computed(() => {
    const day = this.maps().day ?? this.dayOf()(this.index());
    return `${formatModelDay(day)}, ${formatModelYear(day)}`;
  });
  private readonly lineWords = computed(() =>
    this.place().along === 'latitude' ? `along ${formatLatitude(this.at())}` : `along ${formatLongitude(this.at())}`,
  );
  protected readonly cursorWords = computed(() => {
    const at = this.link.cursor();
    if (!at) return '';
    const name = (kind: string, value: number) =>
      kind === 'time'
        ? formatModelDay(Math.round(value))
        : kind === 'latitude'
          ? formatLatitude(value, 1)
          : formatLongitude(value, 1);
    return `cursor ${name(this.axes().x, at.x)}, ${name(this.axes().y, at.y)}`;
  });
  protected readonly caption = computed(() =>
    pairCaption(
      this.view(),
      this.place().mode === 'map' ? this.dayWords() : this.lineWords(),
      { shared: this.shared(), apart: this.apart() },
      regriddingWords(this.a(), this.b(), this.same()),
    ),
  );

  constructor() {
    effect(() => {
      const [readers, record, variable, mode] = [
        this.readers(),
        this.records()[this.index()],
        this.place().variable,
        this.place().mode,
      ];
      if (!record || mode !== 'map') return;
      untracked(() => {
        readers.a.want(variable, record.a);
        readers.b.want(variable, record.b);
      });
    });
    effect(() => {
      const { a, b, day } = this.maps();
      const map = this.place().mode === 'map';
      const { dxC } = this.grids().a;
      const variable = this.place().variable;
      untracked(() => {
        if (!map || !a || !b || day === null) this.measured.emit(null);
        else
          this.measured.emit({
            day,
            variable,
            measures: mapMeasures(a.rows, b.rows, (j) => dxC[Math.min(j, dxC.length - 1)] ?? 1),
          });
      });
    });
    effect(() => {
      this.axes();
      untracked(() => this.link.whole());
    });
    inject(DestroyRef).onDestroy(() => this.stopResting());
  }

  protected play(): void {
    this.slider()?.toggle();
  }

  protected moveTo(index: number): void {
    this.index.set(index);
    this.stopResting();
    this.rest = setTimeout(() => {
      const day = this.records()[this.index()]?.day ?? null;
      if (day !== this.place().day) this.look({ day });
    }, REST_MS);
  }

  private stopResting(): void {
    if (this.rest !== null) clearTimeout(this.rest);
    this.rest = null;
  }

  protected look(change: Partial<SharedPlace>): void {
    this.placeChange.emit({ ...this.place(), ...change });
  }
  protected readAgain(): void {
    this.readers().a.again();
    this.readers().b.again();
    this.lines().a.again();
    this.lines().b.again();
  }

  // ---- saving ----

  protected savePng(): void {
    void this.save('png');
  }
  protected saveSvg(): void {
    void this.save('svg');
  }

  private async save(kind: 'png' | 'svg'): Promise<void> {
    this.saveProblem.set('');
    try {
      const bars = [this.sharedBar(), this.sharedBar(), this.differenceBar()];
      const titles = this.panels().map((panel) => panel.title);
      const panels = await Promise.all(
        this.plots().map(async (plot, k) => ({
          figure: await plot.figure(460),
          title: titles[k] ?? '',
          bar: bars[k] ?? null,
        })),
      );
      const title = `${this.a().label} beside ${this.b().label}`;
      const figure = { name: this.file(), title, caption: this.caption(), panels };
      await (kind === 'png' ? this.saver.savePng(figure) : this.saver.saveSvg(figure));
    } catch (error) {
      this.saveProblem.set(`Not saved. ${error instanceof Error ? error.message : 'The picture could not be drawn.'}`);
    }
  }

  protected saveData(): void {
    this.saver.saveCsv(this.file(), this.table());
  }
  protected showTable(): void {
    const data = { title: `${this.a().label} beside ${this.b().label}`, caption: this.caption(), table: this.table() };
    this.dialog.open(DataTableDialog, { data, maxWidth: '92vw', autoFocus: 'dialog' });
  }

  private file(): string {
    return fileName(this.a().label, 'beside', this.b().label, this.place().variable);
  }

  private table(): PlotTable {
    const { a, b } = this.fields();
    const notes = [
      `A: ${this.a().label}, run ${this.a().id}`,
      `B: ${this.b().label}, run ${this.b().id}`,
      this.caption(),
    ];
    return pairTable(a, b, notes);
  }
}

function framesOf(run: Run): FrameTimes {
  return { count: run.progress.records.frames, firstDay: startDay(run), intervalDays: frameIntervalDays(run) };
}

function ends(values: ArrayLike<number>): [number, number] {
  return [values[0] ?? 0, values[values.length - 1] ?? 1];
}
