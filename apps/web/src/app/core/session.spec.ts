import { HttpClient, provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { Router, provideRouter } from '@angular/router';
import type { Me } from '@halfdeep/contracts';
import { firstValueFrom, forkJoin } from 'rxjs';
import { ApiProblem } from './problem';
import { Session } from './session';
import { refreshOn401 } from './session-interceptor';

const ME: Me = {
  id: '00000000-0000-4000-8000-000000000001',
  name: 'modeller',
  email: 'modeller@halfdeep.example',
  roles: ['modeller'],
  demonstration: true,
};
const REFUSED = { type: 'about:blank', title: 'Not signed in', status: 401 };

function setUp() {
  TestBed.configureTestingModule({
    providers: [
      provideHttpClient(withInterceptors([refreshOn401])),
      provideHttpClientTesting(),
      provideRouter([{ path: '**', children: [] }]),
    ],
  });
  return {
    session: TestBed.inject(Session),
    http: TestBed.inject(HttpClient),
    server: TestBed.inject(HttpTestingController),
    router: TestBed.inject(Router),
  };
}
/** Lets promises between two requests run. */
const settle = () => new Promise((resolve) => setTimeout(resolve));

async function signedIn() {
  const parts = setUp();
  const me = parts.session.whoAmI();
  parts.server.expectOne('/api/me').flush(ME);
  await me;
  return parts;
}

describe('Session', () => {
  it('asks who this is once, whoever wants to know', async () => {
    const { session, server } = setUp();
    const both = Promise.all([session.whoAmI(), session.whoAmI()]);
    server.expectOne('/api/me').flush(ME);
    expect(await both).toEqual([ME, ME]);
    expect(session.me()).toEqual(ME);
    expect(session.has('modeller')).toBe(true);
    expect(session.has('admin')).toBe(false);
    server.verify();
  });

  it('knows nobody when the refresh is refused too, and stays on the page', async () => {
    const { session, server, router } = setUp();
    const me = session.whoAmI();
    server.expectOne('/api/me').flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
    await settle();
    server.expectOne('/api/session/refresh').flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
    expect(await me).toBeNull();
    expect(router.url).toBe('/');
  });

  it('does not take a silent server for a signed-out person, and asks again', async () => {
    const { session, server } = setUp();
    const first = session.whoAmI();
    server.expectOne('/api/me').error(new ProgressEvent('error'));
    await expect(first).rejects.toMatchObject({ name: 'ApiProblem', status: 0 });
    const second = session.whoAmI();
    server.expectOne('/api/me').flush(ME);
    expect(await second).toEqual(ME);
  });

  it('signs in, and out on the server before it forgets', async () => {
    const { session, server, router } = setUp();
    const signIn = firstValueFrom(session.signIn('modeller@halfdeep.example', 'a long enough secret'));
    const request = server.expectOne('/api/session');
    expect(request.request.body).toEqual({ email: 'modeller@halfdeep.example', password: 'a long enough secret' });
    request.flush({ me: ME });
    await signIn;
    expect(session.signedIn()).toBe(true);

    const signOut = session.signOut();
    const ending = server.expectOne('/api/session');
    expect(ending.request.method).toBe('DELETE');
    expect(session.signedIn()).toBe(true);
    ending.flush('');
    await signOut;
    expect(session.brokenOff()).toBe(false);
    expect(session.signedIn()).toBe(false);
    expect(router.url).toBe('/sign-in');
  });

  it('stays signed in when the server could not end the session', async () => {
    const { session, server } = await signedIn();
    const signOut = session.signOut();
    server.expectOne('/api/session').flush('', { status: 503, statusText: 'Unavailable' });
    await expect(signOut).rejects.toBeInstanceOf(ApiProblem);
    expect(session.signedIn()).toBe(true);
  });
});

describe('refreshOn401', () => {
  it('refreshes once for many refused requests and sends each again', async () => {
    const { http, server } = await signedIn();
    const both = firstValueFrom(forkJoin([http.get('/api/desk'), http.get('/api/presets')]));
    for (const path of ['/api/desk', '/api/presets'])
      server.expectOne(path).flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
    await settle();
    server.expectOne('/api/session/refresh').flush('');
    await settle();
    server.expectOne('/api/desk').flush({ desk: 1 });
    server.expectOne('/api/presets').flush([]);
    expect(await both).toEqual([{ desk: 1 }, []]);
    server.verify();
  });

  it('ends the session when the refresh is refused, and keeps the address', async () => {
    const { http, server, session, router } = await signedIn();
    await router.navigateByUrl('/runs/7?tab=map');
    const read = firstValueFrom(http.get('/api/runs/7'));
    server.expectOne('/api/runs/7').flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
    await settle();
    server.expectOne('/api/session/refresh').flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
    await expect(read).rejects.toMatchObject({ status: 401 });
    await settle();
    expect(session.signedIn()).toBe(false);
    expect(session.brokenOff()).toBe(true);
    expect(router.url).toBe('/sign-in?next=%2Fruns%2F7%3Ftab%3Dmap');
  });

  it('keeps the session when the refresh gets no answer', async () => {
    const { http, server, session } = await signedIn();
    const read = firstValueFrom(http.get('/api/desk'));
    server.expectOne('/api/desk').flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
    await settle();
    server.expectOne('/api/session/refresh').error(new ProgressEvent('error'));
    await expect(read).rejects.toMatchObject({ status: 0 });
    expect(session.signedIn()).toBe(true);
  });

  it('does not send a request a third time', async () => {
    const { http, server } = await signedIn();
    const read = firstValueFrom(http.get('/api/desk'));
    server.expectOne('/api/desk').flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
    await settle();
    server.expectOne('/api/session/refresh').flush('');
    await settle();
    server.expectOne('/api/desk').flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
    await expect(read).rejects.toMatchObject({ status: 401 });
    server.verify();
  });

  it.each(['/api/session', '/api/password-resets/redeem', '/api/invitations/look'])(
    'takes a 401 of %s for its answer',
    async (path) => {
      const { http, server } = setUp();
      const sent = firstValueFrom(http.post(path, {}));
      server.expectOne(path).flush(REFUSED, { status: 401, statusText: 'Unauthorized' });
      await expect(sent).rejects.toMatchObject({ status: 401 });
      server.verify();
    },
  );
});
