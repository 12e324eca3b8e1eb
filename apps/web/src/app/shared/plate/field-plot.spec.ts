import { ChangeDetectionStrategy, Component, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { type Field, FieldPlot } from './field-plot';
import { PlotLink } from './plot-link';
import { type PlotLayout, type PlotTrace, PlotlyLoader } from './plotly';

const FIELD: Field = {
  x: [0.5, 1.5, 2.5, 3.5],
  y: [-1, 0, 1],
  rows: [
    [NaN, -1, -2, -3],
    [NaN, 7.06, 8, 9],
    [NaN, 1, 2, 3],
  ],
  xKind: 'longitude',
  yKind: 'latitude',
  factor: 1,
  unit: 'm',
  scale: 'diverging',
  version: 1,
};

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [FieldPlot],
  template: `<app-field-plot
    label="Map"
    [field]="field()"
    [axes]="{ x: 'longitude', y: 'latitude' }"
    [xFull]="[0, 4]"
    [yFull]="[-1.5, 1.5]"
    [limits]="{ min: -20, max: 20 }"
    [link]="link"
    (playPressed)="played = played + 1"
  />`,
})
class Host {
  readonly field = signal<Field | null>(FIELD);
  readonly link = new PlotLink();
  played = 0;
}

describe('FieldPlot', () => {
  const drawn: { traces: PlotTrace[]; layout: PlotLayout }[] = [];
  const plotly = {
    react: (_: HTMLElement, traces: PlotTrace[], layout: PlotLayout) => {
      drawn.push({ traces, layout });
      return Promise.resolve();
    },
    purge: () => undefined,
    toImage: () => Promise.resolve(''),
  };

  beforeEach(() => {
    drawn.length = 0;
    // jsdom lays nothing out: the plot is told that it is 600 px wide.
    vi.spyOn(HTMLElement.prototype, 'clientWidth', 'get').mockReturnValue(600);
    vi.spyOn(HTMLCanvasElement.prototype, 'getContext').mockReturnValue(null);
    vi.stubGlobal(
      'IntersectionObserver',
      class {
        constructor(private readonly tell: (entries: { isIntersecting: boolean }[]) => void) {}
        observe = () => this.tell([{ isIntersecting: true }]);
        disconnect = () => undefined;
      },
    );
    vi.stubGlobal(
      'ResizeObserver',
      class {
        observe = () => undefined;
        disconnect = () => undefined;
      },
    );
    TestBed.configureTestingModule({
      providers: [{ provide: PlotlyLoader, useValue: { load: () => Promise.resolve(plotly) } }],
    });
  });
  afterEach(() => {
    vi.unstubAllGlobals();
    vi.restoreAllMocks();
  });

  async function open() {
    const fixture = TestBed.createComponent(Host);
    await fixture.whenStable();
    await vi.waitFor(() => expect(drawn.length).toBeGreaterThan(0));
    const element = fixture.nativeElement as HTMLElement;
    const plot = element.querySelector<HTMLElement>('[role=application]')!;
    const press = async (key: string, shiftKey = false) => {
      plot.dispatchEvent(new KeyboardEvent('keydown', { key, shiftKey, bubbles: true, cancelable: true }));
      await fixture.whenStable();
    };
    const said = () => element.querySelector('[aria-live]')!.textContent.trim();
    return { fixture, host: fixture.componentInstance, press, said, element };
  }

  it('draws the rows from south to north on a scale that is symmetric about zero', async () => {
    await open();
    const [trace] = drawn.at(-1)!.traces;
    expect(trace).toMatchObject({ type: 'heatmap', zmin: -20, zmax: 20, zsmooth: 'fast' });
    expect(trace?.type === 'heatmap' && trace.z[1]?.[1]).toBe(7.06);
  });

  it('says the value under the cursor with its place and unit, and land where there is none', async () => {
    const { host, press, said, element } = await open();
    host.link.cursor.set({ x: 1.4, y: 0.2 });
    await press('Enter');
    expect(said()).toMatch(/^1\.50°\sE, 0°: \+7\.1\sm$/);
    expect(element.querySelector('svg text[style*="600 12px"]')?.textContent).toMatch(/^\+7\.1\sm$/);
    await press('ArrowUp');
    expect(said()).toMatch(/\+1\.0\sm$/);
    await press('ArrowLeft');
    expect(said()).toMatch(/land$/);
  });

  it('moves further with Shift and stays inside', async () => {
    const { host, press } = await open();
    await press('Enter');
    await press('ArrowRight', true);
    expect(host.link.cursor()?.x).toBe(3.5);
    await press('ArrowDown', true);
    expect(host.link.cursor()?.y).toBe(-1);
  });

  it('zooms about the cursor, shows the whole again, and leaves', async () => {
    const { host, press } = await open();
    await press('+');
    expect(host.link.xZoom()).toBeNull();
    await press('Enter');
    await press('+');
    const [low, high] = host.link.xZoom()!;
    expect(high - low).toBeCloseTo(3.2, 9);
    await vi.waitFor(() => expect(drawn.at(-1)!.layout.xaxis.range).toEqual([low, high]));
    await press('0');
    expect(host.link.xZoom()).toBeNull();
    await press('Escape');
    expect(host.link.cursor()).toBeNull();
  });

  it('plays with Space, inside or not', async () => {
    const { host, press } = await open();
    await press(' ');
    expect(host.played).toBe(1);
  });

  it('draws nothing but the frame while there is no field', async () => {
    const { fixture, host } = await open();
    host.field.set(null);
    await fixture.whenStable();
    await vi.waitFor(() => expect(drawn.at(-1)!.traces).toEqual([]));
  });
});
