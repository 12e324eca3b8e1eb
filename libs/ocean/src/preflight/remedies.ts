import { readable } from '../describe/numbers';
import { LIMITS } from '../limits';
import type { Remedy } from '../preflight-types';
import type { Setup } from '../setup';
import { scalesOf, type Scales } from './scales';
import { proposedSteps, stepPasses } from './step-limits';

/** The setup with a remedy's changes made; the given one stays as it is. Throws RangeError for a pointer that leads nowhere. */
export function applyRemedy(setup: Setup, remedy: Pick<Remedy, 'changes'>): Setup {
  return remedy.changes.reduce(
    (changed, { pointer, value }) => withValue(changed, pointer.split('/').slice(1), value),
    setup,
  );
}

function withValue<T>(holder: T, path: readonly string[], value: unknown): T {
  if (path.length === 0) return value as T;
  const [key, ...rest] = path;
  if (typeof holder !== 'object' || holder === null || !Object.hasOwn(holder, key))
    throw new RangeError(`A setup has no field “${path.join('/')}”.`);
  const copy = (Array.isArray(holder) ? [...(holder as unknown[])] : { ...holder }) as Record<string, unknown>;
  copy[key] = withValue(copy[key], rest, value);
  return copy as T;
}

const RANGES: Record<string, { min: number; max: number }> = {
  '/numerics/stepsPerDay': LIMITS.stepsPerDay,
  '/numerics/spacingLongitudeDeg': LIMITS.spacing,
  '/numerics/spacingLatitudeDeg': LIMITS.spacing,
  '/friction/viscosityM2S': LIMITS.viscosity,
  '/friction/rayleighPerS': LIMITS.rayleigh,
  '/length/days': LIMITS.lengthDays,
  '/basin/southDeg': LIMITS.latitude,
  '/basin/northDeg': LIMITS.latitude,
  '/start/wavelengthDeg': LIMITS.startLength,
  '/layer/minimumThicknessM': LIMITS.minimumThickness,
  '/basin/coastSpacing/longitudeDeg': LIMITS.spacing,
  '/basin/coastSpacing/latitudeDeg': LIMITS.spacing,
};

/** True when every changed field stays inside its hard limit. */
export function withinLimits({ changes }: Remedy): boolean {
  return changes.every(({ pointer, value }) => {
    const range = RANGES[pointer] as { min: number; max: number } | undefined;
    return range === undefined || typeof value !== 'number' || (value >= range.min && value <= range.max);
  });
}

/** Adds the proposed steps a day to changes that would make the present step too long. */
export function withFittingSteps(setup: Setup, remedy: Remedy): Remedy {
  const { rates } = scalesOf(applyRemedy(setup, remedy));
  if (stepPasses(rates, setup.numerics.stepsPerDay)) return remedy;
  const n = proposedSteps(rates);
  if (n > LIMITS.stepsPerDay.max) return remedy;
  return {
    label: `${remedy.label} and ${readable(n, 6)} a day`,
    changes: [...remedy.changes, { pointer: '/numerics/stepsPerDay', value: n }],
  };
}

/** "Use 36 a day", where the limits allow a step that passes; else viscosity or cells that allow one. */
export function stepRemedies(setup: Setup, scales: Scales): Remedy[] {
  const n = proposedSteps(scales.rates);
  if (n <= LIMITS.stepsPerDay.max)
    return [{ label: `Use ${readable(n, 6)} a day`, changes: [{ pointer: '/numerics/stepsPerDay', value: n }] }];
  const coarser = [2, 4, 8, 16, 32, 64, 128, 256].map((factor) =>
    spacingRemedy(
      setup,
      upTo(setup.numerics.spacingLongitudeDeg * factor, LIMITS.spacing.max),
      upTo(setup.numerics.spacingLatitudeDeg * factor, LIMITS.spacing.max),
    ),
  );
  const weaker = [10, 100, 1000, 1e4].map((divisor) => {
    const value = roundedDown(setup.friction.viscosityM2S / divisor);
    return withFittingSteps(setup, {
      label: `Use ${readable(value)} m²/s`,
      changes: [{ pointer: '/friction/viscosityM2S', value }],
    });
  });
  const plain = setup.friction.viscosityPatches.length === 0;
  return setup.friction.viscosityM2S > 0 && plain ? [...weaker, ...coarser] : coarser;
}

/** Cells no larger than `metres` both ways, as degrees that read well and fill the basin. */
export function finerCells(setup: Setup, scales: Scales, metres: number): Remedy[] {
  const { zonal, meridional } = scales.layout;
  const lonExtent = zonal.cells * zonal.spacing;
  const south = meridional.start;
  const north = south + meridional.cells * meridional.spacing;
  const latExtent = meridional.equatorRow === null ? north - south : Math.max(north, -south);
  const lon = fittingSpacings(lonExtent, metres / scales.metresPerDegreeLongitude);
  const lat = fittingSpacings(latExtent, metres / scales.metresPerDegreeLatitude);
  return [0, 1].map((k) =>
    spacingRemedy(
      setup,
      scales.dx > metres ? lon[k] : setup.numerics.spacingLongitudeDeg,
      scales.dy > metres ? lat[k] : setup.numerics.spacingLatitudeDeg,
    ),
  );
}

const NICE_DEGREES = [5, 4, 3, 2.5, 2, 1.5, 1.25, 1, 0.75, 0.625, 0.5, 0.4, 0.3, 0.25, 0.2, 0.15, 0.125, 0.1, 0.075, 0.0625, 0.05, 0.04, 0.03, 0.025, 0.02, 0.0125, 0.01, 0.0075, 0.005, 0.004]; // prettier-ignore

/** A round spacing of at most `most` that divides the extent, then the widest that divides it at all. */
function fittingSpacings(extent: number, most: number): [number, number] {
  const widest = Number((extent / Math.ceil(extent / most)).toPrecision(12));
  const nice = NICE_DEGREES.find((step) => step <= most && Math.abs(extent / step - Math.round(extent / step)) < 1e-9);
  return [nice ?? widest, widest];
}

/** Sets both spacings, and the steps a day where the present ones would no longer do. */
export function spacingRemedy(setup: Setup, longitudeDeg: number, latitudeDeg: number): Remedy {
  const { spacingLongitudeDeg, spacingLatitudeDeg } = setup.numerics;
  const changes = [
    { pointer: '/numerics/spacingLongitudeDeg', value: longitudeDeg, was: spacingLongitudeDeg },
    { pointer: '/numerics/spacingLatitudeDeg', value: latitudeDeg, was: spacingLatitudeDeg },
  ].filter(({ value, was }) => value !== was);
  const sizes = [...new Set(changes.map(({ value }) => `${readable(value, 4)}°`))].join(' by ');
  // A coast on a grid that no longer nests goes back to the run's own.
  const coast = setup.basin.coastSpacing;
  const loose =
    coast !== null && !(isWhole(coast.longitudeDeg / longitudeDeg) && isWhole(coast.latitudeDeg / latitudeDeg));
  return withFittingSteps(setup, {
    label: loose ? `Use ${sizes} cells, for the coast too` : `Use ${sizes} cells`,
    changes: [
      ...changes.map(({ pointer, value }) => ({ pointer, value })),
      ...(loose ? [{ pointer: '/basin/coastSpacing', value: null }] : []),
    ],
  });
}

/** A whole number, or one over a whole number, to round-off. */
function isWhole(quotient: number): boolean {
  const factor = Math.max(quotient, 1 / quotient);
  return Math.abs(factor - Math.round(factor)) <= 1e-9 * factor;
}

/** Rounds to two digits, upwards or downwards in size. */
export function roundedUp(value: number): number {
  return roundedToTwo(value, Math.ceil);
}

export function roundedDown(value: number): number {
  return roundedToTwo(value, Math.floor);
}

function roundedToTwo(value: number, round: (x: number) => number): number {
  if (value === 0) return 0;
  // By its decimal text, which reaches down to the smallest numbers and reads back as written.
  const [mantissa, exponent] = value.toExponential(12).split('e');
  return Number(`${round(Number((Number(mantissa) * 10).toPrecision(12))) / 10}e${exponent}`);
}

export function upTo(value: number, max: number): number {
  return Math.min(Number(value.toPrecision(12)), max);
}
