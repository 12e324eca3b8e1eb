import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatFormFieldHarness } from '@angular/material/form-field/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { Router, provideRouter } from '@angular/router';
import { settle } from '../testing/settle';
import { SignIn } from './sign-in';

const ME = {
  id: '00000000-0000-4000-8000-000000000001',
  name: 'modeller',
  email: 'modeller@halfdeep.example',
  roles: ['modeller'],
  demonstration: true,
};

describe('SignIn', () => {
  let fixture: ComponentFixture<SignIn>;
  let loader: HarnessLoader;
  let server: HttpTestingController;
  let router: Router;

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [provideHttpClient(), provideHttpClientTesting(), provideRouter([{ path: '**', children: [] }])],
    });
    fixture = TestBed.createComponent(SignIn);
    loader = TestbedHarnessEnvironment.loader(fixture);
    server = TestBed.inject(HttpTestingController);
    router = TestBed.inject(Router);
  });
  afterEach(() => {
    server.verify();
    vi.useRealTimers();
  });

  const input = (label: string) => loader.getHarness(MatInputHarness.with({ label }));
  const button = () => loader.getHarness(MatButtonHarness.with({ selector: '[type=submit]' }));
  const alert = () => (fixture.nativeElement as HTMLElement).querySelector('[role=alert]')?.textContent ?? '';
  async function send(email: string, password: string) {
    await (await input('E-mail address')).setValue(email);
    await (await input('Password')).setValue(password);
    await (await button()).click();
  }

  it('says beside each field what is wrong before anything is sent', async () => {
    await send('nobody', '');
    const fields = await loader.getAllHarnesses(MatFormFieldHarness);
    expect(await Promise.all(fields.map((field) => field.getTextErrors()))).toEqual([
      ['An e-mail address looks like name@place.example.'],
      ['The password is missing.'],
    ]);
    expect(await (await input('E-mail address')).isFocused()).toBe(true);
    await send('nobody@halfdeep.example', '');
    expect(await (await input('Password')).isFocused()).toBe(true);
  });

  it('goes on to the page that asked for it', async () => {
    fixture.componentRef.setInput('next', '/runs/7');
    await send('modeller@halfdeep.example', 'a long enough secret');
    server.expectOne('/api/session').flush({ me: ME });
    await settle(fixture);
    expect(router.url).toBe('/runs/7');
  });

  it.each(['//elsewhere.example', 'https://elsewhere.example', '/\\elsewhere.example'])(
    'never leaves the application for %s',
    async (next) => {
      fixture.componentRef.setInput('next', next);
      await send('modeller@halfdeep.example', 'a long enough secret');
      server.expectOne('/api/session').flush({ me: ME });
      await settle(fixture);
      expect(router.url).toBe('/');
    },
  );

  it('shows the refusal and lets one try again', async () => {
    await send('modeller@halfdeep.example', 'wrong');
    const refusal = {
      type: 'about:blank',
      title: 'Not signed in',
      status: 401,
      detail: 'Address or password is wrong.',
    };
    server.expectOne('/api/session').flush(refusal, { status: 401, statusText: 'Unauthorized' });
    await settle(fixture);
    expect(alert()).toContain('Address or password is wrong.');
    expect(await (await button()).isDisabled()).toBe(false);
  });

  it('holds the button for as long as the server asks, and counts the wait down', async () => {
    await send('modeller@halfdeep.example', 'wrong');
    vi.useFakeTimers();
    const refusal = { type: 'about:blank', title: 'Too many tries', status: 429 };
    const headers = { 'Retry-After': '3' };
    server.expectOne('/api/session').flush(refusal, { status: 429, statusText: 'Too many', headers });
    await vi.advanceTimersByTimeAsync(1100);
    fixture.detectChanges();
    expect(alert()).toContain('Try again in 2\u00a0s.');
    const submit = (fixture.nativeElement as HTMLElement).querySelector<HTMLButtonElement>('[type=submit]');
    expect(submit?.disabled).toBe(true);
    await vi.advanceTimersByTimeAsync(2100);
    fixture.detectChanges();
    expect(submit?.disabled).toBe(false);
    expect(alert()).toBe('');
  });
});
