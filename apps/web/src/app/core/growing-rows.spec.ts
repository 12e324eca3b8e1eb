import { type SliceHead } from '@halfdeep/contracts';
import { Subject, of, throwError } from 'rxjs';
import { GrowingSlice, RowStore } from './growing-rows';
import { SliceError, type Slice } from './slices';

const WIDTH = 3;
/** Record k lies on day 5k and holds 10k, 10k + 1, 10k + 2. */
function records(from: number, count: number): Slice {
  const head = {
    runId: 'r',
    name: 'x',
    variable: null,
    unit: null,
    dtype: 'float32',
    shape: [count, WIDTH],
    axes: [
      { name: 'time', unit: 'd', values: Array.from({ length: count }, (_, k) => 5 * (from + k)) },
      { name: 'longitude', unit: '° E', values: [1, 2, 3] },
    ],
    line: null,
    columns: null,
    from,
    available: from + count,
  } as unknown as SliceHead;
  const data = Float32Array.from(
    { length: count * WIDTH },
    (_, k) => 10 * (from + Math.floor(k / WIDTH)) + (k % WIDTH),
  );
  return { head, data };
}

describe('RowStore', () => {
  it('grows past its capacity and keeps every value', () => {
    const store = new RowStore();
    for (let from = 0; from < 300; from += 7) store.append(records(from, 7));
    expect(store.count).toBe(301);
    expect(Array.from(store.row(300))).toEqual([3000, 3001, 3002]);
    expect(store.day(300)).toBe(1500);
    expect(Array.from(store.column(2).subarray(0, 3))).toEqual([2, 12, 22]);
  });

  it('takes only what is new from an overlapping range', () => {
    const store = new RowStore();
    store.append(records(0, 10));
    expect(store.append(records(6, 8))).toBe(4);
    expect(store.count).toBe(14);
    expect(store.value(13, 0)).toBe(130);
    expect(store.append(records(2, 3))).toBe(0);
  });

  it('refuses a gap and another width', () => {
    const store = new RowStore();
    store.append(records(0, 4));
    expect(() => store.append(records(6, 2))).toThrowError(/Record 4 was expected next; record 6 arrived/);
    const wide = records(4, 1);
    wide.head.shape = [1, 4];
    expect(() => store.append(wide)).toThrowError(SliceError);
  });

  it('answers NaN outside', () => {
    const store = new RowStore();
    store.append(records(0, 2));
    expect(store.value(2, 0)).toBeNaN();
    expect(store.value(0, 3)).toBeNaN();
    expect(store.day(-1)).toBeNaN();
  });

  it('goes back to a checkpoint and on again', () => {
    const store = new RowStore();
    store.append(records(0, 10));
    store.truncate(6);
    expect(store.day(6)).toBeNaN();
    store.append(records(6, 2));
    expect(store.count).toBe(8);
    expect(store.value(7, 1)).toBe(71);
  });
});

describe('GrowingSlice', () => {
  const server = (asked: [number, number][]) => (from: number, to: number) => {
    asked.push([from, to]);
    const first = Math.max(0, Math.ceil(from / 5));
    return of(records(first, Math.max(0, Math.floor(to / 5) - first + 1)));
  };
  const mark = (available: number) => ({ available, firstDay: 0, intervalDays: 5 });

  it('asks once for everything, then only for what is missing', () => {
    const asked: [number, number][] = [];
    const slice = new GrowingSlice(server(asked), WIDTH);
    slice.want(mark(4));
    expect(asked).toEqual([[0, 17.5]]);
    slice.want(mark(6));
    expect(asked[1]).toEqual([17.5, 27.5]);
    expect(slice.rows.count).toBe(6);
    expect(slice.reading()).toBeNull();
    slice.want(mark(6));
    expect(asked.length).toBe(2);
  });

  it('reads a long history in pieces and counts them', () => {
    const answers: Subject<Slice>[] = [];
    const wide = 16_384; // four rows of 64 Ki values, but never fewer than 16 rows a piece
    const slice = new GrowingSlice(() => {
      const answer = new Subject<Slice>();
      answers.push(answer);
      return answer;
    }, wide);
    slice.want(mark(40));
    expect(slice.reading()).toEqual({ done: 0, of: 3 });
    answers[0]?.next(records(0, 16));
    answers[0]?.complete();
    // The true width is known now: the rest fits one piece.
    expect(slice.reading()).toEqual({ done: 1, of: 2 });
    answers[1]?.next(records(16, 24));
    expect(slice.reading()).toBeNull();
    expect(slice.rows.count).toBe(40);
  });

  it('keeps what it has after an error, and goes on when asked again', () => {
    let fail = false;
    const good = server([]);
    const slice = new GrowingSlice(
      (from, to) => (fail ? throwError(() => new Error('no answer')) : good(from, to)),
      WIDTH,
    );
    slice.want(mark(4));
    fail = true;
    slice.want(mark(8));
    expect(slice.error()).toBeInstanceOf(Error);
    expect(slice.rows.count).toBe(4);
    fail = false;
    slice.again();
    expect(slice.error()).toBeNull();
    expect(slice.rows.count).toBe(8);
  });

  it('forgets records that the run went back from', () => {
    const slice = new GrowingSlice(server([]), WIDTH);
    slice.want(mark(8));
    const version = slice.version();
    slice.want(mark(5));
    expect(slice.rows.count).toBe(5);
    expect(slice.version()).toBeGreaterThan(version);
    slice.want(mark(9));
    expect(slice.rows.count).toBe(9);
    expect(slice.rows.value(8, 0)).toBe(80);
  });

  it('asks for nothing after it was closed', () => {
    const asked: [number, number][] = [];
    const slice = new GrowingSlice(server(asked), WIDTH);
    slice.close();
    slice.want(mark(4));
    expect(asked).toEqual([]);
  });
});
