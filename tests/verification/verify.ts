/**
 * `npm run verify`: runs every case of the proof and writes data/verification/report.json and report.html from that very
 * run. With `-- --json` the last thing printed is one JSON object: the cases without their plates, and the counts.
 * Exit code 1 when a case or a test fails.
 */
import { mkdirSync, writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { startVitest } from 'vitest/node';
import type { VerificationReport } from '@halfdeep/contracts';
import { ENGINE } from './engine';
import { reportHtml } from './report/html';
import { shown } from './report/numbers';
import { ProofReporter } from './report/proof-reporter';

const json = process.argv.includes('--json');
const print = (line: string) => process.stdout.write(`${line}\n`);

process.env['HALFDEEP_VERIFY'] = 'write';
const reporter = new ProofReporter(ENGINE, print);
print('Running the cases of the proof; this takes a few minutes.');
const root = fileURLToPath(new URL('../..', import.meta.url));
const vitest = await startVitest('test', [], { root, project: ['verification'], watch: false, reporters: [reporter] });
await vitest.close();

const report = reporter.report();
const folder = fileURLToPath(new URL('../../data/verification/', import.meta.url));
mkdirSync(folder, { recursive: true });
writeFileSync(`${folder}report.json`, `${JSON.stringify(report)}\n`);
writeFileSync(`${folder}report.html`, reportHtml(report));

print('');
printTable(report);
for (const failure of report.failures) print(`FAILED ${failure}`);
print('\nWritten: data/verification/report.json and data/verification/report.html');
if (json) {
  const cases = report.cases.map((entry) => ({
    ...entry,
    checks: entry.checks.map(({ plate: _plate, ...rest }) => rest),
  }));
  print(JSON.stringify({ ...report, cases }));
}
process.exitCode = report.counts.failed > 0 || report.failures.length > 0 ? 1 : 0;

function printTable({ cases, counts, coreVersion }: VerificationReport): void {
  const row = (cells: string[]) => {
    const widths = [4, 42, 14, 14, 14, 12, 7];
    return cells.map((text, k) => (k < 2 ? text.padEnd(widths[k]) : text.padStart(widths[k] ?? 0))).join(' ');
  };
  print(row(['case', 'leading quantity', 'expected', 'obtained', 'error', 'tolerance', 'order', 'verdict']));
  const number = (value: number | null, digits: number) => (value === null ? '–' : shown(value, digits));
  for (const entry of cases) {
    const { expected, obtained, error, tolerance, order } = entry;
    const quantity = entry.quantity.length > 42 ? `${entry.quantity.slice(0, 41)}…` : entry.quantity;
    const verdict = `${entry.passed ? 'pass' : 'FAIL'} (${entry.checks.filter((check) => check.passed).length}/${entry.checks.length})`;
    const numbers = [
      number(expected, 6),
      number(obtained, 6),
      number(error, 2),
      number(tolerance, 2),
      number(order, 3),
    ];
    print(row([entry.id, quantity, ...numbers, verdict]));
  }
  print(
    `\nCore version ${coreVersion}: ${counts.passed} of ${counts.cases} cases pass; ${counts.checks - counts.checksFailed} of ${counts.checks} checks.`,
  );
}
