import { type SliceHead } from '@halfdeep/contracts';
import { of } from 'rxjs';
import { GrowingSlice } from '../../core/growing-rows';
import { budgetClosures } from './budget-closures';

const column = (name: string, label: string, unit: string, kind: 'instant' | 'integral' | 'mean' = 'integral') => ({
  name,
  label,
  unit,
  kind,
});
const COLUMNS = [
  column('massAnomaly', 'Mass anomaly', 'Gt', 'instant'),
  column('massChange', 'Change of mass', 'Gt'),
  column('massResidual', 'Mass residual', 'Gt'),
  column('kineticEnergy', 'Kinetic energy', 'PJ', 'instant'),
  column('windWork', 'Work of the wind', 'PJ'),
  column('rayleighWork', 'Work of Rayleigh drag', 'PJ'),
  column('energyResidual', 'Energy residual', 'PJ'),
  column('momentumWind', 'Wind', 'GN', 'mean'),
  column('momentumResidual', 'Residual of zonal momentum', 'GN', 'mean'),
];

/** A budget series with these values of named columns, one record each; what is not named is 0. */
function series(...records: Record<string, number>[]): GrowingSlice {
  const width = COLUMNS.length;
  const head = {
    dtype: 'float64',
    shape: [records.length, width],
    axes: [{ name: 'time', unit: 'd', values: records.map((_, k) => k + 1) }],
    columns: [...COLUMNS],
    from: 0,
    available: records.length,
  } as unknown as SliceHead;
  const data = new Float64Array(records.length * width);
  records.forEach((record, k) => COLUMNS.forEach(({ name }, c) => (data[k * width + c] = record[name] ?? 0)));
  const slice = new GrowingSlice(() => of({ head, data }), width);
  slice.want({ available: records.length, firstDay: 1, intervalDays: 1 });
  return slice;
}

describe('budgetClosures', () => {
  it('holds the largest residual of any interval against the largest term of any interval', () => {
    const budget = series(
      // What is an instant is no term: the energy itself is far larger.
      { kineticEnergy: 99, windWork: 2, rayleighWork: -8, energyResidual: 1e-15 },
      { windWork: 4, rayleighWork: -1, energyResidual: -4e-15 },
    );
    const energy = budgetClosures(budget, 1e5).find(({ name }) => name === 'Energy')!;
    expect(energy).toEqual({
      name: 'Energy',
      unit: 'PJ',
      residual: 4e-15,
      reference: 8,
      referenceName: 'work of Rayleigh drag',
      share: 5e-16,
      closes: true,
    });
  });
  it('holds mass against the layer at rest, since without sources its terms are round-off', () => {
    const budget = series({ massChange: 1e-12, massResidual: 1e-12 });
    const mass = budgetClosures(budget, 1e5).find(({ name }) => name === 'Mass')!;
    expect(mass).toMatchObject({ reference: 1e5, referenceName: 'mass of the layer at rest', closes: true });
    expect(mass.share).toBeCloseTo(1e-17, 25);
  });
  it('finds every budget that the run keeps', () => {
    const found = budgetClosures(series({ momentumWind: 5, momentumResidual: 1e-14 }), 1e5);
    expect(found.map(({ name }) => name)).toEqual(['Mass', 'Energy', 'Zonal momentum']);
    expect(found[2]).toMatchObject({ unit: 'GN', reference: 5, referenceName: 'wind', closes: true });
  });
  it('says what does not close', () => {
    const [mass, energy] = budgetClosures(series({ windWork: 1, energyResidual: 1e-6 }), 1e5);
    expect([mass?.closes, energy?.closes]).toEqual([true, false]);
    const [, broken] = budgetClosures(series({ windWork: 1, energyResidual: NaN }), 1e5);
    expect(broken?.closes).toBe(false);
  });
  it('has nothing to say before the first interval', () => {
    expect(budgetClosures(series(), 1e5)).toEqual([]);
  });
});
