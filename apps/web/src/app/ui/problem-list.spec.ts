import { TestBed } from '@angular/core/testing';
import { Problem } from '../core/http/problem';
import { ProblemList } from './problem-list';

describe('ProblemList', () => {
  it('takes no room while nothing is wrong', async () => {
    const fixture = TestBed.createComponent(ProblemList);
    await fixture.whenStable();
    expect((fixture.nativeElement as HTMLElement).querySelector('*')).toBeNull();
  });

  it('says what, where and what next, every problem at once', async () => {
    const fixture = TestBed.createComponent(ProblemList);
    const problem = new Problem(
      422,
      'invalid',
      'The file has problems',
      'Nothing was stored.',
      [
        { code: 'ragged', message: '7 fields instead of 9', where: { line: 812, column: 'income' } },
        { code: 'blank-header', message: 'The header is blank', where: { column: 3 } },
      ],
      'r-9',
    );
    fixture.componentRef.setInput('error', problem);
    fixture.componentRef.setInput('next', 'Correct the file and bring it in again.');
    await fixture.whenStable();
    const text = (fixture.nativeElement as HTMLElement).textContent?.replace(/\s+/g, ' ');
    expect(text).toContain('The file has problems');
    expect(text).toContain('line 812, column income 7 fields instead of 9');
    expect(text).toContain('column 3 The header is blank');
    expect(text).toContain('Correct the file');
    expect(text).toContain('Request r-9');
    expect((fixture.nativeElement as HTMLElement).querySelector('[role=alert]')).not.toBeNull();
  });

  it('leaves how many and which to the message, which says it', async () => {
    const fixture = TestBed.createComponent(ProblemList);
    const message = 'Line 4 is not UTF-8. 2 lines in all: 4, 6.';
    const problem = new Problem(422, 'file', 'The file cannot be read like this', '', [
      { code: 'not-in-encoding', message, where: { line: 4, lines: '4, 6', count: 2 } },
    ]);
    fixture.componentRef.setInput('error', problem);
    await fixture.whenStable();
    const item = (fixture.nativeElement as HTMLElement).querySelector('li');
    expect(item?.textContent?.replace(/\s+/g, ' ').trim()).toBe(`line 4 ${message}`);
  });

  it('says a single problem once', async () => {
    const fixture = TestBed.createComponent(ProblemList);
    const message = 'Line 1: "colour" is no heading.';
    const item = { code: 'no-such-heading', message, where: { line: 1 } };
    fixture.componentRef.setInput('error', new Problem(422, 'invalid', 'Not valid', message, [item]));
    await fixture.whenStable();
    expect((fixture.nativeElement as HTMLElement).textContent?.split(message)).toHaveLength(2);
    // The message begins with its line, which stands there once, too.
    const place = (fixture.nativeElement as HTMLElement).querySelector('li')?.textContent?.replace(/\s+/g, ' ').trim();
    expect(place).toBe(message);
  });
});
