import { corvaneSetup, type Setup } from '@halfdeep/ocean';

/**
 * A small basin (30 × 20 cells at 1°) under the Corvane wind: a day takes well under a millisecond, and every stream has
 * records whose intervals do not divide each other.
 */
export function tinySetup(days: number, change: (setup: Setup) => void = () => undefined): Setup {
  const setup = structuredClone(corvaneSetup());
  Object.assign(setup.basin, { westDeg: 0, eastDeg: 30, southDeg: -10, northDeg: 10, islands: [] });
  setup.basin.westernCoast = { kind: 'rectangular' };
  Object.assign(setup.numerics, { spacingLongitudeDeg: 1, spacingLatitudeDeg: 1, stepsPerDay: 16 });
  setup.length.days = days;
  setup.output = {
    sections: [
      { name: 'Equator', along: 'latitude', atDeg: 0 },
      { name: 'Middle', along: 'longitude', atDeg: 15 },
    ],
    moorings: [{ name: 'West', longitudeDeg: 2.5, latitudeDeg: 1.5 }],
    frameIntervalDays: 1.5,
    sectionIntervalDays: 1,
    mooringIntervalDays: 0.25,
    momentumBudget: false,
    vorticityBudget: false,
  };
  change(setup);
  return setup;
}
