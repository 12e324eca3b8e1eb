import { TestBed } from '@angular/core/testing';
import { RUN_STATES, type RunState } from '@halfdeep/contracts';
import { StateSign } from './state-sign';

async function show(inputs: { state: RunState; text?: string; share?: number }) {
  const fixture = TestBed.createComponent(StateSign);
  for (const [name, value] of Object.entries(inputs)) fixture.componentRef.setInput(name, value);
  await fixture.whenStable();
  return fixture.nativeElement as HTMLElement;
}

describe('StateSign', () => {
  it.each(RUN_STATES)('says "%s" in a word beside a sign of its own', async (state) => {
    const element = await show({ state });
    expect(element.textContent.trim()).toBe(state);
    expect(element.classList).toContain(state);
    expect(element.querySelector('svg')?.getAttribute('aria-hidden')).toBe('true');
  });

  it('draws five different signs', async () => {
    const drawn: string[] = [];
    for (const state of RUN_STATES) drawn.push((await show({ state })).querySelector('svg')?.innerHTML ?? '');
    expect(new Set(drawn).size).toBe(RUN_STATES.length);
  });

  it('moves the pen of a running one with its share, and never outside the rule', async () => {
    const inked = async (share: number) =>
      Number((await show({ state: 'running', share })).querySelector('rect')?.getAttribute('width'));
    expect(await inked(0.25)).toBeLessThan(await inked(0.75));
    expect(await inked(7)).toBeLessThanOrEqual(28);
    expect(await inked(-1)).toBeGreaterThanOrEqual(0);
  });

  it('says more than the state when it is told to', async () => {
    expect((await show({ state: 'failed', text: 'failed at day 212' })).textContent.trim()).toBe('failed at day 212');
  });
});
