import type { Reporter, TestModule } from 'vitest/node';
import type { VerificationCase, VerificationCheck, VerificationReport } from '@halfdeep/contracts';
import { CORE_VERSION } from '@halfdeep/ocean';
import { CATALOGUE, type CaseId } from '../catalogue';

/** Gathers what the tests proved; `report()` when the run has ended. */
export class ProofReporter implements Reporter {
  private readonly checks = new Map<CaseId, VerificationCheck[]>();
  private readonly failures: string[] = [];
  constructor(
    private readonly engine: string,
    private readonly say: (line: string) => void,
  ) {}

  onTestModuleEnd(module: TestModule): void {
    const tests = [...module.children.allTests()];
    const failed = tests.filter((test) => test.result().state === 'failed').length;
    const seconds = (module.diagnostic().duration + module.diagnostic().collectDuration) / 1000;
    const name = module.moduleId.replace(/^.*\//, '');
    this.say(
      `${module.ok() ? 'ok    ' : 'FAILED'} ${name}: ${tests.length} tests, ${failed} failed, ${seconds.toFixed(0)} s`,
    );
  }

  onTestRunEnd(modules: readonly TestModule[], unhandled: readonly { message: string }[]): void {
    for (const module of [...modules].sort((a, b) => (a.moduleId < b.moduleId ? -1 : 1))) {
      const file = module.moduleId.replace(/^.*\//, '');
      for (const error of module.errors()) this.failures.push(`${file}: ${firstLine(error.message)}`);
      for (const test of module.children.allTests()) {
        for (const { caseId, check } of test.meta().proofs ?? []) this.add(caseId, check);
        const result = test.result();
        if (result.state === 'failed')
          this.failures.push(`${test.fullName}: ${result.errors.map(({ message }) => firstLine(message)).join('; ')}`);
      }
    }
    for (const { message } of unhandled) this.failures.push(firstLine(message));
  }

  report(): VerificationReport {
    const cases = (Object.keys(CATALOGUE) as CaseId[]).map((id) => caseOf(id, this.checks.get(id) ?? []));
    const checks = cases.flatMap((entry) => entry.checks);
    const passed = cases.filter((entry) => entry.passed).length;
    const checksFailed = checks.filter((check) => !check.passed).length;
    return {
      coreVersion: CORE_VERSION,
      engine: this.engine,
      // The same run makes the same report on any day.
      madeAt: null,
      counts: { cases: cases.length, passed, failed: cases.length - passed, checks: checks.length, checksFailed },
      cases,
      failures: this.failures,
    };
  }

  private add(caseId: CaseId, check: VerificationCheck): void {
    const list = this.checks.get(caseId) ?? [];
    if (list.some(({ id }) => id === check.id)) this.failures.push(`${caseId}/${check.id} was proven twice.`);
    list.push(check);
    this.checks.set(caseId, list);
  }
}

function caseOf(id: CaseId, checks: VerificationCheck[]): VerificationCase {
  const [leading] = checks as (VerificationCheck | undefined)[];
  return {
    id,
    ...CATALOGUE[id],
    quantity: leading?.quantity ?? 'no check was reached',
    expected: leading?.expected ?? null,
    obtained: leading?.obtained ?? null,
    error: leading?.error ?? null,
    tolerance: leading?.tolerance ?? null,
    order: leading?.order ?? checks.find((check) => check.order !== null)?.order ?? null,
    resolution: leading?.resolution ?? '',
    passed: checks.length > 0 && checks.every((check) => check.passed),
    checks,
  };
}

function firstLine(message: string): string {
  return message.split('\n', 1)[0];
}
