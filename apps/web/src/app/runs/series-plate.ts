import { ChangeDetectionStrategy, Component, computed, input, viewChild } from '@angular/core';
import { type Run } from '@halfdeep/contracts';
import { formatModelDay } from '../core/format';
import { type GrowingSlice } from '../core/growing-rows';
import { startDay } from '../core/run-follower';
import { type Curve, CurvePlot } from '../shared/plate/curve-plot';
import { type Growth } from '../shared/plate/overlay';
import { Plate, type PlateSource } from '../shared/plate/plate';
import { PlotLink } from '../shared/plate/plot-link';
import { plateAbout } from './plate-about';
import { sameGrowth, sameRange } from './same-setup';

/** A curve to draw: columns of the stream added up and multiplied. */
export interface CurveSpec {
  name: string;
  columns: number[];
  factor: number;
  series: Curve['series'];
}

/** Curves out of one series stream of a run, growing at the pen. */
@Component({
  selector: 'app-series-plate',
  imports: [CurvePlot, Plate],
  templateUrl: './series-plate.html',
  styleUrl: './plates.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SeriesPlate {
  readonly run = input.required<Run>();
  readonly slice = input.required<GrowingSlice>();
  readonly pen = input.required<'live' | 'lost' | 'none'>();
  readonly name = input.required<string>();
  readonly remark = input('');
  readonly caption = input.required<string>();
  readonly unit = input.required<string>();
  readonly specs = input.required<CurveSpec[]>();
  readonly emptyHeading = input('From the first record');
  readonly emptyAbout = input('');
  readonly link = input(new PlotLink());
  private readonly plot = viewChild(CurvePlot);

  protected readonly curves = computed<Curve[]>(() => {
    const slice = this.slice();
    slice.version();
    const { rows } = slice;
    if (rows.count === 0) return [];
    const x = rows.days();
    return this.specs()
      .filter(({ columns }) => columns.every((column) => column >= 0))
      .map(({ name, columns, factor, series }) => ({
        name,
        series,
        x,
        y: Float64Array.from({ length: rows.count }, (_, k) =>
          columns.reduce((sum, column) => sum + rows.value(k, column) * factor, 0),
        ),
      }));
  });
  protected readonly xFull = computed<[number, number]>(() => [startDay(this.run()), this.run().progress.totalDays], {
    equal: sameRange,
  });
  protected readonly growth = computed<Growth>(
    () => {
      const { rows, version } = this.slice();
      version();
      return { axis: 'x', upTo: rows.count > 0 ? rows.day(rows.count - 1) : this.xFull()[0], pen: this.pen() };
    },
    { equal: sameGrowth },
  );
  protected readonly about = computed(() => plateAbout(this.run()));
  protected readonly state = computed(() => {
    const slice = this.slice();
    if (this.curves().length > 0) return 'ready';
    if (slice.error() !== null) return 'error';
    return slice.reading() === null ? 'empty' : 'loading';
  });
  protected readonly busy = computed(() => {
    const reading = this.slice().reading();
    return reading && reading.of > 1 ? `Reading, ${reading.done} of ${reading.of} pieces` : '';
  });
  protected readonly partial = computed(() => {
    const slice = this.slice();
    if (slice.error() === null || this.curves().length === 0) return '';
    return `Not read beyond ${formatModelDay(slice.rows.day(slice.rows.count - 1))}; what is drawn is good.`;
  });
  protected readonly lastGood = computed(
    () =>
      `${this.run().state === 'running' ? 'The run goes on.' : 'The run is safe.'} Last record: ${formatModelDay(this.run().progress.day)}.`,
  );

  protected readonly source: PlateSource = {
    panels: async () => {
      const plot = this.plot();
      return plot ? [{ figure: await plot.figure(), title: this.name(), bar: null }] : [];
    },
    table: (notes) => this.plot()?.table(notes) ?? { columns: [], rows: 0, row: () => [], notes },
  };
}
