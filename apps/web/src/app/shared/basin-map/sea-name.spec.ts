import { freePlace } from './sea-name';

const area = { x: 0, y: 0, width: 400, height: 200 };

describe('freePlace', () => {
  it('stands two thirds east and a quarter down where nothing is in the way', () => {
    const box = freePlace(area, 100, 20, []);
    expect(box).not.toBeNull();
    expect((box?.x ?? 0) + 50).toBeCloseTo(267, -1);
    expect((box?.y ?? 0) + 10).toBeCloseTo(50, -1);
  });
  it('keeps off what is drawn', () => {
    const line = { x: 0, y: 30, width: 400, height: 60 };
    const box = freePlace(area, 100, 20, [line]);
    expect(box && (box.y + 20 <= 30 || box.y >= 90)).toBe(true);
  });
  it('says when there is no room', () => {
    expect(freePlace(area, 500, 20, [])).toBeNull();
    expect(freePlace(area, 100, 20, [area])).toBeNull();
  });
});
