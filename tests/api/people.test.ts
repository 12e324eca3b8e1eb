import { AuditRow, Mail, Person, PersonRole } from '@halfdeep/store';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  NEW_PASSWORD,
  script,
  settled,
  somebody,
  startDeskApi,
  tokenMailedTo,
  type DeskApi,
  type Script,
  type Somebody,
} from './desk-harness';

let api: DeskApi;
let chief: Somebody;
let admin: Script;
beforeAll(async () => {
  api = await startDeskApi();
  chief = await somebody(api, 'Chief', 'admin');
  admin = await script(api, chief);
});
afterAll(() => api.close());

const look = (token: string) => request(api.server).post('/api/invitations/look').send({ token });
const accept = (token: string, name = 'Guest', more: object = {}) =>
  request(api.server)
    .post('/api/invitations/redeem')
    .send({ token, name, password: NEW_PASSWORD, ...more });
const signIn = (email: string) => request(api.server).post('/api/session').send({ email, password: NEW_PASSWORD });

describe('an invitation', () => {
  it('goes by mail, says what it offers, makes the account, and works once', async () => {
    const email = 'Guest.One@desk.example';
    const invited = await admin.post('/api/admin/people', { email, name: 'Guest', roles: ['reviewer'] }).expect(201);
    expect(invited.body).toMatchObject({ email: 'guest.one@desk.example', state: 'invited', roles: ['reviewer'] });
    await signIn(email).expect(401);
    const token = await tokenMailedTo(api, 'guest.one@desk.example');
    expect((await look(token).expect(200)).body).toMatchObject({
      email: 'guest.one@desk.example',
      name: 'Guest',
      roles: ['reviewer'],
      invitedBy: 'Chief',
    });
    await accept(token, 'Greta Guest').expect(204);
    const { body } = await signIn(email).expect(200);
    expect(body.me).toMatchObject({ name: 'Greta Guest', roles: ['reviewer'] });
    await accept(token).expect(422);
    await look(token).expect(422);
    const trail = await AuditRow.findAll({ where: { subject: 'guest.one@desk.example' }, order: ['id'] });
    expect(trail.map((row) => row.action)).toEqual(['invited', 'accepted the invitation', 'signed in']);
  });

  it('sent again withdraws the link before, and carries the newer roles', async () => {
    const email = 'again@desk.example';
    await admin.post('/api/admin/people', { email, name: 'Again', roles: ['reviewer'] }).expect(201);
    const first = await tokenMailedTo(api, email);
    await admin.post('/api/admin/people', { email, name: 'Again', roles: ['modeller', 'reviewer'] }).expect(201);
    const second = await tokenMailedTo(api, email);
    await accept(first).expect(422);
    expect((await look(second).expect(200)).body.roles).toEqual(['modeller', 'reviewer']);
    expect(await Person.count({ where: { email } })).toBe(1);
  });

  it('is refused for somebody who is here already', async () => {
    const there = await somebody(api, 'there', 'modeller');
    const body = { email: there.email.toUpperCase(), name: 'Twin', roles: ['admin'] };
    const answer = await admin.post('/api/admin/people', body).expect(409);
    expect(answer.body.detail).toBe(`there (${there.email}) has an account already.`);
    expect(await PersonRole.count({ where: { personId: there.id, role: 'admin' } })).toBe(0);
  });

  it('withdrawn by deactivation is dead; opened again, a new one goes out', async () => {
    const email = 'withdrawn@desk.example';
    const { body } = await admin.post('/api/admin/people', { email, name: 'W', roles: ['reviewer'] }).expect(201);
    const first = await tokenMailedTo(api, email);
    const path = `/api/admin/people/${(body as Somebody).id}`;
    expect((await admin.patch(path, { active: false }).expect(200)).body.state).toBe('deactivated');
    await look(first).expect(422);
    await admin.post('/api/admin/people', { email, name: 'W', roles: ['reviewer'] }).expect(409);
    expect((await admin.patch(path, { active: true }).expect(200)).body.state).toBe('invited');
    await accept(await tokenMailedTo(api, email)).expect(204);
    await signIn(email).expect(200);
  });
});

describe('an admin', () => {
  it('changes roles, closes an account and opens it again, each time audited and mailed once', async () => {
    const who = await somebody(api, 'moved', 'modeller');
    const path = `/api/admin/people/${who.id}`;
    const changed = await admin.patch(path, { roles: ['reviewer', 'modeller'] }).expect(200);
    expect(changed.body.roles).toEqual(['modeller', 'reviewer']);
    await admin.patch(path, { roles: ['modeller', 'reviewer'] }).expect(200); // the same: nothing happens
    await admin.patch(path, { active: false }).expect(200);
    await admin.patch(path, { active: false }).expect(200);
    await admin.patch(path, { active: true }).expect(200);
    await settled(api);
    const mails = await Mail.findAll({ where: { recipient: who.email }, order: ['id'] });
    expect(mails.map((mail) => mail.subject)).toEqual([
      'Your roles were changed',
      'Your account was deactivated',
      'Your account is open again',
    ]);
    const trail = await AuditRow.findAll({ where: { subject: who.email }, order: ['id'] });
    expect(trail.map((row) => [row.action, row.actorName, row.detail])).toEqual([
      ['changed roles', 'Chief', 'from modeller to modeller, reviewer'],
      ['deactivated', 'Chief', ''],
      ['reactivated', 'Chief', ''],
    ]);
  });

  it('cannot deactivate the own account', async () => {
    await somebody(api, 'second', 'admin');
    const answer = await admin.patch(`/api/admin/people/${chief.id}`, { active: false }).expect(409);
    expect(answer.body.detail).toContain('your own account');
    await admin.get('/api/me').expect(200);
  });

  it('that is the last active one stays: neither role nor account can be taken', async () => {
    await api.close();
    api = await startDeskApi();
    chief = await somebody(api, 'Chief', 'admin', 'modeller');
    admin = await script(api, chief);
    const second = await somebody(api, 'Second', 'admin');
    const own = `/api/admin/people/${chief.id}`;
    const other = await script(api, second);
    await admin.patch(`/api/admin/people/${second.id}`, { active: false }).expect(200);
    await other.get('/api/me').expect(401);
    const answer = await admin.patch(own, { roles: ['modeller'] }).expect(409);
    expect(answer.body.detail).toBe(
      'Chief is the only active admin and keeps the role admin; make somebody else an admin first.',
    );
    expect((await admin.get('/api/me').expect(200)).body.roles).toContain('admin'); // nothing was changed half-way
    await admin.patch(`/api/admin/people/${second.id}`, { active: true }).expect(200);
    await admin.patch(own, { roles: ['modeller'] }).expect(200);
  });

  it('who drops to another role by the hand of two admins at once: one of them remains', async () => {
    const one = await somebody(api, 'One', 'admin', 'modeller');
    const two = await somebody(api, 'Two', 'admin', 'modeller');
    for (const row of await Person.findAll({ include: ['roleRows'] }))
      if (row.id !== one.id && row.id !== two.id && row.roleRows?.some(({ role }) => role === 'admin'))
        await api.services.desk.write((transaction) =>
          PersonRole.destroy({ where: { personId: row.id, role: 'admin' }, transaction }),
        );
    const [a, b] = [await script(api, one), await script(api, two)];
    const answers = await Promise.all([
      a.patch(`/api/admin/people/${two.id}`, { roles: ['modeller'] }),
      b.patch(`/api/admin/people/${one.id}`, { roles: ['modeller'] }),
    ]);
    expect(answers.map((answer) => answer.status)).toContain(200);
    expect(await PersonRole.count({ where: { role: 'admin' } })).toBeGreaterThanOrEqual(1);
  });

  it('who was demoted while a request of theirs waited cannot take the role back with it', async () => {
    const [loser, other] = [await somebody(api, 'Loser', 'admin'), await somebody(api, 'Other', 'admin')];
    const token = await script(api, loser);
    const write = api.services.desk.write.bind(api.services.desk);
    let demoted = false;
    // Between the decision on the request and its turn to write, another admin's change comes first.
    api.services.desk.write = async (work) => {
      if (!demoted) {
        demoted = true;
        await write((transaction) =>
          PersonRole.update({ role: 'modeller' }, { where: { personId: loser.id }, transaction }),
        );
      }
      return write(work);
    };
    try {
      const answer = await token.patch(`/api/admin/people/${loser.id}`, { roles: ['modeller', 'admin'] }).expect(403);
      expect(answer.body.detail).toContain('no longer an admin');
    } finally {
      api.services.desk.write = write;
    }
    expect(await PersonRole.count({ where: { personId: loser.id, role: 'admin' } })).toBe(0);
    expect(await PersonRole.count({ where: { personId: other.id, role: 'admin' } })).toBe(1);
  });
});

describe('lists', () => {
  beforeAll(async () => {
    chief = await somebody(api, 'Lister', 'admin');
    admin = await script(api, chief);
    for (const name of ['Åsa', 'bob', 'Cleo', 'd_ve', '50 %']) await somebody(api, name, 'reviewer');
  });

  it('of people page, sort and search, whatever is typed', async () => {
    const first = await admin.get('/api/admin/people?pageSize=2&sort=name').expect(200);
    expect(first.body).toMatchObject({ page: 1, pageSize: 2, total: await Person.count() });
    expect(first.body.items).toHaveLength(2);
    const next = await admin.get('/api/admin/people?pageSize=2&page=2&sort=name').expect(200);
    expect(next.body.items[0].id).not.toBe(first.body.items[0].id);
    const found = async (q: string) =>
      ((await admin.get(`/api/admin/people?q=${encodeURIComponent(q)}`).expect(200)).body.items as Somebody[]).map(
        ({ name }) => name,
      );
    expect(await found('CLEO')).toEqual(['Cleo']);
    for (const typed of ['Åsa', 'åsa', 'ÅSA', 'ås']) expect(await found(typed)).toEqual(['Åsa']);
    expect(await found('_')).toEqual(['d_ve']); // a character like any other
    expect(await found('%')).toEqual(['50 %']);
    expect(await found(`' OR 1=1 --`)).toEqual([]);
    await admin.get('/api/admin/people?sort=shoe-size').expect(400);
  });

  it('of the audit trail page and search, newest first', async () => {
    const page = await admin.get('/api/admin/audit?pageSize=3').expect(200);
    const ids = (page.body.items as { id: number }[]).map(({ id }) => id);
    expect(ids).toEqual([...ids].sort((a, b) => b - a));
    expect(page.body.total).toBe(await AuditRow.count());
    const found = await admin.get('/api/admin/audit?q=lister').expect(200);
    expect(found.body.items[0]).toMatchObject({ action: 'signed in', actor: { id: chief.id, name: 'Lister' } });
  });
});

describe('the first admin', () => {
  it('is made by a link that asks for an address, once', async () => {
    await api.close();
    api = await startDeskApi();
    const { prepareAccounts } = await import('../../apps/api/src/first-start');
    const news = await prepareAccounts(api.services);
    expect(news.signIns).toEqual([]);
    const token = news.firstAdminLink?.split('#')[1] ?? '';
    expect(news.firstAdminLink).toBe(`${api.services.publicUrl()}/invitation#${token}`);
    expect((await look(token).expect(200)).body).toMatchObject({ email: '', roles: ['modeller', 'admin'] });
    const missing = await accept(token, 'Founder').expect(422);
    expect(missing.body.errors).toEqual([{ pointer: '/email', detail: expect.any(String) }]);
    await accept(token, 'Founder', { email: 'Founder@desk.example' }).expect(204);
    const { body } = await signIn('founder@desk.example').expect(200);
    expect(body.me).toMatchObject({ name: 'Founder', roles: ['modeller', 'admin'], demonstration: false });
    await accept(token, 'Other', { email: 'other@desk.example' }).expect(422);
    expect((await prepareAccounts(api.services)).firstAdminLink).toBeNull();
  });

  it('has a new link at each start until then, and the one before is dead', async () => {
    await api.close();
    api = await startDeskApi();
    const { prepareAccounts } = await import('../../apps/api/src/first-start');
    const token = async () => (await prepareAccounts(api.services)).firstAdminLink?.split('#')[1] ?? '';
    const [first, second] = [await token(), await token()];
    await look(first).expect(422);
    await look(second).expect(200);
  });
});

describe('the demonstration accounts', () => {
  it('are made once, one for each role, with passwords that the rule accepts', async () => {
    await api.close();
    api = await startDeskApi({ HALFDEEP_DEMO: 'on' });
    const { prepareAccounts } = await import('../../apps/api/src/first-start');
    const { signIns } = await prepareAccounts(api.services);
    expect(signIns.map(({ email }) => email)).toEqual([
      'modeller@halfdeep.example',
      'reviewer@halfdeep.example',
      'admin@halfdeep.example',
    ]);
    expect(new Set(signIns.map(({ password }) => password)).size).toBe(3);
    for (const { email, password, role } of signIns) {
      const { body } = await request(api.server).post('/api/session').send({ email, password }).expect(200);
      expect(body.me).toMatchObject({ roles: [role], demonstration: true });
    }
    expect((await prepareAccounts(api.services)).signIns).toEqual([]);
  });

  it('take the operator’s password at a later start, which ends their sessions', async () => {
    const email = 'modeller@halfdeep.example';
    const { prepareAccounts } = await import('../../apps/api/src/first-start');
    const named = { ...api.services, settings: { ...api.services.settings, demoPassword: NEW_PASSWORD } };
    expect((await prepareAccounts(named)).signIns).toHaveLength(3);
    await signIn(email).expect(200);
    expect((await prepareAccounts(named)).signIns).toEqual([]);
  });
});
