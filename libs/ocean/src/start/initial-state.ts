import { exp } from '../exact/elementary';
import { planeOf } from '../grid/build-grid';
import type { Grid } from '../grid/grid';
import type { Geometry, Setup, Start } from '../setup';
import type { InitialValues } from '../stepper/model';
import { waveMode } from './wave-mode';

const BASINS: Record<Geometry, string> = {
  equatorial: 'an equatorial plane',
  midlatitude: 'a mid-latitude plane',
  fplane: 'an f-plane',
  spherical: 'a spherical band',
};

/**
 * Values of an analytic start on the points of a grid. A start from another run's state is `stateFrom`'s.
 * Throws RangeError for a wave mode off the equatorial plane.
 */
export function analyticStart(setup: Setup, grid: Grid, start: Exclude<Start, { kind: 'state' }>): InitialValues {
  switch (start.kind) {
    case 'rest':
      return {};
    case 'bump':
      return {
        eta: (i, j) => {
          const x = (grid.lonCentre[i] - start.longitudeDeg) / start.widthLongitudeDeg;
          const y = (grid.latCentre[j] - start.latitudeDeg) / start.widthLatitudeDeg;
          return start.amplitudeM * exp(-0.5 * x * x) * exp(-0.5 * y * y);
        },
      };
    case 'step':
      return {
        eta: (_i, j) => {
          const north = grid.latCentre[j] - start.latitudeDeg;
          return north > 0 ? -start.amplitudeM : north < 0 ? start.amplitudeM : 0;
        },
      };
    case 'mode': {
      if (setup.basin.geometry !== 'equatorial')
        throw new RangeError(
          `A wave mode can start on an equatorial plane only; the basin is ${BASINS[setup.basin.geometry]}. Choose another start.`,
        );
      const metresPerDegree = (setup.constants.earthRadiusM * Math.PI) / 180;
      const H = setup.layer.restThicknessM;
      const fields = waveMode(start.mode, {
        amplitude: start.amplitudeM,
        wavelength: start.wavelengthDeg * metresPerDegree,
        crest: (start.crestLongitudeDeg - grid.lonFace[0]) * metresPerDegree,
        c: Math.sqrt(setup.layer.reducedGravityMS2 * H),
        beta: planeOf(setup).beta,
        H,
      });
      return {
        eta: (i, j) => fields.eta(grid.xCentre[i], grid.yCentre[j]),
        u: (i, j) => fields.u(grid.xFace[i], grid.yCentre[j]),
        v: (i, j) => fields.v(grid.xCentre[i], grid.yFace[j]),
      };
    }
  }
}
