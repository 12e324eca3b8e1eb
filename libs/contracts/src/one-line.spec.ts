import { describe, expect, it } from 'vitest';
import { isPlain, oneLine } from './one-line';

const name = oneLine(12, 'A name');

describe('oneLine', () => {
  it.each([
    ['Åsa Lindqvist', 'Åsa Lindqvist'.length > 12],
    ['  Åsa  ', false],
    ['王小明', false],
    ['Zoë-🌊', false],
    ['e\u0301mile', false],
    ['می\u200cخواهم', false], // the joiner that some scripts are written with
  ])('takes %j unless it is too long (%s)', (text, tooLong) => {
    const parsed = name.safeParse(text);
    expect(parsed.success).toBe(!tooLong);
    if (parsed.success) expect(parsed.data).toBe(text.trim());
  });

  it.each(['a\nb', 'a\u0000b', 'a\u001bb', 'a\u202eb', 'a\u2066b', 'a\u2028b'])('refuses %j', (text) => {
    expect(name.safeParse(text).error?.issues[0].message).toBe('A name is one line, without invisible characters.');
  });
});

describe('isPlain', () => {
  it.each([
    ['Two lines\r\n\tand a tab, ψ ≤ 3 Sv.', true],
    ['', true],
    ['a\u0000b', false],
    ['a\u001b[31m', false],
    ['a\u0085b', false],
  ])('of %j is %s', (text, plain) => {
    expect(isPlain(text)).toBe(plain);
  });
});
