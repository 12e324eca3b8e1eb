import { describe, expect, it } from 'vitest';
import { corvaneSetup } from '../presets/corvane';
import type { Setup, Sponge } from '../setup';
import { preflight } from './preflight';
import { applyRemedy } from './remedies';
import { scalesOf } from './scales';
import { proposeStepsPerDay } from './step-limits';
import { changed, number, row } from './testing';

const nonlinear = (change: (setup: Setup) => void = () => undefined, strength = 1): Setup =>
  changed((setup) => {
    setup.numerics.equations = 'nonlinear';
    setup.numerics.stepsPerDay = 20;
    setup.layer.minimumThicknessM = 20;
    setup.layer.entrainment = { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' };
    change(setup);
  }, corvaneSetup(strength));

describe('the nonlinear Corvane setup', () => {
  // numerics.md §12, "Its numbers": n = 20, thinning 0.21, at strength 1.2 0.24.
  it.each([
    [1, 0.21],
    [1.2, 0.24],
  ])('at strength %f passes every row, thins by %f and proposes 20 steps a day', (strength, thinning) => {
    const setup = nonlinear(undefined, strength);
    const result = preflight(setup, { quotaBytes: 20e9, freeDiskBytes: 20e9 });
    expect(result.checks.filter(({ verdict }) => verdict !== 'pass')).toEqual([]);
    expect(number(result, 'thinning')).toBeCloseTo(thinning, 2);
    expect(row(result, 'thinning').value).toBe(number(result, 'thinning'));
    expect(result.proposedStepsPerDay).toBe(20);
    expect(proposeStepsPerDay(setup)).toBe(20);
  });
  it('costs more than the linear one, and more with budgets', () => {
    const seconds = (setup: Setup) => preflight(setup, { cellStepsPerSecond: 1e7 }).cost.seconds;
    const plain = seconds(nonlinear());
    expect(plain).toBeGreaterThan(1.25 * seconds(corvaneSetup())); // 20 steps a day instead of 16, and dearer ones
    expect(seconds(nonlinear(({ output }) => (output.momentumBudget = true)))).toBeGreaterThan(plain);
    expect(seconds(nonlinear(({ output }) => (output.vorticityBudget = true)))).toBeGreaterThan(plain);
  });
});

describe('the step of a nonlinear run', () => {
  it('shrinks by 1 + 2Fr: S(1 + 2Fr) is a caution beyond 0.8 and refused beyond 0.91', () => {
    const at = (stepsPerDay: number) => preflight(nonlinear(({ numerics }) => (numerics.stepsPerDay = stepsPerDay)));
    const flow = (n: number) => number(at(n), 'flow');
    const { froude } = scalesOf(nonlinear()).rates;
    expect(flow(20)).toBeCloseTo(number(at(20), 'S') * (1 + 2 * froude), 12);
    expect([16, 12].map((n) => row(at(n), 'step-flow').verdict)).toEqual([
      flow(16) > 0.8 ? 'caution' : 'pass',
      'refuse',
    ]);
    expect(flow(12)).toBeGreaterThan(0.91);
    const cure = row(at(12), 'step-flow').remedy!;
    expect(cure.changes).toEqual([{ pointer: '/numerics/stepsPerDay', value: 20 }]);
  });
  it('is not looked at for the linear equations', () => {
    expect(preflight(corvaneSetup()).checks.map(({ id }) => id)).not.toContain('step-flow');
    expect(scalesOf(corvaneSetup()).rates.froude).toBe(0);
  });
  it('asks for caution where currents pass half the wave speed', () => {
    const fast = preflight(nonlinear(({ wind }) => (wind.seasonalStrength = 5)));
    expect(number(fast, 'froude')).toBeGreaterThan(0.3);
    const faster = nonlinear(({ wind }) => (wind.seasonalStrength = 5));
    for (const { pattern } of faster.wind.components) if ('stressNM2' in pattern) pattern.stressNM2 *= 2;
    faster.numerics.stepsPerDay = proposeStepsPerDay(faster);
    const result = preflight(faster);
    expect(number(result, 'froude')).toBeGreaterThan(0.5);
    expect(row(result, 'step-flow')).toMatchObject({ verdict: 'caution' });
    expect(row(result, 'step-flow').reason).toContain('not proven');
  });
  it('takes an anomaly at the start for currents of |η|/H', () => {
    const step = nonlinear((setup) =>
      Object.assign(setup, { start: { kind: 'step', amplitudeM: 60, latitudeDeg: 2 } }),
    );
    expect(scalesOf(step).rates.froude).toBe(0.3);
  });
});

// numerics.md §5: Fr is the largest of |τ|T/(ρ0Hc), X|τ_yy|/(ρ0βH)/c and |τ|X/(ρ0g′H²).
it('estimates currents of a steady belt by the largest of the three', () => {
  const belt = nonlinear((setup) => {
    setup.wind.components = [setup.wind.components[0]];
    setup.basin.westernCoast = { kind: 'rectangular' };
  });
  const { rates, c, Lx, beta } = scalesOf(belt);
  const [tau, H, rho, gPrime] = [0.01, 200, 1025, 0.03];
  const width = 6 * 111_194.9266;
  const expected = Math.max(
    tau / Math.sqrt(beta * c) / (rho * H * c),
    (Lx * tau) / (width * width) / (rho * beta * H) / c,
    (tau * Lx) / (rho * gPrime * H * H),
  );
  expect(rates.froude / expected).toBeCloseTo(1, 3);
});

describe('a nonlinear layer that outcrops', () => {
  const strong = (change: (setup: Setup) => void) =>
    nonlinear((setup) => {
      setup.wind.seasonalStrength = 4;
      for (const { pattern } of setup.wind.components) if ('amplitudeNM2' in pattern) pattern.amplitudeNM2 *= 4;
      setup.numerics.stepsPerDay = 60;
      change(setup);
    });
  const thinning = (change: (setup: Setup) => void) => row(preflight(strong(change)), 'thinning');
  it('is refused without entrainment and stress floor, with entrainment it asks for caution', () => {
    const bare = thinning(({ layer }) => (layer.entrainment = null));
    expect(bare).toMatchObject({ verdict: 'refuse', value: 1 });
    expect(bare.reason).toContain('outcrop');
    expect(thinning(() => undefined)).toMatchObject({ verdict: 'caution', value: 1 });
    expect(thinning(() => undefined).reason).toContain('entrainment holds it');
  });
  it('needs a cell Reynolds number of at most 9 beside a stress floor', () => {
    const floored = (viscosityM2S: number) =>
      thinning(({ layer, wind, friction }) => {
        layer.entrainment = null;
        wind.stressFloorM = 50;
        friction.viscosityM2S = viscosityM2S;
      });
    const reynolds = (viscosity: number) => {
      const { rates, c, dx } = scalesOf(strong(({ friction }) => (friction.viscosityM2S = viscosity)));
      return (rates.froude * c * dx) / viscosity;
    };
    expect(reynolds(500)).toBeGreaterThan(9);
    expect(floored(500).verdict).toBe('refuse');
    expect(reynolds(20_000)).toBeLessThan(9);
    expect(floored(20_000).verdict).toBe('caution');
    expect(floored(20_000).reason).toContain('the stress floor holds it');
    expect(floored(0).verdict).toBe('refuse');
  });
  it('is cured by a weaker wind, or held by entrainment where that is not in reach', () => {
    const setup = strong(({ layer }) => (layer.entrainment = null));
    const { remedy } = row(preflight(setup), 'thinning');
    expect(row(preflight(applyRemedy(setup, remedy!)), 'thinning').verdict).toBe('pass');
  });
  it('starts with no layer: refused, whatever guards it', () => {
    const gone = preflight(
      nonlinear((setup) => Object.assign(setup, { start: { kind: 'step', amplitudeM: 210, latitudeDeg: 2 } })),
    );
    expect(row(gone, 'thinning')).toMatchObject({ verdict: 'refuse' });
    expect(row(gone, 'thinning').reason).toContain('takes the whole layer');
  });
  it('bends down from linear theory: 1 − √(1 − 2e)', () => {
    const linear = number(preflight(corvaneSetup()), 'thinning');
    expect(row(preflight(nonlinear()), 'thinning').value).toBeCloseTo(1 - Math.sqrt(1 - 2 * linear), 12);
  });
});

describe('sponges', () => {
  const sponge = (edge: Sponge['edge'], change: Partial<Sponge> = {}): Sponge => ({
    edge,
    widthDeg: 4,
    peakRatePerS: null,
    tapersWind: true,
    ...change,
  });
  const withSponges = (...sponges: Sponge[]) => changed(({ basin }) => Object.assign(basin, { sponges }));
  // numerics.md §3: r_max = 3.45, 6.9, 13.8 c/W reflect 0.1003, 0.0101, 0.0001 of the amplitude.
  it.each([
    [3.45, 0.1003],
    [6.9, 0.0101],
    [13.8, 0.0001],
  ])('of %f c/W give back %f', (strength, reflected) => {
    const c = Math.sqrt(0.03 * 200);
    const peakRatePerS = (strength * c) / (4 * 111_194.9266);
    expect(row(preflight(withSponges(sponge('north', { peakRatePerS }))), 'sponges').value).toBeCloseTo(reflected, 4);
  });
  it('pass with the default, and ask for caution when weak or narrow; the remedy cures both', () => {
    expect(row(preflight(withSponges(sponge('north'))), 'sponges').verdict).toBe('pass');
    const weak = withSponges(sponge('north'), sponge('south', { peakRatePerS: 1e-6, widthDeg: 0.5 }));
    const check = row(preflight(weak), 'sponges');
    expect(check.verdict).toBe('caution');
    expect(row(preflight(applyRemedy(weak, check.remedy!)), 'sponges').verdict).toBe('pass');
  });
  it('stand for poleward walls that are near', () => {
    const near = (...sponges: Sponge[]) =>
      row(
        preflight(
          changed(({ basin, output }) => {
            Object.assign(basin, { southDeg: -8, islands: [], westernCoast: { kind: 'rectangular' }, sponges });
            output.sections = [];
          }),
        ),
        'poleward-walls',
      );
    expect(near().verdict).toBe('caution');
    expect(near(sponge('south', { widthDeg: 3 }))).toMatchObject({ verdict: 'pass' }); // the north wall is far
    expect(near(sponge('south', { widthDeg: 3, peakRatePerS: 1e-8 })).verdict).toBe('caution');
    expect(near(sponge('south', { widthDeg: 3 }), sponge('north')).reason).toContain('Sponges take up');
  });
  it('leave their own wind out of what the layer is expected to do', () => {
    const windy = changed(({ wind }) => {
      wind.components = [
        {
          name: 'Edge',
          pattern: { kind: 'zonalBelt', direction: 'eastward', amplitudeNM2: 0.3, latitudeDeg: 16, widthDeg: 0.8 },
          season: { mean: 1, switchOnDays: 0, annual: { amplitude: 0, peakDay: 0 }, semiannual: { amplitude: 0, peakDay: 0 } }, // prettier-ignore
        },
      ];
    });
    const open = row(preflight(windy), 'thinning').value;
    const damped = changed(({ basin }) => (basin.sponges = [sponge('north')]), windy);
    expect(row(preflight(damped), 'thinning').value).toBeLessThan(open / 5);
    expect(number(preflight(damped), 'largestStress')).toBeLessThan(number(preflight(windy), 'largestStress'));
  });
});

describe('maps of viscosity', () => {
  it('bound the step by their largest value and resolve the wall layer by their smallest', () => {
    const patched = changed(({ friction }) => {
      friction.viscosityPatches = [
        {
          name: 'Shelf',
          addedM2S: 60_000,
          longitudeDeg: 30,
          latitudeDeg: 0,
          widthLongitudeDeg: 2,
          widthLatitudeDeg: 2,
        },
      ];
    });
    const { viscosity, rates } = scalesOf(patched);
    expect(viscosity.most).toBeCloseTo(64_000, -1);
    expect(viscosity.least).toBeCloseTo(4000, 6);
    const plain = scalesOf(corvaneSetup()).rates.viscous;
    expect(rates.viscous / plain).toBeCloseTo(16, 3);
    const result = preflight(patched);
    expect(row(result, 'step-viscosity').verdict).toBe('refuse');
    expect(row(result, 'wall-layer').value).toBe(row(preflight(corvaneSetup()), 'wall-layer').value);
    const cured = applyRemedy(patched, row(result, 'step-viscosity').remedy!);
    expect(row(preflight(cured), 'step-viscosity').verdict).toBe('pass');
  });
});

describe('a spherical band', () => {
  const band = (southDeg: number, northDeg: number, change: (setup: Setup) => void = () => undefined) =>
    changed((setup) => {
      Object.assign(setup.basin, { geometry: 'spherical', southDeg, northDeg, islands: [], westernCoast: { kind: 'rectangular' } }); // prettier-ignore
      setup.output = { ...setup.output, sections: [], moorings: [] };
      change(setup);
    });
  const radians = Math.PI / 180;
  it('bounds the step by the smallest dx, at its highest latitude, and f = 2Ω sin φ there', () => {
    const { dx, dxSmallest, rates, dy, c } = scalesOf(band(20, 60));
    expect(dxSmallest / dx).toBeCloseTo(Math.cos(60 * radians) / Math.cos(20 * radians), 12);
    expect(rates.gravity).toBeCloseTo(c * Math.sqrt(1 / dxSmallest ** 2 + 1 / dy ** 2), 15);
    expect(rates.coriolis).toBeCloseTo(2 * 7.2921e-5 * Math.sin(60 * radians), 15);
  });
  it('resolves the wall layer where that is narrowest against dx: nearest to the equator', () => {
    const { munk, dx, beta } = scalesOf(band(20, 60));
    expect(beta).toBeCloseTo(((2 * 7.2921e-5) / 6.371e6) * Math.cos(20 * radians), 25);
    expect(row(preflight(band(20, 60)), 'wall-layer').value).toBeCloseTo(munk! / dx, 12);
  });
  it('asks for equatorial resolution where it holds the equator, and only there', () => {
    const ids = (setup: Setup) => preflight(setup).checks.map(({ id }) => id);
    expect(ids(band(-20, 40))).toContain('equatorial-resolution');
    expect(ids(band(20, 40))).not.toContain('equatorial-resolution');
    const { trapping } = scalesOf(band(-20, 40));
    expect(trapping).toBe(scalesOf(corvaneSetup()).trapping);
  });
  it('looks for coastal waves where dx |f| is largest, at 45° of a band that holds it', () => {
    const wide = band(30, 70, ({ numerics }) => Object.assign(numerics, { spacingLongitudeDeg: 2, spacingLatitudeDeg: 0.5 })); // prettier-ignore
    const check = row(preflight(wide), 'coastal-waves');
    const f45 = 2 * 7.2921e-5 * Math.sin(45 * radians);
    expect(check.limit).toBeCloseTo(scalesOf(wide).c / f45 / 1000, 9);
    expect(check.label).toContain('45° N');
    const cured = preflight(applyRemedy(wide, check.remedy!));
    expect(row(cured, 'coastal-waves').verdict).toBe('pass');
  });
  it('thins a band as the plane that it touches where it is narrow', () => {
    const narrow = (geometry: Setup['basin']['geometry']) =>
      number(preflight(band(28, 32, ({ basin, wind }) => {
        basin.geometry = geometry;
        wind.components = [{ ...wind.components[0], pattern: { kind: 'zonalBelt', direction: 'eastward', amplitudeNM2: 0.02, latitudeDeg: 30, widthDeg: 2 } }]; // prettier-ignore
      })), 'thinning'); // prettier-ignore
    expect(narrow('spherical') / narrow('midlatitude')).toBeCloseTo(1, 1);
  });
  it('keeps its coast on a grid that nests, or goes back to its own', () => {
    const fine = changed(({ basin, numerics }) => {
      basin.coastSpacing = { longitudeDeg: 0.5, latitudeDeg: 0.5 };
      numerics.stepsPerDay = 16;
      numerics.spacingLongitudeDeg = numerics.spacingLatitudeDeg = 1;
    });
    const remedies = preflight(fine).checks.flatMap(({ remedy }) => (remedy ? [applyRemedy(fine, remedy)] : []));
    expect(remedies.length).toBeGreaterThan(0);
    for (const { basin, numerics } of remedies) {
      const quotient =
        (basin.coastSpacing?.longitudeDeg ?? 1) / (basin.coastSpacing ? numerics.spacingLongitudeDeg : 1);
      const factor = Math.max(quotient, 1 / quotient);
      expect(factor).toBeCloseTo(Math.round(factor), 9);
    }
  });
  it('refuses a grid of the coast beyond the limit of cells', () => {
    const setup = changed(({ basin }) => (basin.coastSpacing = { longitudeDeg: 0.01, latitudeDeg: 0.01 }));
    const check = row(preflight(setup), 'coast-cells');
    expect(check).toMatchObject({ verdict: 'refuse', value: 6000 * 3500 });
    expect(applyRemedy(setup, check.remedy!).basin.coastSpacing).toBeNull();
  });
});
