import { ChangeDetectionStrategy, Component, provideZonelessChangeDetection, signal } from '@angular/core';
import { TestBed, type ComponentFixture } from '@angular/core/testing';
import { provideRouter, Router } from '@angular/router';
import type { RunSummary } from '@halfdeep/contracts';
import { DescentTree } from './descent-tree';

function run(id: string, parentRunId: string | null, minute: number): RunSummary {
  return {
    id,
    parentRunId,
    label: id,
    state: 'finished',
    descent: parentRunId ? 'sensitivity' : 'control',
    changes: [{ pointer: '/x', label: 'seasonal strength', from: '1.00', to: '1.20', unit: '' }],
    createdAt: `2026-03-01T10:0${minute}:00Z`,
    progress: { step: 10, totalSteps: 10, startStep: 0, day: 730, totalDays: 730 },
    failure: null,
    queuePosition: null,
    queuedReason: null,
  } as unknown as RunSummary;
}

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [DescentTree],
  template: `<app-descent-tree [runs]="runs()" [(chosen)]="chosen" />`,
})
class Host {
  readonly runs = signal([run('control', null, 1), run('strong', 'control', 2), run('weak', 'control', 3)]);
  readonly chosen = signal<string | null>(null);
}

describe('DescentTree', () => {
  let fixture: ComponentFixture<Host>;
  const nodes = () => [...(fixture.nativeElement as HTMLElement).querySelectorAll<HTMLElement>('[role=treeitem]')];
  const focused = () => document.activeElement?.querySelector('a')?.textContent?.trim();
  const press = async (key: string, keyCode: number) => {
    const event = new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true });
    Object.defineProperty(event, 'keyCode', { value: keyCode });
    document.activeElement?.dispatchEvent(event);
    await fixture.whenStable();
  };

  beforeEach(async () => {
    TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection(), provideRouter([])] });
    fixture = TestBed.createComponent(Host);
    document.body.append(fixture.nativeElement as HTMLElement);
    await fixture.whenStable();
  });
  afterEach(() => (fixture.nativeElement as HTMLElement).remove());

  it('nests the runs and says of each what it changes and what it did', () => {
    expect(nodes().map((node) => node.getAttribute('aria-level'))).toEqual(['1', '2', '2']);
    expect(nodes()[1]?.getAttribute('aria-label')).toBe(
      'strong, finished, 2 years; changes seasonal strength 1.00 → 1.20',
    );
    expect(nodes()[1]?.closest('[role=tree]')?.getAttribute('aria-label')).toBe('Descent of the runs');
    expect(nodes().filter((node) => node.tabIndex === 0)).toHaveLength(1);
  });

  it('moves with the arrows, and the run that has the focus is the chosen one', async () => {
    nodes()[0]?.focus();
    await press('ArrowDown', 40);
    expect(focused()).toBe('strong');
    expect(fixture.componentInstance.chosen()).toBe('strong');
    await press('ArrowDown', 40);
    expect(focused()).toBe('weak');
    await press('ArrowLeft', 37);
    expect(focused()).toBe('control');
    await press('End', 35);
    expect(fixture.componentInstance.chosen()).toBe('weak');
  });

  it('opens the run with Enter', async () => {
    const navigate = vi.spyOn(TestBed.inject(Router), 'navigate').mockResolvedValue(true);
    nodes()[0]?.focus();
    await press('ArrowDown', 40);
    await press('Enter', 13);
    expect(navigate).toHaveBeenCalledWith(['/runs', 'strong']);
  });

  it('keeps the focus when a run moves on, and takes a new run in', async () => {
    nodes()[1]?.focus();
    fixture.componentInstance.runs.update((runs) =>
      runs.map((known) => (known.id === 'strong' ? { ...known, state: 'running' } : known)),
    );
    await fixture.whenStable();
    expect(focused()).toBe('strong');
    expect(nodes()[1]?.textContent).toContain('running');
    fixture.componentInstance.runs.update((runs) => [...runs, run('weaker', 'weak', 4)]);
    await fixture.whenStable();
    expect(nodes().map((node) => node.getAttribute('aria-level'))).toEqual(['1', '2', '2', '3']);
  });
});
