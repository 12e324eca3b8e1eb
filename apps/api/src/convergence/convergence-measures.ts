import { type Convergence, type ConvergenceMeasure } from '@halfdeep/contracts';
import {
  richardson,
  transportMeasures,
  type RefinedSection,
  type Section,
  type TransportMeasures,
} from '@halfdeep/ocean';
import { type Slice } from '../slices/slice-service';

type Result = NonNullable<Convergence['choices'][number]['result']>;
/** The three runs, from the coarse grid to the fine one. */
export type Three<T> = readonly [half: T, own: T, twice: T];

/** Each grid has half the spacing of the one before. */
const RATIO = 2;
/** Differences below this share of the largest transport through a section are none: a mean that is zero by conservation has no order. */
const NEGLIGIBLE = 1e-6;

/** What the sections of three runs say: two measures a section, with its line in the half and in the twice run. */
export function compareSections(
  sections: readonly Section[],
  lines: { half: readonly RefinedSection[]; twice: readonly RefinedSection[] },
  series: Three<Slice>,
  intervalDays: number,
): Pick<Result, 'measures' | 'window'> {
  let window: TransportMeasures['window'] | null = null;
  const measures = sections.flatMap((section, k): ConvergenceMeasure[] => {
    const three = series.map((slice) => measured(slice, k, intervalDays));
    const [half, own, twice] = three;
    if (!half || !own || !twice) return [];
    window = own.window;
    const negligible = NEGLIGIBLE * Math.max(half.largest, own.largest, twice.largest);
    const moved = [lines.half[k], lines.twice[k]].find((line) => line.moved);
    return (['mean', 'amplitude'] as const).map((quantity) => ({
      section: k,
      name: section.name,
      along: section.along,
      atDeg: lines.half[k].fromDeg,
      quantity,
      unit: 'Sv',
      half: half[quantity],
      own: own[quantity],
      twice: twice[quantity],
      ...(moved
        ? otherLine(section.along, moved)
        : judged([half[quantity], own[quantity], twice[quantity]], negligible)),
    }));
  });
  const { fromDay, toDay, wholeYear } = window ?? { fromDay: 0, toDay: 0, wholeYear: false };
  return { measures, window: { fromDay, toDay, wholeYear } };
}

/** Measures of the transport through section k; null when the series does not hold it. */
function measured({ head, data }: Slice, k: number, intervalDays: number): TransportMeasures | null {
  const columns = head.columns ?? [];
  const column = columns.findIndex(({ name }) => name === `${k}.transport`);
  const days = head.axes[0].values;
  if (column < 0 || days.length === 0) return null;
  const values = days.map((_, record) => data[record * columns.length + column]);
  return transportMeasures(values, intervalDays, days[days.length - 1]);
}

type Judged = Pick<ConvergenceMeasure, 'verdict' | 'sentence' | 'order' | 'extrapolated' | 'gci' | 'asymptoticRatio'>;

function judged([half, own, twice]: Three<number>, negligible: number): Judged {
  const { gci, ...said } = richardson(half, own, twice, RATIO, negligible);
  return { ...said, gci: gci && { own: gci.medium, twice: gci.fine } };
}

function otherLine(along: Section['along'], { fromDeg, toDeg }: RefinedSection): Judged {
  const place = (degrees: number) => {
    const size = `${Number(Math.abs(degrees).toFixed(4))}°`;
    const [positive, negative] = along === 'latitude' ? ['N', 'S'] : ['E', 'W'];
    return degrees === 0 ? size : `${size} ${degrees > 0 ? positive : negative}`;
  };
  return {
    verdict: 'line moved',
    sentence: `There is no line at ${place(fromDeg)} at half the resolution; the nearest one, ${place(toDeg)}, carries another transport.`,
    order: null,
    extrapolated: null,
    gci: null,
    asymptoticRatio: null,
  };
}
