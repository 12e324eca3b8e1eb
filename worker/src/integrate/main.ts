import { integrateCommand } from './command';

// `npm run integrate` steps into the workspace's folder; names are meant from where it was called.
const cwd = process.env['npm_lifecycle_event'] === 'integrate' ? process.env['INIT_CWD'] : undefined;
const stop = new AbortController();
let code: number | null = null;
const halt = (exitCode: number) => () => {
  if (stop.signal.aborted) process.exit(exitCode); // asked twice: at once
  code = exitCode;
  stop.abort();
};
process.on('SIGINT', halt(130));
process.on('SIGTERM', halt(143));
const ended = await integrateCommand(process.argv.slice(2), {
  stdout: process.stdout,
  stderr: process.stderr,
  cwd: cwd ?? process.cwd(),
  stop: stop.signal,
});
process.exitCode = ended === 130 ? (code ?? ended) : ended;
