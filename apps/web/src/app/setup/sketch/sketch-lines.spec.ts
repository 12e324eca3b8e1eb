import { corvaneSetup } from '@halfdeep/ocean';
import { lineChoices } from './sketch-lines';

describe('lines of a sketch', () => {
  it('are the equator, the sections and the middle meridian, each once', () => {
    const setup = corvaneSetup();
    setup.output.sections = [
      { name: 'Equator', along: 'latitude', atDeg: 0 },
      { name: 'North', along: 'latitude', atDeg: 10 },
      { name: '', along: 'longitude', atDeg: 30 },
    ];
    expect(lineChoices(setup).map(({ label }) => label)).toEqual(['the equator', 'North, 10°\u00a0N', '30°\u00a0E']);
  });

  it('begin with the middle latitude where the basin does not hold the equator', () => {
    const setup = corvaneSetup();
    Object.assign(setup.basin, { southDeg: 20, northDeg: 45 });
    setup.output.sections = [];
    expect(lineChoices(setup).map(({ along, askedDeg }) => [along, askedDeg])).toEqual([
      ['latitude', 32.5],
      ['longitude', 30],
    ]);
  });
});
