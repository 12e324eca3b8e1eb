import { expect, it } from 'vitest';
import { buildGrid, Integration, type Frame, stressAt, VARIABLES, type Setup, type Variable } from '../index';
import { smallSetup } from '../testing/setups';
import { deriveColumn, deriveMap, deriveRow, nativesOf, neededColumns, neededRows, type NativeFields } from './derive';
import { VARIABLE_INFO } from './variable-info';

const closed = smallSetup();
const periodic = smallSetup({ basin: { ...closed.basin, zonallyPeriodic: true } });
const noSlip = smallSetup({ friction: { ...closed.friction, slip: 'none' } });

function spunUp(setup: Setup): { run: Integration; fields: Frame } {
  const run = Integration.start(setup);
  run.advance(120);
  return { run, fields: run.frame() };
}

it.each([
  ['closed', closed],
  ['periodic', periodic],
  ['no slip', noSlip],
])('makes the same rows and columns from few lines as from whole fields: %s', (_name, setup) => {
  const { run, fields } = spunUp(setup);
  const { grid } = run;
  const rowsOf = (data: Float32Array, columns: number, [first, end]: [number, number]) =>
    data.subarray(first * columns, end * columns);
  const columnsOf = (data: Float32Array, columns: number, [first, end]: [number, number]) => {
    const rows = data.length / columns;
    return Float32Array.from({ length: rows * (end - first) }, (_, k) => {
      const width = end - first;
      return data[Math.floor(k / width) * columns + first + (k % width)];
    });
  };
  const width = { eta: grid.nx, u: grid.nx + 1, v: grid.nx };
  for (const variable of VARIABLES) {
    const map = deriveMap(variable, grid, setup, fields);
    expect(map.data.length).toBe(map.shape[0] * map.shape[1]);
    expect(map.data.some((value) => value !== 0 && Number.isFinite(value))).toBe(true);
    for (const latitude of [-8, -3.1, 0, 0.2, 5, 8]) {
      const needed = neededRows(variable, grid, latitude);
      expect(Math.abs(needed.atDeg - latitude)).toBeLessThanOrEqual(0.25 + 1e-9);
      const row = deriveRow(variable, grid, setup, needed, {
        eta: needed.eta && rowsOf(fields.eta, width.eta, needed.eta),
        u: needed.u && rowsOf(fields.u, width.u, needed.u),
        v: needed.v && rowsOf(fields.v, width.v, needed.v),
        day: fields.day,
      });
      const start = needed.index * map.shape[1];
      expect(row, `${variable} at ${latitude}° N`).toEqual(map.data.slice(start, start + map.shape[1]));
    }
    for (const longitude of [0, 6.6, 13, 20]) {
      const needed = neededColumns(variable, grid, longitude);
      const column = deriveColumn(variable, grid, setup, needed, {
        eta: needed.eta && columnsOf(fields.eta, width.eta, needed.eta),
        u: needed.u && columnsOf(fields.u, width.u, needed.u),
        v: needed.v && columnsOf(fields.v, width.v, needed.v),
        day: fields.day,
      });
      const expected = Float32Array.from({ length: map.shape[0] }, (_, j) => map.data[j * map.shape[1] + needed.index]);
      expect(column, `${variable} at ${longitude}° E`).toEqual(expected);
    }
  }
});

it('leaves land blank and keeps the coast', () => {
  const { run, fields } = spunUp(closed);
  const { grid } = run;
  const [i, j] = [25, 10]; // 12.75° E, 2.75° S: on the island
  expect(grid.mask[j * grid.nx + i]).toBe(0);
  for (const variable of ['eta', 'h', 'uCentre', 'vCentre', 'speed', 'taux', 'tauy'] as const)
    expect(deriveMap(variable, grid, closed, fields).data[j * grid.nx + i]).toBeNaN();
  expect(deriveMap('u', grid, closed, fields).data[j * (grid.nx + 1)]).toBe(0);
  expect(deriveMap('eta', grid, closed, fields).data.filter(Number.isNaN).length).toBe(
    grid.nx * grid.ny - grid.wetCells,
  );
});

it('gives the vorticity of a solid rotation exactly, 2 ω, and q = (f + ζ)/h', () => {
  const setup = smallSetup({ basin: { ...closed.basin, islands: [] } });
  const grid = buildGrid(setup);
  const omega = 3e-6;
  const fields: NativeFields = {
    eta: new Float32Array(grid.nx * grid.ny).fill(50),
    u: Float32Array.from(
      { length: grid.ny * (grid.nx + 1) },
      (_, k) => -omega * grid.yCentre[Math.floor(k / (grid.nx + 1))],
    ),
    v: Float32Array.from({ length: (grid.ny + 1) * grid.nx }, (_, k) => omega * grid.xCentre[k % grid.nx]),
    day: 0,
  };
  const [i, j] = [9, 20];
  const at = j * (grid.nx + 1) + i;
  const zeta = deriveMap('vorticity', grid, setup, fields).data[at];
  expect(Math.abs(zeta / (2 * omega) - 1)).toBeLessThan(1e-4); // float32 fields, differenced
  const pv = deriveMap('pv', grid, setup, fields).data[at];
  expect(Math.abs((pv * 250) / (grid.f[j] + zeta) - 1)).toBeLessThan(1e-6);
});

it('takes the slip factor and the mean of the water cells at a coast', () => {
  const flow = 0.2;
  for (const [slip, factor] of [
    ['free', 0],
    ['none', 2],
  ] as const) {
    const setup = smallSetup({
      basin: { ...closed.basin, islands: [] },
      friction: { ...closed.friction, slip },
    });
    const grid = buildGrid(setup);
    const fields: NativeFields = {
      eta: new Float32Array(grid.nx * grid.ny).fill(50),
      u: new Float32Array(grid.ny * (grid.nx + 1)).fill(flow),
      v: new Float32Array((grid.ny + 1) * grid.nx),
      day: 0,
    };
    // On the southern wall: nothing moves beyond it, and the two cells north of it are all the water there is.
    const zeta = deriveMap('vorticity', grid, setup, fields).data[9];
    expect(Math.abs(zeta + (factor * flow) / grid.dy)).toBeLessThan((1e-6 * flow) / grid.dy);
    const pv = deriveMap('pv', grid, setup, fields).data[9];
    expect(Math.abs((pv * 250) / (grid.f[0] + zeta) - 1)).toBeLessThan(1e-6);
  }
});

it('reads the native fields that a variable is made of, and no others', () => {
  const { run, fields } = spunUp(noSlip);
  for (const variable of VARIABLES) {
    const natives = nativesOf(variable);
    const some: NativeFields = { day: fields.day };
    for (const name of natives) some[name] = fields[name];
    expect(deriveMap(variable, run.grid, noSlip, some)).toEqual(deriveMap(variable, run.grid, noSlip, fields));
    for (const name of natives)
      expect(() => deriveMap(variable, run.grid, noSlip, { ...fields, [name]: undefined })).toThrow(
        new RegExp(`${name} must hold .* none arrived`),
      );
  }
  expect(nativesOf('pv')).toEqual(['eta', 'u', 'v']);
  expect(nativesOf('taux')).toEqual([]);
});

it('pumps −τ0 (d/dy)(1/f) under a uniform zonal wind and nothing under τx = a y', () => {
  const calm = { amplitude: 0, peakDay: 0 };
  const season = { mean: 1, switchOnDays: 0, annual: calm, semiannual: calm };
  const withWind = (pattern: Setup['wind']['components'][number]['pattern']) =>
    smallSetup({ wind: { components: [{ name: '', pattern, season }], seasonalStrength: 1, stressFloorM: 0 } });
  const pumping = (setup: Setup) => {
    const { run, fields } = spunUp(setup);
    return { grid: run.grid, map: deriveMap('ekmanPumping', run.grid, setup, fields) };
  };
  const uniform = pumping(withWind({ kind: 'uniform', eastwardNM2: 0.05, northwardNM2: 0 }));
  const j = uniform.grid.latCentre.findIndex((latitude) => latitude > 5);
  const y = uniform.grid.yCentre[j];
  // wE = −(1/ρ0) ∂y(τx/f) = τx/(ρ0 β y²); the centred difference over 2 dy is larger by 1/(1 − (dy/y)²).
  const exact = 0.05 / (1025 * uniform.grid.beta * y * y);
  const found = uniform.map.data[j * uniform.grid.nx + 3];
  expect(found / exact).toBeCloseTo(1 / (1 - (uniform.grid.dy / y) ** 2), 5);
  const shear = pumping(
    withWind({ kind: 'linearShear', stressNM2: 0.03, overDistanceKm: 1500, fullWithinDeg: 10, zeroBeyondDeg: 15 }),
  );
  const largest = shear.map.data.reduce(
    (most, value) => (Number.isNaN(value) ? most : Math.max(most, Math.abs(value))),
    0,
  );
  expect(largest).toBeLessThan(1e-12 * exact);
  // Blank within L_eq = 327 km of the equator, 2.94°, and only there (and on land).
  uniform.grid.latCentre.forEach((latitude, row) =>
    expect(Number.isNaN(uniform.map.data[row * uniform.grid.nx + 3])).toBe(Math.abs(latitude) < 2.94),
  );
});

it('shows the wind of the day', () => {
  const { run, fields } = spunUp(closed);
  const { grid } = run;
  const [i, j] = [13, 18];
  const expected = stressAt(closed, grid.lonCentre[i], grid.latCentre[j], fields.day);
  expect(deriveMap('tauy', grid, closed, fields).data[j * grid.nx + i]).toBeCloseTo(expected.tauy, 8);
  expect(deriveMap('taux', grid, closed, fields).data[j * grid.nx + i]).toBeCloseTo(expected.taux, 8);
});

it('names a label, a unit and a scale for every variable', () => {
  expect(Object.keys(VARIABLE_INFO).sort()).toEqual([...VARIABLES].sort());
  for (const info of Object.values(VARIABLE_INFO)) expect(info.label && info.unit && info.symbol).toBeTruthy();
});

it('refuses fields of another size by name', () => {
  const { run, fields } = spunUp(closed);
  const short: NativeFields = { ...fields, u: fields.u.slice(1) };
  const derive = (variable: Variable) => () => deriveMap(variable, run.grid, closed, short);
  expect(derive('speed')).toThrow(/u must hold 32 × 41 values; 1311 arrived/);
  const needed = neededRows('eta', run.grid, 0);
  expect(() => deriveRow('eta', run.grid, closed, needed, { day: 0 })).toThrow(/none arrived/);
});
