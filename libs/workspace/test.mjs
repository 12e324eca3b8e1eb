// `npm test`: every check of the project, one after the other, with the sum at the end. All of them run even when one
// fails, so that one run shows everything. `npm test -- unit api` runs just the named ones.
import { mkdtempSync, existsSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { exitCode } from './run.mjs';

const results = mkdtempSync(join(tmpdir(), 'halfdeep-test-'));
const report = (name) => join(results, `${name}.json`);

const vitest = (name) => ({
  name,
  command: [
    'npx',
    ['vitest', 'run', '--project', name, '--reporter=default', '--reporter=json', `--outputFile.json=${report(name)}`],
  ],
});
const checks = [
  { name: 'format', command: ['npx', ['prettier', '--check', '--log-level=warn', '.']] },
  { name: 'lint', command: ['npx', ['eslint', '.', '--max-warnings', '0']] },
  { name: 'types', command: ['node', ['libs/workspace/typecheck.mjs']] },
  vitest('unit'),
  {
    name: 'web',
    command: [
      'npx',
      ['ng', 'test', '--watch=false', '--reporters=default', '--reporters=json', `--output-file=${report('web')}`],
    ],
  },
  vitest('verification'),
  vitest('api'),
  vitest('faults'),
  {
    name: 'e2e',
    command: ['npx', ['playwright', 'test', '--reporter=list,json']],
    env: { PLAYWRIGHT_JSON_OUTPUT_FILE: report('e2e') },
  },
];

/** Passed, failed and skipped tests of one check, from its JSON report where it writes one. */
function counts(name, ok) {
  if (!existsSync(report(name))) return { passed: ok ? 1 : 0, failed: ok ? 0 : 1, skipped: 0 };
  const json = JSON.parse(readFileSync(report(name), 'utf8'));
  const { stats } = json;
  const found = stats
    ? { passed: stats.expected + stats.flaky, failed: stats.unexpected, skipped: stats.skipped }
    : {
        passed: json.numPassedTests,
        failed: json.numFailedTests,
        skipped: json.numPendingTests + (json.numTodoTests ?? 0),
      };
  // A check can fail without a failing test: a file that does not load, a server that does not start.
  if (!ok && found.failed === 0) found.failed = 1;
  return found;
}

const asked = process.argv.slice(2);
const unknown = asked.filter((name) => !checks.some((check) => check.name === name));
if (unknown.length > 0) {
  console.error(
    `No check is called ${unknown.join(', ')}. There are: ${checks.map((check) => check.name).join(', ')}.`,
  );
  process.exit(2);
}
const sum = { passed: 0, failed: 0, skipped: 0 };
const lines = [];
for (const check of checks.filter(({ name }) => asked.length === 0 || asked.includes(name))) {
  console.log(`\n── ${check.name} ──`);
  const began = Date.now();
  const code = await exitCode(...check.command, { env: { ...process.env, NG_CLI_ANALYTICS: 'false', ...check.env } });
  const found = counts(check.name, code === 0);
  for (const key of Object.keys(sum)) sum[key] += found[key];
  lines.push(
    `${code === 0 ? 'ok    ' : 'FAILED'} ${check.name.padEnd(13)} ${found.passed} passed, ${found.failed} failed, ${((Date.now() - began) / 1000).toFixed(0)} s`,
  );
}
rmSync(results, { recursive: true, force: true });
console.log(`\n${lines.join('\n')}\n\n${sum.passed} passed, ${sum.failed} failed, ${sum.skipped} skipped`);
process.exit(sum.failed === 0 ? 0 : 1);
