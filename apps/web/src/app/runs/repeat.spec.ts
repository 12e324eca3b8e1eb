import { isRepeat, repeatVerdict } from './repeat';

const print = (sha256: string, coreVersion = '1') => ({ sha256, coreVersion, shape: [1, 1, 1, 1, 1, 1] });
const run = (label: string, fingerprint: ReturnType<typeof print> | null) => ({ label, fingerprint });

describe('isRepeat', () => {
  const change = { pointer: '/wind/seasonalStrength', label: 'seasonal strength', from: '1.00', to: '1.20', unit: '' };
  it.each([
    [{ descent: 'sensitivity', changes: [], parentLabel: 'Control' } as const, true],
    [{ descent: 'sensitivity', changes: [change], parentLabel: 'Control' } as const, false],
    [{ descent: 'extension', changes: [], parentLabel: 'Control' } as const, false],
    [{ descent: 'control', changes: [], parentLabel: null } as const, false],
  ])('%# knows a repeat by its descent and its changes', (described, expected) => {
    expect(isRepeat({ ...described, changes: [...described.changes] })).toBe(expected);
  });
});

describe('repeatVerdict', () => {
  it('passes only what is the same in every bit', () => {
    const verdict = repeatVerdict(run('Again', print('ab')), run('Control', print('ab')));
    expect(verdict).toEqual({ verdict: 'pass', text: 'verified: same to the last bit as Control' });
  });
  it('refuses a difference that nothing explains', () => {
    expect(repeatVerdict(run('Again', print('ab')), run('Control', print('cd'))).verdict).toBe('refuse');
  });
  it('cautions when another core version computed it', () => {
    const { verdict, text } = repeatVerdict(run('Again', print('ab', '2')), run('Control', print('cd', '1')));
    expect(verdict).toBe('caution');
    expect(text).toMatch(/^another core version \(1 then, 2 now\)/);
    expect(text).not.toMatch(/failed|differs/);
  });
  it('passes the same bits of another core version, and says so', () => {
    const { verdict, text } = repeatVerdict(run('Again', print('ab', '2')), run('Control', print('ab', '1')));
    expect(verdict).toBe('pass');
    expect(text).toContain('by another core version (1 then, 2 now)');
  });
  it.each([
    [null, run('Control', print('ab')), /when it has finished/],
    [print('ab'), run('Control', null), /Control has no fingerprint/],
    [print('ab'), null, /is gone/],
  ])('%# says why there is no verdict yet', (own, original, words) => {
    const { verdict, text } = repeatVerdict(run('Again', own), original);
    expect(verdict).toBeNull();
    expect(text).toMatch(words);
  });
});
