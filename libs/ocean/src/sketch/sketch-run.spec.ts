import { describe, expect, it } from 'vitest';
import { Integration } from '../integration/integration';
import { shapeOf } from '../integration/levels';
import { smallSetup } from '../testing/setups';
import { SketchRun } from './sketch-run';

const setup = smallSetup({ length: { days: 12 } });

/** Steps a sketch to its end. */
function drawn() {
  const sketch = new SketchRun(setup);
  while (!sketch.ended) sketch.advance();
  return sketch;
}

describe('a sketch on its way', () => {
  it('ends with the fingerprint of the same setup integrated in one go', () => {
    const whole = Integration.start(setup);
    whole.advance(whole.totalSteps);
    expect(drawn().fingerprint()).toEqual(whole.fingerprint());
  });

  it('has a row for the start, one after each interval and one at the end', () => {
    const sketch = drawn();
    expect(Array.from(sketch.rowsOf({ variable: 'eta', along: 'latitude', askedDeg: 0 }).days)).toEqual([0, 5, 10, 12]);
    expect(sketch.rows).toBe(4);
    sketch.advance();
    expect(sketch.rows).toBe(4);
  });

  it.each(['eta', 'u', 'v'] as const)('draws %s along either line as it stands in the last frame', (variable) => {
    const sketch = drawn();
    const whole = Integration.start(setup);
    whole.advance(whole.totalSteps);
    const field = whole.frame()[variable];
    const [ny, nx] = shapeOf(sketch.grid, variable);
    const row = sketch.rowsOf({ variable, along: 'latitude', askedDeg: 3.1 }, 3);
    expect(row.first).toBe(3);
    const latitudes = variable === 'v' ? sketch.grid.latFace : sketch.grid.latCentre;
    const j = latitudes.indexOf(row.atDeg);
    expect(Math.abs(row.atDeg - 3.1)).toBeLessThanOrEqual((latitudes[1] - latitudes[0]) / 2 + 1e-9);
    expect(row.values).toEqual(field.slice(j * nx, (j + 1) * nx));
    const column = sketch.rowsOf({ variable, along: 'longitude', askedDeg: 13 }, 3);
    const i = (variable === 'u' ? sketch.grid.lonFace : sketch.grid.lonCentre).indexOf(column.atDeg);
    expect(column.values).toEqual(Float32Array.from({ length: ny }, (_, k) => field[k * nx + i]));
    expect(column.values.some((value) => Number.isNaN(value))).toBe(true); // the island
    expect(column.placesDeg).toHaveLength(ny);
  });
});
