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
import { RouterLink } from '@angular/router';
import { type Run, type RunSummary } from '@halfdeep/contracts';
import { buildGrid } from '@halfdeep/ocean';
import { formatChange, formatLatitude, formatLongitude, formatModelDay, formatModelYear } from '../core/format';
import { MapReader } from '../core/map-reader';
import { toApiProblem } from '../core/problem';
import { type RunFollower, frameIntervalDays, startDay } from '../core/run-follower';
import { ColourBar } from '../shared/plate/colour-bar';
import { type PlotTable } from '../shared/plate/csv';
import { DataTableDialog } from '../shared/plate/data-table-dialog';
import { FieldPlot } from '../shared/plate/field-plot';
import { LandOutline } from '../shared/plate/land';
import { type ColourLimits, fittedLimits, grownLimits, isolineWords, typicalSpan } from '../shared/plate/limits';
import { PlotLink } from '../shared/plate/plot-link';
import { FigureSaver, fileName } from '../shared/plate/save-figure';
import { VARIABLE_CHOICES, VARIABLE_VIEWS, isVariable } from '../shared/plate/variables';
import { DataState } from '../shared/data-state/data-state';
import { StateSign } from '../shared/state-sign/state-sign';
import { TimeSlider } from '../shared/time-slider/time-slider';
import { type PairFields, pairHovmollers, pairMaps, regriddingWords, sameGrid } from './pair-fields';
import { type FrameTimes, type MapMeasures, commonRecords, mapMeasures } from './pair-math';
import { type SharedPlace } from './shared-place';

/** The address follows the slider when it has rested for so long, so that playing does not fill the history. */
const REST_MS = 400;

/** A, B and B − A: one colour scale for two, one cursor and one view for three. */
@Component({
  selector: 'app-pair-plates',
  imports: [ColourBar, DataState, FieldPlot, RouterLink, StateSign, TimeSlider],
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
  readonly chooseA = output();
  readonly chooseB = output();
  readonly measured = output<{ day: number; variable: string; measures: MapMeasures } | null>();

  protected readonly variables = VARIABLE_CHOICES;
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
  private readonly fitted = linkedSignal<
    { key: string; fields: PairFields },
    { key: string; shared: ColourLimits | null; apart: ColourLimits | null }
  >({
    source: () => ({ key: this.scaleKey(), fields: this.fields() }),
    computation: ({ key, fields }, before) => {
      const held = before?.value.key === key ? before.value : null;
      const { scale, factor } = this.view();
      const fit = (rows: readonly ArrayLike<number>[], kind: typeof scale) =>
        fittedLimits(typicalSpan(rows), kind, factor);
      const both = [...(fields.a?.rows ?? []), ...(fields.b?.rows ?? [])];
      const gap = fields.difference?.rows ?? [];
      return {
        key,
        shared: both.length ? grownLimits(held?.shared ?? null, fit(both, scale)) : (held?.shared ?? null),
        apart: gap.length ? grownLimits(held?.apart ?? null, fit(gap, 'diverging')) : (held?.apart ?? null),
      };
    },
  });
  private readonly shared = computed(
    () => this.fitted().shared ?? fittedLimits({ min: NaN, max: NaN }, this.view().scale, this.view().factor),
  );
  private readonly apart = computed(
    () => this.fitted().apart ?? fittedLimits({ min: NaN, max: NaN }, 'diverging', this.view().factor),
  );
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
  protected readonly atStep = computed(() => {
    const { spacingLatitudeDeg, spacingLongitudeDeg } = this.a().setup.numerics;
    return this.place().along === 'latitude' ? spacingLatitudeDeg : spacingLongitudeDeg;
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

  protected readonly panels = computed(() => {
    const { a, b, difference } = this.fields();
    const axis = this.place().along === 'latitude' ? ('y' as const) : ('x' as const);
    const time = (field: PairFields['a']) => (axis === 'y' ? field?.y : field?.x);
    const growth = (field: PairFields['a']) => {
      const days = time(field);
      return { axis, upTo: days?.length ? (days[days.length - 1] ?? 0) : this.timeRange()[0], pen: 'none' as const };
    };
    const what = `${this.view().label}, ${this.place().mode === 'map' ? this.dayWords() : this.lineWords()}`;
    const busy = (field: unknown) => (field ? '' : 'Reading');
    return [
      {
        id: 'a',
        title: `A, ${this.a().label}`,
        label: `A, ${this.a().label}: ${what}`,
        field: a,
        limits: this.shared(),
        land: this.lands().a,
        growth: growth(a),
        busy: busy(a),
      },
      {
        id: 'b',
        title: `B, ${this.b().label}`,
        label: `B, ${this.b().label}: ${what}`,
        field: b,
        limits: this.shared(),
        land: this.lands().b,
        growth: growth(b),
        busy: busy(b),
      },
      {
        id: 'gap',
        title: 'B − A',
        label: `B minus A: ${what}`,
        field: difference,
        limits: this.apart(),
        land: this.lands().a,
        growth: growth(difference),
        busy: busy(a && b),
      },
    ];
  });

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
  protected readonly caption = computed(() => {
    const { factor, unit, scale, label } = this.view();
    const step = (limits: ColourLimits) => isolineWords(limits, factor, unit);
    const isolines =
      scale === 'diverging'
        ? ` Isolines every ${step(this.shared())}, in the difference every ${step(this.apart())}.`
        : ` Isolines of the difference every ${step(this.apart())}.`;
    const regridding = regriddingWords(this.a(), this.b(), this.same());
    return `${label.charAt(0).toUpperCase()}${label.slice(1)}, ${this.place().mode === 'map' ? this.dayWords() : this.lineWords()}. A and B share one colour scale, the difference has its own.${isolines} ${regridding}`.trim();
  });

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
      if (day !== this.place().day) this.choose({ day });
    }, REST_MS);
  }

  private stopResting(): void {
    if (this.rest !== null) clearTimeout(this.rest);
    this.rest = null;
  }

  protected choose(change: Partial<SharedPlace>): void {
    this.placeChange.emit({ ...this.place(), ...change });
  }
  protected chooseVariable(event: Event): void {
    const { value } = event.target as HTMLSelectElement;
    if (isVariable(value)) this.choose({ variable: value });
  }
  protected chooseAlong(event: Event): void {
    const along = (event.target as HTMLSelectElement).value === 'longitude' ? 'longitude' : 'latitude';
    this.choose({ along, at: null });
  }
  protected chooseAt(event: Event): void {
    const field = event.target as HTMLInputElement;
    const { southDeg, northDeg, westDeg, eastDeg } = this.a().setup.basin;
    const [low, high] = this.place().along === 'latitude' ? [southDeg, northDeg] : [westDeg, eastDeg];
    const at = Number.isNaN(field.valueAsNumber) ? this.at() : Math.min(high, Math.max(low, field.valueAsNumber));
    field.value = String(at);
    this.choose({ at });
  }

  protected readAgain(): void {
    this.readers().a.again();
    this.readers().b.again();
    this.lines().a.again();
    this.lines().b.again();
  }

  protected changesOf(run: RunSummary): string {
    if (run.descent === 'control') return 'the reference of its experiment.';
    if (run.descent === 'extension') return `goes on from ${run.parentLabel ?? 'a run that is gone'}.`;
    const from = run.parentRunId === this.a().id && run !== this.a() ? 'A' : (run.parentLabel ?? 'a run that is gone');
    const shown = run.changes
      .slice(0, 2)
      .map(({ label, from: was, to, unit }) => `${label} ${formatChange(was, to, unit)}`);
    const more = run.changes.length - shown.length;
    return `from ${from}: ${shown.join(', ')}${more > 0 ? ` and ${more} more` : ''}.`;
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

  /** One row for each point: place, A, B, B − A. */
  private table(): PlotTable {
    const { a, b, difference } = this.fields();
    const { unit, factor } = this.view();
    const axes = this.axes();
    const title = (kind: string) =>
      kind === 'time' ? 'model day' : kind === 'latitude' ? 'latitude (° N)' : 'longitude (° E)';
    const base = difference ?? a;
    const width = base?.x.length ?? 0;
    const at = (field: PairFields['a'], j: number, i: number) => (field?.rows[j]?.[i] ?? NaN) * factor;
    // In space and time the difference may have fewer days than A or B: rows are then found by their day.
    const same = (field: PairFields['a']) => field?.x.length === width && field.y.length === base?.y.length;
    return {
      columns: [title(axes.x), title(axes.y), `A (${unit})`, `B (${unit})`, `B − A (${unit})`],
      rows: width * (base?.rows.length ?? 0),
      row: (k) => {
        const [j, i] = [Math.floor(k / width), k % width];
        return [
          base?.x[i] ?? NaN,
          base?.y[j] ?? NaN,
          same(a) ? at(a, j, i) : NaN,
          same(b) ? at(b, j, i) : NaN,
          at(difference, j, i),
        ];
      },
      notes: [`A: ${this.a().label}, run ${this.a().id}`, `B: ${this.b().label}, run ${this.b().id}`, this.caption()],
    };
  }
}

function framesOf(run: Run): FrameTimes {
  return { count: run.progress.records.frames, firstDay: startDay(run), intervalDays: frameIntervalDays(run) };
}

function ends(values: ArrayLike<number>): [number, number] {
  return [values[0] ?? 0, values[values.length - 1] ?? 1];
}
