import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MATERIAL_ANIMATIONS } from '@angular/material/core';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { MatRadioButtonHarness } from '@angular/material/radio/testing';
import { provideRouter } from '@angular/router';
import { type Convergence } from '@halfdeep/contracts';
import { EVENT_SOURCE } from '../../core/run-events';
import { aRun } from '../../testing/samples';
import { settle } from '../../testing/settle';
import { Resolution } from './resolution';
import { RUN_ID, aConvergence, aLevel, aMeasure, aWholeRun } from './testing';

const URL_OF = `/api/runs/${RUN_ID}/convergence`;
const REFUSED = { type: 'about:blank', title: 'The request is not right', status: 422, detail: 'The disk is full.' };

describe('Resolution', () => {
  let fixture: ComponentFixture<Resolution>;
  let loader: HarnessLoader;
  let root: HarnessLoader;
  let server: HttpTestingController;
  let emit: (type: string, data: object) => void;

  async function show(answer: Convergence | null, run = aWholeRun()) {
    const listeners = new Map<string, (message: { data: string }) => void>();
    const source = {
      addEventListener: (type: string, hear: (message: { data: string }) => void) => listeners.set(type, hear),
      close: () => undefined,
    };
    emit = (type, data) => listeners.get(type)?.({ data: JSON.stringify(data) });
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([]),
        { provide: MATERIAL_ANIMATIONS, useValue: { animationsDisabled: true } },
        { provide: EVENT_SOURCE, useValue: () => source },
      ],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(Resolution);
    fixture.componentRef.setInput('run', run);
    loader = TestbedHarnessEnvironment.loader(fixture);
    root = TestbedHarnessEnvironment.documentRootLoader(fixture);
    fixture.detectChanges();
    if (answer) {
      server.expectOne(URL_OF).flush(answer);
      await settle(fixture);
    }
  }
  const text = () => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
  const press = async (words: string | RegExp, within = loader) =>
    (await within.getHarness(MatButtonHarness.with({ text: words }))).click();
  const dialogText = async () => (await (await root.getHarness(MatDialogHarness)).getText()).replace(/\s+/g, ' ');

  it('reads, and reads again when that failed', async () => {
    await show(null);
    expect(text()).toContain('Reading the runs on other grids');
    server.expectOne(URL_OF).flush('', { status: 503, statusText: 'Unavailable' });
    await settle(fixture);
    // Not by the harness, which would wait until the answer has come.
    [...(fixture.nativeElement as HTMLElement).querySelectorAll('button')]
      .find(({ textContent }) => textContent.trim() === 'Read again')!
      .click();
    fixture.detectChanges();
    server.expectOne(URL_OF).flush(aConvergence());
    await settle(fixture);
    expect(text()).toContain('No run has been queued at half the resolution or at twice the resolution.');
  });

  it('shows the cost first, and queues with the coast that was chosen', async () => {
    await show(aConvergence());
    await press(/Queue at half and twice the resolution/);
    const shown = await dialogText();
    for (const words of ['120 × 70', '480 × 280', '12 s', '7 min 40 s', '20.0 MB', '320 MB', '7 min 52 s', '340 MB'])
      expect(shown.replace(/[\u00a0\u202f]/g, ' ')).toContain(words);
    server.expectNone(URL_OF);
    await (await root.getHarness(MatRadioButtonHarness.with({ label: /^Anew/ }))).check();
    await press('Queue both', root);
    const sent = server.expectOne({ method: 'POST', url: URL_OF });
    expect(sent.request.body).toEqual({ coast: 'anew' });
    expect(sent.request.headers.get('Idempotency-Key')).toMatch(/^[0-9a-f]{32}$/);
    const answer = aConvergence();
    answer.choices[1].levels = [
      aLevel('half', { plan: null, run: aRun({ id: id(1), label: 'Control, half resolution', queuePosition: 2 }) }),
      aLevel('twice', { plan: null, run: aRun({ id: id(2), label: 'Control, twice the resolution' }) }),
    ];
    sent.flush(answer);
    await settle(fixture);
    expect(await root.getAllHarnesses(MatDialogHarness)).toHaveLength(0);
    expect(text()).toContain('Control, half resolution');
    expect(text()).toContain('number 2 in the queue');
  });

  it('says why nothing was queued, and lets the person try again with another key', async () => {
    await show(aConvergence());
    await press(/Queue at half/);
    await press('Queue both', root);
    const first = server.expectOne({ method: 'POST', url: URL_OF });
    first.flush(REFUSED, { status: 422, statusText: 'Unprocessable' });
    await settle(fixture);
    expect(await dialogText()).toContain('The disk is full.');
    await press('Queue both', root);
    const second = server.expectOne({ method: 'POST', url: URL_OF });
    expect(second.request.headers.get('Idempotency-Key')).not.toBe(first.request.headers.get('Idempotency-Key'));
  });

  it('does not offer what cannot be made, and says why', async () => {
    const refusal = 'Half the resolution needs an even number of rows; this run has 21.';
    const convergence = aConvergence();
    convergence.choices[0].levels[0] = aLevel('half', { plan: null, refusal });
    await show(convergence);
    await press(/Queue at half/);
    expect(await dialogText()).toContain(refusal);
    const button = await root.getHarness(MatButtonHarness.with({ text: 'Queue both' }));
    expect(await button.isDisabled()).toBe(true);
    await button.click();
    server.expectNone(URL_OF);
  });

  it('says the same to those who may not queue, without the button', async () => {
    await show(aConvergence({ canQueue: false }));
    expect(text()).toContain('No run has been queued at half the resolution');
    expect(await loader.getAllHarnesses(MatButtonHarness)).toHaveLength(0);
  });

  it('follows the two runs as they go, and reads the result when they have ended', async () => {
    const running = aRun({ id: id(1), label: 'Control, half resolution', state: 'running' });
    const done = aRun({ id: id(2), label: 'Control, twice the resolution', state: 'finished' });
    const convergence = aConvergence();
    convergence.choices[0].levels = [
      aLevel('half', { plan: null, run: running }),
      aLevel('twice', { plan: null, run: done }),
    ];
    await show(convergence);
    await new Promise((resolve) => setTimeout(resolve, 120)); // the stream opens a moment after it is asked for
    emit('progress', { runId: id(1), progress: { ...running.progress, step: 43_800, day: 1825, secondsLeft: 130 } });
    await settle(fixture);
    expect(text().replace(/\u00a0/g, ' ')).toContain('year 5.00 of 10, 2 min left');
    emit('state', { run: { ...running, state: 'finished' } });
    await new Promise((resolve) => setTimeout(resolve, 450));
    const finished = structuredClone(convergence);
    finished.choices[0].levels[0].run!.state = 'finished';
    finished.choices[0].waitingFor = null;
    finished.choices[0].result = {
      window: { fromDay: 3285, toDay: 3650, wholeYear: true },
      measures: [aMeasure()],
      remarks: ['The three take 16, 16 and 40 steps a day.'],
    };
    server.expectOne(URL_OF).flush(finished);
    await settle(fixture);
    const shown = text().replace(/[\u00a0\u202f]/g, ' ');
    expect(shown).toContain('in the asymptotic range; largest grid convergence index of this run 1.6 %');
    expect(shown).toContain('the last model year, days 3 285 to 3 650');
    expect(shown).toContain('The three take 16, 16 and 40 steps a day.');
    const cells = [...(fixture.nativeElement as HTMLElement).querySelectorAll('tbody tr:first-child td')].map((cell) =>
      cell.textContent.trim().replace(/[\u00a0\u202f\s]+/g, ' '),
    );
    expect(cells[0]).toContain('asymptotic');
    expect(cells.slice(1)).toEqual(['5.100', '5.300', '5.350', '2.00', '5.367', '0.083 Sv, 1.6 %', '0.021 Sv, 0.39 %']);
  });

  it('says in plain words what is not in the asymptotic range, and extrapolates nothing', async () => {
    const sentence = 'Not in the asymptotic range: the value goes up on one refinement and down on the other.';
    const convergence = aConvergence();
    convergence.choices[0] = {
      coast: 'same',
      levels: [aLevel('half', { plan: null, run: aRun() }), aLevel('twice', { plan: null, run: aRun() })].map(
        (level, k) => ({ ...level, run: aRun({ id: id(k + 1), state: 'finished' }) }),
      ),
      waitingFor: null,
      result: {
        window: { fromDay: 0, toDay: 40, wholeYear: false },
        measures: [
          aMeasure({
            verdict: 'not monotone',
            sentence,
            order: null,
            extrapolated: null,
            gci: null,
            asymptoticRatio: null,
          }),
        ],
        remarks: [],
      },
    };
    await show(convergence);
    expect(text()).toContain('one transport of 1 is not in the asymptotic range');
    expect(text()).toContain(sentence);
    expect(text()).toContain('which is no whole year');
  });

  it('tells of what comes when the run itself still computes', async () => {
    const convergence = aConvergence({ canQueue: false });
    convergence.choices.forEach((choice) => (choice.waitingFor = 'The run itself has not finished.'));
    await show(convergence, aWholeRun({ state: 'running' }));
    expect(text()).toContain('When it has finished: the same setup at half and at twice the resolution');
  });
});

function id(n: number): string {
  return `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`;
}
