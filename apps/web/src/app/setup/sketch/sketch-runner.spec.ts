import { provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { Integration, PRESETS, type Setup, type SketchLine } from '@halfdeep/ocean';
import { SetupDraft } from '../setup-draft';
import { SKETCH_THREAD, SketchRunner, type SketchThread } from './sketch-runner';
import { SketchWork, type SketchOrder, type SketchReport } from './sketch-work';

/** The work itself without a thread: it goes on only when the test says so. */
class HandledThread implements SketchThread {
  readonly waiting: (() => void)[] = [];
  ended = false;
  private listener: (event: MessageEvent<SketchReport>) => void = () => undefined;
  private readonly work = new SketchWork(
    (data) => this.listener(new MessageEvent('message', { data })),
    (go) => this.waiting.push(go),
  );

  postMessage(order: SketchOrder): void {
    this.work.take(structuredClone(order));
  }
  addEventListener(type: string, listener: unknown): void {
    if (type === 'message') this.listener = listener as typeof this.listener;
  }
  terminate(): void {
    this.ended = true;
  }
  goOn(): void {
    this.waiting.shift()?.();
  }
  toTheEnd(): void {
    while (this.waiting.length > 0) this.goOn();
  }
}

const setupOf = (id: string): Setup => structuredClone(PRESETS.find((preset) => preset.id === id)!.setup);
const EQUATOR: SketchLine = { variable: 'eta', along: 'latitude', askedDeg: 0 };

function begin(setup: Setup = { ...setupOf('kelvin-channel'), length: { days: 5 } }) {
  const threads: HandledThread[] = [];
  TestBed.configureTestingModule({
    providers: [
      provideZonelessChangeDetection(),
      SetupDraft,
      SketchRunner,
      {
        provide: SKETCH_THREAD,
        useValue: () => {
          const thread = new HandledThread();
          threads.push(thread);
          return thread;
        },
      },
    ],
  });
  const draft = TestBed.inject(SetupDraft);
  draft.fill(setup);
  return { draft, runner: TestBed.inject(SketchRunner), threads, last: () => threads.at(-1)! };
}

describe('SketchRunner', () => {
  it('draws rows as they come, and ends with the fingerprint of the same setup integrated elsewhere', () => {
    const { runner, last } = begin();
    runner.start(() => EQUATOR);
    expect(runner.state()).toBe('running');
    expect(runner.drawing()?.count).toBe(1); // the start
    last().toTheEnd();
    expect(runner.state()).toBe('ended');
    const coarse = runner.plan()!.setup;
    const whole = Integration.start(coarse);
    whole.advance(whole.totalSteps);
    expect(runner.fingerprint()).toEqual(whole.fingerprint());
    const drawing = runner.drawing()!;
    expect(drawing.count).toBe(coarse.length.days / coarse.output.frameIntervalDays + 1);
    const { nx } = whole.grid;
    const row = whole.grid.latCentre.indexOf(drawing.atDeg);
    expect(drawing.row(drawing.count - 1)).toEqual(whole.frame().eta.slice(row * nx, (row + 1) * nx));
  });

  it('draws another line of what was computed, while it goes on and when it has ended', () => {
    const { runner, last } = begin();
    runner.start(() => EQUATOR);
    last().goOn();
    runner.choose({ variable: 'v', along: 'longitude', askedDeg: 10 });
    last().toTheEnd();
    const rows = runner.drawing()!.count;
    expect(runner.drawing()?.row(0)).toHaveLength(runner.drawing()!.placesDeg.length);
    runner.choose({ ...EQUATOR, variable: 'u' });
    expect(runner.drawing()?.count).toBe(rows);
    expect(runner.drawing()?.line.variable).toBe('u');
  });

  it('is outdated once the form says something else, and again up to date when it says the same', () => {
    const { draft, runner, last } = begin();
    expect(runner.outdated()).toBe(false);
    runner.start(() => EQUATOR);
    last().toTheEnd();
    expect(runner.outdated()).toBe(false);
    const before = draft.at('/layer/restThicknessM');
    draft.set('/layer/restThicknessM', 150);
    expect(runner.outdated()).toBe(true);
    draft.set('/layer/restThicknessM', before);
    expect(runner.outdated()).toBe(false);
  });

  it('stops when told, keeps what was drawn, and ends the thread when it begins anew or is left', () => {
    const { runner, threads, last } = begin({ ...setupOf('corvane') });
    runner.start(() => EQUATOR);
    last().goOn();
    runner.stop();
    expect(runner.state()).toBe('stopped');
    const rows = runner.drawing()!.count;
    last().toTheEnd();
    expect(runner.drawing()?.count).toBe(rows);
    expect(runner.state()).toBe('stopped');
    runner.start(() => EQUATOR);
    expect(threads.map(({ ended }) => ended)).toEqual([true, false]);
    TestBed.resetTestingModule();
    expect(threads.map(({ ended }) => ended)).toEqual([true, true]);
  });

  it('says why there is no sketch, and why one broke off', () => {
    const dry = setupOf('corvane');
    dry.basin.islands = [{ kind: 'box', name: '', westDeg: 0, eastDeg: 60, southDeg: -17.5, northDeg: 17.5 }];
    const { draft, runner, last } = begin(dry);
    runner.start(() => EQUATOR);
    expect(runner.state()).toBe('impossible');
    expect(runner.reason()).toContain('at least one must be water');
    draft.fill({ ...setupOf('kelvin-channel'), length: { days: 5 } });
    vi.spyOn(Integration.prototype, 'advance').mockImplementation(() => {
      throw new RangeError('not of the integration');
    });
    runner.start(() => EQUATOR);
    // What is no failure of the integration is a fault of the program: it is not swallowed.
    expect(() => last().goOn()).toThrow('not of the integration');
    vi.restoreAllMocks();
  });

  it('waits while a field cannot be read', () => {
    const { draft, runner, threads } = begin();
    draft.set('/layer/restThicknessM', null);
    runner.start(() => EQUATOR);
    expect(runner.state()).toBe('none');
    expect(threads).toHaveLength(0);
  });
});
