import { describe, expect, it } from 'vitest';
import { corvaneSetup, LIMITS, PRESETS, type Setup } from '@halfdeep/ocean';
import { setupSchema } from './setup-schema';

/** A setup with one thing made wrong; `any`, since wrong types are the point. */
// eslint-disable-next-line @typescript-eslint/no-explicit-any
const wrong = (change: (setup: any) => void): unknown => {
  const setup = corvaneSetup();
  change(setup);
  return setup;
};
const problems = (input: unknown): string[] => {
  const parsed = setupSchema.safeParse(input);
  return parsed.success ? [] : parsed.error.issues.map(({ path, message }) => `/${path.join('/')} ${message}`);
};

/** Turns a setup nonlinear with these fields of the layer. */
const nonlinear = (setup: Setup, layer: object) => {
  setup.numerics.equations = 'nonlinear';
  Object.assign(setup.layer, layer);
};
/** Gives a setup sponges, 5° wide at the north edge where nothing else is said. */
const sponges = (setup: Setup, ...list: object[]) => {
  setup.basin.sponges = list.map((one) => ({
    edge: 'north' as const,
    widthDeg: 5,
    peakRatePerS: null,
    tapersWind: true,
    ...one,
  }));
};

describe('the setup schema', () => {
  it.each(PRESETS.map(({ id, setup }) => [id, setup] as const))(
    'accepts %s and gives it back unchanged',
    (_, setup) => {
      expect(setupSchema.parse(setup)).toEqual(setup);
      expect(setupSchema.parse(JSON.parse(JSON.stringify(setup)))).toEqual(setup);
    },
  );

  it('accepts every limit and refuses what lies beyond it', () => {
    const fields: [keyof typeof LIMITS, (setup: Setup, value: number) => void][] = [
      ['reducedGravity', (setup, value) => (setup.layer.reducedGravityMS2 = value)],
      ['restThickness', (setup, value) => (setup.layer.restThicknessM = value)],
      ['damping', (setup, value) => (setup.layer.dampingPerS = value)],
      ['temperatureStep', (setup, value) => (setup.layer.temperatureStepK = value)],
      ['rayleigh', (setup, value) => (setup.friction.rayleighPerS = value)],
      ['viscosity', (setup, value) => (setup.friction.viscosityM2S = value)],
      ['minimumThickness', (setup, value) => (setup.layer.minimumThicknessM = value)],
      ['stressFloor', (setup, value) => (setup.wind.stressFloorM = value)],
      ['seasonalStrength', (setup, value) => (setup.wind.seasonalStrength = value)],
      ['spacing', (setup, value) => (setup.numerics.spacingLatitudeDeg = value)],
      ['stepsPerDay', (setup, value) => (setup.numerics.stepsPerDay = value)],
      ['peakDay', (setup, value) => (setup.wind.components[2].season.annual.peakDay = value)],
      ['density', (setup, value) => (setup.constants.densityKgM3 = value)],
    ];
    for (const [name, write] of fields) {
      const { min, max, label } = LIMITS[name];
      const at = (value: number) => problems(wrong((setup: Setup) => write(setup, value)));
      expect([...at(min), ...at(max)]).toEqual([]);
      const step = Math.max(1e-6, (max - min) / 1000);
      expect(at(max + step)[0]).toContain(`${label} must be between`);
      expect(at(min - step)[0]).toContain(`${label} must be between`);
    }
  });

  // What is wrong, what arrived, what would be right; and where.
  it.each([
    [
      'NaN',
      (s) => (s.layer.restThicknessM = NaN),
      '/layer/restThicknessM Thickness at rest must be between 10 and 5000 m; no number arrived.',
    ],
    [
      'a text',
      (s) => (s.layer.restThicknessM = '200'),
      '/layer/restThicknessM Thickness at rest must be between 10 and 5000 m; "200" arrived.',
    ],
    [
      'an empty field',
      (s) => (s.layer.restThicknessM = null),
      '/layer/restThicknessM Thickness at rest must be between 10 and 5000 m; nothing arrived.',
    ],
    [
      'a missing field',
      (s) => delete s.layer.restThicknessM,
      '/layer/restThicknessM Thickness at rest must be between 10 and 5000 m; nothing arrived.',
    ],
    [
      'too little',
      (s) => (s.layer.restThicknessM = 5),
      '/layer/restThicknessM Thickness at rest must be between 10 and 5000 m; 5 arrived.',
    ],
    [
      'below zero',
      (s) => (s.friction.viscosityM2S = -1),
      '/friction/viscosityM2S Laplacian viscosity must be between 0 and 1\u202f000\u202f000 m²/s; −1 arrived.',
    ],
    [
      'infinity',
      (s) => (s.friction.viscosityM2S = Infinity),
      '/friction/viscosityM2S Laplacian viscosity must be between 0 and 1\u202f000\u202f000 m²/s; Infinity arrived.',
    ],
    [
      'odd steps',
      (s) => (s.numerics.stepsPerDay = 18),
      '/numerics/stepsPerDay Steps a day must be a multiple of 4; 18 arrived.',
    ],
    [
      'an unknown plane',
      (s) => (s.basin.geometry = 'sphere'),
      '/basin/geometry The geometry must be one of equatorial, midlatitude, fplane, spherical; "sphere" arrived.',
    ],
    [
      'an unknown wind',
      (s) => (s.wind.components[1].pattern.kind = 'gust'),
      '/wind/components/1/pattern/kind The kind of the wind pattern must be one of uniform, zonalBelt, gaussianPatch, linearShear; "gust" arrived.',
    ],
    [
      'an unknown start',
      (s) => (s.start = { kind: 'warm' }),
      '/start/kind The kind of the start must be one of rest, bump, step, mode, state; "warm" arrived.',
    ],
    [
      'a start without kind',
      (s) => (s.start = {}),
      '/start/kind The kind of the start must be one of rest, bump, step, mode, state; nothing arrived.',
    ],
    [
      'an unknown field',
      (s) => (s.friction.colour = 1),
      '/friction The part “friction” has no field “colour”; it has rayleighPerS, viscosityM2S, viscosityPatches, slip.',
    ],
    [
      'a missing part',
      (s) => delete s.friction,
      '/friction The part “friction” must be an object with rayleighPerS, viscosityM2S, viscosityPatches, slip; nothing arrived.',
    ],
    [
      'another version',
      (s) => (s.schemaVersion = 2),
      '/schemaVersion The version of the setup format must be 1; 2 arrived.',
    ],
    [
      'no truth value',
      (s) => (s.basin.zonallyPeriodic = 'yes'),
      '/basin/zonallyPeriodic Zonally periodic must be true or false; "yes" arrived.',
    ],
    [
      'a number for a name',
      (s) => (s.wind.components[0].name = 7),
      '/wind/components/0/name A name must be text; 7 arrived.',
    ],
    [
      'a long name',
      (s) => (s.wind.components[0].name = 'x'.repeat(61)),
      '/wind/components/0/name A name has at most 60 characters.',
    ],
    ['no list', (s) => (s.output.sections = 'N 10'), '/output/sections Sections must be a list; "N 10" arrived.'],
    [
      'too many',
      (s) =>
        (s.output.sections = Array.from({ length: 21 }, (_, k) => ({ name: `S${k}`, along: 'latitude', atDeg: 0 }))),
      '/output/sections At most 20 sections; 21 arrived.',
    ],
    [
      'a section without name',
      (s) => (s.output.sections[0].name = '  '),
      '/output/sections/0/name A section needs a name.',
    ],
    [
      'a name twice',
      (s) => (s.output.sections[1].name = 'N 10'),
      '/output/sections/1/name Another one is called “N 10” already; use a name of its own.',
    ],
    [
      'a section outside',
      (s) => (s.output.sections[0].atDeg = 40),
      '/output/sections/0/atDeg The section “N 10” must lie inside the basin, between −17.5 and 17.5°; 40° arrived.',
    ],
    [
      'a mooring outside',
      (s) => (s.output.moorings[0].longitudeDeg = -1),
      '/output/moorings/0/longitudeDeg The mooring “West” must lie inside the basin, between 0 and 60°; −1° arrived.',
    ],
    [
      'an interval off 6 hours',
      (s) => (s.output.frameIntervalDays = 0.3),
      '/output/frameIntervalDays Output interval must be a multiple of 0.25 d; 0.3 arrived.',
    ],
    [
      'an interval beyond the run',
      (s) => (s.length.days = 3),
      '/output/frameIntervalDays The interval must not be longer than the run (3 d); 5 d arrived.',
    ],
    [
      'edges the wrong way round',
      (s) => (s.basin.northDeg = -20),
      '/basin/northDeg The north edge must lie north of the south edge (−17.5° N); −20° N arrived.',
    ],
    [
      'too wide',
      (s) => (s.basin.westDeg = -360),
      '/basin/eastDeg The zonal extent must be between 0.5 and 360°; 420° arrived. The east edge lies east of the west edge.',
    ],
    [
      'a periodic slanting coast',
      (s) => (s.basin.zonallyPeriodic = true),
      '/basin/westernCoast/kind A zonally periodic basin has no western coast: choose a rectangular coast or a closed basin.',
    ],
    [
      'an island inside out',
      (s) => (s.basin.islands[0].eastDeg = 40),
      '/basin/islands/0/eastDeg The island’s east edge must lie east of its west edge (40.5° E); 40° E arrived.',
    ],
    [
      'a taper inside out',
      (s) => (s.wind.components[2].pattern.zeroBeyondDeg = 10),
      '/wind/components/2/pattern/zeroBeyondDeg The taper must end poleward of where it begins: “zero beyond” above “full within”.',
    ],
    [
      'a polygon of two points',
      (s) =>
        (s.basin.islands = [
          {
            kind: 'polygon',
            name: '',
            points: [
              [1, 2],
              [3, 4],
            ],
          },
        ]),
      '/basin/islands/0/points A polygon needs three points or more.',
    ],
    [
      'a point of one number',
      (s) => (s.basin.islands = [{ kind: 'polygon', name: '', points: [[1, 2], [3], [5, 6]] }]),
      '/basin/islands/0/points/1 A point is [longitude, latitude]; [3] arrived.',
    ],
    [
      'a step before the first',
      (s) =>
        (s.start = {
          kind: 'state',
          runId: '0f0e7a52-32a8-4f0f-9d39-7f6a8f1d1c55',
          fingerprint: 'a'.repeat(64),
          stateSha256: 'b'.repeat(64),
          startStep: -1,
          stepsPerDay: 16,
        }),
      '/start/startStep The step of the state must be 0 or more; −1 arrived.',
    ],
    [
      'a minimum thickness beyond half of H',
      (s) => nonlinear(s, { minimumThicknessM: 101 }),
      '/layer/minimumThicknessM The minimum thickness must be at most half the thickness at rest, 100 m; 101 m arrived.',
    ],
    [
      'entrainment below the minimum thickness',
      (s) => nonlinear(s, { entrainment: { onsetThicknessM: 19, timescaleDays: 10, detrainment: 'none' } }),
      '/layer/entrainment/onsetThicknessM Entrainment must begin between the minimum thickness and the thickness at rest, 20 and 200 m; 19 m arrived.',
    ],
    [
      'entrainment above H',
      (s) => nonlinear(s, { entrainment: { onsetThicknessM: 201, timescaleDays: 10, detrainment: 'none' } }),
      '/layer/entrainment/onsetThicknessM Entrainment must begin between the minimum thickness and the thickness at rest, 20 and 200 m; 201 m arrived.',
    ],
    [
      'fast entrainment',
      (s) => nonlinear(s, { entrainment: { onsetThicknessM: 60, timescaleDays: 0.05, detrainment: 'none' } }),
      '/layer/entrainment/timescaleDays Entrainment time must be between 0.1 and 1000 d; 0.05 arrived.',
    ],
    [
      'an unknown detrainment',
      (s) => nonlinear(s, { entrainment: { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'all' } }),
      '/layer/entrainment/detrainment The detrainment must be one of none, uniform; "all" arrived.',
    ],
    [
      'a stress floor above H',
      (s) => {
        nonlinear(s, {});
        s.wind.stressFloorM = 250;
      },
      '/wind/stressFloorM The stress floor must be at most the thickness at rest, 200 m; 250 m arrived.',
    ],
    [
      'a wide sponge',
      (s) => sponges(s, { widthDeg: 17.6 }),
      '/basin/sponges/0/widthDeg A sponge is at most half as wide as the basin, 17.5° here; 17.6° arrived.',
    ],
    [
      'a sponge without width',
      (s) => sponges(s, { widthDeg: 0 }),
      '/basin/sponges/0/widthDeg Sponge width must be between 0.005 and 180 °; 0 arrived.',
    ],
    [
      'a fierce sponge',
      (s) => sponges(s, { peakRatePerS: 0.1 }),
      '/basin/sponges/0/peakRatePerS Sponge rate must be between 0 and 0.01 1/s; 0.1 arrived.',
    ],
    [
      'two sponges at one edge',
      (s) => sponges(s, {}, { widthDeg: 3 }),
      '/basin/sponges/1/edge There is a sponge at the north edge already; an edge has one at most.',
    ],
    [
      'a sponge at an edge that a periodic basin does not have',
      (s) => {
        s.basin.westernCoast = { kind: 'rectangular' };
        s.basin.zonallyPeriodic = true;
        sponges(s, { edge: 'west' });
      },
      '/basin/sponges/0/edge A zonally periodic basin has no west edge: put the sponge at the south or north edge, or close the basin.',
    ],
    [
      'a coast that does not nest',
      (s) => (s.basin.coastSpacing = { longitudeDeg: 0.5, latitudeDeg: 0.3 }),
      '/basin/coastSpacing/latitudeDeg The spacing of the coast must be a whole multiple or a whole fraction of the grid spacing, 0.25°; 0.3° arrived.',
    ],
    [
      'viscosity that would fall',
      (s) =>
        (s.friction.viscosityPatches = [
          { name: '', addedM2S: -1, longitudeDeg: 5, latitudeDeg: 0, widthLongitudeDeg: 2, widthLatitudeDeg: 2 },
        ]),
      '/friction/viscosityPatches/0/addedM2S Added viscosity must be between 0 and 1\u202f000\u202f000 m²/s; −1 arrived.',
    ],
    [
      'a budget that is not yes or no',
      (s) => (s.output.momentumBudget = 1),
      '/output/momentumBudget Momentum budget must be true or false; 1 arrived.',
    ],
    // eslint-disable-next-line @typescript-eslint/no-explicit-any
  ] satisfies [string, (setup: any) => unknown, string][])('says what is wrong with %s', (_, change, message) => {
    // prettier-ignore
    expect(problems(wrong(change))).toEqual([message]);
  });

  it('leaves the fields of the nonlinear equations alone where the linear ones do not use them', () => {
    const thin = wrong((setup: Setup) => {
      setup.layer.restThicknessM = 30; // half of it is below the default of the minimum thickness
      setup.wind.stressFloorM = 100;
    });
    expect(problems(thin)).toEqual([]);
  });

  it('reads a setup that was exported before sponges and the nonlinear fields existed', () => {
    const old = wrong((setup: Setup) => {
      for (const [part, field] of [
        ['basin', 'sponges'],
        ['basin', 'coastSpacing'],
        ['layer', 'minimumThicknessM'],
        ['layer', 'entrainment'],
        ['wind', 'stressFloorM'],
        ['friction', 'viscosityPatches'],
        ['output', 'momentumBudget'],
        ['output', 'vorticityBudget'],
      ] as const)
        delete (setup[part] as unknown as Record<string, unknown>)[field];
    });
    expect(setupSchema.parse(old)).toEqual(corvaneSetup());
  });

  it.each([
    [{ longitudeDeg: 0.5, latitudeDeg: 0.125 }],
    [{ longitudeDeg: 0.25, latitudeDeg: 0.25 }],
    [{ longitudeDeg: 0.25 / 3, latitudeDeg: 0.75 }],
  ])('takes a coast on a grid of %o', (coastSpacing) => {
    expect(problems(wrong((setup: Setup) => (setup.basin.coastSpacing = coastSpacing)))).toEqual([]);
  });

  it('names every wrong field at once', () => {
    const found = problems(
      wrong((setup: Setup) => {
        setup.layer.restThicknessM = 1;
        setup.friction.rayleighPerS = 1;
        setup.basin.southDeg = -99;
      }),
    );
    expect(found.map((text) => text.split(' ')[0])).toEqual([
      '/basin/southDeg',
      '/layer/restThicknessM',
      '/friction/rayleighPerS',
    ]);
  });

  it('trims names', () => {
    const setup = corvaneSetup();
    setup.basin.name = '  Corvane Basin ';
    expect(setupSchema.parse(setup).basin.name).toBe('Corvane Basin');
  });
});
