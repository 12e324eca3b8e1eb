import { describe, expect, it } from 'vitest';
import { Integration, recordSteps, type Setup } from '@halfdeep/ocean';
import { smallSetup } from '../../libs/ocean/src/testing/setups';
import { proveCase } from './record';

// Case n. Budgets of mass and energy close to round-off: the end values are summed from the fields, the terms step by
// step from ub = (u(n) + u(n + 1))/2 and ηb (identities derived for this project).
const base = smallSetup({ length: { days: 60 } });
const bump = { kind: 'bump', longitudeDeg: 8, latitudeDeg: 2, widthLongitudeDeg: 2, widthLatitudeDeg: 2 } as const;
const periodic = smallSetup({
  length: { days: 60 },
  basin: { ...base.basin, zonallyPeriodic: true },
  layer: { ...base.layer, dampingPerS: 2e-7 },
  friction: { ...base.friction, slip: 'none' },
  // With a mass of its own: one of 0 would close whatever the damping took.
  start: { ...bump, amplitudeM: 20 },
});
const free = smallSetup({
  length: { days: 60 },
  friction: { rayleighPerS: 0, viscosityM2S: 0, viscosityPatches: [], slip: 'free' },
  start: { ...bump, amplitudeM: 20 },
});

const nonlinear = smallSetup({
  length: { days: 60 },
  layer: {
    ...base.layer,
    dampingPerS: 1e-8,
    minimumThicknessM: 190,
    entrainment: { onsetThicknessM: 198, timescaleDays: 10, detrainment: 'uniform' },
  },
  wind: { ...base.wind, stressFloorM: 100 },
  numerics: { ...base.numerics, equations: 'nonlinear', stepsPerDay: 16 },
  start: { ...bump, amplitudeM: 20 },
});
const nonlinearBand = smallSetup({
  length: { days: 60 },
  basin: {
    ...base.basin,
    geometry: 'spherical',
    zonallyPeriodic: true,
    sponges: [{ edge: 'north', widthDeg: 2, peakRatePerS: null, tapersWind: true }],
  },
  friction: { ...base.friction, slip: 'none' },
  numerics: { ...base.numerics, equations: 'nonlinear', stepsPerDay: 16 },
  start: { ...bump, amplitudeM: 20 },
});

function closures(setup: Setup): {
  mass: number;
  energy: number;
  volume: number;
  terms: Record<string, number>;
  energies: number[];
  masses: number[];
} {
  const run = Integration.start(setup);
  const columns = run.budgetColumns().map(({ name }) => name);
  const sections = run.sectionColumns().map(({ name }) => name);
  const interval = recordSteps(setup).sections;
  const seconds = (interval * 86_400) / setup.numerics.stepsPerDay;
  const terms: Record<string, number> = Object.fromEntries(columns.map((name) => [name, 0]));
  const energies: number[] = [];
  const masses: number[] = [];
  let [mass, energy, volume, massSize, work, flow] = [0, 0, 0, 0, 0, 0];
  let volumeBefore = run.takeSections()[sections.indexOf('0.volumeNorth')];
  while (run.step < run.totalSteps) {
    run.advance(interval);
    const budget = run.takeBudget();
    columns.forEach((name, k) => (terms[name] += budget[k]));
    mass = Math.max(mass, Math.abs(budget[columns.indexOf('massResidual')]));
    energy = Math.max(energy, Math.abs(budget[columns.indexOf('energyResidual')]));
    energies.push(budget[columns.indexOf('kineticEnergy')] + budget[columns.indexOf('availablePotentialEnergy')]);
    masses.push(budget[columns.indexOf('massAnomaly')]);
    work += Math.abs(budget[columns.indexOf('windWork')]);
    // Σ |η| A, the size of what mass is a difference of.
    const frame = run.frame();
    const area = run.grid.dxC[0] * run.grid.dy;
    const absolute = frame.eta.reduce((sum, eta) => (Number.isNaN(eta) ? sum : sum + Math.abs(eta)), 0) * area;
    massSize = Math.max(massSize, (setup.constants.densityKgM3 * absolute) / 1e12);
    const record = run.takeSections();
    const at = (name: string) => (sections.includes(name) ? record[sections.indexOf(name)] : 0);
    const change = ((at('0.volumeNorth') - volumeBefore) * 1e9) / seconds / 1e6;
    volume = Math.max(volume, Math.abs(at('0.transport') + at('0.dampingNorth') + at('0.entrainedNorth') - change));
    flow = Math.max(flow, Math.abs(at('0.transport')));
    volumeBefore = at('0.volumeNorth');
  }
  return { mass: mass / massSize, energy: energy / work, volume: volume / flow, terms, energies, masses };
}

describe('budgets of a basin with an island', () => {
  for (const [name, setup] of [
    ['closed, drag and viscosity, free slip', base],
    ['periodic, damped, no slip', periodic],
    ['closed, without friction', free],
    ['nonlinear, closed, limiter and stress floor, entrainment given back', nonlinear],
    ['nonlinear, periodic band of the sphere, no slip, sponge', nonlinearBand],
  ] as const)
    it(`close to 1e-11: ${name}`, (context) => {
      const { mass, energy, volume } = closures(setup);
      // The last: V_net = d(volume north)/dt − damping, from the fluxes that changed η.
      for (const [id, quantity, obtained] of [
        ['energy', 'energy residual over the wind’s work', energy],
        ['mass', 'mass residual over Σ |η|', mass],
        [
          'volume',
          'transport and sources less the change of the volume north of the section, over the transport',
          volume,
        ],
      ] as const)
        proveCase(context, 'n', {
          id: `${id} (${name})`,
          quantity: `${quantity}; ${name}`,
          expected: 0,
          obtained,
          kind: 'absolute',
          tolerance: 1e-11,
          resolution: '60 days, an island',
        });
    });

  it('friction, viscosity and damping take energy, the wind gives it, the scheme hardly counts', () => {
    const { terms } = closures(periodic);
    expect(terms['windWork']).toBeGreaterThan(0);
    for (const sink of ['rayleighWork', 'viscousWork', 'dampingWork']) expect(terms[sink], sink).toBeLessThan(0);
    expect(Math.abs(terms['numericalWork'])).toBeLessThan(1e-3 * terms['windWork']);
  });

  it('with nothing to drive or brake it the energy changes by the numerical sink alone, and falls', () => {
    const { terms, energies } = closures({ ...free, wind: { ...free.wind, components: [] } });
    expect(terms['windWork']).toBe(0);
    expect(terms['numericalWork']).toBeLessThan(0);
    expect(terms['energyChange'] / terms['numericalWork']).toBeCloseTo(1, 9);
    // From day to day it may rise by parts in a thousand (the scheme keeps a slightly different square), never back up.
    energies.slice(1).forEach((energy, k) => expect(energy).toBeLessThan(1.002 * energies[k]));
    expect(energies.at(-1)! / energies[0]).toBeLessThan(1);
    expect(energies.at(-1)! / energies[0]).toBeGreaterThan(0.8);
  });

  it('with damping the mass falls off as exp(−κt), and the damping is what took it', (context) => {
    const { terms, masses } = closures(periodic);
    const [first, last] = [masses[0], masses.at(-1)!];
    proveCase(context, 'n', {
      id: 'damped-mass',
      quantity: 'mass left after 59 days of damping',
      expected: Math.exp(-2e-7 * 59 * 86_400),
      obtained: last / first,
      tolerance: 5e-7,
      resolution: '60 days, an island',
    });
    expect(terms['massDamping']).toBeLessThan(-0.5 * first);
    expect(terms['massChange'] / terms['massDamping']).toBeCloseTo(1, 11);
  });

  it('without damping the mass stays what it was', (context) => {
    const { terms } = closures(free);
    // verification.md reached 1.5e-13; 1e-13 was asked of this setup since the first issue.
    proveCase(context, 'n', {
      id: 'mass-kept',
      quantity: 'change of mass over mass in 60 days without damping',
      expected: 0,
      obtained: terms['massChange'] / terms['massAnomaly'],
      kind: 'absolute',
      tolerance: 1e-13,
      resolution: '60 days, an island',
    });
    expect(terms['massDamping']).toBe(0);
  });
});
