import { sameValue, toPointer, valueAt, withValueAt } from './setup-pointer';

const data = { basin: { islands: [{ name: 'a' }, { name: 'b' }] }, 'a/b~c': 1 };

describe('JSON pointers', () => {
  it('reads through objects and lists', () => {
    expect(valueAt(data, '/basin/islands/1/name')).toBe('b');
    expect(valueAt(data, '/a~1b~0c')).toBe(1);
    expect(valueAt(data, '')).toBe(data);
    expect(valueAt(data, '/basin/lakes/0')).toBeUndefined();
  });
  it('writes a copy and shares the rest', () => {
    const changed = withValueAt(data, '/basin/islands/0/name', 'c');
    expect(changed.basin.islands.map((island) => island.name)).toEqual(['c', 'b']);
    expect(changed.basin.islands[1]).toBe(data.basin.islands[1]);
    expect(data.basin.islands[0]?.name).toBe('a');
  });
  it('appends behind a list', () => {
    expect(withValueAt(data, '/basin/islands/-', { name: 'd' }).basin.islands).toHaveLength(3);
  });
  it('refuses a place that is not there', () => {
    expect(() => withValueAt(data, '/basin/islands/7/name', 'x')).toThrow(RangeError);
    expect(() => withValueAt(data, '/a~1b~0c/deep', 'x')).toThrow(RangeError);
  });
  it('writes the pointer of a path', () => {
    expect(toPointer(['basin', 'islands', 0, 'a/b'])).toBe('/basin/islands/0/a~1b');
  });
  it('compares plain values', () => {
    expect(sameValue(data, structuredClone(data))).toBe(true);
    expect(sameValue([1, 2], [1, 2, 3])).toBe(false);
    expect(sameValue([], {})).toBe(false);
  });
});
