import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, type TestRequest, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MATERIAL_ANIMATIONS } from '@angular/material/core';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { MatRadioButtonHarness } from '@angular/material/radio/testing';
import { MatSlideToggleHarness } from '@angular/material/slide-toggle/testing';
import { MatSliderHarness } from '@angular/material/slider/testing';
import { provideRouter } from '@angular/router';
import type { AdminQueue } from '@halfdeep/contracts';
import { provideIcons } from '../../core/icons';
import { EVENT_SOURCE } from '../../core/run-events';
import { aRun } from '../../testing/samples';
import { settle } from '../../testing/settle';
import { QueuePage } from './queue-page';

const id = (n: number) => `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`;
const QUEUE: AdminQueue = {
  cap: 2,
  maxCap: 4,
  paused: false,
  running: [
    aRun({ id: id(1), label: 'Control', state: 'running' }),
    aRun({ id: id(2), label: 'Strong', state: 'running' }),
  ],
  waiting: [
    aRun({ id: id(3), label: 'Weak', queuePosition: 1 }),
    aRun({ id: id(4), label: 'Wind 1.4', queuePosition: 2 }),
    aRun({ id: id(5), label: 'Thin layer', queuePosition: 3 }),
  ],
};

describe('QueuePage', () => {
  let fixture: ComponentFixture<QueuePage>;
  let loader: HarnessLoader;
  let server: HttpTestingController;

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([]),
        provideIcons(),
        // A dialog that fades away answers late, and the later the busier the machine.
        { provide: MATERIAL_ANIMATIONS, useValue: { animationsDisabled: true } },
        { provide: EVENT_SOURCE, useValue: () => ({ addEventListener: () => undefined, close: () => undefined }) },
      ],
    });
    fixture = TestBed.createComponent(QueuePage);
    loader = TestbedHarnessEnvironment.loader(fixture);
    server = TestBed.inject(HttpTestingController);
    server.expectOne('/api/admin/queue').flush(structuredClone(QUEUE));
    await settle(fixture);
  });

  const text = () => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
  const press = async (words: string | RegExp) =>
    (await loader.getHarness(MatButtonHarness.with({ text: words }))).click();
  const waiting = () =>
    [...(fixture.nativeElement as HTMLElement).querySelectorAll('ol.runs a')].map((link) => link.textContent);
  const patch = (): TestRequest => server.expectOne({ method: 'PATCH', url: '/api/admin/queue' });

  it('says how the queue stands', () => {
    expect(text()).toContain('2 of 2 places computing, three runs wait.');
    expect(waiting()).toEqual(['Weak', 'Wind 1.4', 'Thin layer']);
  });

  it('raises the cap by slider without asking about running work', async () => {
    const thumb = await (await loader.getHarness(MatSliderHarness)).getEndThumb();
    await thumb.setValue(3);
    expect(await loader.getAllHarnesses(MatRadioButtonHarness)).toHaveLength(0);
    await press('Set the cap');
    const request = patch();
    expect(request.request.body).toEqual({ cap: 3, whenLowered: 'drain' });
    request.flush({ ...QUEUE, cap: 3 });
    await settle(fixture);
    expect(text()).toContain('2 of 3 places computing');
  });

  it('asks what becomes of running work when the cap falls below it, and says so to the server', async () => {
    await (await loader.getHarness(MatInputHarness.with({ label: 'Runs at once' }))).setValue('1');
    const checkpoint = await loader.getHarness(MatRadioButtonHarness.with({ label: /checkpoint/ }));
    await checkpoint.check();
    await press('Set the cap');
    expect(patch().request.body).toEqual({ cap: 1, whenLowered: 'checkpoint' });
  });

  it('says that more computes than the cap while running work goes on to its end', async () => {
    await (await loader.getHarness(MatInputHarness.with({ label: 'Runs at once' }))).setValue('1');
    await press('Set the cap');
    const request = patch();
    expect(request.request.body).toEqual({ cap: 1, whenLowered: 'drain' });
    request.flush({ ...QUEUE, cap: 1 });
    await settle(fixture);
    expect(text()).toContain('2 computing, the cap is 1, three runs wait.');
  });

  it.each(['0', '5', '1.5', ''])('refuses the cap "%s" with the range', async (cap) => {
    await (await loader.getHarness(MatInputHarness.with({ label: 'Runs at once' }))).setValue(cap);
    expect(text()).toContain('A whole number from 1 to 4');
    const button = await loader.getHarness(MatButtonHarness.with({ text: 'Set the cap' }));
    expect(await button.isDisabled()).toBe(true);
  });

  it('pauses intake at once', async () => {
    await (await loader.getHarness(MatSlideToggleHarness)).uncheck();
    const request = patch();
    expect(request.request.body).toEqual({ paused: true });
    request.flush({ ...QUEUE, paused: true });
    await settle(fixture);
    expect(text()).toContain('intake paused');
  });

  it('moves a waiting run by its buttons, shown before the server answers', async () => {
    const up = await loader.getHarness(MatButtonHarness.with({ selector: '[aria-label="Move Thin layer up"]' }));
    await up.click();
    expect(waiting()).toEqual(['Weak', 'Thin layer', 'Wind 1.4']);
    expect(patch().request.body).toEqual({ order: [id(3), id(5), id(4)] });
  });

  it('keeps the focus on the button while its row moves, to the top and no further', async () => {
    const up = await loader.getHarness(MatButtonHarness.with({ selector: '[aria-label="Move Thin layer up"]' }));
    await up.focus();
    for (const order of [
      [id(3), id(5), id(4)],
      [id(5), id(3), id(4)],
    ]) {
      await up.click();
      const request = patch();
      expect(request.request.body).toEqual({ order });
      const waits = order.map((run) => QUEUE.waiting.find((item) => item.id === run)!);
      request.flush({ ...QUEUE, waiting: waits });
      await settle(fixture);
      expect(await up.isFocused()).toBe(true);
    }
    await up.click();
    server.expectNone({ method: 'PATCH', url: '/api/admin/queue' });
  });

  it('puts the order back when the server refuses it', async () => {
    await press(/^First.*Wind 1\.4/);
    expect(waiting()).toEqual(['Wind 1.4', 'Weak', 'Thin layer']);
    const refusal = { type: 'about:blank', title: 'The order is stale', status: 409 };
    patch().flush(refusal, { status: 409, statusText: 'Conflict' });
    await settle(fixture);
    server.expectOne('/api/admin/queue').flush(structuredClone(QUEUE));
    await settle(fixture);
    expect(waiting()).toEqual(['Weak', 'Wind 1.4', 'Thin layer']);
    expect(text()).toContain('The order is stale');
  });

  it('stops a run only after it was asked', async () => {
    const root = TestbedHarnessEnvironment.documentRootLoader(fixture);
    await press(/^Stop Strong/);
    await (await root.getHarness(MatDialogHarness)).close();
    await settle(fixture);
    server.expectNone(`/api/runs/${id(2)}/stop`);
    await press(/^Stop Strong/);
    const dialog = await root.getHarness(MatDialogHarness);
    await (await dialog.getHarness(MatButtonHarness.with({ text: 'Stop this run' }))).click();
    await settle(fixture);
    server.expectOne(`/api/runs/${id(2)}/stop`).flush({ ...QUEUE.running[1], state: 'stopped' });
    await settle(fixture);
    server.expectOne('/api/admin/queue');
  });
});
