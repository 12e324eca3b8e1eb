import type { Season } from '@halfdeep/ocean';
import { asKind, fitsKind, kindOf } from './season-kind';

const season = (part: Partial<Season>): Season => ({
  mean: 0,
  switchOnDays: 0,
  annual: { amplitude: 0, peakDay: 196 },
  semiannual: { amplitude: 0, peakDay: 30 },
  ...part,
});

describe('season kinds', () => {
  it.each([
    [season({ mean: 1 }), 'steady'],
    [season({ mean: 1, switchOnDays: 30 }), 'switchOn'],
    [season({ annual: { amplitude: 1, peakDay: 196 } }), 'annual'],
    [season({ semiannual: { amplitude: 0.5, peakDay: 30 } }), 'semiannual'],
    [season({ mean: 1, annual: { amplitude: 1, peakDay: 196 } }), 'all'],
  ] as const)('shows every number that is not at rest', (given, kind) => {
    expect(kindOf(given)).toBe(kind);
  });
  it('keeps the day of the peak and puts to rest what the new kind does not show', () => {
    const mixed = season({ mean: 0.4, switchOnDays: 10, annual: { amplitude: 0.7, peakDay: 196 } });
    for (const kind of ['steady', 'switchOn', 'annual', 'semiannual'] as const) {
      const changed = asKind(mixed, kind);
      expect(fitsKind(changed, kind)).toBe(true);
      expect(changed.annual.peakDay).toBe(196);
    }
    expect(asKind(mixed, 'annual').annual.amplitude).toBe(0.7);
    expect(asKind(mixed, 'steady').mean).toBe(0.4);
  });
});
