import { describe, expect, it } from 'vitest';
import { buildGrid } from '../grid/build-grid';
import { corvaneSetup } from '../presets/corvane';
import { preflight } from './preflight';
import { applyRemedy } from './remedies';
import { changed, row } from './testing';

describe('size, disk and places', () => {
  it('refuses an oversize grid with the limit, and offers cells that fit', () => {
    const fine = changed(({ numerics }) => (numerics.spacingLongitudeDeg = numerics.spacingLatitudeDeg = 0.01));
    const check = row(preflight(fine), 'cells');
    expect(check).toMatchObject({ verdict: 'refuse', value: 6000 * 3500, limit: 4_000_000 });
    expect(check.reason).toMatch(/at most 4.000.000 cells/);
    expect(() => buildGrid(fine)).toThrow(RangeError);
    const after = applyRemedy(fine, check.remedy!);
    expect(row(preflight(after), 'cells').verdict).toBe('pass');
    expect(buildGrid(after).nx).toBeLessThan(6000);
  });
  it('answers for a grid of a hundred million cells without making it', () => {
    const huge = changed(({ numerics }) => (numerics.spacingLongitudeDeg = numerics.spacingLatitudeDeg = 0.004));
    const result = preflight(huge);
    expect(result.cost.cells).toBeGreaterThan(1e8);
    expect(result.cost.wetCells / result.cost.cells).toBeCloseTo(31_824 / 33_600, 3);
    expect(row(result, 'cells').remedy!.label).toMatch(/^Use 0.0(32|25|64)/);
  });
  it('refuses cells finer than the hard limit in km', () => {
    const polar = changed(({ basin, numerics, output }) => {
      Object.assign(basin, {
        geometry: 'fplane',
        eastDeg: 1,
        southDeg: 79,
        northDeg: 80,
        islands: [],
        westernCoast: { kind: 'rectangular' },
      });
      Object.assign(numerics, { spacingLongitudeDeg: 0.02, spacingLatitudeDeg: 0.02 });
      output.sections = [];
      output.moorings = [];
    });
    const check = row(preflight(polar), 'spacing');
    expect(check).toMatchObject({ verdict: 'refuse', limit: 0.5, unit: 'km' });
    expect(() => buildGrid(polar)).toThrow(/between 0.5 and 600 km/);
    expect(() => buildGrid(applyRemedy(polar, check.remedy!))).not.toThrow();
  });
  it('weighs disk against quota and free space, and keeps frames more rarely', () => {
    const { diskBytes } = preflight(corvaneSetup()).cost;
    const within = (share: number) => preflight(corvaneSetup(), { quotaBytes: diskBytes / share, freeDiskBytes: 1e12 });
    expect([0.4, 0.6, 1.01].map((share) => row(within(share), 'disk-quota').verdict)).toEqual([
      'pass',
      'caution',
      'refuse',
    ]);
    const refused = row(within(1.01), 'disk-quota');
    const after = applyRemedy(corvaneSetup(), refused.remedy!);
    expect(after.output.frameIntervalDays).toBeGreaterThan(5);
    expect(row(preflight(after, { quotaBytes: diskBytes / 1.01 }), 'disk-quota').verdict).toBe('pass');
    expect(row(preflight(corvaneSetup(), { freeDiskBytes: 0 }), 'disk-free').verdict).toBe('refuse');
  });
  it('names the section and the mooring that lie on land, and moves the mooring to the nearest water', () => {
    const dry = changed(({ output, basin }) => {
      basin.islands.push({ kind: 'box', name: 'Bar', westDeg: -1, eastDeg: 61, southDeg: 3, northDeg: 4 });
      output.sections.push({ name: 'Over the bar', along: 'latitude', atDeg: 3.5 });
      output.sections.push({ name: 'On the wall', along: 'longitude', atDeg: 60 });
      output.moorings.push({ name: 'Aground', longitudeDeg: 42, latitudeDeg: -7 });
    });
    const result = preflight(dry);
    const sections = row(result, 'sections');
    expect(sections).toMatchObject({
      verdict: 'caution',
      pointers: ['/output/sections/4/atDeg', '/output/sections/5/atDeg'],
    });
    expect(sections.reason).toContain('“Over the bar”, “On the wall” lie on land');
    const moorings = row(result, 'moorings');
    expect(moorings).toMatchObject({ verdict: 'refuse', value: 5, limit: 6 });
    expect(moorings.reason).toContain('“Aground”');
    const after = preflight(applyRemedy(applyRemedy(dry, sections.remedy!), moorings.remedy!));
    expect(row(after, 'sections').verdict).toBe('pass');
    expect(row(after, 'moorings').verdict).toBe('pass');
  });
  it('refuses a basin without water', () => {
    const dry = changed(({ basin, output }) => {
      basin.westernCoast = { kind: 'slanting', atSouthDeg: 90, atNorthDeg: 90 };
      output.sections = [];
      output.moorings = [];
    });
    expect(row(preflight(dry), 'water').verdict).toBe('refuse');
    expect(() => buildGrid(dry)).toThrow(RangeError);
  });
  it('tells what snapping moved', () => {
    const { notes } = preflight(changed(({ basin }) => (basin.southDeg = -17.4)));
    expect(notes).toHaveLength(1);
    expect(notes[0]).toContain('equator');
  });
});
