import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import { type Experiment, type RunSummary } from '@halfdeep/contracts';
import { of } from 'rxjs';
import { GrowingSlice } from '../../core/growing-rows';
import { EVENT_SOURCE } from '../../core/run-events';
import { aRun } from '../../testing/samples';
import { settle } from '../../testing/settle';
import { Evidence } from './evidence';
import { EXPERIMENT_ID, RUN_ID, aConvergence, aWholeRun } from './testing';

const PRINT = { sha256: 'ab'.repeat(32), coreVersion: '2', shape: [1, 1, 1, 1, 1, 1] };

/** An experiment of these runs; what the section does not look at is left empty. */
function experimentOf(runList: RunSummary[]): Experiment {
  const runs = { queued: 0, running: 0, finished: runList.length, stopped: 0, failed: 0 };
  return {
    id: EXPERIMENT_ID,
    question: 'Does it hold?',
    owner: aRun().owner,
    createdAt: '2026-12-01T06:00:00.000Z',
    movedAt: '2026-12-01T06:00:00.000Z',
    moved: 'Control finished',
    physics: null,
    runs,
    can: { edit: true, queueRuns: true },
    notes: '',
    runList,
  };
}

describe('Evidence', () => {
  let fixture: ComponentFixture<Evidence>;
  let server: HttpTestingController;

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([]),
        { provide: EVENT_SOURCE, useValue: () => ({ addEventListener: () => undefined, close: () => undefined }) },
      ],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(Evidence);
    fixture.componentRef.setInput('run', aWholeRun({ fingerprint: PRINT }));
    fixture.componentRef.setInput('budget', new GrowingSlice(() => of(), 13));
    fixture.detectChanges();
    server.expectOne(`/api/runs/${RUN_ID}/convergence`).flush(aConvergence());
  });
  const text = () => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
  const experiment = () => server.expectOne(`/api/experiments/${EXPERIMENT_ID}`);

  it('says what will stand there before there is anything', async () => {
    experiment().flush(experimentOf([aWholeRun()]));
    await settle(fixture);
    expect(text()).toContain('From the first interval on: the largest residual over the largest term.');
    expect(text()).toContain('Nobody has computed it a second time yet.');
    expect(text()).toContain('No run has been queued at half the resolution or at twice the resolution.');
  });

  it('links the run that repeated it', async () => {
    const repeat = aRun({
      id: '00000000-0000-4000-8000-000000000102',
      label: 'Control, repeated',
      parentRunId: RUN_ID,
      parentLabel: 'Control',
      changes: [],
      state: 'finished',
      fingerprint: PRINT,
    });
    experiment().flush(experimentOf([aWholeRun(), repeat]));
    await settle(fixture);
    const link = [...(fixture.nativeElement as HTMLElement).querySelectorAll('a')].find(
      ({ textContent }) => textContent === 'Control, repeated',
    );
    expect(link?.getAttribute('href')).toBe(`/runs/${repeat.id}`);
    expect(text()).toContain('the same to the last bit as Control, repeated');
  });

  it('says when the repeats were not read, and reads them again', async () => {
    experiment().flush('', { status: 500, statusText: 'Failed' });
    await settle(fixture);
    expect(text()).toContain('The repeats of this run were not read.');
    // Not by the harness, which would wait until the answer has come.
    (fixture.nativeElement as HTMLElement).querySelector('button')!.click();
    fixture.detectChanges();
    experiment().flush(experimentOf([aWholeRun()]));
    await settle(fixture);
    expect(text()).toContain('Nobody has computed it a second time yet.');
  });
});
