import type { Season } from '@halfdeep/ocean';

/** How a season is entered: each kind shows only the numbers that it has. */
export type SeasonKind = 'steady' | 'switchOn' | 'annual' | 'semiannual' | 'all';

/** Whether the numbers that the kind does not show are all at rest. */
export function fitsKind(season: Season, kind: SeasonKind): boolean {
  const [annual, semiannual] = [season.annual.amplitude === 0, season.semiannual.amplitude === 0];
  switch (kind) {
    case 'steady':
      return annual && semiannual && season.switchOnDays === 0;
    case 'switchOn':
      return annual && semiannual;
    case 'annual':
      return semiannual && season.mean === 0;
    case 'semiannual':
      return annual && season.mean === 0;
    case 'all':
      return true;
  }
}

/** The plainest kind that shows every number that is not at rest. */
export function kindOf(season: Season): SeasonKind {
  const order: SeasonKind[] = ['steady', 'switchOn', 'annual', 'semiannual'];
  return order.find((kind) => fitsKind(season, kind)) ?? 'all';
}

/** The season in another kind: what the kind does not show goes to rest, what it shows is kept or gets its default. */
export function asKind(season: Season, kind: SeasonKind): Season {
  const still = (peakDay: number) => ({ amplitude: 0, peakDay });
  const moving = (harmonic: Season['annual']) => ({ ...harmonic, amplitude: harmonic.amplitude || 1 });
  const steady = {
    mean: season.mean || 1,
    annual: still(season.annual.peakDay),
    semiannual: still(season.semiannual.peakDay),
  };
  switch (kind) {
    case 'steady':
      return { ...steady, switchOnDays: 0 };
    case 'switchOn':
      return { ...steady, switchOnDays: season.switchOnDays || 30 };
    case 'annual':
      return { ...steady, mean: 0, switchOnDays: 0, annual: moving(season.annual) };
    case 'semiannual':
      return { ...steady, mean: 0, switchOnDays: 0, semiannual: moving(season.semiannual) };
    case 'all':
      return season;
  }
}
