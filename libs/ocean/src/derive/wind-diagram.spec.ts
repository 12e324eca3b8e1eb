import { describe, expect, it } from 'vitest';
import { corvaneSetup } from '../presets/corvane';
import type { Setup } from '../setup';
import { windDiagram } from './wind-diagram';

/** One component alone in a copy of the Corvane setup. */
function blowing(pattern: Setup['wind']['components'][number]['pattern'], mean = 1): Setup {
  const setup = corvaneSetup();
  const still = { amplitude: 0, peakDay: 0 };
  const season = { mean, switchOnDays: 0, annual: still, semiannual: still };
  return { ...setup, wind: { ...setup.wind, components: [{ name: '', pattern, season }] } };
}

describe('windDiagram', () => {
  it('gives the curl and the pumping of a linear shear in closed form', () => {
    const a = 0.03 / 1.5e6; // τx = a y
    const setup = blowing({
      kind: 'linearShear',
      stressNM2: 0.03,
      overDistanceKm: 1500,
      fullWithinDeg: 20,
      zeroBeyondDeg: 30,
    });
    const diagram = windDiagram(setup, { rows: 36 });
    const { latitudeDeg, dayOfYear, curl, ekmanPumping } = diagram;
    const beta = (2 * setup.constants.rotationRatePerS) / setup.constants.earthRadiusM;
    const trappingDeg = (Math.sqrt(Math.sqrt(0.03 * 200) / beta) / setup.constants.earthRadiusM) * (180 / Math.PI);
    expect(diagram.undefinedWithinDeg).toBeCloseTo(trappingDeg, 9);
    latitudeDeg.forEach((latitude, j) => {
      const cell = j * dayOfYear.length;
      expect(curl[cell] / -a).toBeCloseTo(1, 8);
      // τx/f = a/β is the same everywhere: no pumping, whatever the curl.
      if (Math.abs(latitude) < trappingDeg) expect(ekmanPumping[cell]).toBeNaN();
      else expect(Math.abs(ekmanPumping[cell]) * 1025 * beta * 1e5).toBeLessThan(1e-6 * a);
    });
  });

  it('gives −∂y(τx/f)/ρ0 for a belt', () => {
    const setup = blowing({
      kind: 'zonalBelt',
      direction: 'eastward',
      amplitudeNM2: 0.05,
      latitudeDeg: 12,
      widthDeg: 4,
    });
    const { latitudeDeg, dayOfYear, ekmanPumping } = windDiagram(setup, { rows: 36 });
    const radius = setup.constants.earthRadiusM;
    const beta = (2 * setup.constants.rotationRatePerS) / radius;
    const j = latitudeDeg.findIndex((latitude) => latitude > 9);
    const phi = latitudeDeg[j];
    const metres = (radius * Math.PI) / 180;
    const tau = 0.05 * Math.exp(-((phi - 12) ** 2) / 32);
    const slope = (-tau * (phi - 12)) / 16 / metres;
    const f = beta * phi * metres;
    const exact = -(slope / f - (tau * beta) / f ** 2) / setup.constants.densityKgM3;
    expect(ekmanPumping[j * dayOfYear.length] / exact).toBeCloseTo(1, 6);
  });

  it('scales the season alone with its strength and peaks on the day of the peak', () => {
    const [weak, strong] = [windDiagram(corvaneSetup(0)), windDiagram(corvaneSetup(2))];
    const { latitudeDeg, dayOfYear, taux } = strong;
    const row = latitudeDeg.findIndex((latitude) => latitude > 8);
    const season = Array.from(
      dayOfYear,
      (_, k) => taux[row * dayOfYear.length + k] - weak.taux[row * dayOfYear.length + k],
    );
    const peak = season.indexOf(Math.max(...season));
    expect(Math.abs(dayOfYear[peak] - 196)).toBeLessThanOrEqual(365 / 73 / 2 + 1e-9);
    expect(season[peak]).toBeGreaterThan(0);
  });

  it('refuses a diagram without rows', () => {
    expect(() => windDiagram(corvaneSetup(), { rows: 1 })).toThrow(RangeError);
  });
});
