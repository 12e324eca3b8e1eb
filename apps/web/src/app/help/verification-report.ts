import { ChangeDetectionStrategy, Component, computed, inject, signal } from '@angular/core';
import { verificationAnswerSchema, type VerificationCheck, type VerificationReport } from '@halfdeep/contracts';
import { Api } from '../core/api';
import { formatCount, formatNumber, formatTimestamp, NO_VALUE, sentenceStart } from '../core/format';
import { Reading } from '../core/reading';
import { ChoiceField, type Choice } from '../shared/choice-field/choice-field';
import { DataState } from '../shared/data-state/data-state';
import { ListSearch } from '../shared/list-search/list-search';
import { VerdictSign } from '../shared/verdict/verdict';
import { VerificationFigure } from './verification-figure';

/** The proof of the core: every case with its source, what was expected and what came out. */
@Component({
  selector: 'app-verification-report',
  imports: [ChoiceField, DataState, ListSearch, VerdictSign, VerificationFigure],
  templateUrl: './verification-report.html',
  styleUrl: './verification-report.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class VerificationReportView {
  private readonly api = inject(Api);
  protected readonly reading = new Reading(() => this.api.get('/api/verification', verificationAnswerSchema));
  protected readonly words = signal('');
  protected readonly which = signal('all');
  protected readonly open = signal<ReadonlySet<string>>(new Set());
  protected readonly choices: Choice[] = [
    { value: 'all', label: 'all cases' },
    { value: 'passed', label: 'those that passed' },
    { value: 'failed', label: 'those that failed' },
    { value: 'order', label: 'those with an order' },
  ];

  protected readonly cases = computed(() => {
    const all = this.reading.value()?.report?.cases ?? [];
    const wanted = this.words().trim().toLowerCase();
    return all.filter((one) => {
      const kinds: Record<string, boolean> = { passed: one.passed, failed: !one.passed, order: one.order !== null };
      const text = `${one.id} ${one.title} ${one.source} ${one.quantity} ${one.about}`.toLowerCase();
      return (kinds[this.which()] ?? true) && wanted.split(/\s+/).every((word) => text.includes(word));
    });
  });

  protected toggle(id: string): void {
    this.open.update((open) => {
      const next = new Set(open);
      if (!next.delete(id)) next.add(id);
      return next;
    });
  }

  protected summary({ counts }: VerificationReport): string {
    const checks = `${formatNumber(counts.checks - counts.checksFailed)} of ${formatNumber(counts.checks)} checks hold`;
    const all = counts.failed === 0 && counts.checksFailed === 0;
    return all
      ? `${sentenceStart(formatCount(counts.cases, 'case'))}, all passed: ${checks}.`
      : `${formatNumber(counts.passed)} of ${formatCount(counts.cases, 'case')} passed: ${checks}.`;
  }

  protected made({ madeAt, engine }: VerificationReport): string {
    return `${madeAt === null ? '' : `, made ${formatTimestamp(madeAt)}`} with ${engine}`;
  }

  protected count(count: number, what: string): string {
    return sentenceStart(formatCount(count, what));
  }

  /** So many significant digits at most; an en dash where there is no number. */
  protected number(value: number | null, digits: number): string {
    if (value === null) return NO_VALUE;
    const size = Math.abs(value);
    if (size !== 0 && (size < 1e-3 || size >= 1e6)) return formatNumber(value, { significant: Math.min(digits, 3) });
    return formatNumber(Number(value.toPrecision(digits)));
  }

  protected kind(kind: VerificationCheck['errorKind']): string {
    return { relative: 'relative', absolute: 'absolute', L2: 'L2', bound: 'beyond the bound' }[kind];
  }
}
