import {
  MINUS,
  NARROW,
  NO_VALUE,
  SPACE,
  formatBytes,
  formatCellSteps,
  formatChange,
  formatCount,
  formatDay,
  formatDuration,
  formatLatitude,
  formatLongitude,
  formatModelDay,
  formatModelLength,
  formatModelTime,
  formatMoment,
  formatNumber,
  formatQuantity,
  formatSeasonDay,
} from './format';

describe('formatNumber', () => {
  it.each([
    [1234.5, {}, `1${NARROW}234.5`],
    [1234567, {}, `1${NARROW}234${NARROW}567`],
    [-0.25, {}, `${MINUS}0.25`],
    [0, {}, '0'],
    [1.005, { decimals: 2 }, '1.00'],
    [1.2, { decimals: 2 }, '1.20'],
    [7.1, { decimals: 1, signed: true }, '+7.1'],
    [0, { signed: true }, '0'],
    [0.0381, { significant: 3 }, '0.0381'],
    [999.6, { significant: 3 }, '1000'.replace('1000', `1${NARROW}000`)],
    [3.2e-14, { significant: 1 }, `3${NARROW}×${NARROW}10⁻¹⁴`],
    [-2.5e7, { significant: 2 }, `${MINUS}2.5${NARROW}×${NARROW}10⁷`],
    [0, { significant: 3 }, '0'],
    [NaN, {}, NO_VALUE],
    [Infinity, { decimals: 1 }, NO_VALUE],
  ])('writes %f with %o as %s', (value, options, text) => {
    expect(formatNumber(value, options)).toBe(text);
  });

  it('gives no sign to what rounds to nothing', () => {
    expect(formatNumber(-0.0004, { decimals: 2 })).toBe('0.00');
  });
});

describe('units, places and changes', () => {
  it('keeps degrees at the number and other units a no-break space away', () => {
    expect(formatQuantity(0.381, 'PW')).toBe(`0.381${SPACE}PW`);
    expect(formatQuantity(0.2, '°', { decimals: 2 })).toBe('0.20°');
    expect(formatQuantity(NaN, 'm')).toBe(NO_VALUE);
  });

  it('names latitude and longitude', () => {
    expect(formatLatitude(20)).toBe(`20°${SPACE}N`);
    expect(formatLatitude(-17.5)).toBe(`17.5°${SPACE}S`);
    expect(formatLatitude(-0)).toBe('0°');
    expect(formatLongitude(30)).toBe(`30°${SPACE}E`);
    expect(formatLongitude(-12.42, 1)).toBe(`12.4°${SPACE}W`);
  });

  it('writes a change with its unit once', () => {
    expect(formatChange('1.00', '1.20')).toBe('1.00 → 1.20');
    expect(formatChange('250', '150', 'm')).toBe(`250 → 150${SPACE}m`);
  });
});

describe('model time', () => {
  it('counts years of 365 days from day 0', () => {
    expect(formatModelTime(1244.65, 3650)).toBe('year 3.41 of 10');
    expect(formatModelTime(24.5, 90)).toBe('day 24.5 of 90');
    expect(formatModelLength(3650)).toBe('10 years');
    expect(formatModelLength(365)).toBe('1 year');
    expect(formatModelLength(90)).toBe('90 days');
    expect(formatModelDay(1240)).toBe(`day 1${NARROW}240`);
    expect(formatModelDay(12.25)).toBe('day 12.25');
  });

  it.each([
    [0, '1 Jan'],
    [30.9, '31 Jan'],
    [31, '1 Feb'],
    [196, '16 Jul'],
    [364, '31 Dec'],
    [365 * 3 + 58, '28 Feb'],
    [-1, '31 Dec'],
  ])('puts day %f at %s', (day, text) => {
    expect(formatSeasonDay(day)).toBe(text);
  });
});

describe('wall clock, sizes and speeds', () => {
  it.each([
    [0, `0${SPACE}s`],
    [45.4, `45${SPACE}s`],
    [59.7, `1${SPACE}min`],
    [365, `6${SPACE}min 5${SPACE}s`],
    [7199.6, `2${SPACE}h`],
    [7500, `2${SPACE}h 5${SPACE}min`],
    [273_600, `3${SPACE}d 4${SPACE}h`],
    [-1, NO_VALUE],
  ])('says %f seconds as %s', (seconds, text) => {
    expect(formatDuration(seconds)).toBe(text);
  });

  it('rounds to one unit when asked', () => {
    expect(formatDuration(365, 1)).toBe(`6${SPACE}min`);
    expect(formatDuration(3599, 1)).toBe(`1${SPACE}h`);
  });

  it.each([
    [0, `0${SPACE}B`],
    [999, `999${SPACE}B`],
    [18_400_000_000, `18.4${SPACE}GB`],
    [999_700, `1.00${SPACE}MB`],
    [120_000_000, `120${SPACE}MB`],
  ])('says %i bytes as %s', (bytes, text) => {
    expect(formatBytes(bytes)).toBe(text);
  });

  it('says how fast the stepper goes', () => {
    expect(formatCellSteps(9.04e7)).toBe('90 million cell-steps/s');
    expect(formatCellSteps(1.5e9)).toBe('1.5 billion cell-steps/s');
  });
});

describe('moments', () => {
  const now = new Date(2026, 11, 3, 12, 0); // a Thursday, local time
  const at = (...parts: [number, number, number, number?, number?]) => new Date(...parts).toISOString();

  it('says less the nearer they are', () => {
    expect(formatMoment(at(2026, 11, 3, 9, 12), now)).toBe('09:12');
    expect(formatMoment(at(2026, 10, 27, 9, 12), now)).toBe('Friday 09:12');
    expect(formatMoment(at(2026, 2, 3, 9, 12), now)).toBe('3 March 09:12');
    expect(formatMoment(at(2024, 2, 3, 9, 12), now)).toBe('3 March 2024');
    expect(formatMoment('nonsense', now)).toBe(NO_VALUE);
  });

  it('names days by the calendar, not by 24 hours', () => {
    expect(formatDay(at(2026, 11, 2, 23, 59), now)).toBe('yesterday');
    expect(formatDay(at(2026, 11, 3, 0, 1), now)).toBe('today');
    expect(formatDay(at(2026, 10, 26, 23, 0), now)).toBe('26 November');
  });
});

it('counts in words up to twelve', () => {
  expect(formatCount(1, 'run')).toBe('one run');
  expect(formatCount(3, 'run')).toBe('three runs');
  expect(formatCount(14, 'run')).toBe('14 runs');
  expect(formatCount(0, 'run')).toBe('no runs');
});
