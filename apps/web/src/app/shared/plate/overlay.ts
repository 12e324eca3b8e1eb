import { type LandOutline } from './land';
import { type Palette } from './palette';
import { type PlotBox, toPxX, toPxY } from './plot-box';

const NS = 'http://www.w3.org/2000/svg';
const NEAT = 4;
const FONT = '"Inter Variable", Inter, sans-serif';
type Attributes = Record<string, string | number>;

export function svg(name: string, attributes: Attributes = {}, ...children: (Node | string)[]): SVGElement {
  const element = document.createElementNS(NS, name);
  for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, String(value));
  element.append(...children);
  return element;
}

/** Up to where an axis has been computed; the frame beyond is left uninked and the paper dotted. */
export interface Growth {
  axis: 'x' | 'y';
  upTo: number;
  /** A pen is drawn while the run is going: `live`, or `lost` when the page hears nothing any more. */
  pen: 'live' | 'lost' | 'none';
}

/** A straight line of theory, in data coordinates, named along itself. */
export interface TheoryLine {
  from: [number, number];
  to: [number, number];
  name: string;
  dashed: boolean;
}

export interface OverlayModel {
  box: PlotBox;
  growth: Growth | null;
  land: LandOutline | null;
  /** Stretches of the x or y axis that are land throughout a space-time plot. */
  landBands: { axis: 'x' | 'y'; from: number; to: number }[];
  theory: TheoryLine[];
  /** Name of the water, sloped and spaced; empty for none. */
  seaName: string;
  /** Straight lines across a map where sections lie, and moorings, both with names. */
  sections: { along: 'latitude' | 'longitude'; atDeg: number; name: string }[];
  moorings: { longitudeDeg: number; latitudeDeg: number; name: string }[];
}

/** Draws what lies over the plot area: land, sea name, theory, blank paper, the graduated frame, the pen. */
export function drawOverlay(target: SVGElement, model: OverlayModel, palette: Palette, id: string): void {
  const { box } = model;
  const clip = `${id}-clip`;
  const hatch = `${id}-hatch`;
  const dots = `${id}-dots`;
  const defs = svg(
    'defs',
    {},
    svg('clipPath', { id: clip }, svg('rect', { x: box.left, y: box.top, width: box.w, height: box.h })),
    svg(
      'pattern',
      { id: hatch, width: 5, height: 5, patternUnits: 'userSpaceOnUse', patternTransform: 'rotate(45)' },
      svg('rect', { width: 5, height: 5, fill: palette.colour.land }),
      svg('line', { x1: 0, y1: 0, x2: 0, y2: 5, stroke: palette.colour['land-line'], 'stroke-width': 1.4 }),
    ),
    svg(
      'pattern',
      { id: dots, width: 12, height: 12, patternUnits: 'userSpaceOnUse' },
      svg('rect', { x: 6, y: 6, width: 1.2, height: 1.2, fill: palette.colour.hair }),
    ),
  );
  const inside = svg('g', { 'clip-path': `url(#${clip})` });
  if (model.growth) inside.append(...blankPaper(box, model.growth, palette, dots));
  for (const band of model.landBands) inside.append(landBand(box, band, hatch));
  if (model.land)
    inside.append(
      svg('path', { d: model.land.area(box), fill: `url(#${hatch})` }),
      svg('path', { d: model.land.coast(box), fill: 'none', stroke: palette.colour.text, 'stroke-width': 1.2 }),
    );
  if (model.seaName) inside.append(seaName(box, model.seaName, palette));
  inside.append(...marks(model, palette));
  for (const line of model.theory) inside.append(...theoryLine(box, line, palette));
  target.replaceChildren(defs, inside, ...frame(box, model.growth, palette));
  if (model.growth && model.growth.pen !== 'none') target.append(...pen(box, model.growth, palette));
}

function blankPaper(box: PlotBox, growth: Growth, palette: Palette, dots: string): SVGElement[] {
  const rect = { x: box.left, y: box.top, width: box.w, height: box.h };
  if (growth.axis === 'x') {
    const edge = Math.min(box.left + box.w, Math.max(box.left, toPxX(box, growth.upTo)));
    rect.width = box.left + box.w - edge;
    rect.x = edge;
  } else rect.height = Math.min(box.h, Math.max(0, toPxY(box, growth.upTo) - box.top));
  if (rect.width <= 0 || rect.height <= 0) return [];
  return [svg('rect', { ...rect, fill: palette.colour.sheet }), svg('rect', { ...rect, fill: `url(#${dots})` })];
}

function landBand(box: PlotBox, band: { axis: 'x' | 'y'; from: number; to: number }, hatch: string): SVGElement {
  const fill = `url(#${hatch})`;
  if (band.axis === 'x') {
    const x = toPxX(box, band.from);
    return svg('rect', { x, y: box.top, width: Math.max(0, toPxX(box, band.to) - x), height: box.h, fill });
  }
  const y = toPxY(box, band.to);
  return svg('rect', { x: box.left, y, width: box.w, height: Math.max(0, toPxY(box, band.from) - y), fill });
}

function seaName(box: PlotBox, name: string, palette: Palette): SVGElement {
  const spacing = box.w < 300 ? 2 : 6;
  return svg(
    'text',
    {
      x: box.left + box.w * 0.56,
      y: box.top + box.h * 0.2,
      'text-anchor': 'middle',
      fill: palette.colour.text,
      stroke: palette.colour.sheet,
      'stroke-opacity': 0.6,
      'stroke-width': 3,
      'paint-order': 'stroke',
      style: `font: italic 400 ${box.w < 300 ? 11 : 13}px ${FONT}; letter-spacing: ${spacing}px`,
    },
    name,
  );
}

function marks(model: OverlayModel, palette: Palette): SVGElement[] {
  const { box } = model;
  const stroke = { stroke: palette.colour.text, 'stroke-width': 1.2, fill: 'none' };
  const text = (x: number, y: number, name: string) =>
    svg(
      'text',
      {
        x,
        y,
        fill: palette.colour.text,
        stroke: palette.colour.sheet,
        'stroke-width': 3,
        'paint-order': 'stroke',
        style: `font: italic 400 11px ${FONT}`,
      },
      name,
    );
  const sections = model.sections.flatMap(({ along, atDeg, name }) => {
    const flat = along === 'latitude';
    const at = flat ? toPxY(box, atDeg) : toPxX(box, atDeg);
    const ends = flat
      ? { x1: box.left, x2: box.left + box.w, y1: at, y2: at }
      : { x1: at, x2: at, y1: box.top, y2: box.top + box.h };
    const square = (x: number, y: number) =>
      svg('rect', { ...stroke, x: x - 3.5, y: y - 3.5, width: 7, height: 7, fill: palette.colour.sheet });
    return [
      svg('line', { ...ends, ...stroke, 'stroke-dasharray': '1 3' }),
      square(ends.x2, ends.y2),
      text(flat ? box.left + box.w - 34 : at + 5, flat ? at - 5 : box.top + 14, name),
    ];
  });
  const moorings = model.moorings.flatMap(({ longitudeDeg, latitudeDeg, name }) => {
    const x = toPxX(box, longitudeDeg);
    const y = toPxY(box, latitudeDeg);
    const d = `M${x} ${y + 5}L${x - 4.5} ${y - 4}L${x + 4.5} ${y - 4}z`;
    return [svg('path', { ...stroke, d, fill: palette.colour.sheet }), text(x + 7, y - 4, name)];
  });
  return [...sections, ...moorings];
}

function theoryLine(box: PlotBox, line: TheoryLine, palette: Palette): SVGElement[] {
  const [x1, y1, x2, y2] = [
    toPxX(box, line.from[0]),
    toPxY(box, line.from[1]),
    toPxX(box, line.to[0]),
    toPxY(box, line.to[1]),
  ];
  const dash: Attributes = line.dashed ? { 'stroke-dasharray': '6 3' } : {};
  const flip = x2 < x1 ? 180 : 0;
  const angle = (Math.atan2(y2 - y1, x2 - x1) * 180) / Math.PI + flip;
  return [
    svg('line', { x1, y1, x2, y2, stroke: palette.colour.sheet, 'stroke-width': 3.5, 'stroke-opacity': 0.85 }),
    svg('line', { x1, y1, x2, y2, stroke: palette.colour.text, 'stroke-width': 1.3, ...dash }),
    svg(
      'text',
      {
        transform: `translate(${(x1 + x2) / 2} ${(y1 + y2) / 2}) rotate(${angle}) translate(0 -7)`,
        'text-anchor': 'middle',
        fill: palette.colour.text,
        stroke: palette.colour.sheet,
        'stroke-width': 4,
        'stroke-linejoin': 'round',
        'paint-order': 'stroke',
        style: `font: italic 500 11px ${FONT}`,
      },
      line.name,
    ),
  ];
}

/** Two hairlines 4 px apart; stretches between stops inked alternately, only as far as the run has come. */
function frame(box: PlotBox, growth: Growth | null, palette: Palette): SVGElement[] {
  const x = Math.round(box.left) - 0.5;
  const y = Math.round(box.top) - 0.5;
  const w = Math.round(box.w) + 1;
  const h = Math.round(box.h) + 1;
  const ink = palette.colour.text;
  const line = { fill: 'none', stroke: ink, 'stroke-width': 1 };
  let d = '';
  const put = (left: number, top: number, width: number, height: number) => {
    if (width > 0 && height > 0) d += `M${left} ${top}h${width}v${height}h${-width}z`;
  };
  const end = (axis: 'x' | 'y') => (growth?.axis === axis ? growth.upTo : Infinity);
  box.xTicks.stops.slice(0, -1).forEach((stop, k) => {
    const to = Math.min(box.xTicks.stops[k + 1] ?? stop, end('x'));
    const inked = (k % 2 === 0) === box.xTicks.inkFirst;
    const left = toPxX(box, stop);
    const width = inked ? toPxX(box, to) - left : 0;
    put(left, y - NEAT, width, NEAT);
    put(left, y + h, width, NEAT);
    if (growth?.axis === 'x') [y - NEAT, y + h].forEach((top) => put(left, top, 1, NEAT));
  });
  box.yTicks.stops.slice(0, -1).forEach((stop, k) => {
    const to = Math.min(box.yTicks.stops[k + 1] ?? stop, end('y'));
    const inked = (k % 2 === 0) === box.yTicks.inkFirst;
    const bottom = toPxY(box, stop);
    const height = inked ? bottom - toPxY(box, to) : 0;
    put(x - NEAT, bottom - height, NEAT, height);
    put(x + w, bottom - height, NEAT, height);
    if (growth?.axis === 'y') [x - NEAT, x + w].forEach((left) => put(left, bottom, NEAT, 1));
  });
  return [
    svg('rect', { x, y, width: w, height: h, ...line }),
    svg('rect', { x: x - NEAT, y: y - NEAT, width: w + 2 * NEAT, height: h + 2 * NEAT, ...line }),
    svg('path', { d, fill: ink }),
  ];
}

function pen(box: PlotBox, growth: Growth, palette: Palette): SVGElement[] {
  const colour = growth.pen === 'live' ? palette.colour.live : palette.colour['text-3'];
  const upright = growth.axis === 'x';
  const at = upright ? toPxX(box, growth.upTo) : toPxY(box, growth.upTo);
  const [low, high] = upright ? [box.left, box.left + box.w] : [box.top, box.top + box.h];
  if (at < low - 0.5 || at > high + 0.5) return [];
  const line = upright
    ? { x1: at, x2: at, y1: box.top - 1, y2: box.top + box.h }
    : { x1: box.left, x2: box.left + box.w, y1: at, y2: at };
  const right = box.left + box.w;
  const nib = upright
    ? `M${at} ${box.top + 3}L${at - 5} ${box.top - 8}L${at + 5} ${box.top - 8}z`
    : `M${right - 3} ${at}L${right + 8} ${at - 5}L${right + 8} ${at + 5}z`;
  return [
    svg('line', { ...line, stroke: palette.colour.sheet, 'stroke-width': 5 }),
    svg('line', { ...line, stroke: colour, 'stroke-width': 2 }),
    svg('path', { d: nib, fill: colour }),
  ];
}

/** The cursor: hairs with a halo, a square at the place, and a tag with the value. */
export function drawCursor(
  target: SVGElement,
  box: PlotBox,
  at: { x: number; y: number } | null,
  tag: string,
  palette: Palette,
): void {
  if (!at || at.x < box.x[0] || at.x > box.x[1] || at.y < box.y[0] || at.y > box.y[1]) {
    target.replaceChildren();
    return;
  }
  const x = toPxX(box, at.x);
  const y = toPxY(box, at.y);
  const right = box.left + box.w;
  const foot = box.top + box.h;
  const d = `M${box.left} ${y}H${x - 7}M${x + 7} ${y}H${right}M${x} ${box.top}V${y - 7}M${x} ${y + 7}V${foot}`;
  const width = 7 * tag.length + 12;
  const tagX = x + 12 + width > right ? x - 12 - width : x + 12;
  const tagY = y - 28 < box.top ? y + 8 : y - 28;
  target.replaceChildren(
    svg('path', { d, fill: 'none', stroke: palette.colour.sheet, 'stroke-width': 2.5, 'stroke-opacity': 0.6 }),
    svg('path', { d, fill: 'none', stroke: palette.colour.text, 'stroke-width': 1 }),
    svg('rect', { x: x - 7, y: y - 7, width: 14, height: 14, fill: 'none', stroke: palette.colour.text }),
  );
  if (tag)
    target.append(
      svg('rect', { x: tagX, y: tagY, width, height: 20, fill: palette.colour.sheet, stroke: palette.colour.text }),
      svg(
        'text',
        {
          x: tagX + width / 2,
          y: tagY + 14,
          'text-anchor': 'middle',
          fill: palette.colour.text,
          style: `font: 600 12px ${FONT}; font-feature-settings: "tnum"`,
        },
        tag,
      ),
    );
}
