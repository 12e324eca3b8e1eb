// Widths of boundary layers: Munk (1950), Stommel (1948); trapping scale √(c/β): Matsuno (1966).
import { describe, expect, it } from 'vitest';
import { buildGrid } from '../grid/build-grid';
import { Integration } from '../integration/integration';
import { preflight } from '../preflight/preflight';
import { changed, number, preset, row } from '../preflight/testing';
import { corvaneSetup } from '../presets/corvane';
import { PRESETS } from '../presets/presets';
import type { Setup } from '../setup';
import { SKETCH_WORK, sketchSetup } from './sketch-setup';

const note = (setup: Setup, words: string) => sketchSetup(setup).notes.find((sentence) => sentence.includes(words));

describe('sketch of a setup', () => {
  it.each(PRESETS.map(({ id }) => id))('fits the work and passes preflight: %s', (id) => {
    const setup = preset(id);
    const { setup: sketch, cellSteps, coarser } = sketchSetup(setup);
    const { cost, verdict } = preflight(sketch);
    expect(verdict).not.toBe('refuse');
    expect(cost.cells * cost.steps).toBe(cellSteps);
    expect(cellSteps).toBeLessThanOrEqual(SKETCH_WORK[setup.numerics.equations]);
    expect(sketch.numerics.spacingLongitudeDeg).toBeCloseTo(coarser.longitude * setup.numerics.spacingLongitudeDeg, 9);
    expect(sketch.numerics.spacingLatitudeDeg).toBeCloseTo(coarser.latitude * setup.numerics.spacingLatitudeDeg, 9);
    const run = Integration.start(sketch);
    run.advance(8);
    expect(run.grid.nx * run.grid.ny).toBe(cost.cells);
  });

  it('leaves wind, layer and the setup itself alone', () => {
    const setup = corvaneSetup();
    const before = structuredClone(setup);
    const { setup: sketch } = sketchSetup(setup);
    expect(setup).toEqual(before);
    expect(sketch.wind).toEqual(setup.wind);
    expect(sketch.layer).toEqual(setup.layer);
    expect(sketch.length).toEqual(setup.length);
  });

  it('raises viscosity until the Munk layer is one cell wide, and says what that costs', () => {
    const setup = corvaneSetup();
    const { setup: sketch } = sketchSetup(setup);
    const result = preflight(sketch);
    const cells = number(result, 'munkWidth') / number(result, 'dx');
    expect(cells).toBeGreaterThanOrEqual(1);
    expect(cells).toBeLessThan(1.05); // rounded up to two digits: (1.1)^⅓ at most
    const days = (number(result, 'trappingScale') * 1000) ** 2 / sketch.friction.viscosityM2S / 86_400;
    const sentence = note(setup, 'Viscosity raised')!;
    expect(sentence).toContain(`from 4\u202f000 to 14\u202f000 m²/s`);
    expect(Number(/damps in (\d+) d/.exec(sentence)?.[1])).toBeCloseTo(days, -1);
    expect(sentence).toContain('55.9 km in the setup');
  });

  it('keeps viscosity where drag holds the wall layer, where there is no wall, and where there is no friction at all', () => {
    const friction = (rayleighPerS: number, viscosityM2S: number) =>
      changed((setup) => (setup.friction = { ...setup.friction, rayleighPerS, viscosityM2S }));
    // r/β = 87 km: more than half of a coarse cell.
    expect(sketchSetup(friction(2e-6, 4000)).setup.friction.viscosityM2S).toBe(4000);
    expect(sketchSetup(friction(0, 0)).setup.friction.viscosityM2S).toBe(0);
    expect(note(friction(0, 0), 'pile up')).toBeDefined();
    const channel = changed((setup) => {
      setup.basin.zonallyPeriodic = true;
      setup.basin.westernCoast = { kind: 'rectangular' };
      setup.basin.islands = [];
    });
    expect(sketchSetup(channel).setup.friction.viscosityM2S).toBe(4000);
  });

  it('says when coastal waves cannot be shown, by the very numbers of preflight', () => {
    const { setup: sketch, notes } = sketchSetup(corvaneSetup());
    const { value, limit } = row(preflight(sketch), 'coastal-waves');
    expect(value / limit).toBeGreaterThan(1);
    const sentence = notes.find((words) => words.startsWith('Coastal waves'))!;
    expect(Number(/are ([\d.]+) times/.exec(sentence)?.[1])).toBeCloseTo(value / limit, 1);
  });

  it('names islands that fall between the centres of its cells, and those of few cells', () => {
    const setup = changed(({ basin }) => {
      basin.islands.push({ kind: 'box', name: 'Speck', westDeg: 20.2, eastDeg: 20.8, southDeg: 5.2, northDeg: 5.6 });
      basin.islands.push({ kind: 'box', name: 'Skerry', westDeg: 25.5, eastDeg: 26.3, southDeg: 5.2, northDeg: 6.2 });
    });
    const { setup: sketch } = sketchSetup(setup);
    const grid = buildGrid({ ...sketch, basin: { ...sketch.basin, westernCoast: { kind: 'rectangular' } } });
    const land = (west: number, east: number, south: number, north: number) => {
      let cells = 0;
      for (let j = 0; j < grid.ny; j++)
        for (let i = 0; i < grid.nx; i++) {
          const inside =
            grid.lonCentre[i] >= west && grid.lonCentre[i] <= east && grid.latCentre[j] >= south && grid.latCentre[j] <= north; // prettier-ignore
          if (inside && grid.mask[j * grid.nx + i] === 0) cells++;
        }
      return cells;
    };
    expect(land(20.2, 20.8, 5.2, 5.6)).toBe(0);
    expect(note(setup, 'Speck')).toContain('is not there');
    const few = land(25.5, 26.3, 5.2, 6.2);
    expect(few).toBeGreaterThan(0);
    expect(note(setup, 'Skerry')).toContain(few === 1 ? 'is one cell' : `is ${few} cells`);
  });

  it('starts from rest where the setup starts from a state, and says so', () => {
    const setup = changed((one) => {
      one.start = { kind: 'state', runId: 'r', fingerprint: 'f', stateSha256: 's', startStep: 16, stepsPerDay: 16 };
    });
    expect(sketchSetup(setup).setup.start).toEqual({ kind: 'rest' });
    expect(note(setup, 'starts from rest')).toBeDefined();
  });

  it('cuts the length to whole years before the cells grow beyond a third of the trapping scale', () => {
    const setup = changed((one) => (one.length.days = 73_000));
    const { setup: sketch } = sketchSetup(setup);
    expect(sketch.length.days % 365).toBe(0);
    expect(sketch.length.days).toBeGreaterThanOrEqual(365);
    const result = preflight(sketch);
    expect(number(result, 'trappingScale') / number(result, 'dx')).toBeGreaterThanOrEqual(3);
    expect(note(setup, 'Length cut')).toContain('from 73\u202f000');
  });

  it('keeps a small setup on its own grid', () => {
    const setup = changed((one) => {
      one.length.days = 10;
      one.basin.islands = [];
    });
    const { setup: sketch, coarser } = sketchSetup(setup);
    expect(coarser).toEqual({ longitude: 1, latitude: 1 });
    expect(sketch.friction).toEqual(setup.friction);
    expect(sketch.numerics).toEqual(setup.numerics);
  });

  it('records a row every whole quarter of a day, four hundred at most, to the very end', () => {
    for (const days of [1, 10, 365, 2555, 2555.25]) {
      const { setup: sketch } = sketchSetup(changed((one) => (one.length.days = days)));
      const { frameIntervalDays } = sketch.output;
      expect(Number.isInteger(frameIntervalDays * 4)).toBe(true);
      expect(sketch.length.days / frameIntervalDays).toBeLessThanOrEqual(400);
      if (days !== 2555.25) expect(Number.isInteger(sketch.length.days / frameIntervalDays)).toBe(true);
    }
  });

  it('says why there is none', () => {
    const dry = changed(({ basin }) => {
      basin.islands = [{ kind: 'box', name: 'All', westDeg: -1, eastDeg: 61, southDeg: -18, northDeg: 18 }];
    });
    expect(() => sketchSetup(dry)).toThrow(/No sketch.*at least one must be water/);
  });
});
