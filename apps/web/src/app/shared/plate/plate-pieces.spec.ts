import { csvCell, csvFile, CAUTION } from './csv';
import { traceIsoline } from './isolines';
import { LandOutline, landStretches } from './land';
import { chosenLimits } from './scale-choice';
import { extremes, fittedLimits, grownLimits, isolineLevels, niceCeiling, typicalSpan } from './limits';
import { channels, colourScale, colourTable } from './palette';
import { nearestIndex, toDataX, toDataY, toPxX, toPxY, type PlotBox } from './plot-box';
import { zoomed } from './plot-link';
import { fileName, wrapped } from './save-figure';
import { degreeTicks, tickNumber, timeTicks } from './ticks';

const NO_TICKS = { values: [], labels: [], stops: [], inkFirst: false };
const BOX: PlotBox = {
  width: 300,
  height: 200,
  left: 50,
  top: 10,
  w: 200,
  h: 150,
  x: [0, 60],
  y: [-20, 20],
  xTicks: NO_TICKS,
  yTicks: NO_TICKS,
};

describe('colour scale', () => {
  it('puts the middle stop of a diverging scale on zero', () => {
    const stops = Array.from({ length: 17 }, (_, k) => `rgb(${k}, 0, 0)`);
    expect(colourScale(stops)[8]).toEqual([0.5, 'rgb(8, 0, 0)']);
    expect(colourScale(stops)[16]).toEqual([1, 'rgb(16, 0, 0)']);
    expect(() => colourScale(['#000000'])).toThrowError(/at least two stops; 1 arrived/);
  });
  it('interpolates between stops in each channel', () => {
    const table = colourTable(['#000000', 'rgb(255, 128, 0)']);
    expect(Array.from(table.subarray(0, 3))).toEqual([0, 0, 0]);
    expect(Array.from(table.subarray(765))).toEqual([255, 128, 0]);
    expect(table[3 * 51]).toBe(51);
    expect(channels('transparent')).toEqual([NaN, NaN, NaN]);
  });
});

describe('limits', () => {
  it.each([
    [20, 20],
    [20.1, 24],
    [0.00031, 0.00032],
    [9.1, 10],
    [0, 1],
    [-5, 1],
  ])('rounds %f up to %f', (value, nice) => expect(niceCeiling(value)).toBeCloseTo(nice, 12));

  it('makes a diverging scale symmetric and leaves land out', () => {
    expect(fittedLimits(extremes([[NaN, -3, 7]]), 'diverging', 1)).toEqual({ min: -8, max: 8 });
  });
  it('rounds in the unit that is shown', () => {
    // 1.7e-6 m/s is 0.147 m/d: the bar ends at 0.16 m/d.
    const { max } = fittedLimits({ min: 0, max: 1.7e-6 }, 'diverging', 86_400);
    expect(max * 86_400).toBeCloseTo(0.16, 9);
  });
  it('spans a sequential variable that lies far from zero', () => {
    const { min, max } = fittedLimits({ min: 191, max: 219 }, 'sequential', 1);
    expect(min).toBeGreaterThan(180);
    expect(min).toBeLessThanOrEqual(191);
    expect(max).toBeGreaterThanOrEqual(219);
    expect(max).toBeLessThanOrEqual(240);
    expect([min, (min + max) / 2, max, (max - min) / 4].map((tick) => tick % 2)).toEqual([0, 0, 0, 0]);
  });
  it.each([0.7, 3, 15, 28, 31, 37, 90])('covers a span of %f with four whole steps', (span) => {
    const { min, max } = fittedLimits({ min: 1000.3, max: 1000.3 + span }, 'sequential', 1);
    expect(min).toBeLessThanOrEqual(1000.3);
    expect(max).toBeGreaterThanOrEqual(1000.3 + span);
    expect(max - min).toBeLessThan(2.7 * span);
    expect(Math.abs(min / ((max - min) / 4) - Math.round(min / ((max - min) / 4)))).toBeLessThan(1e-6);
  });
  it('is not ruled by a few cells of a jet', () => {
    const row = Float32Array.from({ length: 10_000 }, (_, k) => (k === 17 ? 100 : Math.sin(k)));
    expect(typicalSpan([row]).max).toBe(50);
    expect(typicalSpan([Float32Array.from([1, 2, 3])]).max).toBe(3);
  });
  it('only grows', () => {
    expect(grownLimits({ min: -5, max: 5 }, { min: -3, max: 3 })).toEqual({ min: -5, max: 5 });
    expect(grownLimits({ min: -5, max: 5 }, { min: -8, max: 8 })).toEqual({ min: -8, max: 8 });
  });
  it('has zero among the isolines', () => {
    expect(isolineLevels({ min: -20, max: 20 })).toEqual([-20, -15, -10, -5, 0, 5, 10, 15, 20]);
  });
  it('narrows about zero, or above the low end', () => {
    expect(chosenLimits({ min: -4, max: 4 }, 'half')).toEqual({ min: -2, max: 2 });
    expect(chosenLimits({ min: 10, max: 30 }, 'half')).toEqual({ min: 10, max: 20 });
  });
});

describe('traceIsoline', () => {
  const trace = (rows: number[][], level: number) => {
    const x = rows[0]?.map((_, i) => i) ?? [];
    const pieces: number[][] = [];
    traceIsoline({ x, y: rows.map((_, j) => j), rows }, level, (...piece) => pieces.push(piece));
    return pieces;
  };
  it('finds a plane where it is', () => {
    expect(
      trace(
        [
          [0, 1],
          [0, 1],
        ],
        0.25,
      ),
    ).toEqual([[0.25, 0, 0.25, 1]]);
  });
  it('leaves squares that touch land out', () => {
    expect(
      trace(
        [
          [0, 1],
          [NaN, 1],
        ],
        0.25,
      ),
    ).toEqual([]);
  });
  it('keeps the sides of a saddle apart by the mean of its corners', () => {
    // Corners a = c = 1 are above, b = d = −2 below; the mean is below, so the lows are joined and a is cut off alone.
    const pieces = trace(
      [
        [1, -2],
        [-2, 1],
      ],
      0,
    );
    expect(pieces.length).toBe(2);
    expect(pieces[0]?.slice(0, 2)).toEqual([0, 1 / 3]);
  });
  it('closes round a hill: every end meets another', () => {
    const hill = Array.from({ length: 12 }, (_, j) =>
      Array.from({ length: 12 }, (_, i) => -Math.hypot(i - 5.3, j - 5.7)),
    );
    const ends = new Map<string, number>();
    for (const [x0 = 0, y0 = 0, x1 = 0, y1 = 0] of trace(hill, -3))
      for (const key of [`${x0.toFixed(9)} ${y0.toFixed(9)}`, `${x1.toFixed(9)} ${y1.toFixed(9)}`])
        ends.set(key, (ends.get(key) ?? 0) + 1);
    expect(ends.size).toBeGreaterThan(8);
    expect([...ends.values()].every((count) => count === 2)).toBe(true);
  });
});

describe('land', () => {
  it('is drawn as whole cells, with the coast between land and water alone', () => {
    const grid = { nx: 2, ny: 1, mask: Uint8Array.from([0, 1]), lonFace: [0, 30, 60], latFace: [-20, 20] };
    const outline = new LandOutline(grid);
    expect(outline.area(BOX)).toBe('M50.0 10.0H150.0V160.0H50.0z');
    expect(outline.coast(BOX)).toBe('M150.0 160.0V10.0');
  });
  it('is found in a space-time plot where every row is blank', () => {
    const rows = [
      [NaN, NaN, 1, NaN, 2],
      [NaN, NaN, 1, 3, 2],
    ];
    expect(landStretches([0, 1, 2, 3, 4], rows)).toEqual([{ from: -0.5, to: 1.5 }]);
  });
});

describe('plot box', () => {
  it('goes to px and back', () => {
    expect(toPxX(BOX, 30)).toBe(150);
    expect(toPxY(BOX, 20)).toBe(10);
    expect(toDataX(BOX, toPxX(BOX, 12.5))).toBeCloseTo(12.5, 12);
    expect(toDataY(BOX, toPxY(BOX, -7))).toBeCloseTo(-7, 12);
  });
  it('finds the nearest value', () => {
    expect(nearestIndex([0, 5, 10], 7.4)).toBe(1);
    expect(nearestIndex([0, 5, 10], 7.6)).toBe(2);
    expect(nearestIndex([0, 5, 10], -9)).toBe(0);
    expect(nearestIndex([], 1)).toBe(-1);
  });
  it('zooms about a place and stays inside the whole', () => {
    expect(zoomed([0, 60], 0.5, 15, [0, 60])).toEqual([7.5, 37.5]);
    expect(zoomed([0, 30], 0.5, 0, [0, 60])).toEqual([0, 15]);
    expect(zoomed([0, 30], 4, 10, [0, 60])).toBeNull();
  });
});

describe('ticks', () => {
  it('labels degrees with their hemisphere and inks the frame at half steps', () => {
    const ticks = degreeTicks('latitude', -20, 20, 300);
    expect(ticks.values).toEqual([-20, -15, -10, -5, 0, 5, 10, 15, 20]);
    expect(ticks.labels[4]).toBe('0°');
    expect(ticks.labels[0]).toContain('S');
    expect(ticks.stops[1]).toBe(-17.5);
  });
  it('counts years from 0 and names months of the 365-day year', () => {
    expect(timeTicks(0, 2555, 600, 44).labels.slice(0, 3)).toEqual(['year 0', '1', '2']);
    const months = timeTicks(365, 730, 440, 34);
    expect(months.labels).toContain('year 1');
    expect(months.labels).toContain('Jul');
    expect(months.values[months.labels.indexOf('Jul')]).toBe(365 + 181);
  });
  it('does not flip its ink when the view moves by one stretch', () => {
    const a = timeTicks(365, 730, 440, 34);
    const b = timeTicks(396, 730, 440, 34);
    expect(a.inkFirst).not.toBe(b.inkFirst);
  });
  it('writes tick numbers short', () => {
    expect(tickNumber(20)).toBe('20');
    expect(tickNumber(-0.1 - 0.2)).toBe('−0.3');
    expect(tickNumber(15, true)).toBe('+15');
  });
});

describe('csv', () => {
  it('never lets a spreadsheet see a formula', () => {
    for (const text of ['=1+1', '+1', '-1', '@x', '\tx']) expect(csvCell(text).replace(/^"/, '')).toMatch(/^'/);
    expect(csvCell(-1.5)).toBe('-1.5');
    expect(csvCell('a, "b"')).toBe('"a, ""b"""');
    expect(csvCell(NaN)).toBe('');
  });
  it('carries its notes and the caution as comments, each on one line', () => {
    const text = csvFile({
      columns: ['x', 'y (m)'],
      rows: 2,
      row: (k) => [k, k / 2],
      notes: ['Run "=cmd"\nsecond line'],
    });
    const lines = text.split('\r\n');
    expect(lines[0]).toBe('# Run "=cmd" second line');
    expect(lines[1]).toBe(`# ${CAUTION}`);
    expect(lines.slice(2)).toEqual(['x,y (m)', '0,0', '1,0.5', '']);
  });
});

describe('saved files', () => {
  it('have names that every disk takes', () => {
    expect(fileName('Strong wind, +20 %', 'Along 0°')).toBe('strong-wind-20-along-0');
    expect(fileName('../..', '')).toBe('plate');
  });
  it('wrap their caption between words', () => {
    const lines = wrapped('one two three four five six seven eight', 140, 12);
    expect(lines.length).toBeGreaterThan(1);
    expect(lines.join(' ')).toBe('one two three four five six seven eight');
  });
});
