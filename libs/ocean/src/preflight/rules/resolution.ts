import { readable, readableLatitude } from '../../describe/numbers';
import { LIMITS } from '../../limits';
import type { Remedy } from '../../preflight-types';
import type { Setup } from '../../setup';
import { NO_CURE, ratioOfMaximum, ratioOfMinimum, verdictOf, type Case, type Rule } from '../draft';
import { finerCells, roundedUp, withFittingSteps } from '../remedies';
import type { Place, Scales } from '../scales';
import { absorbs } from './sponges';

const SPACINGS = ['/numerics/spacingLongitudeDeg', '/numerics/spacingLatitudeDeg'];
const km = (metres: number) => `${readable(metres / 1000)} km`;

/** Cells against √(c/β) where the basin holds the equator: a quarter passes, all of it is the most. */
export const equatorialResolution: Rule = ({ setup, scales }) => {
  if (!scales.holdsEquator || scales.trapping === null) return null;
  const largest = Math.max(scales.dx, scales.dy);
  const limit = scales.trapping / 4;
  const ratio = ratioOfMaximum(largest, limit);
  const refused = largest > scales.trapping;
  return {
    id: 'equatorial-resolution',
    label: 'Cells against the trapping scale',
    verdict: verdictOf(ratio, refused),
    value: largest / 1000,
    limit: limit / 1000,
    unit: 'km',
    ratio,
    reason: refused
      ? `Cells of ${km(largest)} are wider than the trapping scale of ${km(scales.trapping)}: no equatorial wave is represented; use ${km(limit)} or less.`
      : ratio > 1
        ? `Cells of ${km(largest)} leave fewer than four to the trapping scale of ${km(scales.trapping)}; use ${km(limit)} or less.`
        : `Cells of ${km(largest)}, ${readable(scales.trapping / largest)} to the trapping scale of ${km(scales.trapping)}.`,
    pointers: [...SPACINGS, '/layer/reducedGravityMS2', '/layer/restThicknessM'],
    cures: () => finerCells(setup, scales, limit),
  };
};

/** Cells against c/|f| at the wall where it is narrowest. Beyond twice that the decay alternates in sign. */
export const coastalWaves: Rule = ({ setup, scales }) => {
  if (scales.fMax === 0) return null;
  const worst = narrowest(setup, scales);
  const largest = Math.max(worst.dx, scales.dy);
  const radius = scales.c / Math.abs(worst.f);
  if (!Number.isFinite(radius)) return null; // a rotation too slow for a number
  const ratio = ratioOfMaximum(largest, radius);
  const edge = worst === scales.poleward ? polewardWords({ setup, scales }) : readableLatitude(worst.latitudeDeg);
  const where = edge ? ` at ${edge}` : '';
  return {
    id: 'coastal-waves',
    label: edge ? `Coastal waves, ${edge}` : 'Coastal waves',
    verdict: verdictOf(ratio, false),
    value: largest / 1000,
    limit: radius / 1000,
    unit: 'km',
    ratio,
    reason:
      ratio > 2
        ? `Coastal waves are not represented: cells of ${km(largest)} are more than twice c/|f| = ${km(radius)}${where}, and their decay alternates in sign.`
        : ratio > 1
          ? `Cells of ${km(largest)} are wider than c/|f| = ${km(radius)}${where}: coastal waves are barely represented; use ${km(radius)} or less.`
          : `Cells of ${km(largest)} are within c/|f| = ${km(radius)}${where}.`,
    pointers: [...SPACINGS, '/basin/southDeg', '/basin/northDeg'],
    // Degrees of longitude are longest elsewhere on a sphere, and with those halved the edge may be the worst.
    cures: () => [
      ...finerCells(setup, scales, radius * Math.max(1, scales.dx / worst.dx)),
      ...finerCells(setup, scales, scales.c / scales.fMax),
    ],
  };
};

/** Where cells are largest against c/|f|: the poleward edge; on a sphere dx |f| grows to 45° and falls again. */
function narrowest(setup: Setup, scales: Scales): Place {
  if (setup.basin.geometry !== 'spherical') return scales.poleward;
  const { start, spacing, cells } = scales.layout.meridional;
  const end = start + cells * spacing;
  const at45 = [-45, 45].filter((latitude) => latitude > start && latitude < end).map(scales.at);
  const size = ({ dx, f }: Place) => Math.max(dx, scales.dy) * Math.abs(f);
  return [...at45].reduce((worst, place) => (size(place) > size(worst) ? place : worst), scales.poleward);
}

/** Cells in the frictional layer of an east or west wall: two in a Munk layer or one in a Stommel layer pass. */
export const wallLayer: Rule = ({ setup, scales }) => {
  const { beta, munk, stommel, dx } = scales;
  const open = (['west', 'east'] as const).every((edge) => setup.basin.sponges.some((sponge) => sponge.edge === edge));
  const hasWall = !(setup.basin.zonallyPeriodic || open) || setup.basin.islands.length > 0;
  if (munk === null || stommel === null || !hasWall) return null;
  const munkRatio = ratioOfMinimum(munk / dx, 2);
  const stommelRatio = ratioOfMinimum(stommel / dx, 1);
  const byMunk = munkRatio <= stommelRatio;
  const [name, width, asked] = byMunk ? (['Munk', munk, 2] as const) : (['Stommel', stommel, 1] as const);
  const ratio = Math.min(munkRatio, stommelRatio);
  const cells = width / dx;
  const advice = `${asked === 2 ? 'two cells or more' : 'a cell or more'} in it, or ${asked === 2 ? 'one in a Stommel' : 'two in a Munk'} layer, represent it`;
  return {
    id: 'wall-layer',
    label: `Cells in the ${name} layer`,
    verdict: verdictOf(ratio, false),
    value: cells,
    limit: asked,
    unit: 'cells',
    ratio,
    reason:
      width === 0
        ? 'Without viscosity and drag short Rossby waves pile up at grid scale along the walls; two cells in a Munk layer, or one in a Stommel layer, represent it.'
        : ratio > 1
          ? `The ${name} layer of ${km(width)} holds ${readable(cells)} cells; ${advice}.`
          : `The ${name} layer of ${km(width)} holds ${readable(cells)} cells of ${km(dx)}.`,
    pointers: ['/friction/viscosityM2S', '/friction/rayleighPerS', '/numerics/spacingLongitudeDeg'],
    cures: (): Remedy[] => {
      const viscosity = roundedUp((2 * dx) ** 3 * beta);
      const drag = roundedUp(beta * dx);
      return [
        withFittingSteps(setup, {
          label: `Use ${readable(viscosity, 6)} m²/s`,
          changes: [{ pointer: '/friction/viscosityM2S', value: viscosity }],
        }),
        {
          label: `Use a drag of ${readable(drag)} 1/s`,
          changes: [{ pointer: '/friction/rayleighPerS', value: drag }],
        },
      ];
    },
  };
};

/**
 * Poleward walls of a basin that holds the equator, in trapping scales: five pass, and so does a sponge. A wall on the
 * equator is symmetry.
 */
export const polewardWalls: Rule = (of) => {
  const { setup, scales } = of;
  const { trapping } = scales;
  if (!scales.holdsEquator || trapping === null) return null;
  const open = setup.basin.sponges.filter((sponge) => absorbs(of, sponge)).map(({ edge }) => edge);
  const walls = wallDistances(scales).filter(({ distance, edge }) => distance > 0 && !open.includes(edge));
  const row = { id: 'poleward-walls', label: 'Poleward walls from the equator', limit: 5, unit: 'trapping scales' };
  const pointers = ['/basin/southDeg', '/basin/northDeg'];
  if (walls.length === 0) {
    const nearest = Math.min(
      ...wallDistances(scales)
        .map(({ distance }) => distance)
        .filter((away) => away > 0),
    );
    return {
      ...row,
      verdict: 'pass',
      value: nearest / trapping,
      ratio: 0,
      reason: 'Sponges take up what reaches the poleward walls.',
      pointers: [...pointers, '/basin/sponges'],
      cures: NO_CURE,
    };
  }
  const found = Math.min(...walls.map(({ distance }) => distance)) / trapping;
  const ratio = ratioOfMinimum(found, 5);
  return {
    ...row,
    verdict: verdictOf(ratio, false),
    value: found,
    ratio,
    reason:
      found < 3
        ? `The nearer wall lies ${readable(found)} trapping scales of ${km(trapping)} from the equator: equatorial waves feel it strongly; ask for five, or a sponge.`
        : ratio > 1
          ? `The nearer wall lies ${readable(found)} trapping scales from the equator; at five, or behind a sponge, equatorial waves no longer feel it.`
          : `The nearer wall lies ${readable(found)} trapping scales of ${km(trapping)} from the equator.`,
    pointers,
    cures: () => fartherWalls({ setup, scales }),
  };
};

/** Metres from the equator, where f = 0, to each poleward wall. */
function wallDistances(scales: Scales) {
  const { fSouth, fNorth, beta, layout, metresPerDegreeLatitude } = scales;
  const { start, spacing, cells } = layout.meridional;
  // On a sphere f is no straight line; the equator lies at 0°.
  const spherical = scales.dxSmallest !== scales.dx;
  const [south, north] = spherical
    ? [-start * metresPerDegreeLatitude, (start + cells * spacing) * metresPerDegreeLatitude]
    : [-fSouth / beta, fNorth / beta];
  return [
    { edge: 'south' as const, distance: south },
    { edge: 'north' as const, distance: north },
  ];
}

function fartherWalls({ setup, scales }: Pick<Case, 'setup' | 'scales'>): Remedy[] {
  const { trapping, metresPerDegreeLatitude, beta, f0 } = scales;
  if (trapping === null) return [];
  // Mid-latitude planes have their equator where f0 + β y = 0.
  const reference = setup.basin.referenceLatitudeDeg ?? (setup.basin.southDeg + setup.basin.northDeg) / 2;
  const fixed = setup.basin.geometry === 'equatorial' || setup.basin.geometry === 'spherical';
  const equator = fixed ? 0 : reference - f0 / beta / metresPerDegreeLatitude;
  const reach = (5 * trapping) / metresPerDegreeLatitude;
  // Hardly any rotation: no wall is that far away.
  if (!(reach < LIMITS.latitude.max - LIMITS.latitude.min)) return [];
  const spacing = setup.numerics.spacingLatitudeDeg;
  const outward = (degrees: number) => Number((Math.ceil(degrees / spacing - 1e-9) * spacing).toPrecision(12));
  const north = outward(equator + reach);
  const south = -outward(reach - equator);
  const { southDeg, northDeg } = setup.basin;
  const changes = [
    ...(southDeg < equator && southDeg > south ? [{ pointer: '/basin/southDeg', value: south }] : []),
    ...(northDeg > equator && northDeg < north ? [{ pointer: '/basin/northDeg', value: north }] : []),
    // The plane keeps touching where it did.
    ...(fixed || setup.basin.referenceLatitudeDeg !== null
      ? []
      : [{ pointer: '/basin/referenceLatitudeDeg', value: reference }]),
  ];
  const edges = changes.filter(({ pointer }) => !pointer.includes('reference'));
  if (edges.length === 0) return [];
  const words = edges.map(({ value }) => readableLatitude(value)).join(' and ');
  return [withFittingSteps(setup, { label: `Move to ${words}`, changes })];
}

/** The wall where |f| is largest: "17.5° N", "17.5°" where both are alike, empty on an f-plane. */
export function polewardWords({ setup, scales }: Pick<Case, 'setup' | 'scales'>): string {
  if (scales.beta === 0) return '';
  const { start, spacing, cells } = scales.layout.meridional;
  const [south, north] = [Math.abs(scales.fSouth), Math.abs(scales.fNorth)];
  const words = readableLatitude(Number((north >= south ? start + cells * spacing : start).toPrecision(10)));
  const symmetric = setup.basin.geometry === 'equatorial' || setup.basin.geometry === 'spherical';
  const alike = symmetric && Math.abs(north - south) < 1e-9 * scales.fMax;
  return alike ? words.replace(/ [NS]$/, '') : words;
}
