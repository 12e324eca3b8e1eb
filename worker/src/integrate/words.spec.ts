import type { Column } from '@halfdeep/ocean';
import { describe, expect, it } from 'vitest';
import { quantitiesByPlace, quantitiesOfBasin, quantityAttributes, snake } from './cf-columns';
import { cfUnit } from './cf-units';
import { duration, ProgressLine } from './progress-line';
import { SeriesSummary } from './series-summary';

describe('units in CF notation', () => {
  // UDUNITS (common practice): exponents after the unit, spaces between factors, “Sv” is the sievert there.
  it.each([
    ['Sv', '1e6 m3 s-1'],
    ['Gt', '1e12 kg'],
    ['PW', 'PW'],
    ['PJ', 'PJ'],
    ['km³', 'km3'],
    ['m/s', 'm s-1'],
    ['m²/s', 'm2 s-1'],
    ['N/m²', 'N m-2'],
    ['1/s', 's-1'],
    ['1/(m s)', 'm-1 s-1'],
    ['J/(m³ K)', 'J m-3 K-1'],
    ['m³/s²', 'm3 s-2'],
    ['', '1'],
    ['°', 'degree'],
    ['d', 'day'],
    ['cells', '1'],
  ])('%s is %s', (unit, cf) => expect(cfUnit(unit)).toBe(cf));

  it.each(['a/b/c', '% of it', 'm^2', '10 m'])('refuses “%s”, which nobody could parse', (unit) =>
    expect(() => cfUnit(unit)).toThrow(/no CF notation/),
  );
});

describe('quantities of the columns of a stream', () => {
  const column = (name: string, label: string): Column => ({ name, label, unit: 'Sv', kind: 'mean' });
  it('gathers places, and says what lies only at some of them', () => {
    const columns = [
      column('0.transport', 'Equator: northward volume transport'),
      column('0.volumeNorth', 'Equator: volume anomaly north of it'),
      column('1.transport', 'Middle: eastward volume transport'),
      column('2.transport', 'N 10: northward volume transport'),
    ];
    expect(quantitiesByPlace(columns, 3)).toMatchObject([
      { name: 'transport', longName: 'northward or eastward volume transport', columns: [0, 2, 3] },
      { name: 'volume_north', longName: 'volume anomaly north of the section', columns: [1, -1, -1] },
    ]);
  });
  it('refuses a column that belongs to no place', () => {
    expect(() => quantitiesByPlace([column('transport', 'x')], 1)).toThrow(/is not “<place>\.<quantity>”/);
    expect(() => quantitiesByPlace([column('3.transport', 'x')], 1)).toThrow(RangeError);
  });
  it('says over what a value is meant', () => {
    const [mass] = quantitiesOfBasin([{ name: 'massChange', label: 'Change of mass', unit: 'Gt', kind: 'integral' }]);
    expect(quantityAttributes('budget', 'budget_time', mass)).toEqual({
      long_name: 'Change of mass',
      units: '1e12 kg',
      cell_methods: 'budget_time: sum',
    });
  });
  it('makes names that netCDF takes', () => {
    expect(['transportNow', 'kineticEnergy', 'Σ τ', 'pv2'].map(snake)).toEqual([
      'transport_now',
      'kinetic_energy',
      '_',
      'pv2',
    ]);
  });
});

describe('progress', () => {
  const state = (share: number) => ({
    share,
    day: 100 * share,
    totalDays: 100,
    secondsLeft: 90,
    cellStepsPerSecond: 2.5e7,
  });
  it('says a line every ten per cent where there is no terminal', () => {
    let text = '';
    const line = new ProgressLine({ write: (part) => (text += part) });
    for (let k = 0; k <= 100; k++) line.show(state(k / 100));
    line.end();
    expect(text.split('\n')).toHaveLength(11);
    expect(text.split('\n')[0]).toBe(' 10 %, day 10 of 100, 25.0 million cell-steps/s, 1 min 30 s left');
    expect(text.split('\n')[9]).toBe('100 %, day 100 of 100, 25.0 million cell-steps/s');
  });
  it('redraws one line on a terminal, not more often than somebody can read', () => {
    const written: string[] = [];
    let now = 0;
    const line = new ProgressLine({ isTTY: true, columns: 60, write: (part) => written.push(part) }, () => now);
    for (let k = 0; k <= 100; k++, now += 20) line.show(state(k / 100));
    line.end();
    expect(written).toHaveLength(22); // 20 ms each, drawn every 100 ms, and at the end; then the line's end
    expect(written.slice(0, -1).every((part) => part.startsWith('\r') && part.length <= 60)).toBe(true);
    expect(written.at(-1)).toBe('\n');
  });
  it.each([
    [0.2, '1 s'],
    [59, '59 s'],
    [72, '1 min 12 s'],
    [7500, '2 h 5 min'],
  ])('%d s are %s', (seconds, words) => expect(duration(seconds)).toBe(words));
});

it('sums up the records of a series', () => {
  const summary = new SeriesSummary([
    { name: 'a', label: 'A', unit: 'PJ', kind: 'integral' },
    { name: 'b', label: 'B', unit: 'Sv', kind: 'mean' },
  ]);
  expect(summary.get()).toEqual({
    a: { label: 'A', unit: 'PJ', kind: 'integral', last: null, sum: null },
    b: { label: 'B', unit: 'Sv', kind: 'mean', last: null, mean: null },
  });
  summary.add(Float64Array.of(1, 2));
  summary.add(Float64Array.of(3, 5));
  expect(summary.get()).toMatchObject({ a: { last: 3, sum: 4 }, b: { last: 5, mean: 3.5 } });
});
