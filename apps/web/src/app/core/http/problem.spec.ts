import { HttpErrorResponse, HttpHeaders } from '@angular/common/http';
import { Problem, asProblem, problemFrom } from './problem';

const answer = (status: number, error: unknown, headers: Record<string, string> = {}): HttpErrorResponse =>
  new HttpErrorResponse({ status, error, headers: new HttpHeaders(headers), url: '/api/models' });

describe('problemFrom', () => {
  it('keeps the code, the words, every single problem and the request id', () => {
    const problem = problemFrom(
      answer(422, {
        type: 'about:blank',
        title: 'The input has problems',
        status: 422,
        code: 'invalid',
        detail: '2 fields',
        problems: [
          { code: 'required', message: 'Fill this in', where: { field: 'name' } },
          { code: 'too-long', message: 'Use at most 120 characters', where: { path: 'owner' } },
        ],
        requestId: 'r-1',
      }),
    );
    expect(problem).toBeInstanceOf(Problem);
    expect(problem.code).toBe('invalid');
    expect(problem.problems).toHaveLength(2);
    expect(problem.forField('owner')?.code).toBe('too-long');
    expect(problem.forField('purpose')).toBeUndefined();
    expect(problem.requestId).toBe('r-1');
  });

  it('says that the server was not reached', () => {
    expect(problemFrom(answer(0, new ProgressEvent('error'))).code).toBe('unreachable');
  });

  it('reads problem details that arrived as text, and survives text that is none', () => {
    expect(problemFrom(answer(409, '{"title":"In the way","code":"conflict"}')).code).toBe('conflict');
    const page = problemFrom(answer(502, '<html>Bad gateway</html>'));
    expect(page.code).toBe('failed');
    expect(page.detail).toContain('502');
  });

  it('reads how long to wait', () => {
    expect(problemFrom(answer(429, null, { 'Retry-After': '30' })).retryAfterSeconds).toBe(30);
    expect(problemFrom(answer(429, null)).retryAfterSeconds).toBeNull();
  });
});

describe('asProblem', () => {
  it('passes problems on and wraps what this page threw', () => {
    const problem = new Problem(412, 'stale', 'Stale', '');
    expect(asProblem(problem)).toBe(problem);
    expect(asProblem(new TypeError('x is not a function'))).toMatchObject({ status: -1, detail: 'x is not a function' });
  });
});
