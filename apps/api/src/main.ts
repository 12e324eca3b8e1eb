import { createServer, type RequestListener, type Server } from 'node:http';
import { type AddressInfo } from 'node:net';
import { join } from 'node:path';
import { buildApp } from './app';
import { composeServices, type Services } from './compose-services';
import { queueDemonstration } from './demo/demonstration';
import { DEMO_MODELLER, prepareAccounts, type FirstStartNews } from './first-start';
import { claimFolder } from './one-server';
import { projectFolder } from './project-folder';
import { readSettings, SettingsError, type Settings } from './settings';
import { prepareVarFolder } from './var-folder';

/** A stop that takes longer than this leaves the open connections to themselves, ms. */
const PATIENCE_MS = 10_000;

const say = (text: string) => process.stdout.write(`${text}\n`);

/** Said in one piece, so that whoever reads the output has all of it once the address is there. */
function announce({ firstStart, demonstration, settings, publicUrl }: Services, news: FirstStartNews): void {
  const lines = ['', `Halfdeep is at ${publicUrl()}`, ''];
  if (news.signIns.length > 0) {
    const accounts = news.signIns.map(({ email, password }) => `  ${email.padEnd(28)} ${password}`);
    lines.push(
      firstStart ? 'Demonstration accounts, shown this once:' : 'Demonstration accounts, with the password you set:',
      ...accounts,
      '',
    );
  } else if (demonstration) {
    lines.push(
      'Its demonstration passwords were shown at the first start; to replace them, start once with',
      'HALFDEEP_DEMO_PASSWORD set to a new one.',
      '',
    );
  }
  if (news.firstAdminLink) lines.push('Make the first admin here, once, within a day:', `  ${news.firstAdminLink}`, '');
  if (demonstration && !settings.loopback)
    lines.push(
      `The demonstration accounts can be reached from other machines (HALFDEEP_HOST is ${settings.host}).`,
      '',
    );
  say(lines.join('\n'));
}

/** Answers what comes while the desk is being opened. */
const stillStarting: RequestListener = (_req, res) => {
  res.writeHead(503, { 'Content-Type': 'text/plain', 'Retry-After': '2' }).end('Halfdeep is starting. Try again.\n');
};

async function listen(server: Server, { host, port }: Settings): Promise<number> {
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(port, host, resolve);
  });
  return (server.address() as AddressInfo).port;
}

/** Says why the server cannot listen, in words. */
function whyNot(error: unknown, { host, port }: Settings): Error {
  const code = (error as NodeJS.ErrnoException).code;
  const where = `port ${port} of ${host}`;
  if (code === 'EADDRINUSE')
    return new Error(`Another program listens on ${where}. Stop it, or set PORT to a free one: PORT=4301 npm start`);
  if (code === 'EACCES') return new Error(`This user may not listen on ${where}. Set PORT to one above 1023.`);
  if (code === 'EADDRNOTAVAIL' || code === 'ENOTFOUND')
    return new Error(
      `${host} is no address of this machine. Set HALFDEEP_HOST to one that is, 127.0.0.1 for instance.`,
    );
  return error as Error;
}

/** A server that takes requests, and how it stops. */
interface Running {
  logger: Services['logger'];
  /** Stops taking requests, saves and closes everything. */
  stop: () => Promise<void>;
}

async function start(): Promise<Running> {
  const project = projectFolder();
  const settings = readSettings(process.env, project);
  // What the server and its workers make is for the server's own user: the desk holds addresses and password hashes.
  process.umask(0o077);
  prepareVarFolder(settings.varFolder);
  const giveBack = await claimFolder(settings.varFolder);
  let handler: RequestListener = stillStarting;
  const server = createServer((req, res) => handler(req, res));
  // The port is taken before anything is touched: a second start by mistake changes nothing.
  const port = await listen(server, settings).catch(async (error: unknown) => {
    await giveBack();
    throw whyNot(error, settings);
  });
  const services = await composeServices(settings);
  services.listeningOn(port);
  const news = await prepareAccounts(services);
  await services.start();
  if (services.demonstration) await queueDemonstration({ ...services.runs, desk: services.desk }, DEMO_MODELLER);
  handler = buildApp(services, { webFolder: join(project, 'dist', 'web') });
  announce(services, news);
  return { logger: services.logger, stop: () => shutDown(server, services, giveBack) };
}

async function shutDown(server: Server, services: Services, giveBack: () => Promise<void>): Promise<void> {
  const closed = new Promise<void>((resolve) => server.close(() => resolve()));
  const impatient = setTimeout(() => server.closeAllConnections(), PATIENCE_MS);
  impatient.unref();
  server.closeIdleConnections();
  await services.close(); // ends the event streams, which keep connections open
  server.closeIdleConnections();
  await closed;
  await giveBack();
}

function fail(error: unknown): never {
  const known = error instanceof Error;
  process.stderr.write(`Halfdeep does not start.\n${known ? error.message : String(error)}\n`);
  if (process.env['HALFDEEP_LOG'] === 'debug' && known) process.stderr.write(`${error.stack ?? ''}\n`);
  process.exit(error instanceof SettingsError ? 2 : 1);
}

const starting = start();
starting.catch(fail);

let stopping = false;
/** Also when the start is not over: what it began is closed in order. */
async function stop(signal: NodeJS.Signals): Promise<void> {
  if (stopping) return;
  stopping = true;
  say(`${signal}: saving what runs, then stopping.`);
  const running = await starting;
  try {
    await running.stop();
    process.exit(0);
  } catch (error) {
    running.logger.error({ err: error }, 'failed while stopping');
    process.exit(1);
  }
}
for (const signal of ['SIGTERM', 'SIGINT'] as const) process.on(signal, (name) => void stop(name));
