import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import type { VerificationAnswer, VerificationReport } from '@halfdeep/contracts';
import { provideIcons } from '../core/icons';
import { VerificationReportView } from './verification-report';

const oneCase = (id: string, title: string, passed: boolean): VerificationReport['cases'][number] => ({
  id,
  title,
  source: 'Matsuno 1966',
  about: 'About it.',
  quantity: 'speed, m/s',
  expected: 2.5,
  obtained: passed ? 2.499 : null,
  error: 4e-4,
  tolerance: 2e-3,
  order: null,
  resolution: '50 km',
  passed,
  checks: [
    {
      id: 'speed',
      quantity: 'speed, m/s',
      expected: 2.5,
      obtained: 2.499,
      error: 4e-4,
      errorKind: 'relative',
      tolerance: 2e-3,
      order: 2.01,
      orderRange: [1.8, 2.2],
      resolution: '50 km',
      passed,
      plate: {
        caption: 'Error against spacing.',
        x: { label: 'spacing, km', log: true },
        y: { label: 'error', log: true },
        series: [{ name: 'found', role: 'found', points: [[100, 0.02], [50, 0.005]] }], // prettier-ignore
      },
    },
  ],
});
const report: VerificationReport = {
  coreVersion: '2',
  engine: 'V8 11.3',
  madeAt: '2026-03-01T10:00:00.000Z',
  counts: { cases: 2, passed: 1, failed: 1, checks: 2, checksFailed: 1 },
  cases: [oneCase('a', 'Kelvin pulse', true), oneCase('b', 'Rossby wave', false)],
  failures: ['Rossby wave > period'],
};

async function show(answer: VerificationAnswer) {
  TestBed.configureTestingModule({
    providers: [provideZonelessChangeDetection(), provideHttpClient(), provideHttpClientTesting(), provideIcons()],
  });
  const fixture = TestBed.createComponent(VerificationReportView);
  fixture.detectChanges();
  TestBed.inject(HttpTestingController).expectOne('/api/verification').flush(answer);
  await fixture.whenStable();
  const element = fixture.nativeElement as HTMLElement;
  const search = async (words: string) => {
    const field = element.querySelector<HTMLInputElement>('input[type=search]')!;
    field.value = words;
    field.dispatchEvent(new Event('input'));
    await fixture.whenStable();
  };
  return { fixture, element, search, text: () => (element.textContent ?? '').replace(/\s+/g, ' ') };
}

describe('VerificationReportView', () => {
  it('shows every case with its numbers and verdict, and names what failed', async () => {
    const { element, text } = await show({ coreVersion: '2', report, why: '' });
    expect(text()).toContain('1 of two cases passed: 1 of 2 checks hold.');
    expect(text()).toContain('the one that runs here');
    expect(text()).toContain('Rossby wave > period');
    const rows = [...element.querySelectorAll('tbody > tr')].map((row) => row.textContent ?? '');
    expect(rows).toHaveLength(2);
    expect(rows[0]).toContain('2.499');
    expect(rows[0]).toContain('passed');
    expect(rows[1]).toContain('–');
    expect(rows[1]).toContain('failed');
  });

  it('opens a case with its checks and plates', async () => {
    const { fixture, element, text } = await show({ coreVersion: '2', report, why: '' });
    const opener = element.querySelector<HTMLButtonElement>('.opener')!;
    opener.click();
    await fixture.whenStable();
    expect(opener.getAttribute('aria-expanded')).toBe('true');
    expect(text()).toContain('About it. Resolution: 50 km.');
    const picture = element.querySelector('app-verification-figure svg')!;
    expect(picture.getAttribute('aria-label')).toContain('error against spacing, km');
    expect(picture.querySelectorAll('circle')).toHaveLength(2);
  });

  it('filters by words, and says when nothing matches', async () => {
    const { search, text } = await show({ coreVersion: '2', report, why: '' });
    await search('kelvin');
    expect(text()).toContain('1 of 2 cases');
    await search('nothing of this');
    expect(text()).toContain('No case matches');
  });

  it('says when the report is about another core, and why there is none', async () => {
    const other = await show({ coreVersion: '3', report, why: '' });
    expect(other.text()).toContain('here runs version 3, which it says nothing about');
    TestBed.resetTestingModule();
    const none = await show({ coreVersion: '3', report: null, why: 'No verification report came with it.' });
    expect(none.text()).toContain('No verification report came with it.');
  });
});
