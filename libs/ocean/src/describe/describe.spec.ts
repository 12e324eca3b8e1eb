import { describe, expect, it } from 'vitest';
import { corvaneSetup } from '../presets/corvane';
import { PRESETS } from '../presets/presets';
import type { Setup } from '../setup';
import { describeSetup } from './describe-setup';
import { diffSetups } from './diff-setups';
import { fieldLabel, fieldUnit } from './field-label';
import { FIELDS, patternOf } from './fields';
import { readable, readableBytes, readableDate, readablePair } from './numbers';

const changed = (change: (setup: Setup) => void): Setup => {
  const setup = corvaneSetup();
  change(setup);
  return setup;
};
const lines = (a: Setup, b: Setup) =>
  diffSetups(a, b).map(({ label, from, to, unit }) => `${label} ${from} → ${to}${unit ? ` ${unit}` : ''}`);

describe('readable numbers', () => {
  it.each([
    [2700, '2\u202f700'],
    [-0.852, '−0.852'],
    [2.2892e-11, '2.29 × 10⁻¹¹'],
    [1e-8, '1 × 10⁻⁸'],
    [12_345_678, '1.23 × 10⁷'],
    [1_234_567, '1\u202f230\u202f000'],
    [0, '0'],
    [-0, '0'],
    [0.1 + 0.2, '0.3'],
  ])('%f reads %s', (value, text) => {
    expect(readable(value)).toBe(text);
  });
  it.each([
    [0.03, 0.036, 0, ['0.030', '0.036']],
    [0.2, 0.1, 2, ['0.20', '0.10']],
    [1e-8, 2.5e-8, 0, ['1.0 × 10⁻⁸', '2.5 × 10⁻⁸']],
    [0, 1e-8, 0, ['0', '1 × 10⁻⁸']],
    [0.3, 0.1 + 0.2, 0, ['0.30000000000000000', '0.30000000000000004']],
    [365, 2555, 0, ['365', '2\u202f555']],
  ])('%f → %f with %i decimals', (a, b, decimals, texts) => {
    expect(readablePair(a, b, decimals)).toEqual(texts);
  });
  it('counts days of the model year from 1 January', () => {
    expect([0, 31, 59, 196, 364.9, 365].map(readableDate)).toEqual([
      '1 January',
      '1 February',
      '1 March',
      '16 July',
      '31 December',
      '1 January',
    ]);
  });
  it('gives bytes a decimal prefix', () => {
    expect([999, 1_300_000_000].map(readableBytes)).toEqual(['999 B', '1.3 GB']);
  });
});

describe('diffSetups', () => {
  it('is empty for equal setups, whatever the order of keys', () => {
    const shuffled = Object.fromEntries(Object.entries(corvaneSetup()).reverse()) as unknown as Setup;
    expect(diffSetups(corvaneSetup(), corvaneSetup())).toEqual([]);
    expect(diffSetups(corvaneSetup(), shuffled)).toEqual([]);
  });
  it('says the seasonal strength of the strong run', () => {
    expect(diffSetups(corvaneSetup(), corvaneSetup(1.2))).toEqual([
      { pointer: '/wind/seasonalStrength', label: 'seasonal strength', from: '1.00', to: '1.20', unit: '' },
    ]);
  });
  it('names the component whose stress changed, though it moved in the list', () => {
    const b = changed(({ wind }) => {
      const shear = wind.components[2];
      if (shear.pattern.kind === 'linearShear') shear.pattern.stressNM2 = 0.036;
    });
    expect(lines(corvaneSetup(), b)).toEqual(['Halcyon shear, stress 0.030 → 0.036 N/m²']);
    b.wind.components.unshift(b.wind.components.pop()!);
    expect(lines(corvaneSetup(), b)).toEqual([
      'Halcyon shear, stress 0.030 → 0.036 N/m²',
      'order of the wind components Northern belt, Southern belt, Halcyon shear → Halcyon shear, Northern belt, Southern belt',
    ]);
    expect(diffSetups(corvaneSetup(), b)[0].pointer).toBe('/wind/components/0/pattern/stressNM2');
  });
  it('tells an added, a removed and a renamed member apart', () => {
    const b = changed(({ output, basin }) => {
      output.sections[0].name = 'North';
      output.sections.push({ name: 'S 5', along: 'latitude', atDeg: -5 });
      basin.islands = [];
    });
    expect(lines(corvaneSetup(), b)).toEqual([
      'island Tern Island 40.5° E to 43.5° E, 8° S to 6° S → none',
      'North, name N 10 → North',
      'section S 5 none → along 5° S',
    ]);
    expect(diffSetups(corvaneSetup(), b).map((change) => change.pointer)).toEqual([
      '/basin/islands',
      '/output/sections/0/name',
      '/output/sections/4',
    ]);
  });
  it('sums up a change of kind, of a choice, and of a value that was not set', () => {
    const b = changed(({ basin, start, friction }) => {
      basin.westernCoast = { kind: 'rectangular' };
      basin.betaPerMS = 2e-11;
      Object.assign(start, { kind: 'step', amplitudeM: -5, latitudeDeg: 3 });
      friction.slip = 'none';
      friction.rayleighPerS = 2e-8;
    });
    expect(lines(corvaneSetup(), b)).toEqual([
      'β from the latitude → 2 × 10⁻¹¹ 1/(m s)',
      'western coast slanting from 0° in the south to 6° E in the north → straight',
      'start rest → step of −5 m at 3° N',
      'Rayleigh drag 1 × 10⁻⁸ → 2 × 10⁻⁸ 1/s',
      'coast free slip → no slip',
    ]);
  });
  it('finds the point of a polygon that moved', () => {
    const withIsle = (longitude: number) =>
      changed(({ basin }) => {
        basin.islands.push({ kind: 'polygon', name: 'Isle', points: [[10, 1], [longitude, 1], [11, 2]] }); // prettier-ignore
      });
    expect(lines(withIsle(12), withIsle(12.5))).toEqual(['Isle, points 12.0° E 1° N → 12.5° E 1° N']);
  });
});

it('says what changes in sponges, viscosity, entrainment and the coast', () => {
  const sponge = (edge: 'north' | 'south', widthDeg: number) => ({
    edge,
    widthDeg,
    peakRatePerS: null,
    tapersWind: true,
  });
  const a = changed(({ basin, friction }) => {
    basin.sponges = [sponge('south', 4), sponge('north', 4)];
    friction.viscosityPatches = [
      { name: 'Shelf', addedM2S: 500, longitudeDeg: 3, latitudeDeg: 1, widthLongitudeDeg: 2, widthLatitudeDeg: 2 },
    ];
  });
  const b = changed(({ basin, layer, numerics, output, wind }) => {
    basin.sponges = [sponge('north', 5)];
    basin.coastSpacing = { longitudeDeg: 0.5, latitudeDeg: 0.5 };
    numerics.equations = 'nonlinear';
    layer.entrainment = { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' };
    wind.stressFloorM = 50;
    output.momentumBudget = true;
  });
  expect(lines(a, b)).toEqual([
    'north sponge, width 4 → 5 °',
    'south sponge 4° wide, rate 6.9 c/W, wind tapered → none',
    'grid of the coast the run’s own → 0.5° × 0.5°',
    'entrainment none → below 60 m in 10 d',
    'stress floor 0 → 50 m',
    'place of other viscosity Shelf 500 m²/s added at 3° E 1° N, widths 2° and 2° → none',
    'equations linear → nonlinear',
    'momentum budget not kept → kept',
  ]);
  const slower = structuredClone(b);
  slower.layer.entrainment!.timescaleDays = 20;
  expect(lines(b, slower)).toEqual(['entrainment time 10 → 20 d']);
  expect(fieldLabel('/basin/sponges/0/widthDeg', a)).toBe('South sponge, width');
  expect(fieldLabel('/basin/sponges/0/widthDeg')).toBe('Sponge 1, width');
  expect(fieldLabel('/friction/viscosityPatches/0/addedM2S', a)).toBe('Shelf, added viscosity');
});

describe('describeSetup', () => {
  it('says the Corvane Basin in a few words', () => {
    expect(describeSetup(corvaneSetup(1.2))).toEqual({
      basin: '60° × 35°, equatorial plane, slanting coast, 1 island',
      layer: 'H 200 m, g′ 0.03 m/s², c 2.45 m/s',
      season: 'Halcyon shear × 1.2 yearly, peak 16 July; 2 components steady',
    });
  });
  it('says nonlinear equations, entrainment and sponges', () => {
    const setup = changed(({ basin, layer, numerics }) => {
      numerics.equations = 'nonlinear';
      layer.entrainment = { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' };
      basin.geometry = 'spherical';
      basin.sponges = [{ edge: 'north', widthDeg: 5, peakRatePerS: null, tapersWind: true }];
    });
    expect(describeSetup(setup)).toMatchObject({
      basin: '60° × 35°, spherical band, slanting coast, 1 island, 1 sponge',
      layer: 'H 200 m, g′ 0.03 m/s², c 2.45 m/s, nonlinear, entrains below 60 m',
    });
  });
  it('says when there is no wind', () => {
    expect(describeSetup(PRESETS.find((preset) => preset.id === 'kelvin-channel')!.setup)).toMatchObject({
      basin: '40° × 30°, equatorial plane, periodic',
      season: 'no wind',
    });
  });
});

describe('fieldLabel', () => {
  it('names fields, members of lists, and what lies in a request', () => {
    expect(fieldLabel('/layer/restThicknessM')).toBe('Thickness at rest');
    expect(fieldLabel('/wind/components/2/pattern/stressNM2')).toBe('Wind component 3, stress');
    expect(fieldLabel('/wind/components/2/pattern/stressNM2', corvaneSetup())).toBe('Halcyon shear, stress');
    expect(fieldLabel('/setup/output/moorings/9/longitudeDeg', corvaneSetup())).toBe('Mooring 10, longitude');
    expect(fieldLabel('/basin/islands/0/points/2/1')).toBe('Island 1, point');
    expect(fieldLabel('/layer/nonsense/deeper')).toBe('Layer');
    expect(fieldLabel('/setup')).toBe('Setup');
    expect(fieldUnit('/setup/layer/restThicknessM')).toBe('m');
  });
  it('knows every field of every ready setup', () => {
    const unknown = new Set<string>();
    const visit = (value: unknown, pointer: string) => {
      if (!Object.hasOwn(FIELDS, patternOf(pointer))) unknown.add(pointer);
      if (typeof value === 'object' && value !== null)
        for (const [key, child] of Object.entries(value)) visit(child, `${pointer}/${key}`);
    };
    for (const { setup } of PRESETS) visit(setup, '');
    visit(
      changed(({ basin, layer, friction }) => {
        basin.sponges = [{ edge: 'north', widthDeg: 5, peakRatePerS: null, tapersWind: true }];
        basin.coastSpacing = { longitudeDeg: 0.5, latitudeDeg: 0.5 };
        layer.entrainment = { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' };
        friction.viscosityPatches = [
          { name: '', addedM2S: 500, longitudeDeg: 3, latitudeDeg: 1, widthLongitudeDeg: 2, widthLatitudeDeg: 2 },
        ];
      }),
      '',
    );
    expect([...unknown]).toEqual([]);
  });
});
