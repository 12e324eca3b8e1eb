import { expect, it } from 'vitest';
import { isCommonPassword } from './common-password';

it.each([
  'password1234',
  'P@ssw0rd2026!',
  'Passwort12345',
  'qwertyuiop123',
  'administrator',
  'aaaaaaaaaaaa',
  '123456789012',
  'abcdefghijklm',
  'letmeinletmein',
  'halfdeep2026!',
  'Summer-2026-Summer',
  'correct horse battery staple',
  'harb harb harb',
])('refuses %s', (password) => {
  expect(isCommonPassword(password)).toBe(true);
});

it.each(['slack water 41 fathoms', 'Undertow-lantern-88', 'kq8Zr-3vTmw-x9Fp', 'thermocline pears', 'пять солёных рыб'])(
  'accepts %s',
  (password) => {
    expect(isCommonPassword(password)).toBe(false);
  },
);
