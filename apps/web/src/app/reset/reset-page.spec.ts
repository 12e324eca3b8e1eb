import { Location } from '@angular/common';
import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { provideRouter, withComponentInputBinding } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import { settle } from '../testing/settle';
import { ResetPage } from './reset-page';

const TOKEN = 'xNjmM26nlMrwJ2UFCMUeWQu4d3PfzZ4Q';

async function open(address: string) {
  TestBed.configureTestingModule({
    providers: [
      provideHttpClient(),
      provideHttpClientTesting(),
      provideRouter([{ path: 'reset', component: ResetPage }], withComponentInputBinding()),
    ],
  });
  const harness = await RouterTestingHarness.create(address);
  const { fixture } = harness;
  return {
    harness,
    loader: TestbedHarnessEnvironment.loader(fixture),
    server: TestBed.inject(HttpTestingController),
    address: () => TestBed.inject(Location).path(true),
    settle: () => settle(fixture),
    text: () => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' '),
  };
}

describe('ResetPage', () => {
  it.each([`/reset#${TOKEN}`, `/reset#token=${TOKEN}`, `/reset?token=${TOKEN}`])(
    'takes the token out of %s and sends it with the new password',
    async (link) => {
      const page = await open(link);
      expect(page.address()).toBe('/reset');
      await (await page.loader.getHarness(MatInputHarness)).setValue('several words in a row');
      await (await page.loader.getHarness(MatButtonHarness.with({ text: 'Set the password' }))).click();
      const request = page.server.expectOne('/api/password-resets/redeem');
      expect(request.request.body).toEqual({ token: TOKEN, password: 'several words in a row' });
      request.flush('');
      await page.settle();
      expect(page.text()).toContain('The new password holds');
    },
  );

  it('takes up a link that is opened in the tab that asked for it', async () => {
    const page = await open('/reset');
    await (await page.loader.getHarness(MatInputHarness)).setValue('modeller@halfdeep.example');
    await (await page.loader.getHarness(MatButtonHarness.with({ text: 'Send the link' }))).click();
    page.server.expectOne('/api/password-resets').flush('');
    await page.settle();
    expect(page.text()).toContain('a link is on its way');
    await page.harness.navigateByUrl(`/reset#${TOKEN}`);
    await page.settle();
    expect(page.text()).toContain('Choose a password');
    expect(page.address()).toBe('/reset');
  });

  it('refuses a short password before it is sent', async () => {
    const page = await open(`/reset#${TOKEN}`);
    await (await page.loader.getHarness(MatInputHarness)).setValue('short');
    await (await page.loader.getHarness(MatButtonHarness.with({ text: 'Set the password' }))).click();
    expect(page.text()).toContain('A password has at least 12 characters.');
    page.server.expectNone('/api/password-resets/redeem');
  });

  it('offers another link when this one is used up', async () => {
    const page = await open(`/reset#${TOKEN}`);
    await (await page.loader.getHarness(MatInputHarness)).setValue('several words in a row');
    await (await page.loader.getHarness(MatButtonHarness.with({ text: 'Set the password' }))).click();
    const refusal = { type: 'about:blank', title: 'This link is used up', status: 410 };
    page.server.expectOne('/api/password-resets/redeem').flush(refusal, { status: 410, statusText: 'Gone' });
    await page.settle();
    expect(page.text()).toContain('This link is used up');
    await (await page.loader.getHarness(MatButtonHarness.with({ text: 'Ask for another link' }))).click();
    expect(page.text()).toContain('Where shall the link go?');
  });

  it('says that the link was used when it is opened again in the tab that used it', async () => {
    const page = await open(`/reset#${TOKEN}`);
    await (await page.loader.getHarness(MatInputHarness)).setValue('several words in a row');
    await (await page.loader.getHarness(MatButtonHarness.with({ text: 'Set the password' }))).click();
    page.server.expectOne('/api/password-resets/redeem').flush('');
    await page.settle();
    await page.harness.navigateByUrl(`/reset#${TOKEN}`);
    await page.settle();
    expect(page.text()).toContain('This link was used');
    expect(page.text()).not.toContain('Choose a password');
    expect(page.address()).toBe('/reset');
    await (await page.loader.getHarness(MatButtonHarness.with({ text: 'Ask for another link' }))).click();
    expect(page.text()).toContain('Where shall the link go?');
    await page.harness.navigateByUrl(`/reset#${TOKEN.toLowerCase()}`);
    await page.settle();
    expect(page.text()).toContain('Choose a password');
  });
});
