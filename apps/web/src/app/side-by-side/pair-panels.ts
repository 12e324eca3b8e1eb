import { sentenceStart } from '../core/format';
import { type LandOutline } from '../shared/plate/land';
import { type ColourLimits, isolineWords } from '../shared/plate/limits';
import { type Growth } from '../shared/plate/overlay';
import { type VariableView } from '../shared/plate/variables';
import { type PairFields } from './pair-fields';

interface PairLimits {
  shared: ColourLimits;
  apart: ColourLimits;
}

/** What the three plates show: A and B on one scale, B − A on its own. */
export function pairPanels(parts: {
  labels: { a: string; b: string };
  fields: PairFields;
  /** Variable and day or line, in words. */
  what: string;
  limits: PairLimits;
  lands: { a: LandOutline; b: LandOutline };
  timeAxis: 'x' | 'y';
  firstDay: number;
}) {
  const { labels, fields, what, limits, lands, timeAxis: axis, firstDay } = parts;
  const growth = (field: PairFields['a']): Growth => {
    const days = axis === 'y' ? field?.y : field?.x;
    return { axis, upTo: days?.length ? (days[days.length - 1] ?? 0) : firstDay, pen: 'none' };
  };
  const panel = (id: string, title: string, spoken: string, field: PairFields['a']) => ({
    id,
    title,
    label: `${spoken}: ${what}`,
    field,
    limits: id === 'gap' ? limits.apart : limits.shared,
    land: id === 'b' ? lands.b : lands.a,
    growth: growth(field),
  });
  const busy = (field: unknown) => (field ? '' : 'Reading');
  const [titleA, titleB] = [`A, ${labels.a}`, `B, ${labels.b}`];
  return [
    { ...panel('a', titleA, titleA, fields.a), busy: busy(fields.a) },
    { ...panel('b', titleB, titleB, fields.b), busy: busy(fields.b) },
    { ...panel('gap', 'B − A', 'B minus A', fields.difference), busy: busy(fields.a && fields.b) },
  ];
}

/** Caption of the three plates; `where`: the day or the line. */
export function pairCaption(view: VariableView, where: string, limits: PairLimits, regridding: string): string {
  const step = (of: ColourLimits) => isolineWords(of, view.factor, view.unit);
  const isolines =
    view.scale === 'diverging'
      ? `Isolines every ${step(limits.shared)}, in the difference every ${step(limits.apart)}.`
      : `Isolines of the difference every ${step(limits.apart)}.`;
  const scales = 'A and B share one colour scale, the difference has its own.';
  return [`${sentenceStart(view.label)}, ${where}.`, scales, isolines, regridding].filter(Boolean).join(' ');
}
