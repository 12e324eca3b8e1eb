// The security table of the architecture, line by line; the names of the blocks are its left column.
import { readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { AuditRow, Mail, OneUseToken, Person, RefreshToken, Run, Session } from '@halfdeep/store';
import request, { type Response } from 'supertest';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { PasswordHasher } from '../../apps/api/src/accounts/password-hasher';
import { TRADE_GRACE_MS } from '../../apps/api/src/accounts/session-service';
import {
  browser,
  NEW_PASSWORD,
  PASSWORD,
  script,
  settled,
  somebody,
  startDeskApi,
  tokenMailedTo,
  type DeskApi,
} from './desk-harness';

let api: DeskApi;
beforeAll(async () => {
  api = await startDeskApi();
});
afterAll(() => api.close());

const cookiesOf = (answer: Response): string[] =>
  (answer.headers['set-cookie'] as unknown as string[] | undefined) ?? [];
const cookie = (answer: Response, name: string) => cookiesOf(answer).find((text) => text.startsWith(`${name}=`)) ?? '';
const valueOf = (text: string) => text.slice(0, text.indexOf(';'));
const signIn = (email: string, password = PASSWORD, query = '') =>
  request(api.server).post(`/api/session${query}`).send({ email, password });
const askForReset = async (email: string) => {
  await request(api.server).post('/api/password-resets').send({ email }).expect(202);
  return tokenMailedTo(api, email);
};
const redeem = (token: string, password = NEW_PASSWORD) =>
  request(api.server).post('/api/password-resets/redeem').send({ token, password });

/** Everything the database files hold, as text. */
async function everythingKept(): Promise<string> {
  const files = ['desk.sqlite', 'desk.sqlite-wal'].map((name) => readFile(join(api.varFolder, name), 'latin1'));
  return (await Promise.all(files)).join('');
}

describe('passwords', () => {
  it('are kept by bcrypt at cost 12', async () => {
    const hasher = new PasswordHasher();
    const hash = await hasher.hash(PASSWORD);
    expect(hash).toMatch(/^\$2[aby]\$12\$/);
    expect(await hasher.matches(PASSWORD, hash)).toBe(true);
    expect(await hasher.matches('another', hash)).toBe(false);
  });

  it.each([
    ['shorter than 12 characters', 'brine-7-cod', /at least 12 characters/],
    ['longer than bcrypt reads', 'ö'.repeat(37), /at most 72 bytes/],
    ['common', 'Password-2026', /first that anybody would try/],
  ])('are refused when %s, in a reset and in an invitation', async (_why, password, sentence) => {
    const { email } = await somebody(api, 'chooser', 'modeller');
    const reset = await redeem(await askForReset(email), password).expect(422);
    expect(reset.body.errors).toEqual([{ pointer: '/password', detail: expect.stringMatching(sentence) }]);
    const admin = await script(api, await somebody(api, 'inviter', 'admin'));
    const invited = `new-${password.length}@desk.example`;
    await admin.post('/api/admin/people', { email: invited, name: 'New', roles: ['reviewer'] }).expect(201);
    const token = await tokenMailedTo(api, invited);
    const body = { token, name: 'New', password };
    const refused = await request(api.server).post('/api/invitations/redeem').send(body).expect(422);
    expect(refused.body.errors[0].pointer).toBe('/password');
  });

  it('links are kept as hashes, and no secret is in the database', async () => {
    const owner = await somebody(api, 'careful', 'modeller');
    const token = await askForReset(owner.email);
    const answer = await signIn(owner.email).expect(200);
    const refresh = valueOf(cookie(answer, 'halfdeep_refresh')).split('=')[1];
    const kept = await everythingKept();
    expect(kept.includes(owner.email)).toBe(true); // so that the next lines mean something
    for (const secret of [PASSWORD, token, refresh]) expect(kept.includes(secret)).toBe(false);
  });

  it('links work once', async () => {
    const { email } = await somebody(api, 'once', 'modeller');
    const token = await askForReset(email);
    await redeem(token).expect(204);
    const again = await redeem(token, 'another set of words 9').expect(422);
    expect(again.body.errors).toEqual([{ pointer: '/token', detail: expect.stringContaining('no longer good') }]);
    await signIn(email, NEW_PASSWORD).expect(200);
  });

  it('links expire: a reset after an hour, an invitation after seven days', async () => {
    const started = api.clock.now;
    const { email } = await somebody(api, 'slow', 'modeller');
    const reset = await askForReset(email);
    const admin = await script(api, await somebody(api, 'inviter', 'admin'));
    const body = { email: 'slow-guest@desk.example', name: 'Guest', roles: ['reviewer'] };
    await admin.post('/api/admin/people', body).expect(201);
    const invitation = await tokenMailedTo(api, 'slow-guest@desk.example');
    const look = () => request(api.server).post('/api/invitations/look').send({ token: invitation });
    try {
      api.clock.now = new Date(started.getTime() + 61 * 60_000);
      await redeem(reset).expect(422);
      await look().expect(200);
      api.clock.now = new Date(started.getTime() + 7 * 24 * 3600_000 + 1);
      await look().expect(422);
    } finally {
      api.clock.now = started;
    }
  });

  it('a newer link withdraws the older one', async () => {
    const { email } = await somebody(api, 'twice', 'modeller');
    const first = await askForReset(email);
    const second = await askForReset(email);
    await redeem(first).expect(422);
    await redeem(second).expect(204);
  });
});

describe('browser session', () => {
  it('lives in HttpOnly, SameSite=Strict cookies, with no token in the body', async () => {
    const owner = await somebody(api, 'browser', 'modeller');
    const answer = await signIn(owner.email).expect(200);
    expect(answer.body).toEqual({
      me: { id: owner.id, name: owner.name, email: owner.email, roles: ['modeller'], demonstration: false },
    });
    expect(cookiesOf(answer)).toHaveLength(3);
    for (const text of cookiesOf(answer)) expect(text).toMatch(/HttpOnly; SameSite=Strict/);
    expect(cookie(answer, 'halfdeep_access')).toContain('Path=/api;');
    expect(cookie(answer, 'halfdeep_refresh')).toContain('Path=/api/session;');
    // Plain HTTP on loopback: Secure would keep the browser from sending them.
    for (const text of cookiesOf(answer)) expect(text).not.toContain('Secure');
  });

  it('puts the access token into the body when a script asks with token=1, and nothing else does', async () => {
    const owner = await somebody(api, 'scripted', 'modeller');
    const answer = await signIn(owner.email, PASSWORD, '?token=1').expect(200);
    expect(Date.parse(answer.body.expiresAt)).toBeGreaterThan(Date.now());
    const me = () => request(api.server).get('/api/me');
    await me().set('authorization', `Bearer ${answer.body.accessToken}`).expect(200);
    await me().set('authorization', `Bearer ${answer.body.accessToken}x`).expect(401);
    await signIn(owner.email, PASSWORD, '?token=yes').expect(400);
  });

  it('has a short access token: after ten minutes it is refused, and a refresh brings another', async () => {
    const started = api.clock.now;
    const agent = request.agent(api.server);
    const { email } = await somebody(api, 'patient', 'modeller');
    // Signed eleven minutes ago, as far as the token says.
    api.clock.now = new Date(Date.now() - 11 * 60_000);
    const answer = await agent.post('/api/session').send({ email, password: PASSWORD }).expect(200);
    api.clock.now = started;
    const access = valueOf(cookie(answer, 'halfdeep_access'));
    await request(api.server).get('/api/me').set('cookie', access).expect(401);
    await agent.post('/api/session/refresh').send({}).expect(204);
    await agent.get('/api/me').expect(200);
  });

  it('rotates the refresh token, and ends the family when a rotated one is used again', async () => {
    const { email } = await somebody(api, 'rotating', 'modeller');
    const agent = request.agent(api.server);
    const first = await agent.post('/api/session').send({ email, password: PASSWORD }).expect(200);
    const stolen = valueOf(cookie(first, 'halfdeep_refresh'));
    const second = await agent.post('/api/session/refresh').send({}).expect(204);
    expect(valueOf(cookie(second, 'halfdeep_refresh'))).not.toBe(stolen);
    await agent.get('/api/me').expect(200);
    api.clock.now = new Date(api.clock.now.getTime() + TRADE_GRACE_MS + 1);
    await request(api.server).post('/api/session/refresh').set('cookie', stolen).send({}).expect(401);
    await agent.get('/api/me').expect(401); // the owner too: one of the two is a thief
    await agent.post('/api/session/refresh').send({}).expect(401);
    const why = await AuditRow.findOne({ where: { subject: email, action: 'ended a session' } });
    expect(why?.detail).toContain('second time');
  });

  it('goes on for two tabs that send the same refresh token at once: both get the one successor', async () => {
    const { email } = await somebody(api, 'two-tabs', 'modeller');
    const first = await signIn(email).expect(200);
    const shared = valueOf(cookie(first, 'halfdeep_refresh'));
    const trade = (token: string) => request(api.server).post('/api/session/refresh').set('cookie', token).send({});
    const [one, other] = await Promise.all([trade(shared).expect(204), trade(shared).expect(204)]);
    const successor = valueOf(cookie(one, 'halfdeep_refresh'));
    expect(successor).not.toBe(shared);
    expect(valueOf(cookie(other, 'halfdeep_refresh'))).toBe(successor);
    await request(api.server)
      .get('/api/me')
      .set('cookie', valueOf(cookie(other, 'halfdeep_access')))
      .expect(200);
    // Once the successor has been used, the token before it is a copy, however early it comes.
    const third = await trade(successor).expect(204);
    await trade(shared).expect(401);
    await trade(valueOf(cookie(third, 'halfdeep_refresh'))).expect(401);
  });

  it('that has ended is not opened again by a token traded a moment ago', async () => {
    const { email } = await somebody(api, 'gone', 'modeller');
    const first = await signIn(email).expect(200);
    const shared = valueOf(cookie(first, 'halfdeep_refresh'));
    const trade = () => request(api.server).post('/api/session/refresh').set('cookie', shared).send({});
    const second = await trade().expect(204);
    await request(api.server)
      .delete('/api/session')
      .set('cookie', valueOf(cookie(second, 'halfdeep_refresh')))
      .expect(204);
    await trade().expect(401);
  });

  it('ends at once when signing out, although the access token has time left', async () => {
    const { email } = await somebody(api, 'leaving', 'modeller');
    const answer = await signIn(email, PASSWORD, '?token=1').expect(200);
    const bearer = `Bearer ${answer.body.accessToken as string}`;
    const other = await browser(api, { email });
    const signedOut = await request(api.server).delete('/api/session').set('authorization', bearer).expect(204);
    expect(cookie(signedOut, 'halfdeep_access')).toContain('halfdeep_access=;');
    await request(api.server).get('/api/me').set('authorization', bearer).expect(401);
    await other.get('/api/me').expect(200); // another session of the same person goes on
  });

  it('is not opened by a token that somebody else signed, or that says another algorithm', async () => {
    const { id } = await somebody(api, 'forged', 'admin');
    const part = (value: object) => Buffer.from(JSON.stringify(value)).toString('base64url');
    const claims = part({ sub: id, sid: id, iss: 'halfdeep', exp: 4e9 });
    const forged = [`${part({ alg: 'none', typ: 'JWT' })}.${claims}.`, `${part({ alg: 'HS256' })}.${claims}.AAAA`];
    for (const token of forged)
      await request(api.server).get('/api/me').set('authorization', `Bearer ${token}`).expect(401);
  });
});

describe('requests that change something', () => {
  it.each([
    ['Origin of another site', { origin: 'https://elsewhere.example' }],
    ['Origin null', { origin: 'null' }],
    ['Sec-Fetch-Site: cross-site', { 'sec-fetch-site': 'cross-site' }],
    ['Sec-Fetch-Site: same-site', { 'sec-fetch-site': 'same-site' }],
  ])('are refused with %s, whoever sends them', async (_what, headers) => {
    const owner = await somebody(api, 'victim', 'modeller');
    const agent = await browser(api, owner);
    const answer = await agent.post('/api/experiments').set(headers).send({ question: 'Is this mine?' }).expect(403);
    expect(answer.body.detail).toContain('another site');
    await agent.delete('/api/session').set(headers).expect(403);
    await request(api.server)
      .post('/api/session')
      .set(headers)
      .send({ email: owner.email, password: PASSWORD })
      .expect(403);
    await agent.get('/api/me').set(headers).expect(200); // reading changes nothing, and SameSite keeps it at home
  });

  it('are taken from our own pages', async () => {
    const agent = await browser(api, await somebody(api, 'at-home', 'modeller'));
    const ours = { origin: api.url, 'sec-fetch-site': 'same-origin' };
    await agent
      .post('/api/experiments')
      .set('host', new URL(api.url).host)
      .set(ours)
      .send({ question: 'Is this mine?' })
      .expect(201);
  });

  it.each(['text/plain', 'application/x-www-form-urlencoded', 'multipart/form-data; boundary=x'])(
    'are JSON: %s is refused',
    async (type) => {
      const agent = await browser(api, await somebody(api, 'form', 'modeller'));
      const body = '{"question": "Is this mine?"}';
      const answer = await agent.post('/api/experiments').set('content-type', type).send(body).expect(415);
      expect(answer.body.detail).toContain('application/json');
    },
  );
});

describe('guessing', () => {
  it('is refused after five failures from one address, with the seconds to wait', async () => {
    const { email } = await somebody(api, 'guessed', 'modeller');
    for (let k = 0; k < 6; k++) await signIn(email, 'wrong').expect(401);
    const refused = await signIn(email, 'wrong').expect(429);
    expect(Number(refused.headers['retry-after'])).toBeGreaterThanOrEqual(1);
    expect(refused.body.detail).toMatch(/Try again in \d+ s/);
  });

  it('by a stranger does not shut the owner out of a browser that is known', async () => {
    const owner = await somebody(api, 'besieged', 'modeller');
    const agent = await browser(api, owner); // leaves the mark of a known browser
    await agent.delete('/api/session').expect(204);
    let refused = 0;
    for (let k = 0; k < 12; k++) refused += Number((await signIn(owner.email, 'wrong')).status === 429);
    expect(refused).toBeGreaterThan(0); // the stranger, at the very same address
    await agent.post('/api/session').send({ email: owner.email, password: PASSWORD }).expect(200);
  });

  it('gets the same answer, at the same cost, for an unknown, an invited and a deactivated account', async () => {
    const known = await somebody(api, 'known', 'modeller');
    const closed = await somebody(api, 'closed', 'modeller');
    await api.services.desk.write((transaction) =>
      Person.update({ state: 'deactivated' }, { where: { id: closed.id }, transaction }),
    );
    const answers: unknown[] = [];
    for (const [email, password] of [
      [known.email, 'wrong'],
      ['nobody@desk.example', 'wrong'],
      [closed.email, PASSWORD],
    ] as const) {
      const before = api.hasher.compared;
      const answer = await signIn(email, password).expect(401);
      expect(api.hasher.compared - before).toBe(1);
      expect(cookiesOf(answer)).toEqual([]);
      answers.push(answer.body);
    }
    expect(answers[1]).toEqual(answers[0]);
    expect(answers[2]).toEqual(answers[0]);
  });

  it('gets the same answer to a forgotten password for an address that nobody has, and no mail goes there', async () => {
    const known = await somebody(api, 'forgetful', 'modeller');
    const ask = (email: string) => request(api.server).post('/api/password-resets').send({ email }).expect(202);
    const [one, other] = [await ask(known.email), await ask('stranger@desk.example')];
    expect(other.text).toBe(one.text);
    expect(other.headers['content-length']).toBe(one.headers['content-length']);
    await settled(api);
    expect(await Mail.count({ where: { recipient: known.email } })).toBe(1);
    expect(await Mail.count({ where: { recipient: 'stranger@desk.example' } })).toBe(0);
  });

  it('does not fill a mailbox: three reset mails an hour', async () => {
    const { email } = await somebody(api, 'flooded', 'modeller');
    for (let k = 0; k < 6; k++) await request(api.server).post('/api/password-resets').send({ email }).expect(202);
    await settled(api);
    expect(await Mail.count({ where: { recipient: email } })).toBe(3);
  });

  it('of links is limited by address', async () => {
    await api.close();
    api = await startDeskApi({}, { openRequests: 3 });
    const look = () =>
      request(api.server)
        .post('/api/invitations/look')
        .send({ token: 'x'.repeat(43) });
    for (let k = 0; k < 3; k++) await look().expect(422);
    const refused = await look().expect(429);
    expect(Number(refused.headers['retry-after'])).toBeGreaterThan(0);
    await api.close();
    api = await startDeskApi();
  });
});

describe('rights lost', () => {
  /** A person with a browser, a script, an open event stream and a mailed link: everything that must end. */
  async function everythingOpen(name: string) {
    const who = await somebody(api, name, 'modeller');
    const agent = await browser(api, who);
    const scripted = await script(api, who);
    const link = await askForReset(who.email);
    const events = await fetch(`${api.url}/api/events`, { headers: { authorization: `Bearer ${scripted.token}` } });
    expect(events.status).toBe(200);
    const reader = events.body!.getReader();
    const streamEnds = (async () => {
      for (;;) if ((await reader.read()).done) return true;
    })();
    return { who, agent, scripted, link, streamEnds };
  }

  it.each([
    ['a change of roles', { roles: ['reviewer'] }, 'changed roles', 'Your roles were changed'],
    ['deactivation', { active: false }, 'deactivated', 'Your account was deactivated'],
  ])(
    'by %s end sessions, links and event streams at once, are audited, and mailed',
    async (name, patch, action, mail) => {
      const { who, agent, scripted, link, streamEnds } = await everythingOpen(name.replaceAll(' ', '-'));
      const admin = await script(api, await somebody(api, 'chief', 'admin'));
      await admin.patch(`/api/admin/people/${who.id}`, patch).expect(200);
      expect(await streamEnds).toBe(true);
      await agent.get('/api/me').expect(401);
      await agent.post('/api/session/refresh').send({}).expect(401);
      await scripted.get('/api/me').expect(401);
      await redeem(link).expect(422);
      const trail = await AuditRow.findOne({ where: { subject: who.email, action } });
      expect(trail?.actorName).toBe('chief');
      await settled(api);
      expect(await Mail.count({ where: { recipient: who.email, subject: mail, state: 'sent' } })).toBe(1);
      expect(await Session.count({ where: { personId: who.id, endedAt: null } })).toBe(0);
    },
  );

  it('end a stream, too, that was being opened at that moment', async () => {
    const who = await somebody(api, 'in-between', 'modeller');
    const scripted = await script(api, who);
    const admin = await script(api, await somebody(api, 'chief', 'admin'));
    // The route asks for the runs after it was found out who asks, and before it listens.
    const runs = vi.spyOn(Run, 'findAll').mockImplementationOnce(async () => {
      await admin.patch(`/api/admin/people/${who.id}`, { active: false }).expect(200);
      return [];
    });
    const events = await fetch(`${api.url}/api/events`, { headers: { authorization: `Bearer ${scripted.token}` } });
    expect(events.status).toBe(200);
    expect(await events.text()).toBe('retry: 2000\n\n');
    runs.mockRestore();
  });

  it('by a new password end sessions and event streams at once, are audited, and mailed', async () => {
    const { who, agent, scripted, link, streamEnds } = await everythingOpen('renewed');
    await redeem(link).expect(204);
    expect(await streamEnds).toBe(true);
    await agent.get('/api/me').expect(401);
    await scripted.get('/api/me').expect(401);
    await signIn(who.email, PASSWORD).expect(401);
    await signIn(who.email, NEW_PASSWORD).expect(200);
    expect(await AuditRow.count({ where: { subject: who.email, action: 'set a new password' } })).toBe(1);
    await settled(api);
    expect(await Mail.count({ where: { recipient: who.email, subject: 'Your password was changed' } })).toBe(1);
  });

  it('take effect on a request that comes with an unexpired token: a role is read afresh each time', async () => {
    const who = await somebody(api, 'demoted', 'modeller', 'reviewer');
    const scripted = await script(api, who);
    await scripted.post('/api/experiments', { question: 'May I still ask?' }).expect(201);
    const admin = await script(api, await somebody(api, 'chief', 'admin'));
    await admin.patch(`/api/admin/people/${who.id}`, { roles: ['reviewer'] }).expect(200);
    const again = await script(api, who);
    const refused = await again.post('/api/experiments', { question: 'May I still ask?' }).expect(403);
    expect(refused.body.detail).toBe('You may not begin an experiment: that takes the role modeller; yours: reviewer.');
  });
});

describe('outbox', () => {
  it('shows an admin subject, recipient and state, and blanks the links', async () => {
    const admin = await script(api, await somebody(api, 'postmaster', 'admin'));
    const { email } = await somebody(api, 'addressee', 'modeller');
    const token = await askForReset(email);
    const page = await admin.get(`/api/admin/outbox?q=${encodeURIComponent(email)}`).expect(200);
    expect(page.body).toMatchObject({
      total: 1,
      items: [{ to: email, subject: 'Choose a new password', state: 'sent' }],
    });
    expect(page.body.items[0].body).toContain('[link withheld]');
    expect(JSON.stringify(page.body)).not.toContain(token);
    expect((await Mail.findOne({ where: { recipient: email } }))?.link).toBeNull(); // forgotten, not only hidden
  });

  it('shows the links in demonstration mode on loopback, and nowhere else', async () => {
    await api.close();
    const shown = async (environment: Record<string, string>) => {
      api = await startDeskApi(environment);
      const admin = await script(api, await somebody(api, 'postmaster', 'admin'));
      const { email } = await somebody(api, 'addressee', 'modeller');
      const token = await askForReset(email);
      const page = await admin.get('/api/admin/outbox').expect(200);
      await api.close();
      return JSON.stringify(page.body).includes(token);
    };
    expect(await shown({ HALFDEEP_DEMO: 'on' })).toBe(true);
    expect(await shown({ HALFDEEP_DEMO: 'on', HALFDEEP_HOST: '0.0.0.0' })).toBe(false);
    expect(await shown({ HALFDEEP_DEMO: 'off' })).toBe(false);
    api = await startDeskApi();
  });

  it('tries again when the mail server does not answer, and says so', async () => {
    const admin = await script(api, await somebody(api, 'postmaster', 'admin'));
    const { email } = await somebody(api, 'later', 'modeller');
    const send = api.mails.send.bind(api.mails);
    let failures = 0;
    api.mails.send = () => {
      failures += 1;
      return Promise.reject(new Error('450 mailbox busy'));
    };
    await request(api.server).post('/api/password-resets').send({ email }).expect(202);
    await settled(api);
    const item = async () => (await admin.get(`/api/admin/outbox?q=${email}`).expect(200)).body.items[0] as unknown;
    expect(await item()).toMatchObject({ state: 'waiting', attempts: 1, error: '450 mailbox busy' });
    await settled(api);
    expect(failures).toBe(1); // not before its time
    api.mails.send = send;
    const started = api.clock.now;
    api.clock.now = new Date(started.getTime() + 61_000);
    await settled(api);
    expect(await item()).toMatchObject({ state: 'sent', attempts: 2, error: null });
    api.clock.now = started;
  });

  it('gives a mail up in the end, and forgets its link', async () => {
    const { email } = await somebody(api, 'never', 'modeller');
    const send = api.mails.send.bind(api.mails);
    const started = api.clock.now;
    api.mails.send = () => Promise.reject(new Error('550 no such mailbox'));
    await request(api.server).post('/api/password-resets').send({ email }).expect(202);
    for (let k = 0; k < 10; k++) {
      await settled(api);
      api.clock.now = new Date(api.clock.now.getTime() + 17 * 3600_000);
    }
    api.mails.send = send;
    api.clock.now = started;
    const mail = await Mail.findOne({ where: { recipient: email } });
    expect(mail).toMatchObject({ state: 'failed', attempts: 8, link: null, error: '550 no such mailbox' });
  });
});

describe('headers', () => {
  it('allow no inline script, no framing and no upgrade on plain HTTP', async () => {
    const { headers } = await request(api.server).get('/api/health').expect(200);
    const csp = Object.fromEntries(
      headers['content-security-policy'].split(';').map((part) => {
        const [name, ...values] = part.split(' ');
        return [name, values.join(' ')];
      }),
    );
    expect(csp).toMatchObject({
      'default-src': "'self'",
      'script-src': "'self' 'wasm-unsafe-eval'",
      'img-src': "'self' data: blob:",
      'frame-ancestors': "'none'",
      'object-src': "'none'",
      'worker-src': "'self'",
    });
    expect(csp).not.toHaveProperty('upgrade-insecure-requests');
    expect(headers).not.toHaveProperty('strict-transport-security');
    expect(headers).not.toHaveProperty('x-powered-by');
    expect(headers['x-content-type-options']).toBe('nosniff');
    expect(headers['referrer-policy']).toBe('no-referrer');
  });

  it('behind HTTPS cookies are Secure, HSTS is on, and the proxy is believed about the address', async () => {
    await api.close();
    api = await startDeskApi({ HALFDEEP_PUBLIC_URL: 'https://desk.example' });
    const { email } = await somebody(api, 'remote', 'modeller');
    const answer = await request(api.server)
      .post('/api/session')
      .set({ 'x-forwarded-for': '203.0.113.9', 'x-forwarded-proto': 'https', origin: 'https://desk.example' })
      .send({ email, password: PASSWORD })
      .expect(200);
    for (const text of cookiesOf(answer)) expect(text).toContain('Secure');
    expect(answer.headers['strict-transport-security']).toContain('max-age');
    expect((await Session.findOne())?.address).toBe('203.0.113.9');
    await api.close();
    api = await startDeskApi();
    const plain = await somebody(api, 'local', 'modeller');
    await request(api.server)
      .post('/api/session')
      .set('x-forwarded-for', '203.0.113.9')
      .send({ email: plain.email, password: PASSWORD })
      .expect(200);
    expect((await Session.findOne())?.address).not.toBe('203.0.113.9');
  });
});

describe('secrets', () => {
  it('are made at first start, readable by their owner alone, and are not the same twice', async () => {
    const path = join(api.varFolder, 'secrets.json');
    expect((await stat(path)).mode & 0o777).toBe(0o600);
    const first = await readFile(path, 'utf8');
    await api.close();
    api = await startDeskApi();
    expect(await readFile(join(api.varFolder, 'secrets.json'), 'utf8')).not.toBe(first);
  });

  it('of other kinds are rows of hashes: sessions, links', async () => {
    const { email } = await somebody(api, 'hashed', 'modeller');
    await askForReset(email);
    await signIn(email).expect(200);
    for (const row of [await OneUseToken.findOne(), await RefreshToken.findOne()])
      expect(row?.hash).toMatch(/^[0-9a-f]{64}$/);
  });
});
