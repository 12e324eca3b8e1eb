import fc from 'fast-check';
import { LIMITS, type LimitName, type Setup, type Start, type WindComponent } from '@halfdeep/ocean';
import { setupSchema } from '../setup-schema';

/** A value inside a hard limit: its ends, its default, and anything between; whole multiples where asked. */
function quantity(name: LimitName, range: { min?: number; max?: number } = {}): fc.Arbitrary<number> {
  const limit: { min: number; max: number; default: number; multipleOf?: number } = LIMITS[name];
  const min = range.min ?? limit.min;
  const max = range.max ?? limit.max;
  const step = limit.multipleOf;
  if (step !== undefined)
    return fc.integer({ min: Math.ceil(min / step), max: Math.floor(max / step) }).map((count) => count * step);
  const inside = Math.min(Math.max(limit.default, min), max);
  const spread = fc.double({ min: 0, max: 1, noNaN: true }).map((share) => Math.min(max, min + share * (max - min)));
  // Over many decades as often as evenly: drags and viscosities are chosen by their power of ten.
  const decades = fc
    .double({ min: -8, max: 0, noNaN: true })
    .map((power) => Math.min(max, Math.max(min, 10 ** power * max)));
  return fc.oneof(fc.constant(inside), spread, min >= 0 ? decades : spread, fc.constantFrom(min, max));
}

const name = fc.constantFrom('', 'North', 'South', 'Belt', 'Shear', 'A name with “quotes”');
const season = fc.record({
  mean: quantity('seasonFactor'),
  switchOnDays: quantity('switchOn'),
  annual: fc.record({ amplitude: quantity('seasonFactor'), peakDay: quantity('peakDay') }),
  semiannual: fc.record({ amplitude: quantity('seasonFactor'), peakDay: quantity('peakDay') }),
});
const direction = fc.constantFrom('eastward' as const, 'northward' as const);
const pattern: fc.Arbitrary<WindComponent['pattern']> = fc.oneof(
  fc.record({
    kind: fc.constant('uniform' as const),
    eastwardNM2: quantity('stress'),
    northwardNM2: quantity('stress'),
  }),
  fc.record({
    kind: fc.constant('zonalBelt' as const),
    direction,
    amplitudeNM2: quantity('stress'),
    latitudeDeg: quantity('latitude'),
    widthDeg: quantity('windLength'),
  }),
  fc.record({
    kind: fc.constant('gaussianPatch' as const),
    direction,
    amplitudeNM2: quantity('stress'),
    longitudeDeg: quantity('longitude'),
    latitudeDeg: quantity('latitude'),
    widthLongitudeDeg: quantity('windLength'),
    widthLatitudeDeg: quantity('windLength'),
  }),
  fc.record({
    kind: fc.constant('linearShear' as const),
    stressNM2: quantity('stress'),
    overDistanceKm: quantity('windDistance'),
    fullWithinDeg: fc.integer({ min: 0, max: 40 }),
    zeroBeyondDeg: fc.integer({ min: 41, max: 90 }),
  }),
);
const hash = fc.constantFrom('0'.repeat(64), 'f'.repeat(64));
const start: fc.Arbitrary<Start> = fc.oneof(
  fc.constant({ kind: 'rest' as const }),
  fc.record({
    kind: fc.constant('bump' as const),
    amplitudeM: quantity('startAmplitude'),
    longitudeDeg: quantity('longitude'),
    latitudeDeg: quantity('latitude'),
    widthLongitudeDeg: quantity('startLength'),
    widthLatitudeDeg: quantity('startLength'),
  }),
  fc.record({
    kind: fc.constant('step' as const),
    amplitudeM: quantity('startAmplitude'),
    latitudeDeg: quantity('latitude'),
  }),
  fc.record({
    kind: fc.constant('mode' as const),
    mode: fc.constantFrom('kelvin' as const, 'rossby1' as const, 'mixedWest' as const, 'gravity1East' as const),
    amplitudeM: quantity('startAmplitude'),
    wavelengthDeg: quantity('startLength'),
    crestLongitudeDeg: quantity('longitude'),
  }),
  fc.record({
    kind: fc.constant('state' as const),
    runId: fc.uuid({ version: 4 }),
    fingerprint: hash,
    stateSha256: hash,
    startStep: fc.nat(100_000),
    stepsPerDay: quantity('stepsPerDay'),
  }),
);

/** A share 0…1 of the way between two edges. */
const share = fc.double({ min: 0, max: 1, noNaN: true });
const between = (low: number, high: number, part: number) => Math.min(high, low + part * (high - low));

const basin = fc
  .record({
    name: fc.constantFrom('', 'Sea'),
    geometry: fc.constantFrom('equatorial' as const, 'midlatitude' as const, 'fplane' as const, 'spherical' as const),
    westDeg: fc.integer({ min: -100, max: 100 }),
    width: fc.oneof(fc.integer({ min: 1, max: 250 }), fc.double({ min: 0.5, max: 5, noNaN: true })),
    southDeg: fc.oneof(fc.integer({ min: -80, max: 79 }), fc.constantFrom(-17.5, -15, 0)),
    height: fc.oneof(fc.integer({ min: 1, max: 159 }), fc.double({ min: 0.1, max: 5, noNaN: true })),
    referenceLatitudeDeg: fc.option(quantity('latitude')),
    f0PerS: fc.option(quantity('coriolis')),
    betaPerMS: fc.option(quantity('beta')),
    zonallyPeriodic: fc.boolean(),
    coast: fc.option(fc.tuple(fc.integer({ min: -110, max: 110 }), fc.integer({ min: -110, max: 110 }))),
    islands: fc.array(
      fc.oneof(
        fc.tuple(name, share, share, share, share).map(([text, x, y, w, h]) => ({ kind: 'box' as const, text, x, y, w, h })), // prettier-ignore
        fc
          .tuple(name, fc.array(fc.tuple(share, share), { minLength: 3, maxLength: 6 }))
          .map(([text, ring]) => ({ kind: 'polygon' as const, text, ring })),
      ),
      { maxLength: 3 },
    ),
    sponges: fc.uniqueArray(
      fc.record({
        edge: fc.constantFrom('west' as const, 'east' as const, 'south' as const, 'north' as const),
        part: share,
        peakRatePerS: fc.option(quantity('spongeRate')),
        tapersWind: fc.boolean(),
      }),
      { maxLength: 4, selector: ({ edge }) => edge },
    ),
  })
  .map(({ width, height, coast, islands, sponges, ...rest }): Setup['basin'] => {
    const eastDeg = rest.westDeg + width;
    const northDeg = Math.min(80, rest.southDeg + height);
    const longitude = (part: number) => between(rest.westDeg, eastDeg, part);
    const latitude = (part: number) => between(rest.southDeg, northDeg, part);
    return {
      ...rest,
      eastDeg,
      northDeg,
      westernCoast:
        coast && !rest.zonallyPeriodic
          ? { kind: 'slanting', atSouthDeg: coast[0], atNorthDeg: coast[1] }
          : { kind: 'rectangular' },
      islands: islands.map((island) =>
        island.kind === 'box'
          ? {
              kind: 'box',
              name: island.text,
              westDeg: longitude(0.8 * island.x),
              eastDeg: longitude(0.8 * island.x + 0.01 + 0.19 * island.w),
              southDeg: latitude(0.8 * island.y),
              northDeg: latitude(0.8 * island.y + 0.01 + 0.19 * island.h),
            }
          : {
              kind: 'polygon',
              name: island.text,
              points: island.ring.map(([x, y]): [number, number] => [longitude(x), latitude(y)]),
            },
      ),
      sponges: sponges
        .map(({ part, ...sponge }) => {
          const zonal = sponge.edge === 'west' || sponge.edge === 'east';
          const half = (zonal ? eastDeg - rest.westDeg : northDeg - rest.southDeg) / 2;
          return { ...sponge, zonal, widthDeg: between(LIMITS.spongeWidth.min, half, part) };
        })
        .filter(({ zonal }) => !(zonal && rest.zonallyPeriodic))
        .map(({ edge, widthDeg, peakRatePerS, tapersWind }) => ({ edge, widthDeg, peakRatePerS, tapersWind })),
      coastSpacing: null,
    };
  });

/**
 * Any setup that the schema accepts: every field over its whole hard range, sane and insane together, with at most
 * `cells` cells across and along where that is given.
 */
export function anySetup(cells?: number): fc.Arbitrary<Setup> {
  return fc
    .record({
      constants: fc.record({
        earthRadiusM: fc.oneof(fc.constant(6.371e6), quantity('earthRadius')),
        rotationRatePerS: fc.oneof(fc.constant(7.2921e-5), quantity('rotationRate')),
        gravityMS2: quantity('gravity'),
        densityKgM3: quantity('density'),
        heatCapacityJM3K: quantity('heatCapacity'),
      }),
      basin,
      layer: fc.record({
        reducedGravityMS2: quantity('reducedGravity'),
        restThicknessM: quantity('restThickness'),
        dampingPerS: quantity('damping'),
        temperatureStepK: quantity('temperatureStep'),
        minimumThicknessM: quantity('minimumThickness'),
        entrainment: fc.option(
          fc.record({
            onsetThicknessM: quantity('entrainmentOnset'),
            timescaleDays: quantity('entrainmentTime'),
            detrainment: fc.constantFrom('none' as const, 'uniform' as const),
          }),
        ),
      }),
      wind: fc.record({
        components: fc.array(fc.record({ name, pattern, season }), { maxLength: 3 }),
        seasonalStrength: quantity('seasonalStrength'),
        stressFloorM: quantity('stressFloor'),
      }),
      start,
      friction: fc.record({
        rayleighPerS: quantity('rayleigh'),
        viscosityM2S: quantity('viscosity'),
        viscosityPatches: fc.array(
          fc.record({
            name,
            addedM2S: quantity('addedViscosity'),
            longitudeDeg: quantity('longitude'),
            latitudeDeg: quantity('latitude'),
            widthLongitudeDeg: quantity('windLength'),
            widthLatitudeDeg: quantity('windLength'),
          }),
          { maxLength: 3 },
        ),
        slip: fc.constantFrom('free' as const, 'none' as const),
      }),
      equations: fc.constantFrom('linear' as const, 'nonlinear' as const),
      spacing: fc.tuple(quantity('spacing'), quantity('spacing')),
      coastFactors: fc.option(fc.tuple(fc.constantFrom(1, 2, 3, 1 / 2, 1 / 3), fc.constantFrom(1, 2, 3, 1 / 2, 1 / 3))),
      budgets: fc.tuple(fc.boolean(), fc.boolean()),
      stepsPerDay: fc.oneof(fc.constantFrom(16, 24, 48, 96), quantity('stepsPerDay')),
      days: fc.oneof(fc.constantFrom(365, 2555), quantity('lengthDays')),
      intervals: fc.tuple(share, share, share),
      sections: fc.array(fc.tuple(fc.constantFrom('latitude' as const, 'longitude' as const), share), { maxLength: 3 }),
      moorings: fc.array(fc.tuple(share, share), { maxLength: 3 }),
    })
    .map(({ equations, spacing, coastFactors, budgets, stepsPerDay, days, ...given }): Setup => {
      const { intervals, sections, moorings, ...parts } = given;
      const { westDeg, eastDeg, southDeg, northDeg } = parts.basin;
      const coarse = (wanted: number, extent: number) =>
        cells === undefined ? wanted : Math.min(LIMITS.spacing.max, Math.max(wanted, extent / cells));
      const interval = (part: number) => Math.max(0.25, Math.floor(part * Math.min(days, 30) * 4) / 4);
      const spacingLongitudeDeg = coarse(spacing[0], eastDeg - westDeg);
      const spacingLatitudeDeg = coarse(spacing[1], northDeg - southDeg);
      const coastSpacing = coastFactors && {
        longitudeDeg: spacingLongitudeDeg * coastFactors[0],
        latitudeDeg: spacingLatitudeDeg * coastFactors[1],
      };
      const ofCoast = Object.values(coastSpacing ?? {});
      const nests = ofCoast.every((degrees) => degrees >= LIMITS.spacing.min && degrees <= LIMITS.spacing.max);
      const { layer, wind, basin } = parts;
      const { restThicknessM } = layer;
      // Bounds that hang on H hold for nonlinear setups; the others keep what no one reads.
      const minimumThicknessM = Math.min(layer.minimumThicknessM, restThicknessM / 2);
      const bounded = equations === 'nonlinear' && {
        layer: {
          ...layer,
          minimumThicknessM,
          entrainment: layer.entrainment && {
            ...layer.entrainment,
            onsetThicknessM: Math.min(restThicknessM, Math.max(minimumThicknessM, layer.entrainment.onsetThicknessM)),
          },
        },
        wind: { ...wind, stressFloorM: Math.min(wind.stressFloorM, restThicknessM) },
      };
      return {
        schemaVersion: 1,
        ...parts,
        ...bounded,
        basin: { ...basin, coastSpacing: nests ? coastSpacing : null },
        numerics: { equations, spacingLongitudeDeg, spacingLatitudeDeg, stepsPerDay },
        length: { days },
        output: {
          sections: sections.map(([along, part], k) => ({
            name: `Section ${k}`,
            along,
            atDeg: along === 'latitude' ? between(southDeg, northDeg, part) : between(westDeg, eastDeg, part),
          })),
          moorings: moorings.map(([x, y], k) => ({
            name: `Mooring ${k}`,
            longitudeDeg: between(westDeg, eastDeg, x),
            latitudeDeg: between(southDeg, northDeg, y),
          })),
          frameIntervalDays: interval(intervals[0]),
          sectionIntervalDays: interval(intervals[1]),
          mooringIntervalDays: interval(intervals[2]),
          momentumBudget: budgets[0],
          vorticityBudget: budgets[1],
        },
      };
    })
    .filter((setup) => setupSchema.safeParse(setup).success);
}
