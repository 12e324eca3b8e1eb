import { cos, RADIANS_PER_DEGREE, sin } from '../exact/elementary';
import type { Setup } from '../setup';

/** A plane f = f0 + β (y − y0): f0 in 1/s at `referenceDeg`, β in 1/(m s), and cos of the reference latitude. */
export interface Plane {
  referenceDeg: number;
  f0: number;
  beta: number;
  cosReference: number;
}

/**
 * The plane of a setup. Of a sphere the one that touches it at the equator where the basin holds that, else at the
 * middle of the basin: for scales and estimates; the grid has the true f of every row.
 */
export function planeOf(setup: Pick<Setup, 'basin' | 'constants'>): Plane {
  const { basin, constants } = setup;
  const twoOmega = 2 * constants.rotationRatePerS;
  const byHand = basin.geometry !== 'spherical';
  if (basin.geometry === 'equatorial' || (basin.geometry === 'spherical' && basin.southDeg <= 0 && basin.northDeg >= 0))
    return {
      referenceDeg: 0,
      f0: 0,
      beta: (byHand ? basin.betaPerMS : null) ?? twoOmega / constants.earthRadiusM,
      cosReference: 1,
    };
  const referenceDeg = (byHand ? basin.referenceLatitudeDeg : null) ?? (basin.southDeg + basin.northDeg) / 2;
  const phi0 = referenceDeg * RADIANS_PER_DEGREE;
  const cosReference = cos(phi0);
  const f0 = (byHand ? basin.f0PerS : null) ?? twoOmega * sin(phi0);
  const beta =
    basin.geometry === 'fplane'
      ? 0
      : ((byHand ? basin.betaPerMS : null) ?? (twoOmega * cosReference) / constants.earthRadiusM);
  return { referenceDeg, f0, beta, cosReference };
}

/** Coriolis parameter of a setup at a latitude in degrees, 1/s: 2Ω sin φ on a sphere, else that of its plane. */
export function coriolisAt(setup: Pick<Setup, 'basin' | 'constants'>): (latitudeDeg: number) => number {
  const { basin, constants } = setup;
  const twoOmega = 2 * constants.rotationRatePerS;
  if (basin.geometry === 'spherical') return (latitude) => twoOmega * sin(latitude * RADIANS_PER_DEGREE);
  const { f0, beta, referenceDeg } = planeOf(setup);
  const metresPerDegree = constants.earthRadiusM * RADIANS_PER_DEGREE;
  return (latitude) => f0 + beta * (latitude - referenceDeg) * metresPerDegree;
}

/** β of a setup at a latitude in degrees, 1/(m s): 2Ω cos φ/a on a sphere, else that of its plane. */
export function betaAt(setup: Pick<Setup, 'basin' | 'constants'>): (latitudeDeg: number) => number {
  const { basin, constants } = setup;
  const equatorial = (2 * constants.rotationRatePerS) / constants.earthRadiusM;
  if (basin.geometry === 'spherical') return (latitude) => equatorial * cos(latitude * RADIANS_PER_DEGREE);
  const { beta } = planeOf(setup);
  return () => beta;
}

/** How far a degree of longitude reaches at a latitude in degrees, over one at the equator: cos φ, on a plane that of its reference. */
export function zonalShrink(setup: Pick<Setup, 'basin' | 'constants'>): (latitudeDeg: number) => number {
  if (setup.basin.geometry === 'spherical') return (latitude) => cos(latitude * RADIANS_PER_DEGREE);
  const { cosReference } = planeOf(setup);
  return () => cosReference;
}
