import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { provideRouter } from '@angular/router';
import type { Me, Role } from '@halfdeep/contracts';
import { PRESETS } from '@halfdeep/ocean';
import { Session } from '../core/session';
import { aRun } from '../testing/samples';
import { settle } from '../testing/settle';
import { ReadySetup } from './ready-setup';

const EXPERIMENT = '00000000-0000-4000-8000-000000000500';
const REFUSED = { type: 'about:blank', title: 'The disk is full', status: 507 };

describe('ReadySetup', () => {
  let fixture: ComponentFixture<ReadySetup>;
  let loader: HarnessLoader;
  let server: HttpTestingController;
  let queued: number;

  async function show(roles: Role[]) {
    TestBed.configureTestingModule({
      providers: [provideHttpClient(), provideHttpClientTesting(), provideRouter([])],
    });
    server = TestBed.inject(HttpTestingController);
    const me: Me = { id: EXPERIMENT, name: 'A person', email: 'a@halfdeep.example', roles, demonstration: false };
    const known = TestBed.inject(Session).whoAmI();
    server.expectOne('/api/me').flush(me);
    await known;
    fixture = TestBed.createComponent(ReadySetup);
    loader = TestbedHarnessEnvironment.loader(fixture);
    queued = 0;
    fixture.componentInstance.queued.subscribe(() => queued++);
  }
  const text = () => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
  const press = async () => (await loader.getHarness(MatButtonHarness.with({ text: 'Queue this run' }))).click();

  it('makes an experiment of the setup and queues it, in one click', async () => {
    await show(['modeller']);
    server.expectOne('/api/presets').flush(PRESETS);
    await settle(fixture);
    const preset = PRESETS.find((item) => item.id === 'first-look')!;
    expect(text()).toContain(preset.name);
    await press();
    server.expectOne('/api/experiments').flush({ id: EXPERIMENT });
    await settle(fixture);
    const run = server.expectOne(`/api/experiments/${EXPERIMENT}/runs`);
    expect(run.request.body).toEqual({ label: 'Control', setup: preset.setup });
    run.flush(aRun());
    await settle(fixture);
    expect(queued).toBe(1);
  });

  it('leaves one experiment behind, not one a try, when the run is refused', async () => {
    await show(['modeller']);
    server.expectOne('/api/presets').flush(PRESETS);
    await settle(fixture);
    await press();
    server.expectOne('/api/experiments').flush({ id: EXPERIMENT });
    await settle(fixture);
    server.expectOne(`/api/experiments/${EXPERIMENT}/runs`).flush(REFUSED, { status: 507, statusText: 'Full' });
    await settle(fixture);
    expect(text()).toContain('The disk is full');
    await press();
    await settle(fixture);
    server.expectNone('/api/experiments');
    server.expectOne(`/api/experiments/${EXPERIMENT}/runs`).flush(aRun());
    await settle(fixture);
    expect(queued).toBe(1);
  });

  it('offers no button to those who may not queue', async () => {
    await show(['reviewer']);
    server.expectOne('/api/presets').flush(PRESETS);
    await settle(fixture);
    expect(await loader.getAllHarnesses(MatButtonHarness.with({ text: 'Queue this run' }))).toHaveLength(0);
    expect(text()).toContain('Runs are queued by modellers.');
  });

  it('says when the ready setups cannot be read, and reads them again', async () => {
    await show(['modeller']);
    server.expectOne('/api/presets').flush('', { status: 503, statusText: 'Unavailable' });
    await settle(fixture);
    await (await loader.getHarness(MatButtonHarness.with({ text: 'Read again' }))).click();
    server.expectOne('/api/presets').flush(PRESETS);
    await settle(fixture);
    expect(text()).toContain('First look');
  });
});
