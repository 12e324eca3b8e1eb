import { plainDecimal, readDecimal, stepDecimal, writeDecimal } from './decimal-text';

describe('readDecimal', () => {
  it.each([
    ['12.5', 12.5],
    ['12,5', 12.5],
    ['\u221217.5', -17.5],
    ['-17,5', -17.5],
    ['6\u202f371\u202f000', 6371000],
    ['1e\u22128', 1e-8],
    ['2.2892 × 10⁻¹¹', 2.2892e-11],
    ['3*10^-2', 0.03],
    ['.5', 0.5],
  ])('reads %s', (text, value) => {
    expect(readDecimal(text)).toEqual({ kind: 'number', value });
  });
  it.each(['12a', '-', '1,000.5', '1.2.3', 'e5', '1e999'])('does not take %s for a number', (text) => {
    expect(readDecimal(text)).toEqual({ kind: 'unreadable', text });
  });
  it('tells nothing from zero', () => {
    expect(readDecimal('  ')).toEqual({ kind: 'empty' });
    expect(readDecimal('0')).toEqual({ kind: 'number', value: 0 });
  });
});

describe('writeDecimal', () => {
  it.each([
    [-17.5, '\u221217.5'],
    [1e-8, '1e\u22128'],
    [6371000, '6\u202f371\u202f000'],
    [4000, '4000'],
    [0, '0'],
  ])('writes %f', (value, text) => {
    expect(writeDecimal(value)).toBe(text);
  });
  it('leaves an empty field for what is no number', () => {
    expect(writeDecimal(null)).toBe('');
    expect(writeDecimal(NaN)).toBe('');
  });
  it('gives back every number that it wrote', () => {
    for (const value of [0.1 + 0.2, 7.2921e-5, -1.5e-4, 73_000, 9.80665, 1e21, 123456.789])
      expect(readDecimal(writeDecimal(value))).toEqual({ kind: 'number', value });
  });
});

describe('stepDecimal', () => {
  it.each([
    ['0.20', 1, '0.21'],
    ['0.20', -10, '0.10'],
    ['60', 1, '61'],
    ['\u221217.5', 1, '\u221217.4'],
    ['0.1', -1, '0.0'],
    ['1e\u22128', 1, '2e\u22128'],
    ['1.5e-8', -1, '1.4e\u22128'],
  ])('steps the last digit of %s by %i', (text, count, after) => {
    expect(stepDecimal(text, count)).toBe(after);
  });
  it('keeps to whole multiples where they are asked', () => {
    expect(stepDecimal('16', 1, { multipleOf: 4 })).toBe('20');
    expect(stepDecimal('18', 1, { multipleOf: 4 })).toBe('20');
    expect(stepDecimal('18', -1, { multipleOf: 4 })).toBe('16');
  });
  it('stops at the bounds and comes back from beyond them', () => {
    expect(stepDecimal('9.9', 10, { max: 10 })).toBe('10');
    expect(stepDecimal('4', -1, { min: 4, multipleOf: 4 })).toBe('4');
    expect(stepDecimal('95', -10, { max: 80 })).toBe('85');
    expect(stepDecimal('95', 1, { max: 80 })).toBe('95');
  });
  it('leaves what is no number alone', () => {
    expect(stepDecimal('abc', 1)).toBeNull();
    expect(stepDecimal('', 1)).toBeNull();
  });
});

it('writes a number without a power of ten for attributes', () => {
  expect(plainDecimal(1e-13)).toBe('0.0000000000001');
  expect(plainDecimal(-6371000)).toBe('-6371000');
  expect(plainDecimal(NaN)).toBeNull();
});
