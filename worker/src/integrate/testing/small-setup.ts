import { corvaneSetup, type Setup } from '@halfdeep/ocean';

/** A small basin with a coast and an island, sections both ways, and intervals that do not divide each other. */
export function smallSetup(days: number, change: (setup: Setup) => void = () => undefined): Setup {
  const setup = corvaneSetup();
  Object.assign(setup.basin, { westDeg: 0, eastDeg: 30, southDeg: -10, northDeg: 10 });
  setup.basin.islands = [{ kind: 'box', name: 'Rock', westDeg: 20, eastDeg: 23, southDeg: -5, northDeg: -3 }];
  setup.basin.westernCoast = { kind: 'slanting', atSouthDeg: 0, atNorthDeg: 3 };
  Object.assign(setup.numerics, { spacingLongitudeDeg: 1, spacingLatitudeDeg: 1, stepsPerDay: 16 });
  setup.length.days = days;
  setup.output = {
    ...setup.output,
    sections: [
      { name: 'Équateur', along: 'latitude', atDeg: 0 },
      { name: 'Middle', along: 'longitude', atDeg: 15 },
    ],
    moorings: [
      { name: 'West', longitudeDeg: 6.5, latitudeDeg: 1.5 },
      { name: 'East', longitudeDeg: 25, latitudeDeg: -1.5 },
    ],
    frameIntervalDays: 1.5,
    sectionIntervalDays: 1,
    mooringIntervalDays: 0.25,
  };
  change(setup);
  return setup;
}
