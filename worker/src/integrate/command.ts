import { open, readFile, rename, rm, stat, statfs } from 'node:fs/promises';
import { basename, dirname, join, resolve } from 'node:path';
import { Integration, type Setup, type StepperOptions } from '@halfdeep/ocean';
import { WorkerThreadTeam } from '../team/thread-team';
import { type IntegrateArguments, readArguments, USAGE } from './arguments';
import { integrate, type IntegrationOutcome, type IntegrationSummary } from './integrate';
import { duration, ProgressLine, type ProgressTarget } from './progress-line';
import { readSetup, type SetupInput } from './read-setup';
import { Refusal } from './refusal';
import { RunNetcdf } from './run-netcdf';

export const EXIT = { done: 0, failed: 1, badInput: 2, stopped: 130 } as const;

/** The world around the command. */
export interface CommandIo {
  stdout: { write(text: string): unknown };
  stderr: ProgressTarget;
  /** Folder that relative names start from. */
  cwd: string;
  /** Aborted by Ctrl-C. */
  stop: AbortSignal;
}

/** The whole command; resolves to the exit code. Rejects only with what is nobody's input: a programme error. */
export async function integrateCommand(argv: readonly string[], io: CommandIo): Promise<number> {
  const json = argv.includes('--json');
  try {
    const given = readArguments(argv);
    if (!given) {
      io.stdout.write(`${USAGE}\n`);
      return EXIT.done;
    }
    return await run(given, io);
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    io.stderr.write(`${error.message}\n`);
    for (const { pointer, detail } of error.errors) io.stderr.write(`  ${pointer || '/'}: ${detail}\n`);
    if (json) answer(io, { refused: { detail: error.message, errors: error.errors } });
    return EXIT.badInput;
  }
}

async function run(given: IntegrateArguments, io: CommandIo): Promise<number> {
  const outputFile = resolve(io.cwd, given.outputFile);
  const freeDiskBytes = await freeBytesFor(outputFile);
  const bytes = await readSetupFile(resolve(io.cwd, given.setupFile), given.setupFile);
  const input = readSetup(bytes, { freeDiskBytes });
  for (const caution of input.cautions) io.stderr.write(`Caution: ${caution}\n`);
  const { kernel, threads } = given;
  const integration = begin(input, { kernel, ...(threads > 1 && { team: new WorkerThreadTeam(threads) }) });
  const temporary = join(dirname(outputFile), `.${basename(outputFile)}.${process.pid}.part`);
  let outcome: IntegrationOutcome;
  try {
    const file = await RunNetcdf.create(temporary, integration, input.label, 'npm run integrate');
    try {
      outcome = await integrate({
        run: integration,
        anew: () => begin(input, { kernel }),
        restore: (checkpoint) => Integration.restore(input.setup, checkpoint, { kernel }),
        file,
        progress: new ProgressLine(io.stderr),
        stopped: () => io.stop.aborted,
      });
    } finally {
      file.abandon();
    }
    if (outcome.kind === 'finished') await putInPlace(temporary, outputFile);
  } finally {
    integration.dismissThreads();
    await rm(temporary, { force: true });
  }
  return report(outcome, given, io);
}

/** The run at its first step. What the core refuses beyond schema and preflight is bad input too. */
function begin({ setup, state }: SetupInput, options: StepperOptions): Integration {
  try {
    return Integration.start(setup, state ?? undefined, options);
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    throw new Refusal(error.message, [{ pointer: pointerOf(setup), detail: error.message }]);
  }
}

/** The core refuses places off the water and states of another grid; schema and preflight have seen to the rest. */
const pointerOf = ({ start }: Setup) => (start.kind === 'state' ? '/start' : '');

async function readSetupFile(path: string, name: string): Promise<Uint8Array> {
  try {
    const bytes = await readFile(path);
    return new Uint8Array(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  } catch (error) {
    throw unusable(error, `The setup ${name} cannot be read`);
  }
}

/** Free bytes of the disk on which a file is to be written. Throws Refusal when it cannot be written there. */
async function freeBytesFor(path: string): Promise<number> {
  try {
    const there = await stat(path).catch((error: NodeJS.ErrnoException) => {
      if (error.code === 'ENOENT') return null;
      throw error;
    });
    if (there && !there.isFile()) throw new Refusal(`${basename(path)} is not a file: name one to write.`);
    const { bavail, bsize } = await statfs(dirname(path));
    return bavail * bsize;
  } catch (error) {
    throw error instanceof Refusal ? error : unusable(error, `${basename(path)} cannot be written`);
  }
}

const REASONS: Readonly<Record<string, string>> = {
  ENOENT: 'there is no such file or folder',
  ENOTDIR: 'there is no such folder',
  EISDIR: 'it is a folder',
  EACCES: 'permission is missing',
  EPERM: 'permission is missing',
};

/** A Refusal for what the operating system says of a file; anything else is passed on. */
function unusable(error: unknown, what: string): Refusal {
  const reason = REASONS[(error as NodeJS.ErrnoException).code ?? ''];
  if (!reason) throw error;
  return new Refusal(`${what}: ${reason}.`);
}

/** The whole file under its own name, on the disk. */
async function putInPlace(temporary: string, path: string): Promise<void> {
  const file = await open(temporary, 'r+');
  try {
    await file.sync();
  } finally {
    await file.close();
  }
  await rename(temporary, path);
}

function report(outcome: IntegrationOutcome, given: IntegrateArguments, io: CommandIo): number {
  switch (outcome.kind) {
    case 'stopped':
      io.stderr.write('Stopped; the half-written file is gone.\n');
      if (given.json) answer(io, { stopped: true });
      return EXIT.stopped;
    case 'failed': {
      const { failure, report: facts } = outcome;
      io.stderr.write(`The integration failed on day ${failure.day ?? '?'}. ${failure.message}\n`);
      if (failure.lastGoodStep !== null) io.stderr.write(`Last good step: ${failure.lastGoodStep}.\n`);
      if (given.json) answer(io, { failed: facts });
      return EXIT.failed;
    }
    case 'finished':
      for (const { message } of outcome.summary.cautions) io.stderr.write(`Caution: ${message}\n`);
      if (given.json) answer(io, { ...outcome.summary, outputFile: basename(given.outputFile) });
      else io.stdout.write(words(outcome.summary, given.outputFile));
      return EXIT.done;
  }
}

const answer = (io: CommandIo, value: object) => io.stdout.write(`${JSON.stringify(value)}\n`);

function words(summary: IntegrationSummary, outputFile: string): string {
  const { steps, days, seconds, cellStepsPerSecond, sections, budgets, fingerprint } = summary;
  const lines = [
    `${outputFile}: ${steps} steps, ${days} days, in ${duration(seconds)} (${(cellStepsPerSecond / 1e6).toFixed(1)} million cell-steps/s)`,
  ];
  for (const { columns } of sections)
    for (const { label, unit, last, mean } of Object.values(columns))
      lines.push(`${label}: last ${number(last)} ${unit}, mean ${number(mean)} ${unit}`);
  for (const { label, unit, last, sum } of Object.values(budgets))
    lines.push(`${label}: last ${number(last)} ${unit}${sum === undefined ? '' : `, in all ${number(sum)} ${unit}`}`);
  lines.push(`Core version ${summary.coreVersion}, setup ${summary.setupSha256}`);
  lines.push(`Fingerprint ${fingerprint.sha256}`);
  return `${lines.join('\n')}\n`;
}

const number = (value: number | null | undefined) =>
  value === null || value === undefined ? 'none' : String(Number(value.toPrecision(6))).replace('-', '−');
