import { join } from 'node:path';
import { CORE_VERSION } from '@halfdeep/ocean';
import { DeskSetting, openDesk, type DeskDatabase } from '@halfdeep/store';
import { type Logger } from 'pino';
import { AccountService } from './accounts/account-service';
import { PasswordHasher } from './accounts/password-hasher';
import { SessionService } from './accounts/session-service';
import { SignInGuard } from './accounts/sign-in-guard';
import { PeopleService } from './admin-people/people-service';
import { AuditTrail } from './audit/audit-trail';
import { AnswerOnce } from './http/answer-once';
import { makeLogger } from './http/logger';
import { localCarrier, smtpCarrier, type MailCarrier } from './mail/mail-carrier';
import { Outbox } from './mail/outbox';
import { composeRuns, type RunParts, type RunServices } from './runs/compose-runs';
import { openSecrets, type Secrets } from './secrets';
import { type Settings } from './settings';

/** Everything the API is made of, on one open desk database. */
export interface Services {
  settings: Settings;
  secrets: Secrets;
  logger: Logger;
  desk: DeskDatabase;
  audit: AuditTrail;
  outbox: Outbox;
  sessions: SessionService;
  accounts: AccountService;
  people: PeopleService;
  hasher: PasswordHasher;
  answerOnce: AnswerOnce;
  runs: RunServices;
  coreVersion: string;
  startedAt: Date;
  /** This is the demonstration's database. */
  demonstration: boolean;
  /** Nothing was kept here before this start. */
  firstStart: boolean;
  /** How people reach this server; the port is known once it listens. */
  publicUrl: () => string;
  listeningOn: (port: number) => void;
  /** Takes up waiting mails and runs. */
  start: () => Promise<void>;
  /** Saves running work, ends streams, closes the files. Call once the server takes no more requests. */
  close: () => Promise<void>;
}

/** What tests replace. */
export interface ComposeOptions {
  logger?: Logger;
  hasher?: PasswordHasher;
  guard?: SignInGuard;
  carrier?: MailCarrier;
  now?: () => Date;
  runs?: Partial<RunParts>;
}

const DEMONSTRATION = 'demonstration';

/** Opens the desk of `settings.varFolder` and composes every service on it; nothing works yet until `start`. */
export async function composeServices(settings: Settings, options: ComposeOptions = {}): Promise<Services> {
  const logger = options.logger ?? makeLogger(settings.logLevel);
  const secrets = openSecrets(settings.varFolder);
  const desk = await openDesk(join(settings.varFolder, 'desk.sqlite'));
  try {
    return await onDesk(desk, settings, secrets, logger, options);
  } catch (error) {
    await desk.close();
    throw error;
  }
}

async function onDesk(
  desk: DeskDatabase,
  settings: Settings,
  secrets: Secrets,
  logger: Logger,
  options: ComposeOptions,
): Promise<Services> {
  const now = options.now ?? (() => new Date());
  const kept = await DeskSetting.read(DEMONSTRATION);
  const firstStart = kept === undefined;
  const demonstration = firstStart ? settings.demo : kept === true;
  if (firstStart) await desk.write((transaction) => DeskSetting.keep(DEMONSTRATION, demonstration, transaction));

  let port = settings.port;
  const publicUrl = () => settings.publicUrl ?? addressOf(settings.host, port);
  const carrier = options.carrier ?? (settings.smtpUrl ? smtpCarrier(settings.smtpUrl) : await localCarrier());
  const audit = new AuditTrail(now);
  const outbox = new Outbox(desk, carrier, logger, {
    showLinks: demonstration && settings.loopback,
    linkKey: secrets.linkKey,
    now,
  });
  const sessions = new SessionService(desk, audit, secrets.accessKey, now);
  const hasher = options.hasher ?? new PasswordHasher();
  const shared = { desk, sessions, outbox, audit, publicUrl, now };
  const accounts = new AccountService({
    ...shared,
    hasher,
    guard: options.guard ?? new SignInGuard(),
    logger,
    deviceKey: secrets.deviceKey,
    demonstration,
  });
  const runs = composeRuns({
    desk,
    audit,
    varFolder: settings.varFolder,
    failed: (what, error) => logger.error({ err: error }, what),
    ...options.runs,
  });
  return {
    settings,
    secrets,
    logger,
    desk,
    audit,
    outbox,
    sessions,
    accounts,
    people: new PeopleService(shared),
    hasher,
    answerOnce: new AnswerOnce(desk, now),
    runs,
    coreVersion: CORE_VERSION,
    startedAt: now(),
    demonstration,
    firstStart,
    publicUrl,
    listeningOn: (actual) => {
      port = actual;
    },
    start: async () => {
      await sessions.sweep();
      void outbox.dispatch();
      await runs.start();
    },
    close: async () => {
      await runs.close();
      await accounts.idle();
      await outbox.close();
      await desk.close();
    },
  };
}

/** The address to type into a browser. */
function addressOf(host: string, port: number): string {
  const name = host === '127.0.0.1' || host === '::1' || host === '0.0.0.0' || host === '::' ? 'localhost' : host;
  return `http://${name.includes(':') ? `[${name}]` : name}:${port}`;
}
