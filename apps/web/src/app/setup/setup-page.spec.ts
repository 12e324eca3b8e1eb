import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { provideRouter, Router } from '@angular/router';
import { corvaneSetup, type Setup } from '@halfdeep/ocean';
import { KeptDrafts } from '../core/kept-drafts';
import { SetupExchange } from './setup-exchange';
import { withValueAt } from './setup-pointer';
import { SetupPage } from './setup-page';

const EXPERIMENT = '11111111-1111-4111-8111-111111111111';
const RUN = '22222222-2222-4222-8222-222222222222';
const PERSON = { id: '33333333-3333-4333-8333-333333333333', name: 'A modeller' };
const place = { personId: 'nobody', experimentId: EXPERIMENT, parentRunId: RUN };

const experiment = {
  id: EXPERIMENT,
  question: 'Does it scale with the season?',
  owner: PERSON,
  createdAt: '2026-03-01T10:00:00Z',
  movedAt: '2026-03-01T10:00:00Z',
  moved: 'Control finished',
  physics: null,
  runs: { queued: 0, running: 0, finished: 1, stopped: 0, failed: 0 },
  can: { edit: true, queueRuns: true },
  notes: '',
  runList: [],
};
const run = (setup: Setup) => ({
  id: RUN,
  experimentId: EXPERIMENT,
  question: experiment.question,
  label: 'Control',
  state: 'finished',
  queuedReason: null,
  queuePosition: null,
  failure: null,
  parentRunId: null,
  parentLabel: null,
  descent: 'control',
  changes: [],
  owner: PERSON,
  createdAt: '2026-03-01T10:00:00Z',
  startedAt: null,
  endedAt: null,
  progress: {
    step: 10,
    totalSteps: 10,
    startStep: 0,
    day: 1,
    totalDays: 1,
    cellStepsPerSecond: null,
    secondsLeft: null,
    records: { frames: 1, sections: 1, moorings: 1, budget: 1 },
    savedStep: null,
    cautions: [],
  },
  fingerprint: null,
  grid: { nx: 240, ny: 140 },
  diskBytes: null,
  can: { stop: false, resume: false, extend: true, repeat: true, derive: true, delete: false },
  setup,
  preflight: {},
  lastState: null,
});
const desk = {
  since: null,
  queue: { cap: 2, paused: false, running: 2, waiting: 1 },
  running: [],
  waiting: [],
  ended: [],
  recent: false,
  disk: { usedBytes: 0, quotaBytes: 2e10, freeBytes: 1e11 },
};

/** The page over a parent run, once the server has answered. */
async function openPage() {
  TestBed.configureTestingModule({
    providers: [provideZonelessChangeDetection(), provideRouter([]), provideHttpClient(), provideHttpClientTesting()],
  });
  const fixture = TestBed.createComponent(SetupPage);
  fixture.componentRef.setInput('id', EXPERIMENT);
  fixture.componentRef.setInput('from', RUN);
  fixture.detectChanges();
  const http = TestBed.inject(HttpTestingController);
  await vi.waitFor(() => {
    http.expectOne(`/api/experiments/${EXPERIMENT}`).flush(experiment);
  });
  http.expectOne(`/api/runs/${RUN}`).flush(run(corvaneSetup()));
  http.expectOne('/api/desk').flush(desk);
  await vi.waitFor(() => expect(text(fixture)).toContain('computing'), { timeout: 20_000 });
  await new Promise((done) => setTimeout(done, 700)); // what the desk said of disk and queue is in
  await fixture.whenStable();
  const loader = TestbedHarnessEnvironment.loader(fixture);
  return { fixture, http, loader };
}
const text = (fixture: { nativeElement: unknown }) => (fixture.nativeElement as HTMLElement).textContent ?? '';
type Page = Awaited<ReturnType<typeof openPage>>;
const QUEUE = '.go button';
const press = (page: Page, selector: string) =>
  page.loader.getHarness(MatButtonHarness.with({ selector })).then((button) => button.click());
const canQueue = async (page: Page) =>
  !(await (await page.loader.getHarness(MatButtonHarness.with({ selector: `${QUEUE}:first-child` }))).isDisabled());

// The whole form is drawn for each: slow in a browser without a screen.
describe('SetupPage', { timeout: 60_000 }, () => {
  beforeEach(() => {
    localStorage.clear();
    // The test browser draws no pictures; what asks for one gets none, as in a browser without canvas.
    vi.spyOn(HTMLCanvasElement.prototype, 'getContext').mockReturnValue(null);
  });
  afterEach(() => vi.restoreAllMocks());

  async function typeAt(page: Page, pointer: string, words: string) {
    const input = await page.loader.getHarness(MatInputHarness.with({ selector: `[data-pointer="${pointer}"] input` }));
    const element = await input.host();
    await element.setInputValue(words);
    await element.dispatchEvent('input');
    await new Promise((done) => setTimeout(done, 700)); // longer than preflight ever waits
    await page.fixture.whenStable();
  }

  it('opens filled in from the run, and does not queue what changes nothing', async () => {
    const page = await openPage();
    expect(text(page.fixture)).toContain('Nothing is changed yet.');
    expect(text(page.fixture)).toContain('Nothing differs from Control yet.');
    expect(await canQueue(page)).toBe(false);
  });

  it('marks what differs, proposes a label and queues it', async () => {
    const page = await openPage();
    await typeAt(page, '/wind/seasonalStrength', '1,2');
    expect(text(page.fixture)).toContain('seasonal strength 1.00 → 1.20');
    expect(text(page.fixture)).toContain('was 1.00');
    const navigate = vi.spyOn(TestBed.inject(Router), 'navigate').mockResolvedValue(true);
    expect(await canQueue(page)).toBe(true);
    await press(page, `${QUEUE}:first-child`);
    const sent = page.http.expectOne(`/api/experiments/${EXPERIMENT}/runs`);
    expect(sent.request.body).toMatchObject({
      label: 'Seasonal strength 1.20',
      parentRunId: RUN,
      setup: { wind: { seasonalStrength: 1.2 } },
    });
    expect(sent.request.headers.get('Idempotency-Key')).toMatch(/^[0-9a-f]{32}$/);
    sent.flush(run(corvaneSetup(1.2)), { status: 202, statusText: 'Accepted' });
    await vi.waitFor(() => expect(navigate).toHaveBeenCalledWith(['/runs', RUN]));
    expect(TestBed.inject(KeptDrafts).read(place)).toBeNull();
  });

  it('refuses an unstable step, names the remedy, and applies it', async () => {
    const page = await openPage();
    await typeAt(page, '/numerics/stepsPerDay', '8');
    expect(await canQueue(page)).toBe(false);
    expect(text(page.fixture)).toContain('It can be queued once nothing is refused.');
    const remedy = (page.fixture.nativeElement as HTMLElement)
      .querySelector('.check.refuse button')
      ?.textContent?.trim();
    expect(remedy).toBe('Use 16 a day');
    await press(page, '.check.refuse button');
    await new Promise((done) => setTimeout(done, 700));
    await page.fixture.whenStable();
    // Back at the step of the parent: nothing is refused, and nothing differs.
    expect(text(page.fixture)).toContain('every check passes');
    expect(text(page.fixture)).toContain('Nothing differs from Control yet.');
  });

  it('shows the server’s refusal at its field', async () => {
    const page = await openPage();
    await typeAt(page, '/layer/restThicknessM', '210');
    expect(await canQueue(page)).toBe(true);
    await press(page, `${QUEUE}:first-child`);
    page.http.expectOne(`/api/experiments/${EXPERIMENT}/runs`).flush(
      {
        type: 'about:blank',
        title: 'Refused',
        status: 422,
        detail: 'One field is refused.',
        errors: [{ pointer: '/setup/layer/restThicknessM', detail: 'Thicker than this server allows.' }],
      },
      { status: 422, statusText: 'Unprocessable Content' },
    );
    await vi.waitFor(() =>
      expect(document.querySelector('[data-pointer="/layer/restThicknessM"] mat-error')?.textContent).toBe(
        'Thicker than this server allows.',
      ),
    );
  });

  it('brings back what was typed and not sent, and forgets it when told', async () => {
    TestBed.inject(KeptDrafts).save(place, {
      label: 'Half done',
      content: withValueAt(corvaneSetup(), '/layer/restThicknessM', 175),
    });
    TestBed.resetTestingModule();
    const page = await openPage();
    const { fixture } = page;
    expect(text(fixture)).toContain('What you had typed here is back');
    expect(text(fixture)).toContain('thickness at rest 200 → 175');
    await press(page, '.notice button:first-child');
    expect(text(fixture)).toContain('Nothing is changed yet.');
    expect(TestBed.inject(KeptDrafts).read(place)).toBeNull();
    await press(page, '.notice button:first-child');
    expect(text(fixture)).toContain('thickness at rest 200 → 175');
  });

  it('opens a setup file with what is wrong at its field, and exports what stands in the form', async () => {
    const page = await openPage();
    const input = (page.fixture.nativeElement as HTMLElement).querySelector<HTMLInputElement>('.file input')!;
    const content = JSON.stringify(withValueAt(corvaneSetup(), '/layer/restThicknessM', 9000));
    const file = new File([content], 'thick.setup.json');
    file.arrayBuffer = () => Promise.resolve(new TextEncoder().encode(content).buffer);
    Object.defineProperty(input, 'files', { value: [file] });
    Object.defineProperty(input, 'value', { value: '', writable: true });
    input.dispatchEvent(new Event('change'));
    await vi.waitFor(() => expect(text(page.fixture)).toContain('filled in from “thick.setup.json”'));
    expect(text(page.fixture)).toContain('One field cannot be read yet.');
    await vi.waitFor(() =>
      expect(document.querySelector('[data-pointer="/layer/restThicknessM"] mat-error')?.textContent).toContain(
        'must be between 10 and 5000 m; 9000 arrived',
      ),
    );
    const save = vi
      .spyOn(TestBed.inject(SetupExchange), 'save')
      .mockResolvedValue({ text: 'The setup is in “x.setup.json”.', refused: false });
    await press(page, '.beginning .actions button');
    expect(save.mock.calls[0][0]).toMatchObject({ layer: { restThicknessM: 9000 } });
    expect(text(page.fixture)).toContain('The setup is in “x.setup.json”.');
  });

  it('keeps what is typed when the page is left', async () => {
    const page = await openPage();
    await typeAt(page, '/layer/restThicknessM', '9999');
    page.fixture.destroy();
    expect(TestBed.inject(KeptDrafts).read(place)).toMatchObject({ content: { layer: { restThicknessM: 9999 } } });
  });
});
