import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { readBundle } from '@halfdeep/contracts';
import { corvaneSetup, type Setup } from '@halfdeep/ocean';
import { aRun } from '../testing/samples';
import { SetupExchange } from './setup-exchange';
import { withValueAt } from './setup-pointer';

const RUN = '22222222-2222-4222-8222-222222222222';
const start = {
  kind: 'state',
  runId: RUN,
  fingerprint: 'ab'.repeat(32),
  stateSha256: 'cd'.repeat(32),
  startStep: 160,
  stepsPerDay: 16,
} as const;
const extension: Setup = { ...corvaneSetup(), start };

describe('SetupExchange', () => {
  let exchange: SetupExchange;
  let http: HttpTestingController;
  let saved: { name: string; blob: Blob }[];
  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [provideZonelessChangeDetection(), provideHttpClient(), provideHttpClientTesting()],
    });
    exchange = TestBed.inject(SetupExchange);
    http = TestBed.inject(HttpTestingController);
    saved = [];
    let blob = new Blob();
    class FileUrl extends URL {
      static override createObjectURL(given: Blob) {
        blob = given;
        return 'blob:of-the-test';
      }
      static override revokeObjectURL() {
        // Nothing is kept.
      }
    }
    vi.stubGlobal('URL', FileUrl);
    vi.spyOn(HTMLAnchorElement.prototype, 'click').mockImplementation(function (this: HTMLAnchorElement) {
      saved.push({ name: this.download, blob });
    });
  });
  afterEach(() => {
    vi.unstubAllGlobals();
    vi.restoreAllMocks();
    http.verify();
  });

  it('saves a setup as JSON named after its label', async () => {
    const notice = await exchange.save(corvaneSetup(1.2), 'Seasonal strength 1.20');
    expect(notice).toEqual({ text: 'The setup is in “seasonal-strength-1.20.setup.json”.', refused: false });
    expect(JSON.parse(await saved[0].blob.text())).toEqual(corvaneSetup(1.2));
  });

  it('saves what cannot be read yet too, and says that nothing can compute it', async () => {
    const half = withValueAt(corvaneSetup(), '/layer/restThicknessM', null);
    const { text } = await exchange.save(half, '');
    expect(text).toContain('One field cannot be read yet');
    expect(JSON.parse(await saved[0].blob.text())).toEqual(half);
  });

  it('saves a setup that starts from a state together with it', async () => {
    const saving = exchange.save(extension, 'Longer');
    http.expectOne(`/api/runs/${RUN}/state`).flush(Uint8Array.of(1, 2, 3).buffer);
    expect((await saving).text).toContain('“longer.halfdeep.zip”, together with the state');
    const { text, state } = readBundle(new Uint8Array(await saved[0].blob.arrayBuffer()));
    expect(JSON.parse(text)).toEqual(extension);
    expect([...(state ?? [])]).toEqual([1, 2, 3]);
  });

  it('says in the server’s words why there is no state, and saves nothing', async () => {
    const saving = exchange.save(extension, 'Longer');
    const problem = { type: 'about:blank', title: 'Not found', status: 404, detail: 'There is no such run.' };
    http
      .expectOne(`/api/runs/${RUN}/state`)
      .flush(Uint8Array.from(new TextEncoder().encode(JSON.stringify(problem))).buffer, {
        status: 404,
        statusText: 'Not Found',
      });
    const notice = await saving;
    expect(notice.refused).toBe(true);
    expect(notice.text).toContain('There is no such run.');
    expect(saved).toEqual([]);
  });

  describe('says what a setup from elsewhere can do here', () => {
    const ask = async (answer: () => void) => {
      const asked = exchange.whatStartCanDo(extension);
      answer();
      return asked;
    };
    const asked = () => http.expectOne(`/api/runs/${RUN}`);
    const run = (lastState: object | null) => ({
      ...aRun({ id: RUN, label: 'Control', state: 'finished' }),
      setup: corvaneSetup(),
      preflight: {},
      lastState,
    });
    it('nothing to say of a start from rest', async () => {
      expect(await exchange.whatStartCanDo(corvaneSetup())).toBeNull();
    });
    it('the state is here', async () => {
      expect(await ask(() => asked().flush(run(start)))).toContain('“Control”, which is here: it can be queued');
    });
    it('the run is here, but its state is another one', async () => {
      const other = { ...start, stateSha256: 'ef'.repeat(32) };
      expect(await ask(() => asked().flush(run(other)))).toContain('a run that is not here');
    });
    it('the run is not here', async () => {
      const gone = { type: 'about:blank', title: 'Not found', status: 404 };
      const answer = await ask(() => asked().flush(gone, { status: 404, statusText: 'Not Found' }));
      expect(answer).toContain('give it another start to queue it, or compute it as it is with npm run integrate');
    });
    it('nobody knows', async () => {
      const answer = await ask(() => asked().error(new ProgressEvent('error')));
      expect(answer).toContain('is not known: The server did not answer');
    });
  });
});
