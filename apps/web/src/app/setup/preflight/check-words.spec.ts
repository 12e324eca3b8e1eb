import type { Check } from '@halfdeep/ocean';
import { SPACE } from '../../core/format';
import { checkNumbers, splitUnit, unbroken, verdictWords } from './check-words';

const check = (part: Partial<Check>): Check => ({
  id: 'x',
  label: 'x',
  verdict: 'pass',
  value: 11,
  limit: 44,
  unit: 'km',
  ratio: 0.25,
  reason: '',
  remedy: null,
  pointers: [],
  ...part,
});

describe('words of a check', () => {
  it('tells a most from a least by the ratio', () => {
    expect(checkNumbers(check({}))).toBe(`11.0 of 44.0${SPACE}km`);
    expect(checkNumbers(check({ value: 2.5, limit: 2, unit: '', ratio: 0.8 }))).toBe('2.50');
    expect(checkNumbers(check({ unit: 'trapping scales' }))).toBe('11.0 of 44.0');
    expect(checkNumbers(check({ value: 0, limit: 0.4, unit: '', ratio: 0 }))).toBe('0 of 0.400');
  });
  it('counts refusals before cautions, fields that cannot be read among them', () => {
    expect(verdictWords({ checks: [check({ verdict: 'refuse' }), check({ verdict: 'caution' })] })).toBe(
      'one refusal, one caution',
    );
    expect(verdictWords({ checks: [check({})] }, 2)).toBe('two refusals');
    expect(verdictWords({ checks: [check({})] })).toBe('every check passes');
  });
  it('tells counts whole, and nothing of two zeros', () => {
    const cells = { value: 33_600, limit: 4_000_000, ratio: 0.0084, unit: 'cells' };
    expect(checkNumbers(check(cells))).toBe('33\u202f600 of 4\u202f000\u202f000');
    expect(checkNumbers(check({ value: 4, limit: 4, ratio: 0, unit: 'sections' }))).toBe('4 of 4');
    expect(checkNumbers(check({ value: 9.44e-4, limit: 40.8, ratio: 2e-5, unit: 'GB' }))).toBe(
      `944${SPACE}kB of 40.8${SPACE}GB`,
    );
    expect(checkNumbers(check({ value: 0, limit: 0, ratio: 0, unit: 'd' }))).toBe('');
  });
  it('keeps a unit with its number', () => {
    expect(unbroken('10\u202f800 s must be below 7\u202f690 s; 2 sections stay apart.')).toBe(
      `10\u202f800${SPACE}s must be below 7\u202f690${SPACE}s; 2 sections stay apart.`,
    );
  });
  it('parts a number from its unit', () => {
    expect(splitUnit(`18.4${SPACE}GB`)).toEqual({ number: '18.4', unit: 'GB' });
    expect(splitUnit('3')).toEqual({ number: '3', unit: '' });
  });
});
