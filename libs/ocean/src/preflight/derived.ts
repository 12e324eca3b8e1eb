import { SECONDS_PER_DAY } from '../forcing/season';
import type { DerivedNumber } from '../preflight-types';
import type { Case } from './draft';
import { polewardWords } from './rules/resolution';
import { nonlinearThinning } from './rules/season-and-length';
import { SECONDS_PER_YEAR, type Place } from './scales';
import { stepNumbers } from './step-limits';

/**
 * The numbers that a specialist looks at first, the six that head the form foremost. What does not exist for this setup
 * (no β, no rotation) is left out; every value is finite.
 */
export function derivedNumbers(of: Case): DerivedNumber[] {
  const { scales } = of;
  const { c, beta, f0, Lx, trapping, munk, stommel, fMax, poleward, home } = scales;
  const { S, F, nuS, combined, flow } = stepNumbers(scales.rates, scales.dt);
  const edge = polewardWords(of);
  const days = (seconds: number) => seconds / SECONDS_PER_DAY;
  const equatorial = scales.holdsEquator;
  const nonlinear = of.setup.numerics.equations === 'nonlinear';
  const change = (e: number) => (nonlinear ? nonlinearThinning(e) : e);
  const fHome = equatorial ? fMax : Math.abs(home.f) || fMax;
  const homeWords = equatorial && edge ? `, ${edge}` : '';
  const number = (id: string, label: string, symbol: string, value: number | null, unit: string) => ({
    id,
    label,
    symbol,
    // Zero has no sign on screen.
    value: (value ?? NaN) + 0,
    unit,
  });
  const crossing = (at: Place, f: number) => (at.beta > 0 ? (at.Lx * f * f) / (at.beta * c * c) : null);
  const gyre = munk !== null && munk > 0 ? ['munkWidth', 'stommelWidth'] : ['stommelWidth', 'munkWidth'];

  const numbers: Record<string, DerivedNumber> = Object.fromEntries(
    [
      number('waveSpeed', 'wave speed', 'c', c, 'm/s'),
      equatorial
        ? number('trappingScale', 'trapping scale', '√(c/β)', trapping && trapping / 1000, 'km')
        : number('deformationRadius', 'deformation radius', 'c/|f|', c / fHome / 1000, 'km'),
      number('munkWidth', 'Munk width', '(A/β)^⅓', munk && munk / 1000, 'km'),
      number('stommelWidth', 'Stommel width', 'r/β', stommel && stommel / 1000, 'km'),
      number('kelvinCrossing', 'Kelvin crossing', 'Lx/c', days(Lx / c), 'd'),
      equatorial
        ? number('rossbyCrossing', 'Rossby, n = 1', '3Lx/c', days((3 * Lx) / c), 'd')
        : number('rossbyCrossing', 'Rossby crossing', 'Lx f²/(βc²)', nullable(crossing(home, fHome), days), 'd'),
      number(
        'adjustment',
        `adjustment at ${edge}`,
        'Lx f²/(βc²)',
        // Nothing crosses from wall to wall where there is no wall.
        of.setup.basin.zonallyPeriodic ? null : nullable(crossing(poleward, fMax), (s) => s / SECONDS_PER_YEAR),
        'y',
      ),
      number('memory', 'memory of the layer', 'm', days(scales.memory), 'd'),
      number('inertialPeriod', `inertial period${homeWords}`, '2π/|f|', days((2 * Math.PI) / fHome), 'd'),
      number('equatorialTime', 'equatorial time', 'T', equatorial ? days(1 / Math.sqrt(beta * c)) : null, 'd'),
      number('beta', 'gradient of f', 'β', beta > 0 ? home.beta : null, '1/(m s)'),
      number('f', 'Coriolis parameter', 'f', beta > 0 ? null : f0, '1/s'),
      number('fSouth', 'f at the south wall', '', beta > 0 ? scales.fSouth : null, '1/s'),
      number('fNorth', 'f at the north wall', '', beta > 0 ? scales.fNorth : null, '1/s'),
      number('wallRadius', `deformation radius at ${edge}`, 'c/|f|', beta > 0 ? c / fMax / 1000 : null, 'km'),
      number(
        'rossbySpeed',
        equatorial ? 'Rossby speed, n = 1' : 'Rossby speed',
        equatorial ? 'c/3' : 'βc²/f²',
        equatorial ? c / 3 : beta > 0 ? (home.beta * c * c) / (fHome * fHome) : null,
        'm/s',
      ),
      number('dx', 'cell, zonal', 'dx', scales.dx / 1000, 'km'),
      number(
        'dxSmallest',
        `cell, zonal, ${edge}`,
        'dx',
        scales.dxSmallest < scales.dx ? scales.dxSmallest / 1000 : null,
        'km',
      ),
      number('dy', 'cell, meridional', 'dy', scales.dy / 1000, 'km'),
      number('dt', 'step', 'dt', scales.dt, 's'),
      number('S', 'gravity number', 'S', S, ''),
      number('F', 'rotation number', 'F', F, ''),
      number('nuS', 'viscosity number', 'νS', nuS, ''),
      number('combined', 'waves and viscosity', '(S/S₀)² + νS/0.16', combined, ''),
      number('froude', 'expected currents over the wave speed', 'Fr', nonlinear ? scales.rates.froude : null, ''),
      number('flow', 'waves on the flow', 'S(1 + 2Fr)', nonlinear ? flow : null, ''),
      number('largestStress', 'largest stress', '|τ|', of.wind.stress, 'N/m²'),
      number('thinning', 'thickness change by the wind', '|η|/H', nullable(of.wind.thinning, change), ''),
    ].map((entry) => [entry.id, entry]),
  );
  const first = ['waveSpeed', 'trappingScale', 'deformationRadius', gyre[0], 'kelvinCrossing', 'rossbyCrossing'];
  const order = [...first, 'adjustment', ...Object.keys(numbers)];
  return [...new Set(order)].flatMap((id) => (Number.isFinite(numbers[id]?.value) ? [numbers[id]] : []));
}

function nullable(value: number | null, convert: (value: number) => number): number | null {
  return value === null ? null : convert(value);
}
