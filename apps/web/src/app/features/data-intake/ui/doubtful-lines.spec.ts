import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { DoubtfulLines as Found } from '@tallystone/contracts/samples/reading';
import { DoubtfulLines, type Looked } from './doubtful-lines';

describe('the doubtful lines of a file', () => {
  let fixture: ComponentFixture<DoubtfulLines>;
  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const show = (found: Found, looked: Looked = 'file'): void => {
    fixture.componentRef.setInput('found', found);
    fixture.componentRef.setInput('looked', looked);
    fixture.detectChanges();
  };
  const texts = (selector: string): string[] =>
    [...page().querySelectorAll(selector)].map((one) => one.textContent?.trim().replace(/\s+/g, ' ') ?? '');

  beforeEach(() => {
    fixture = TestBed.createComponent(DoubtfulLines);
  });

  it('are shown with what is wrong beside each, and what does not fit is told', () => {
    show({
      count: 3,
      lines: [
        { line: 1, record: null, text: 'n\\xE9,b', clipped: false, doubts: ['not UTF-8'] },
        { line: 1204, record: 1203, text: '', clipped: false, doubts: ['1 field where the header has 2', 'not UTF-8'] },
        { line: 1206, record: 1205, text: 'x'.repeat(200), clipped: true, doubts: ['text after a closing quote'] },
      ],
    });
    expect(texts('p')).toEqual(['3 lines of the file are doubtful.']);
    const cells = texts('tbody th, tbody td');
    expect(cells.slice(0, 8)).toEqual(['1', 'header', 'not UTF-8', 'n\\xE9,b', '1\u202f204', '1\u202f203', '1 field where the header has 2; not UTF-8', '(blank)'].map((text) => text.replace(/\s+/g, ' '))); // prettier-ignore
    expect(cells[11]).toBe(`${'x'.repeat(200)}…`);
  });

  it('say how many there are beyond those that are listed', () => {
    const lines = [{ line: 2, record: 1, text: '1', clipped: false, doubts: ['1 field'] }];
    show({ count: 70, lines }, 'part');
    expect(texts('p')).toEqual(['70 lines of the part of the file that was looked at are doubtful; these are the first 1.']);
    show({ count: 70, lines }, 'reading');
    expect(texts('p')).toEqual(['When the file was last read, 70 lines of it were doubtful; these are the first 1.']);
    show({ count: 1, lines }, 'reading');
    expect(texts('p')).toEqual(['When the file was last read, 1 line of it was doubtful.']);
  });

  it('take no room where there are none', () => {
    show({ count: 0, lines: [] });
    expect(page().textContent).toBe('');
  });
});
