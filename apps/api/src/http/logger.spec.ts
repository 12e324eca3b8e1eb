import { Writable } from 'node:stream';
import { describe, expect, it } from 'vitest';
import { makeLogger } from './logger';

function logged(entry: object): string {
  let text = '';
  const destination = new Writable({
    write: (chunk: Buffer, _encoding, done) => {
      text += chunk.toString();
      done();
    },
  });
  makeLogger('info', destination).error(entry, 'failed');
  return text;
}

describe('the log', () => {
  it('blanks what a failing statement carried', () => {
    const sql = "UPDATE people SET password_hash = '$2b$12$abcdefghijk'";
    const parent = Object.assign(new Error('SQLITE_BUSY'), { sql });
    const err = Object.assign(new Error('SQLITE_BUSY'), { sql, parameters: ['$2b$12$abcdefghijk'], parent });
    const text = logged({ err: Object.assign(err, { original: parent }) });
    expect(text).toContain('SQLITE_BUSY');
    expect(text).toContain('[withheld]');
    expect(text).not.toContain('$2b$');
  });

  it('blanks passwords, tokens and links', () => {
    const text = logged({ password: 'seven gulls', token: 'xNjmM26n', body: { link: 'https://desk.example/reset#x' } });
    for (const secret of ['seven gulls', 'xNjmM26n', 'reset#']) expect(text).not.toContain(secret);
  });
});
