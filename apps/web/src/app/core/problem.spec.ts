import { HttpErrorResponse, HttpHeaders } from '@angular/common/http';
import { toApiProblem } from './problem';

const answer = (status: number, body: unknown, headers: Record<string, string> = {}) =>
  new HttpErrorResponse({ status, statusText: 'Refused', error: body, headers: new HttpHeaders(headers) });

describe('toApiProblem', () => {
  it('keeps the sentence and the wrong fields of problem details', () => {
    const problem = toApiProblem(
      answer(400, {
        type: 'about:blank',
        title: 'The setup is refused',
        status: 400,
        detail: 'One field is wrong.',
        errors: [
          { pointer: '/setup/layer/restThicknessM', detail: 'Rest thickness must be at least 10 m; 1 arrived.' },
        ],
      }),
    );
    expect(problem.title).toBe('The setup is refused');
    expect(problem.fields.get('/setup/layer/restThicknessM')).toBe('Rest thickness must be at least 10 m; 1 arrived.');
  });

  it('reads a refusal that came as bytes, as slices get it', () => {
    const text = JSON.stringify({ type: 'about:blank', title: 'Gone', status: 410 });
    expect(toApiProblem(answer(410, new TextEncoder().encode(text).buffer)).title).toBe('Gone');
  });

  it.each([
    ['28', 28],
    ['0.2', 1],
    ['nonsense', null],
  ])('reads Retry-After: %s as %s', (header, seconds) => {
    const body = { type: 'about:blank', title: 'Too many tries', status: 429 };
    expect(toApiProblem(answer(429, body, { 'Retry-After': header })).retryAfterSeconds).toBe(seconds);
  });

  it('says something true when the answer says nothing', () => {
    expect(toApiProblem(answer(0, null)).title).toBe('No connection');
    expect(toApiProblem(answer(502, '<html>Bad gateway</html>')).detail).toContain('502');
    expect(toApiProblem(new TypeError('broken')).detail).toContain('broken');
  });
});
