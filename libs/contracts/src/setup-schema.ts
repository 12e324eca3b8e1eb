import * as z from 'zod';
import { LIMITS, type LimitName, type Setup } from '@halfdeep/ocean';

/** An empty field arrives as null. */
function arrived(input: unknown): string {
  if (input === undefined || input === null) return 'nothing';
  return typeof input === 'number' ? String(input) : JSON.stringify(input);
}

/** A number inside a hard limit; the message says what is wrong, what arrived and what would be right. */
function quantity(name: LimitName, range: { min?: number; max?: number } = {}) {
  const limit: (typeof LIMITS)[LimitName] & { multipleOf?: number } = LIMITS[name];
  const min = range.min ?? limit.min;
  const max = range.max ?? limit.max;
  const unit = limit.unit ? ` ${limit.unit}` : '';
  const rule = `${limit.label} must be between ${min} and ${max}${unit}`;
  const base = z
    .number({
      error: (issue) => `${rule}; ${arrived(issue.input)} arrived.`,
    })
    .min(min, { error: (issue) => `${rule}; ${String(issue.input)} arrived.` })
    .max(max, { error: (issue) => `${rule}; ${String(issue.input)} arrived.` });
  const step = limit.multipleOf;
  if (step === undefined) return base;
  return base.multipleOf(step, {
    error: (issue) => `${limit.label} must be a multiple of ${step}${unit}; ${String(issue.input)} arrived.`,
  });
}

const name = z.string().trim().max(60, 'A name has at most 60 characters.');

export const constantsSchema = z.strictObject({
  earthRadiusM: quantity('earthRadius'),
  rotationRatePerS: quantity('rotationRate'),
  gravityMS2: quantity('gravity'),
  densityKgM3: quantity('density'),
  heatCapacityJM3K: quantity('heatCapacity'),
});

const coastSchema = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('rectangular') }),
  z.strictObject({ kind: z.literal('slanting'), atSouthDeg: quantity('longitude'), atNorthDeg: quantity('longitude') }),
]);

const islandSchema = z.discriminatedUnion('kind', [
  z.strictObject({
    kind: z.literal('box'),
    name,
    westDeg: quantity('longitude'),
    eastDeg: quantity('longitude'),
    southDeg: quantity('latitude'),
    northDeg: quantity('latitude'),
  }),
  z.strictObject({
    kind: z.literal('polygon'),
    name,
    points: z
      .array(z.tuple([quantity('longitude'), quantity('latitude')]))
      .min(3, 'A polygon needs three points or more.')
      .max(500, 'A polygon has at most 500 points.'),
  }),
]);

export const basinSchema = z
  .strictObject({
    name,
    geometry: z.enum(['equatorial', 'midlatitude', 'fplane']),
    westDeg: quantity('longitude'),
    eastDeg: quantity('longitude'),
    southDeg: quantity('latitude'),
    northDeg: quantity('latitude'),
    referenceLatitudeDeg: quantity('latitude').nullable(),
    f0PerS: quantity('coriolis').nullable(),
    betaPerMS: quantity('beta').nullable(),
    zonallyPeriodic: z.boolean(),
    westernCoast: coastSchema,
    islands: z.array(islandSchema).max(LIMITS.islands.max, `At most ${LIMITS.islands.max} islands.`),
  })
  .superRefine((basin, context) => {
    const extent = basin.eastDeg - basin.westDeg;
    const { min, max } = LIMITS.zonalExtent;
    if (!(extent >= min && extent <= max))
      context.addIssue({
        code: 'custom',
        path: ['eastDeg'],
        message: `The zonal extent must be between ${min} and ${max}°; ${extent}° arrived. The east edge lies east of the west edge.`,
      });
    if (!(basin.northDeg > basin.southDeg))
      context.addIssue({
        code: 'custom',
        path: ['northDeg'],
        message: 'The north edge must lie north of the south edge.',
      });
    if (basin.zonallyPeriodic && basin.westernCoast.kind === 'slanting')
      context.addIssue({
        code: 'custom',
        path: ['westernCoast', 'kind'],
        message: 'A zonally periodic basin has no western coast: choose a rectangular coast or a closed basin.',
      });
    basin.islands.forEach((island, k) => {
      if (island.kind !== 'box') return;
      if (!(island.eastDeg > island.westDeg))
        context.addIssue({
          code: 'custom',
          path: ['islands', k, 'eastDeg'],
          message: 'The island’s east edge must lie east of its west edge.',
        });
      if (!(island.northDeg > island.southDeg))
        context.addIssue({
          code: 'custom',
          path: ['islands', k, 'northDeg'],
          message: 'The island’s north edge must lie north of its south edge.',
        });
    });
  });

export const layerSchema = z.strictObject({
  reducedGravityMS2: quantity('reducedGravity'),
  restThicknessM: quantity('restThickness'),
  dampingPerS: quantity('damping'),
  temperatureStepK: quantity('temperatureStep'),
});

const direction = z.enum(['eastward', 'northward']);
const patternSchema = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('uniform'), eastwardNM2: quantity('stress'), northwardNM2: quantity('stress') }),
  z.strictObject({
    kind: z.literal('zonalBelt'),
    direction,
    amplitudeNM2: quantity('stress'),
    latitudeDeg: quantity('latitude'),
    widthDeg: quantity('windLength'),
  }),
  z.strictObject({
    kind: z.literal('gaussianPatch'),
    direction,
    amplitudeNM2: quantity('stress'),
    longitudeDeg: quantity('longitude'),
    latitudeDeg: quantity('latitude'),
    widthLongitudeDeg: quantity('windLength'),
    widthLatitudeDeg: quantity('windLength'),
  }),
  z
    .strictObject({
      kind: z.literal('linearShear'),
      stressNM2: quantity('stress'),
      overDistanceKm: quantity('windDistance'),
      fullWithinDeg: quantity('latitude', { min: 0, max: 90 }),
      zeroBeyondDeg: quantity('latitude', { min: 0, max: 90 }),
    })
    .refine((shear) => shear.zeroBeyondDeg > shear.fullWithinDeg, {
      path: ['zeroBeyondDeg'],
      message: 'The taper must end poleward of where it begins.',
    }),
]);

const harmonicSchema = z.strictObject({ amplitude: quantity('seasonFactor'), peakDay: quantity('peakDay') });
export const seasonSchema = z.strictObject({
  mean: quantity('seasonFactor'),
  switchOnDays: quantity('switchOn'),
  annual: harmonicSchema,
  semiannual: harmonicSchema,
});

export const windSchema = z.strictObject({
  components: z
    .array(z.strictObject({ name, pattern: patternSchema, season: seasonSchema }))
    .max(LIMITS.windComponents.max, `At most ${LIMITS.windComponents.max} wind components.`),
  seasonalStrength: quantity('seasonalStrength'),
});

const sha256 = z.string().regex(/^[0-9a-f]{64}$/, 'A SHA-256 has 64 hexadecimal digits.');
/** The last state of a finished run, to start from. */
export const startStateSchema = z.strictObject({
  kind: z.literal('state'),
  runId: z.uuid('The run that the state comes from is named by its id.'),
  fingerprint: sha256,
  stateSha256: sha256,
  startStep: z.number().int().min(0),
  stepsPerDay: quantity('stepsPerDay'),
});

export const startSchema = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('rest') }),
  z.strictObject({
    kind: z.literal('bump'),
    amplitudeM: quantity('startAmplitude'),
    longitudeDeg: quantity('longitude'),
    latitudeDeg: quantity('latitude'),
    widthLongitudeDeg: quantity('startLength'),
    widthLatitudeDeg: quantity('startLength'),
  }),
  z.strictObject({
    kind: z.literal('step'),
    amplitudeM: quantity('startAmplitude'),
    latitudeDeg: quantity('latitude'),
  }),
  z.strictObject({
    kind: z.literal('mode'),
    mode: z.enum(['kelvin', 'rossby1', 'rossby2', 'mixedWest', 'mixedEast', 'gravity1West', 'gravity1East']),
    amplitudeM: quantity('startAmplitude'),
    wavelengthDeg: quantity('startLength'),
    crestLongitudeDeg: quantity('longitude'),
  }),
  startStateSchema,
]);

export const frictionSchema = z.strictObject({
  rayleighPerS: quantity('rayleigh'),
  viscosityM2S: quantity('viscosity'),
  slip: z.enum(['free', 'none']),
});

export const numericsSchema = z.strictObject({
  equations: z.literal('linear'),
  spacingLongitudeDeg: quantity('spacing'),
  spacingLatitudeDeg: quantity('spacing'),
  stepsPerDay: quantity('stepsPerDay'),
});

export const outputSchema = z.strictObject({
  sections: z
    .array(
      z.strictObject({
        name: name.min(1, 'A section needs a name.'),
        along: z.enum(['latitude', 'longitude']),
        atDeg: quantity('longitude'),
      }),
    )
    .max(LIMITS.sections.max, `At most ${LIMITS.sections.max} sections.`),
  moorings: z
    .array(
      z.strictObject({
        name: name.min(1, 'A mooring needs a name.'),
        longitudeDeg: quantity('longitude'),
        latitudeDeg: quantity('latitude'),
      }),
    )
    .max(LIMITS.moorings.max, `At most ${LIMITS.moorings.max} moorings.`),
  frameIntervalDays: quantity('outputInterval'),
  sectionIntervalDays: quantity('outputInterval'),
  mooringIntervalDays: quantity('outputInterval'),
});

/** A setup as it crosses the wire. What single fields cannot say (stability, resolution, size) is preflight's. */
export const setupSchema = z
  .strictObject({
    schemaVersion: z.literal(1),
    constants: constantsSchema,
    basin: basinSchema,
    layer: layerSchema,
    wind: windSchema,
    start: startSchema,
    friction: frictionSchema,
    numerics: numericsSchema,
    length: z.strictObject({ days: quantity('lengthDays') }),
    output: outputSchema,
  })
  .superRefine((setup, context) => {
    const { basin, output } = setup;
    const longitude = (degrees: number) => degrees >= basin.westDeg && degrees <= basin.eastDeg;
    const latitude = (degrees: number) => degrees >= basin.southDeg && degrees <= basin.northDeg;
    const inside = 'must lie inside the basin';
    output.sections.forEach((section, k) => {
      const ok = section.along === 'latitude' ? latitude(section.atDeg) : longitude(section.atDeg);
      if (!ok)
        context.addIssue({
          code: 'custom',
          path: ['output', 'sections', k, 'atDeg'],
          message: `The section “${section.name}” ${inside}.`,
        });
    });
    output.moorings.forEach((mooring, k) => {
      if (!longitude(mooring.longitudeDeg))
        context.addIssue({
          code: 'custom',
          path: ['output', 'moorings', k, 'longitudeDeg'],
          message: `The mooring “${mooring.name}” ${inside}.`,
        });
      if (!latitude(mooring.latitudeDeg))
        context.addIssue({
          code: 'custom',
          path: ['output', 'moorings', k, 'latitudeDeg'],
          message: `The mooring “${mooring.name}” ${inside}.`,
        });
    });
    for (const key of ['frameIntervalDays', 'sectionIntervalDays', 'mooringIntervalDays'] as const)
      if (output[key] > setup.length.days)
        context.addIssue({
          code: 'custom',
          path: ['output', key],
          message: `The interval must not be longer than the run (${setup.length.days} d); ${output[key]} d arrived.`,
        });
    for (const list of ['sections', 'moorings'] as const) {
      const names = output[list].map((item) => item.name);
      names.forEach((text, k) => {
        if (names.indexOf(text) !== k)
          context.addIssue({
            code: 'custom',
            path: ['output', list, k, 'name'],
            message: `Another one is called “${text}” already.`,
          });
      });
    }
  })
  .meta({ id: 'Setup' });

// The schema and the type of libs/ocean must say the same, both ways.
type Same<A, B> = [A] extends [B] ? ([B] extends [A] ? true : never) : never;
export const setupSchemaMatchesType: Same<z.infer<typeof setupSchema>, Setup> = true;
