import { TestBed } from '@angular/core/testing';
import { ApiProblem } from '../../core/problem';
import { ProblemMessage } from './problem-message';

function shown(problem: Partial<ConstructorParameters<typeof ApiProblem>[0]>, elsewhere: string[] = []): string {
  const fixture = TestBed.createComponent(ProblemMessage);
  const whole = { type: 'about:blank', title: 'The request is not right', status: 422, ...problem };
  fixture.componentRef.setInput('problem', new ApiProblem(whole, null));
  fixture.componentRef.setInput('shownElsewhere', elsewhere);
  fixture.detectChanges();
  return (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ').trim();
}

describe('ProblemMessage', () => {
  const first = { pointer: '/token', detail: 'This is not the whole link.' };
  const second = { pointer: '/name', detail: 'A name is missing.' };
  const detail = 'The body of the request is not right: This is not the whole link (at /token). So is one more place.';

  it('says what the sentence names once, and lists the rest', () => {
    const text = shown({ detail, errors: [first, second] });
    expect(text.match(/not the whole link/g)).toHaveLength(1);
    expect(text).toContain('A name is missing.');
  });

  it('leaves to a field what stands beside it', () => {
    expect(shown({ detail: second.detail, errors: [second] }, ['/name'])).not.toContain('A name is missing');
    expect(shown({ detail: second.detail, errors: [second] })).toContain('A name is missing.');
  });
});
