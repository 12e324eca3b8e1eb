import { graduation, mapFrame, pxX, pxY, ticks, tickStep } from './map-frame';

const corvane = { westDeg: 0, eastDeg: 60, southDeg: -17.5, northDeg: 17.5 };

describe('mapFrame', () => {
  it('gives a degree of longitude and of latitude the same length', () => {
    const frame = mapFrame(corvane, 480, 360);
    expect(frame.equalDegrees).toBe(true);
    expect(pxX(frame, 10) - pxX(frame, 0)).toBeCloseTo(pxY(frame, 0) - pxY(frame, 10), 9);
    expect(frame.x + frame.width).toBeLessThanOrEqual(480);
  });
  it('draws a sliver out of scale and says so', () => {
    const frame = mapFrame({ ...corvane, eastDeg: 1 }, 480, 360);
    expect(frame.equalDegrees).toBe(false);
    expect(frame.width).toBeGreaterThan(30);
  });
});

describe('graduation', () => {
  it('inks alternate stretches and reaches both ends', () => {
    const stretches = graduation(-17.5, 17.5, 5);
    expect(stretches[0]).toMatchObject({ from: -17.5, to: -15 });
    expect(stretches.at(-1)).toMatchObject({ from: 15, to: 17.5 });
    for (let k = 1; k < stretches.length; k++) expect(stretches[k].inked).toBe(!stretches[k - 1].inked);
  });
});

it('chooses round ticks that stand apart', () => {
  expect(tickStep(7, 56)).toBe(10);
  expect(ticks(-17.5, 17.5, 10)).toEqual([-10, 0, 10]);
});
