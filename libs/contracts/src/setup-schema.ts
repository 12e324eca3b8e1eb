import * as z from 'zod';
import { LIMITS, type Setup } from '@halfdeep/ocean';
import { arrived, choice, fields, kindError, list, name, quantity, yesOrNo } from './setup-words';

export const constantsSchema = fields('The part “constants”', {
  earthRadiusM: quantity('earthRadius'),
  rotationRatePerS: quantity('rotationRate'),
  gravityMS2: quantity('gravity'),
  densityKgM3: quantity('density'),
  heatCapacityJM3K: quantity('heatCapacity'),
});

const coastSchema = z.discriminatedUnion(
  'kind',
  [
    fields('A rectangular coast', { kind: z.literal('rectangular') }),
    fields('A slanting coast', {
      kind: z.literal('slanting'),
      atSouthDeg: quantity('longitude'),
      atNorthDeg: quantity('longitude'),
    }),
  ],
  { error: kindError('the western coast', ['rectangular', 'slanting']) },
);

const islandSchema = z.discriminatedUnion(
  'kind',
  [
    fields('An island of kind box', {
      kind: z.literal('box'),
      name: name(),
      westDeg: quantity('longitude'),
      eastDeg: quantity('longitude'),
      southDeg: quantity('latitude'),
      northDeg: quantity('latitude'),
    }),
    fields('An island of kind polygon', {
      kind: z.literal('polygon'),
      name: name(),
      points: z
        .array(
          z.tuple([quantity('longitude'), quantity('latitude')], {
            error: (issue) => `A point is [longitude, latitude]; ${arrived(issue.input)} arrived.`,
          }),
          { error: (issue) => `The points must be a list; ${arrived(issue.input)} arrived.` },
        )
        .min(3, 'A polygon needs three points or more.')
        .max(500, 'A polygon has at most 500 points.'),
    }),
  ],
  { error: kindError('an island', ['box', 'polygon']) },
);

const spongeSchema = fields('A sponge', {
  edge: choice('The edge of a sponge', ['west', 'east', 'south', 'north']),
  widthDeg: quantity('spongeWidth'),
  peakRatePerS: quantity('spongeRate').nullable(),
  tapersWind: yesOrNo('Tapers the wind'),
});

export const basinSchema = fields('The part “basin”', {
  name: name(),
  geometry: choice('The geometry', ['equatorial', 'midlatitude', 'fplane', 'spherical']),
  westDeg: quantity('longitude'),
  eastDeg: quantity('longitude'),
  southDeg: quantity('latitude'),
  northDeg: quantity('latitude'),
  referenceLatitudeDeg: quantity('latitude').nullable(),
  f0PerS: quantity('coriolis').nullable(),
  betaPerMS: quantity('beta').nullable(),
  zonallyPeriodic: yesOrNo('Zonally periodic'),
  westernCoast: coastSchema,
  islands: list('Islands', islandSchema, LIMITS.islands.max),
  // Fields with a default came after the first setups were exported: those still read.
  sponges: list('Sponges', spongeSchema, 4).default([]),
  coastSpacing: fields('The grid of the coast', {
    longitudeDeg: quantity('spacing'),
    latitudeDeg: quantity('spacing'),
  })
    .nullable()
    .default(null),
}).superRefine((basin, context) => {
  const extent = basin.eastDeg - basin.westDeg;
  const { min, max } = LIMITS.zonalExtent;
  if (!(extent >= min && extent <= max))
    context.addIssue({
      code: 'custom',
      path: ['eastDeg'],
      message: `The zonal extent must be between ${min} and ${max}°; ${arrived(extent)}° arrived. The east edge lies east of the west edge.`,
    });
  if (!(basin.northDeg > basin.southDeg))
    context.addIssue({
      code: 'custom',
      path: ['northDeg'],
      message: `The north edge must lie north of the south edge (${arrived(basin.southDeg)}° N); ${arrived(basin.northDeg)}° N arrived.`,
    });
  if (basin.zonallyPeriodic && basin.westernCoast.kind === 'slanting')
    context.addIssue({
      code: 'custom',
      path: ['westernCoast', 'kind'],
      message: 'A zonally periodic basin has no western coast: choose a rectangular coast or a closed basin.',
    });
  basin.sponges.forEach(({ edge, widthDeg }, k) => {
    const zonal = edge === 'west' || edge === 'east';
    const extent = zonal ? basin.eastDeg - basin.westDeg : basin.northDeg - basin.southDeg;
    if (zonal && basin.zonallyPeriodic)
      context.addIssue({
        code: 'custom',
        path: ['sponges', k, 'edge'],
        message: `A zonally periodic basin has no ${edge} edge: put the sponge at the south or north edge, or close the basin.`,
      });
    if (basin.sponges.findIndex((other) => other.edge === edge) < k)
      context.addIssue({
        code: 'custom',
        path: ['sponges', k, 'edge'],
        message: `There is a sponge at the ${edge} edge already; an edge has one at most.`,
      });
    // An extent that is not positive has its own message.
    if (extent > 0 && widthDeg > extent / 2)
      context.addIssue({
        code: 'custom',
        path: ['sponges', k, 'widthDeg'],
        message: `A sponge is at most half as wide as the basin, ${arrived(extent / 2)}° here; ${arrived(widthDeg)}° arrived.`,
      });
  });
  basin.islands.forEach((island, k) => {
    if (island.kind !== 'box') return;
    if (!(island.eastDeg > island.westDeg))
      context.addIssue({
        code: 'custom',
        path: ['islands', k, 'eastDeg'],
        message: `The island’s east edge must lie east of its west edge (${arrived(island.westDeg)}° E); ${arrived(island.eastDeg)}° E arrived.`,
      });
    if (!(island.northDeg > island.southDeg))
      context.addIssue({
        code: 'custom',
        path: ['islands', k, 'northDeg'],
        message: `The island’s north edge must lie north of its south edge (${arrived(island.southDeg)}° N); ${arrived(island.northDeg)}° N arrived.`,
      });
  });
});

export const layerSchema = fields('The part “layer”', {
  reducedGravityMS2: quantity('reducedGravity'),
  restThicknessM: quantity('restThickness'),
  dampingPerS: quantity('damping'),
  temperatureStepK: quantity('temperatureStep'),
  minimumThicknessM: quantity('minimumThickness').default(LIMITS.minimumThickness.default),
  entrainment: fields('The entrainment', {
    onsetThicknessM: quantity('entrainmentOnset'),
    timescaleDays: quantity('entrainmentTime'),
    detrainment: choice('The detrainment', ['none', 'uniform']),
  })
    .nullable()
    .default(null),
});

const direction = choice('The direction', ['eastward', 'northward']);
const patternSchema = z.discriminatedUnion(
  'kind',
  [
    fields('A uniform wind', {
      kind: z.literal('uniform'),
      eastwardNM2: quantity('stress'),
      northwardNM2: quantity('stress'),
    }),
    fields('A zonal belt', {
      kind: z.literal('zonalBelt'),
      direction,
      amplitudeNM2: quantity('stress'),
      latitudeDeg: quantity('latitude'),
      widthDeg: quantity('windLength'),
    }),
    fields('A Gaussian patch', {
      kind: z.literal('gaussianPatch'),
      direction,
      amplitudeNM2: quantity('stress'),
      longitudeDeg: quantity('longitude'),
      latitudeDeg: quantity('latitude'),
      widthLongitudeDeg: quantity('windLength'),
      widthLatitudeDeg: quantity('windLength'),
    }),
    fields('A linear shear', {
      kind: z.literal('linearShear'),
      stressNM2: quantity('stress'),
      overDistanceKm: quantity('windDistance'),
      fullWithinDeg: quantity('latitude', { min: 0, max: 90 }),
      zeroBeyondDeg: quantity('latitude', { min: 0, max: 90 }),
    }).refine((shear) => shear.zeroBeyondDeg > shear.fullWithinDeg, {
      path: ['zeroBeyondDeg'],
      message: 'The taper must end poleward of where it begins: “zero beyond” above “full within”.',
    }),
  ],
  { error: kindError('the wind pattern', ['uniform', 'zonalBelt', 'gaussianPatch', 'linearShear']) },
);

const harmonicSchema = fields('A harmonic', { amplitude: quantity('seasonFactor'), peakDay: quantity('peakDay') });
export const seasonSchema = fields('A season', {
  mean: quantity('seasonFactor'),
  switchOnDays: quantity('switchOn'),
  annual: harmonicSchema,
  semiannual: harmonicSchema,
});

export const windSchema = fields('The part “wind”', {
  components: list(
    'Wind components',
    fields('A wind component', { name: name(), pattern: patternSchema, season: seasonSchema }),
    LIMITS.windComponents.max,
  ),
  seasonalStrength: quantity('seasonalStrength'),
  stressFloorM: quantity('stressFloor').default(LIMITS.stressFloor.default),
});

const sha256 = z
  .string({ error: (issue) => `A SHA-256 must be text; ${arrived(issue.input)} arrived.` })
  .regex(/^[0-9a-f]{64}$/, 'A SHA-256 has 64 hexadecimal digits.');
/** The last state of a finished run, to start from. */
export const startStateSchema = fields('A start from a state', {
  kind: z.literal('state'),
  runId: z.uuid('The run that the state comes from is named by its id.'),
  fingerprint: sha256,
  stateSha256: sha256,
  startStep: z
    .int({ error: (issue) => `The step of the state must be a whole number; ${arrived(issue.input)} arrived.` })
    .min(0, { error: (issue) => `The step of the state must be 0 or more; ${arrived(issue.input)} arrived.` }),
  stepsPerDay: quantity('stepsPerDay'),
});

export const startSchema = z.discriminatedUnion(
  'kind',
  [
    fields('A start from rest', { kind: z.literal('rest') }),
    fields('A start from a bump', {
      kind: z.literal('bump'),
      amplitudeM: quantity('startAmplitude'),
      longitudeDeg: quantity('longitude'),
      latitudeDeg: quantity('latitude'),
      widthLongitudeDeg: quantity('startLength'),
      widthLatitudeDeg: quantity('startLength'),
    }),
    fields('A start from a step', {
      kind: z.literal('step'),
      amplitudeM: quantity('startAmplitude'),
      latitudeDeg: quantity('latitude'),
    }),
    fields('A start from a wave', {
      kind: z.literal('mode'),
      mode: choice('The wave', [
        'kelvin',
        'rossby1',
        'rossby2',
        'mixedWest',
        'mixedEast',
        'gravity1West',
        'gravity1East',
      ]),
      amplitudeM: quantity('startAmplitude'),
      wavelengthDeg: quantity('startLength'),
      crestLongitudeDeg: quantity('longitude'),
    }),
    startStateSchema,
  ],
  { error: kindError('the start', ['rest', 'bump', 'step', 'mode', 'state']) },
);

export const frictionSchema = fields('The part “friction”', {
  rayleighPerS: quantity('rayleigh'),
  viscosityM2S: quantity('viscosity'),
  viscosityPatches: list(
    'Places of other viscosity',
    fields('A place of other viscosity', {
      name: name(),
      addedM2S: quantity('addedViscosity'),
      longitudeDeg: quantity('longitude'),
      latitudeDeg: quantity('latitude'),
      widthLongitudeDeg: quantity('windLength'),
      widthLatitudeDeg: quantity('windLength'),
    }),
    LIMITS.viscosityPatches.max,
  ).default([]),
  slip: choice('The slip', ['free', 'none']),
});

export const numericsSchema = fields('The part “numerics”', {
  equations: choice('The equations', ['linear', 'nonlinear']),
  spacingLongitudeDeg: quantity('spacing'),
  spacingLatitudeDeg: quantity('spacing'),
  stepsPerDay: quantity('stepsPerDay'),
});

export const outputSchema = fields('The part “output”', {
  sections: list(
    'Sections',
    fields('A section', {
      name: name('A section needs a name.'),
      along: choice('The direction of a section', ['latitude', 'longitude']),
      atDeg: quantity('longitude'),
    }),
    LIMITS.sections.max,
  ),
  moorings: list(
    'Moorings',
    fields('A mooring', {
      name: name('A mooring needs a name.'),
      longitudeDeg: quantity('longitude'),
      latitudeDeg: quantity('latitude'),
    }),
    LIMITS.moorings.max,
  ),
  frameIntervalDays: quantity('outputInterval'),
  sectionIntervalDays: quantity('outputInterval'),
  mooringIntervalDays: quantity('outputInterval'),
  momentumBudget: yesOrNo('Momentum budget').default(false),
  vorticityBudget: yesOrNo('Vorticity budget').default(false),
});

/** A setup as it crosses the wire. What single fields cannot say (stability, resolution, size) is preflight's. */
export const setupSchema = fields('A setup', {
  schemaVersion: z.literal(1, {
    error: (issue) => `The version of the setup format must be 1; ${arrived(issue.input)} arrived.`,
  }),
  constants: constantsSchema,
  basin: basinSchema,
  layer: layerSchema,
  wind: windSchema,
  start: startSchema,
  friction: frictionSchema,
  numerics: numericsSchema,
  length: fields('The part “length”', { days: quantity('lengthDays') }),
  output: outputSchema,
})
  .superRefine((setup, context) => {
    const { basin, output } = setup;
    refuseThicknesses(setup, context);
    refuseCoastSpacing(setup, context);
    const within = (what: string, path: PropertyKey[], degrees: number, edges: [number, number]) => {
      // Edges the wrong way round have their own message; every place would be outside of them.
      if (!(edges[1] > edges[0]) || (degrees >= edges[0] && degrees <= edges[1])) return;
      const [low, high] = edges.map(arrived);
      const message = `${what} must lie inside the basin, between ${low} and ${high}°; ${arrived(degrees)}° arrived.`;
      context.addIssue({ code: 'custom', path, message });
    };
    const longitudes: [number, number] = [basin.westDeg, basin.eastDeg];
    const latitudes: [number, number] = [basin.southDeg, basin.northDeg];
    output.sections.forEach(({ name, along, atDeg }, k) =>
      within(
        `The section “${name}”`,
        ['output', 'sections', k, 'atDeg'],
        atDeg,
        along === 'latitude' ? latitudes : longitudes,
      ),
    );
    output.moorings.forEach(({ name, longitudeDeg, latitudeDeg }, k) => {
      within(`The mooring “${name}”`, ['output', 'moorings', k, 'longitudeDeg'], longitudeDeg, longitudes);
      within(`The mooring “${name}”`, ['output', 'moorings', k, 'latitudeDeg'], latitudeDeg, latitudes);
    });
    for (const key of ['frameIntervalDays', 'sectionIntervalDays', 'mooringIntervalDays'] as const)
      if (output[key] > setup.length.days)
        context.addIssue({
          code: 'custom',
          path: ['output', key],
          message: `The interval must not be longer than the run (${setup.length.days} d); ${output[key]} d arrived.`,
        });
    for (const stream of ['sections', 'moorings'] as const) {
      const names = output[stream].map((item) => item.name);
      names.forEach((text, k) => {
        if (names.indexOf(text) !== k)
          context.addIssue({
            code: 'custom',
            path: ['output', stream, k, 'name'],
            message: `Another one is called “${text}” already; use a name of its own.`,
          });
      });
    }
  })
  .meta({ id: 'Setup' });

/** Bounds of the nonlinear equations that hang on H or on each other; the linear ones do not use these fields. */
function refuseThicknesses({ layer, wind, numerics }: SetupParts, context: z.RefinementCtx): void {
  if (numerics.equations !== 'nonlinear') return;
  const { restThicknessM: H, minimumThicknessM: hmin, entrainment } = layer;
  const refuse = (path: PropertyKey[], message: string) => context.addIssue({ code: 'custom', path, message });
  if (hmin > H / 2)
    refuse(
      ['layer', 'minimumThicknessM'],
      `The minimum thickness must be at most half the thickness at rest, ${arrived(H / 2)} m; ${arrived(hmin)} m arrived.`,
    );
  if (entrainment && !(entrainment.onsetThicknessM >= hmin && entrainment.onsetThicknessM <= H))
    refuse(
      ['layer', 'entrainment', 'onsetThicknessM'],
      `Entrainment must begin between the minimum thickness and the thickness at rest, ${arrived(hmin)} and ${arrived(H)} m; ${arrived(entrainment.onsetThicknessM)} m arrived.`,
    );
  if (wind.stressFloorM > H)
    refuse(
      ['wind', 'stressFloorM'],
      `The stress floor must be at most the thickness at rest, ${arrived(H)} m; ${arrived(wind.stressFloorM)} m arrived.`,
    );
}

/** How far a quotient of two spacings may be off a whole number: they are typed or divided decimals. */
const WHOLE_TOLERANCE = 1e-6;

/** The grid of the coast nests in that of the run, or the other way round, along each axis. */
function refuseCoastSpacing({ basin, numerics }: SetupParts, context: z.RefinementCtx): void {
  if (basin.coastSpacing === null) return;
  const axes = [
    ['longitudeDeg', basin.coastSpacing.longitudeDeg, numerics.spacingLongitudeDeg],
    ['latitudeDeg', basin.coastSpacing.latitudeDeg, numerics.spacingLatitudeDeg],
  ] as const;
  for (const [field, coast, own] of axes) {
    const factor = Math.max(coast / own, own / coast);
    if (Math.abs(factor - Math.round(factor)) > WHOLE_TOLERANCE * factor)
      context.addIssue({
        code: 'custom',
        path: ['basin', 'coastSpacing', field],
        message: `The spacing of the coast must be a whole multiple or a whole fraction of the grid spacing, ${arrived(own)}°; ${arrived(coast)}° arrived.`,
      });
  }
}

interface SetupParts {
  basin: z.infer<typeof basinSchema>;
  layer: z.infer<typeof layerSchema>;
  wind: z.infer<typeof windSchema>;
  numerics: z.infer<typeof numericsSchema>;
}

// The schema and the type of libs/ocean must say the same, both ways.
type Same<A, B> = [A] extends [B] ? ([B] extends [A] ? true : never) : never;
export const setupSchemaMatchesType: Same<z.infer<typeof setupSchema>, Setup> = true;
