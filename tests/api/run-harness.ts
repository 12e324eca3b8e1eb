import { randomUUID } from 'node:crypto';
import { readdir } from 'node:fs/promises';
import { mkdir, mkdtemp, rm } from 'node:fs/promises';
import { createServer, type Server } from 'node:http';
import { type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { setTimeout as sleep } from 'node:timers/promises';
import { build } from 'esbuild';
import { type Experiment, type Role, type Run, type RunSummary } from '@halfdeep/contracts';
import { corvaneSetup, type Setup } from '@halfdeep/ocean';
import { Person, PersonRole } from '@halfdeep/store';
import { pino } from 'pino';
import request, { type Response, type Test } from 'supertest';
import { PasswordHasher } from '../../apps/api/src/accounts/password-hasher';
import { buildApp } from '../../apps/api/src/app';
import { composeServices, type Services } from '../../apps/api/src/compose-services';
import { readSettings } from '../../apps/api/src/settings';

const root = fileURLToPath(new URL('../../', import.meta.url));
const PASSWORD = 'a lantern on the quiet quay';

/** A person of the tests: requests in their name. */
export interface Hand {
  id: string;
  token: string;
  get(path: string): Test;
  post(path: string, body?: object): Test;
  patch(path: string, body: object): Test;
  delete(path: string): Test;
}

export interface RunApi {
  services: Services;
  varFolder: string;
  /** Of the listening server, for streams: http://127.0.0.1:port */
  url: string;
  /** A new person with these roles. */
  person(name: string, ...roles: Role[]): Promise<Hand>;
  /** Ends everything and removes the folder. */
  close(): Promise<void>;
}

/** The whole API with the real queue and real workers on a database of its own; answers are held against their schemas. */
export async function startRunApi(): Promise<RunApi> {
  const varFolder = await mkdtemp(join(tmpdir(), 'halfdeep-api-'));
  const worker = await bundled('tests/faults/slow-worker.ts'); // slow where `slowly` says so
  const settings = readSettings({ HALFDEEP_VAR: varFolder, HALFDEEP_DEMO: 'off', HALFDEEP_LOG: 'error' }, varFolder);
  const services = await composeServices(settings, {
    hasher: new PasswordHasher(4),
    logger: pino({ level: 'error' }),
    runs: { worker: { path: worker } },
  });
  const app = buildApp(services, { checkAnswers: true });
  const server: Server = createServer(app);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  await services.start();
  const url = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  return {
    services,
    varFolder,
    url,
    person: (name, ...roles) => makeHand(services, server, name, roles),
    close: async () => {
      await services.close();
      server.closeAllConnections();
      await new Promise((resolve) => server.close(resolve));
      await rm(varFolder, { recursive: true });
      await rm(join(worker, '..'), { recursive: true });
    },
  };
}

/** A programme as the build bundles it: it starts in a fraction of the time of its sources. Its folder is its own. */
export async function bundled(entry: string): Promise<string> {
  const folder = join(root, 'var', `api-tests-${randomUUID()}`); // inside the workspace, so that packages are found
  await mkdir(folder, { recursive: true });
  const outfile = join(folder, 'bundle.mjs');
  await build({
    entryPoints: [join(root, entry)],
    outfile,
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    packages: 'external',
    tsconfig: join(root, 'tsconfig.base.json'),
    logLevel: 'warning',
  });
  return outfile;
}

async function makeHand(services: Services, server: Server, name: string, roles: Role[]): Promise<Hand> {
  const id = randomUUID();
  const email = `${name.toLowerCase()}@desk.example`;
  const passwordHash = await services.hasher.hash(PASSWORD);
  await services.desk.write(async (transaction) => {
    await Person.create({ id, email, name, state: 'active', passwordHash, createdAt: new Date() }, { transaction });
    for (const role of roles) await PersonRole.create({ personId: id, role }, { transaction });
  });
  const signedIn = await request(server).post('/api/session?token=1').send({ email, password: PASSWORD }).expect(200);
  const token = (signedIn.body as { accessToken: string }).accessToken;
  const as = (test: Test) => test.set('authorization', `Bearer ${token}`);
  return {
    id,
    token,
    get: (path) => as(request(server).get(path)),
    post: (path, body) => (body ? as(request(server).post(path)).send(body) : as(request(server).post(path))),
    patch: (path, body) => as(request(server).patch(path)).send(body),
    delete: (path) => as(request(server).delete(path)),
  };
}

/** Runs that start during `work` rest between slices of steps, so that they last however quick the machine is. */
export async function slowly<T>(work: () => Promise<T>): Promise<T> {
  process.env['TEST_PAUSE_MS'] = '100'; // workers are started with this process's environment
  try {
    return await work();
  } finally {
    delete process.env['TEST_PAUSE_MS'];
  }
}

/** A small basin (30 × 20 cells at 1°) under the Corvane wind; intervals that do not divide each other. */
export function smallSetup(days: number, change: (setup: Setup) => void = () => undefined): Setup {
  const setup = structuredClone(corvaneSetup());
  Object.assign(setup.basin, { westDeg: 0, eastDeg: 30, southDeg: -10, northDeg: 10 });
  setup.basin.islands = [{ kind: 'box', name: 'Rock', westDeg: 20, eastDeg: 23, southDeg: -5, northDeg: -3 }];
  setup.basin.westernCoast = { kind: 'slanting', atSouthDeg: 0, atNorthDeg: 3 };
  Object.assign(setup.numerics, { spacingLongitudeDeg: 1, spacingLatitudeDeg: 1, stepsPerDay: 16 });
  setup.length.days = days;
  setup.output = {
    sections: [{ name: 'Equator', along: 'latitude', atDeg: 0 }],
    moorings: [{ name: 'West', longitudeDeg: 6.5, latitudeDeg: 1.5 }],
    frameIntervalDays: 1.5,
    sectionIntervalDays: 1,
    mooringIntervalDays: 0.25,
    momentumBudget: false,
    vorticityBudget: false,
  };
  change(setup);
  return setup;
}

/** A run that computes for as long as a test may want: stop it. */
export const endlessSetup = () =>
  smallSetup(73_000, (setup) => {
    setup.output.frameIntervalDays = 5;
    setup.output.sectionIntervalDays = 5;
    setup.output.mooringIntervalDays = 5;
  });

/** A new experiment of this person. */
export async function newExperiment(hand: Hand, question = 'Does it come out the same?'): Promise<Experiment> {
  const answer = await hand.post('/api/experiments', { question }).expect(201);
  return answer.body as Experiment;
}

/** Queues a run. */
export async function newRun(hand: Hand, experimentId: string, setup: Setup, label = 'Control'): Promise<Run> {
  const answer = await hand.post(`/api/experiments/${experimentId}/runs`, { label, setup });
  if (answer.status !== 202) throw new Error(JSON.stringify(answer.body));
  return answer.body as Run;
}

/** Asks until a run is in one of the states, half a minute at most. */
export async function reach(hand: Hand, runId: string, ...states: RunSummary['state'][]): Promise<Run> {
  for (const end = Date.now() + 40_000; ; await sleep(50)) {
    const run = (await hand.get(`/api/runs/${runId}`).expect(200)).body as Run;
    if (states.includes(run.state)) return run;
    if (run.state === 'failed' || Date.now() > end)
      throw new Error(`The run is ${run.state}, not ${states.join(' or ')}: ${JSON.stringify(run.failure)}`);
  }
}

/** Asks until `check` holds, half a minute at most. */
export async function until<T>(ask: () => Promise<T>, check: (value: T) => boolean): Promise<T> {
  for (const end = Date.now() + 40_000; ; await sleep(50)) {
    const value = await ask();
    if (check(value)) return value;
    if (Date.now() > end) throw new Error(`It did not happen: ${JSON.stringify(value)}`);
  }
}

/** Names of everything in the folder of runs. */
export const runFiles = (api: RunApi) =>
  readdir(join(api.varFolder, 'runs')).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return [];
    throw error;
  });

/** The bytes of a slice. */
export async function bytesOf(test: Test): Promise<Buffer> {
  const answer: Response = await test.responseType('blob').expect(200);
  return answer.body as Buffer;
}
