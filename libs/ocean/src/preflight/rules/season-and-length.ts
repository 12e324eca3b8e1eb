import { readable } from '../../describe/numbers';
import { SECONDS_PER_DAY } from '../../forcing/season';
import { LIMITS } from '../../limits';
import type { Remedy } from '../../preflight-types';
import type { Setup, WindComponent } from '../../setup';
import { ratioOfMaximum, ratioOfMinimum, verdictOf, NO_CURE, type Case, type Rule } from '../draft';
import { roundedDown } from '../remedies';
import { polewardWords } from './resolution';

const THINNING_LIMIT = 0.25;
/** e at which a nonlinear layer changes by a quarter: 1 − √(1 − 2e) = 0.25. */
const NONLINEAR_WIND_LIMIT = (1 - (1 - THINNING_LIMIT) ** 2) / 2;
/** Fr c dx/A that outcropping runs under a stress floor completed with (numerics.md §6). */
const REYNOLDS_LIMIT = 9;
const UNITS_PER_DAY = 4;

/** Thickness lost over H where linear theory expects |η|/H = e: the layer pushes back less the thinner it is. */
export function nonlinearThinning(e: number): number {
  return 1 - Math.sqrt(Math.max(0, 1 - 2 * e));
}

/**
 * Largest |η|/H that is expected: a quarter passes. Linear equations do not hold beyond a half; a nonlinear layer that
 * outcrops needs entrainment, or a stress floor with a cell Reynolds number Fr c dx/A of at most 9 (numerics.md §6).
 */
export const thinning: Rule = (of) => {
  const { setup, wind: estimate, startThinning: start } = of;
  const nonlinear = setup.numerics.equations === 'nonlinear';
  const e = estimate.thinning;
  if (e === null && (start === null || start === 0)) return null;
  const wind = e === null ? null : nonlinear ? nonlinearThinning(e) : e;
  const found = Math.max(wind ?? 0, start ?? 0);
  const byStart = (start ?? 0) > (wind ?? 0);
  const outcrops = nonlinear && found >= 1;
  const reynolds = cellReynolds(of);
  const { entrainment } = setup.layer;
  const floored = setup.wind.stressFloorM > 0 && reynolds <= REYNOLDS_LIMIT;
  // What starts below the bottom of the layer is no start at all, and no entrainment helps.
  const refused = outcrops && (byStart || !(entrainment !== null || floored));
  const ratio = ratioOfMaximum(found, THINNING_LIMIT);
  const H = setup.layer.restThicknessM;
  const source = byStart ? 'the start' : 'the wind';
  const size = `about ${readable(found * H, 2)} m of ${readable(H, 4)} m (${readable(found, 2)}) by ${source}`;
  const guard = entrainment !== null ? 'entrainment' : 'the stress floor';
  const reason = () => {
    if (refused && byStart) return `The start takes the whole layer of ${readable(H, 4)} m away; keep its amplitude below ${readable(H, 4)} m.`; // prettier-ignore
    if (refused)
      return `The layer would outcrop under this wind: give it entrainment, or a stress floor with |u| dx/A of at most ${REYNOLDS_LIMIT} (${readable(reynolds)} here).`;
    if (outcrops) return `The layer would outcrop under this wind; ${guard} holds it.`;
    if (nonlinear && ratio > 1) return `The layer would change by ${size}, more than ${THINNING_LIMIT}: watch its thickness.`; // prettier-ignore
    if (found > 0.5) return `The layer would change by ${size}: the linear equations do not hold; keep it below ${THINNING_LIMIT}.`; // prettier-ignore
    if (ratio > 1) return `The layer would change by ${size}: linear equations are doubtful past ${THINNING_LIMIT}.`;
    return `The layer would change by ${size}.`;
  };
  return {
    id: 'thinning',
    label: 'Thickness change against H',
    verdict: verdictOf(ratio, refused),
    value: found,
    limit: THINNING_LIMIT,
    unit: 'of H',
    ratio,
    reason: reason(),
    pointers: byStart
      ? ['/start/amplitudeM', '/layer/restThicknessM']
      : [
          '/wind/components',
          '/wind/seasonalStrength',
          '/layer/restThicknessM',
          '/layer/reducedGravityMS2',
          ...(refused ? ['/layer/entrainment', '/wind/stressFloorM'] : []),
        ],
    cures: () => [
      ...weaker(setup, e ?? 0, start ?? 0, nonlinear ? NONLINEAR_WIND_LIMIT : THINNING_LIMIT),
      ...(refused && !byStart ? entraining(setup) : []),
    ],
  };
};

/** |u| dx/A with |u| = Fr c, the smallest viscosity and the largest cell; without viscosity beyond any bound. */
function cellReynolds({ scales }: Case): number {
  const size = Math.max(scales.dx, scales.dy);
  const flow = scales.rates.froude * scales.c * size;
  return flow === 0 ? 0 : scales.viscosity.least > 0 ? Math.min(flow / scales.viscosity.least, 1e6) : 1e6;
}

/** Entrainment with the defaults of numerics.md §12. */
function entraining({ layer }: Setup): Remedy[] {
  const onsetThicknessM = Number(Math.max(layer.minimumThicknessM, Math.min(60, 0.3 * layer.restThicknessM)).toPrecision(4)); // prettier-ignore
  const value = { onsetThicknessM, timescaleDays: LIMITS.entrainmentTime.default, detrainment: 'none' };
  return [
    { label: `Entrain below ${readable(onsetThicknessM)} m`, changes: [{ pointer: '/layer/entrainment', value }] },
  ];
}

/** Scales the wind, the start, or both, to the limit; the factor is rounded down to two digits. */
function weaker(setup: Setup, wind: number, start: number, windLimit: number): Remedy[] {
  const factor = (found: number, limit: number) => roundedDown(limit / found);
  const scaled = (value: number, by: number) => Number((value * by).toPrecision(12));
  const changes: Remedy['changes'] = [];
  const words: string[] = [];
  if (wind > windLimit) {
    const by = factor(wind, windLimit);
    setup.wind.components.forEach((component, k) => {
      for (const [field, value] of amplitudes(component))
        if (value !== 0) changes.push({ pointer: `/wind/components/${k}/pattern/${field}`, value: scaled(value, by) });
    });
    words.push(`Wind × ${readable(by)}`);
  }
  if (start > THINNING_LIMIT && 'amplitudeM' in setup.start) {
    const value = scaled(setup.start.amplitudeM, factor(start, THINNING_LIMIT));
    changes.push({ pointer: '/start/amplitudeM', value });
    words.push(`start at ${readable(value)} m`);
  }
  const label = words.join(', ');
  return changes.length > 0 ? [{ label: label.charAt(0).toUpperCase() + label.slice(1), changes }] : [];
}

function amplitudes({ pattern }: WindComponent): [string, number][] {
  switch (pattern.kind) {
    case 'uniform':
      return [
        ['eastwardNM2', pattern.eastwardNM2],
        ['northwardNM2', pattern.northwardNM2],
      ];
    case 'linearShear':
      return [['stressNM2', pattern.stressNM2]];
    default:
      return [['amplitudeNM2', pattern.amplitudeNM2]];
  }
}

/** Length against twice the memory; only where a wind has to be forgotten from. A start from a state has run already. */
export const lengthAgainstMemory: Rule = ({ setup, scales, wind }) => {
  if (wind.stress === 0) return null;
  const earlier = setup.start.kind === 'state' ? setup.start.startStep / setup.start.stepsPerDay : 0;
  const found = earlier + setup.length.days;
  const limit = (2 * scales.memory) / SECONDS_PER_DAY;
  const ratio = ratioOfMinimum(found, limit);
  const edge = polewardWords({ setup, scales });
  const where = edge ? ` at ${edge}` : '';
  const memories = readable(found / (limit / 2), 2);
  const lengthWords = earlier > 0 ? `${readable(found, 5)} d since day 0` : `${readable(found, 5)} d`;
  return {
    id: 'length',
    label: 'Length against spin-up',
    verdict: verdictOf(ratio, false),
    value: found,
    limit,
    unit: 'd',
    ratio,
    reason:
      ratio > 1
        ? `${lengthWords} are ${memories} times the memory of the layer${where}; ask for twice, ${readable(limit, 4)} d.`
        : `${lengthWords} are ${memories} times the memory of the layer${where}.`,
    pointers: ['/length/days'],
    cures: () => longer(setup, limit - earlier),
  };
};

/** Whole years that are whole output intervals too, else whole output intervals, at least so many days. */
function longer(setup: Setup, days: number): Remedy[] {
  const { frameIntervalDays, sectionIntervalDays, mooringIntervalDays } = setup.output;
  const interval = [frameIntervalDays, sectionIntervalDays, mooringIntervalDays]
    .map((value) => Math.round(value * UNITS_PER_DAY))
    .reduce(leastCommonMultiple);
  const year = 365 * UNITS_PER_DAY;
  const wanted = Math.ceil(days * UNITS_PER_DAY - 1e-6);
  return [leastCommonMultiple(interval, year), year, interval]
    .map((unit) => (Math.ceil(wanted / unit) * unit) / UNITS_PER_DAY)
    .filter(
      (value, k, all) => value <= LIMITS.lengthDays.max && value <= 4 * Math.max(days, 365) && all.indexOf(value) === k,
    )
    .map((value) => ({
      label: value % 365 === 0 ? `Use ${readable(value / 365, 5)} years` : `Use ${readable(value, 7)} d`,
      changes: [{ pointer: '/length/days', value }],
    }));
}

/** Intervals are whole 6-hour units and the run a whole number of each, so that no stream ends short. */
export const wholeIntervals: Rule = ({ setup }) => {
  const days = setup.length.days;
  const streams = [
    { word: 'frames', key: 'frameIntervalDays' },
    { word: 'sections', key: 'sectionIntervalDays' },
    { word: 'moorings', key: 'mooringIntervalDays' },
  ] as const;
  const used = streams.filter(({ word }) => word !== 'moorings' || setup.output.moorings.length > 0);
  const uneven = used.filter(({ key }) => !Number.isInteger(setup.output[key] * UNITS_PER_DAY));
  const left = used.map(({ word, key }) => ({ word, key, days: leftOver(days, setup.output[key]) }));
  const short = left.filter((stream) => stream.days > 0);
  const longest = Math.max(0, ...short.map((stream) => stream.days));
  const pointers = ['/length/days', ...used.map(({ key }) => `/output/${key}`)];
  const row = { id: 'intervals', label: 'Records to the end of the run', limit: 0, unit: 'd', pointers };
  if (uneven.length > 0)
    return {
      ...row,
      verdict: 'refuse',
      value: longest,
      ratio: 2,
      reason: `The intervals of ${listed(uneven.map(({ word }) => word))} must be whole numbers of 6 hours.`,
      cures: () => [
        {
          label: 'Use whole 6 hours',
          changes: uneven.map(({ key }) => ({
            pointer: `/output/${key}`,
            value: Math.max(1, Math.round(setup.output[key] * UNITS_PER_DAY)) / UNITS_PER_DAY,
          })),
        },
      ],
    };
  if (short.length === 0)
    return {
      ...row,
      verdict: 'pass',
      value: 0,
      ratio: 0,
      reason: `${readable(days, 7)} d are a whole number of every output interval.`,
      cures: NO_CURE,
    };
  return {
    ...row,
    verdict: 'caution',
    value: longest,
    ratio: 1 + longest / Math.max(...short.map(({ key }) => setup.output[key])),
    reason: `The last ${readable(longest, 4)} d have no record of ${listed(short.map(({ word }) => word))}; use a length that is a whole number of every interval.`,
    cures: () => longer(setup, days),
  };
};

function leftOver(days: number, interval: number): number {
  const units = Math.round(days * UNITS_PER_DAY);
  const each = Math.max(1, Math.round(interval * UNITS_PER_DAY));
  return (units % each) / UNITS_PER_DAY;
}

function leastCommonMultiple(a: number, b: number): number {
  let [x, y] = [a, b];
  while (y > 0) [x, y] = [y, x % y];
  return (a / x) * b;
}

function listed(words: readonly string[]): string {
  return words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words[words.length - 1]}`;
}
