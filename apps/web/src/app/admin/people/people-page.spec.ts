import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MATERIAL_ANIMATIONS } from '@angular/material/core';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { provideRouter } from '@angular/router';
import type { Person } from '@halfdeep/contracts';
import { provideIcons } from '../../core/icons';
import { settle } from '../../testing/settle';
import { PeoplePage } from './people-page';

const person = (n: number, name: string, more: Partial<Person>): Person => ({
  id: `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`,
  name,
  email: `${name.toLowerCase()}@desk.example`,
  roles: ['reviewer'],
  state: 'active',
  createdAt: '2026-03-02T09:15:00.000Z',
  lastSeenAt: null,
  ...more,
});
const CHIEF = person(1, 'Chief', { roles: ['admin'], lastSeenAt: '2026-03-02T10:00:00.000Z' });
const GUEST = person(2, 'Guest', { state: 'invited' });
const FORMER = person(3, 'Former', { state: 'deactivated', lastSeenAt: '2026-03-02T10:00:00.000Z' });

describe('PeoplePage', () => {
  let fixture: ComponentFixture<PeoplePage>;
  let loader: HarnessLoader;
  let server: HttpTestingController;

  async function open(...items: Person[]): Promise<void> {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([]),
        provideIcons(),
        { provide: MATERIAL_ANIMATIONS, useValue: { animationsDisabled: true } },
      ],
    });
    fixture = TestBed.createComponent(PeoplePage);
    loader = TestbedHarnessEnvironment.documentRootLoader(fixture);
    server = TestBed.inject(HttpTestingController);
    const page = { items, page: 1, pageSize: 20, total: items.length };
    server.expectOne(({ url }) => url === '/api/admin/people').flush(page);
    await settle(fixture);
  }
  const text = () => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
  const press = async (words: RegExp) =>
    (await loader.getHarness(MatButtonHarness.with({ ancestor: 'app-people-page, td', text: words }))).click();
  const inDialog = async (words: string) =>
    (await (await loader.getHarness(MatDialogHarness)).getHarness(MatButtonHarness.with({ text: words }))).click();
  const patch = ({ id }: Person) => server.expectOne({ method: 'PATCH', url: `/api/admin/people/${id}` });

  it('withdraws an invitation, after asking', async () => {
    await open(GUEST);
    await press(/^Withdraw/);
    expect(await (await loader.getHarness(MatDialogHarness)).getText()).toContain('guest@desk.example stops working');
    await inDialog('Withdraw');
    const request = patch(GUEST);
    expect(request.request.body).toEqual({ active: false });
    request.flush({ ...GUEST, state: 'deactivated' });
    await settle(fixture);
    expect(text()).toContain('The invitation of Guest is withdrawn.');
    expect(text()).toContain('deactivated');
  });

  it('says what comes of opening an account again: signing in as before, or a new invitation', async () => {
    await open(FORMER);
    await press(/^Reactivate/);
    expect(await (await loader.getHarness(MatDialogHarness)).getText()).toContain('with the password they had');
    await inDialog('Reactivate');
    patch(FORMER).flush({ ...FORMER, state: 'active' });
    await settle(fixture);
    expect(text()).toContain('Former can sign in again.');
  });

  it('does not promise a sign-in to somebody who never accepted', async () => {
    const never = { ...GUEST, state: 'deactivated' as const };
    await open(never);
    await press(/^Reactivate/);
    expect(await (await loader.getHarness(MatDialogHarness)).getText()).toContain('a new one goes to');
    await inDialog('Reactivate');
    patch(never).flush(GUEST);
    await settle(fixture);
    expect(text()).toContain('A new invitation goes to guest@desk.example.');
  });

  it('shows why the last admin stays', async () => {
    await open(CHIEF);
    await press(/^Deactivate/);
    await inDialog('Deactivate');
    const detail = 'Chief is the only active admin and stays active; make somebody else an admin first.';
    const refusal = { type: 'about:blank', title: 'Not possible now', status: 409, detail };
    patch(CHIEF).flush(refusal, { status: 409, statusText: 'Conflict' });
    await settle(fixture);
    expect(text()).toContain(detail);
    expect(text()).not.toContain('is deactivated.');
  });
});
