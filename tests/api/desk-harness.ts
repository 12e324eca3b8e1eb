import { randomUUID } from 'node:crypto';
import { mkdtemp, rm } from 'node:fs/promises';
import { createServer, type Server } from 'node:http';
import { type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type Role } from '@halfdeep/contracts';
import { Person, PersonRole } from '@halfdeep/store';
import { type Express } from 'express';
import { pino } from 'pino';
import request, { type Test } from 'supertest';
import { PasswordHasher } from '../../apps/api/src/accounts/password-hasher';
import { SignInGuard } from '../../apps/api/src/accounts/sign-in-guard';
import { buildApp } from '../../apps/api/src/app';
import { composeServices, type Services } from '../../apps/api/src/compose-services';
import { localCarrier, type LocalCarrier } from '../../apps/api/src/mail/mail-carrier';
import { readSettings } from '../../apps/api/src/settings';

export const PASSWORD = 'a lantern on the quiet quay';
export const NEW_PASSWORD = 'pewter gulls over shingle';

/** The API on a database of its own, with a mail server of its own; the queue is composed and not started. */
export interface DeskApi {
  services: Services;
  app: Express;
  server: Server;
  url: string;
  varFolder: string;
  mails: LocalCarrier;
  /** The clock that sessions, tokens and mails read; tests move it. */
  clock: { now: Date };
  /** How often a password was compared. */
  hasher: CountingHasher;
  close(): Promise<void>;
}

/** Cheap hashes, counted: that an unknown address costs a comparison too is told by counting, not by timing. */
export class CountingHasher extends PasswordHasher {
  compared = 0;
  constructor() {
    super(4);
  }
  override matches(password: string, kept: string | null): Promise<boolean> {
    this.compared += 1;
    return super.matches(password, kept);
  }
}

export async function startDeskApi(
  environment: Record<string, string> = {},
  options: { guard?: SignInGuard; openRequests?: number; webFolder?: string; verificationFolder?: string } = {},
): Promise<DeskApi> {
  const varFolder = await mkdtemp(join(tmpdir(), 'halfdeep-desk-'));
  const settings = readSettings({ HALFDEEP_DEMO: 'off', ...environment, HALFDEEP_VAR: varFolder }, varFolder);
  const clock = { now: new Date() };
  const hasher = new CountingHasher();
  const mails = await localCarrier();
  const services = await composeServices(settings, {
    hasher,
    guard: options.guard ?? new SignInGuard(Date.now, () => Promise.resolve()),
    carrier: mails,
    logger: pino({ level: 'silent' }),
    now: () => clock.now,
  });
  const app = buildApp(services, {
    checkAnswers: true,
    openRequests: options.openRequests ?? 10_000,
    webFolder: options.webFolder,
    verificationFolder: options.verificationFolder,
  });
  const server = createServer(app);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  services.listeningOn(port);
  return {
    services,
    app,
    server,
    url: `http://127.0.0.1:${port}`,
    varFolder,
    mails,
    clock,
    hasher,
    close: async () => {
      server.closeAllConnections();
      await new Promise((resolve) => server.close(resolve));
      await services.close();
      await rm(varFolder, { recursive: true });
    },
  };
}

export interface Somebody {
  id: string;
  name: string;
  email: string;
}

/** A new person with these roles, who may sign in with PASSWORD. */
export async function somebody({ services }: DeskApi, name: string, ...roles: Role[]): Promise<Somebody> {
  const id = randomUUID();
  const email = `${name.toLowerCase().replace(/[^a-z]+/g, '-')}-${id.slice(0, 4)}@desk.example`;
  const passwordHash = await services.hasher.hash(PASSWORD);
  await services.desk.write(async (transaction) => {
    await Person.create({ id, email, name, state: 'active', passwordHash, createdAt: new Date() }, { transaction });
    for (const role of roles) await PersonRole.create({ personId: id, role }, { transaction });
  });
  return { id, name, email };
}

/** A script's session: requests with a bearer token. */
export interface Script {
  token: string;
  get(path: string): Test;
  post(path: string, body?: object): Test;
  patch(path: string, body: object): Test;
  delete(path: string): Test;
}

export async function script({ server }: DeskApi, { email }: { email: string }): Promise<Script> {
  const signedIn = await request(server).post('/api/session?token=1').send({ email, password: PASSWORD }).expect(200);
  const token = (signedIn.body as { accessToken: string }).accessToken;
  const as = (test: Test) => test.set('authorization', `Bearer ${token}`);
  return {
    token,
    get: (path) => as(request(server).get(path)),
    post: (path, body) => (body ? as(request(server).post(path)).send(body) : as(request(server).post(path))),
    patch: (path, body) => as(request(server).patch(path)).send(body),
    delete: (path) => as(request(server).delete(path)),
  };
}

/** A browser that is signed in: requests with cookies. */
export async function browser({ server }: DeskApi, { email }: { email: string }, password = PASSWORD) {
  const agent = request.agent(server);
  await agent.post('/api/session').send({ email, password }).expect(200);
  return agent;
}

/** Waits for the work behind the answers and for the mails. */
export async function settled({ services }: DeskApi): Promise<void> {
  await services.accounts.idle();
  await services.outbox.dispatch();
}

/** The link of the newest mail to somebody, as it left the building; its token. */
export async function tokenMailedTo(api: DeskApi, email: string): Promise<string> {
  await settled(api);
  const mail = api.mails.taken.findLast((text) => text.includes(`To: ${email}`));
  const token = mail && /#([A-Za-z0-9_-]{43})/.exec(mail.replaceAll(/=\r?\n/g, ''))?.[1];
  if (!token) throw new Error(`No mail with a link went to ${email}: ${mail ?? 'none at all'}`);
  return token;
}
