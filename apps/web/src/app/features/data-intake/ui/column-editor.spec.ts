import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import { ColumnEditor } from './column-editor';

describe('the part of one column', () => {
  let fixture: ComponentFixture<ColumnEditor>;
  const profile: ColumnProfile = {
    position: 0,
    column: 'amount',
    kind: 'numeric',
    rows: 200,
    distinct: 199,
    missing: 0,
    missingTokens: [],
    specialSuspects: [],
    mostFrequent: [],
    valuesComplete: false,
    numeric: null,
    date: null,
    text: null,
    flags: [{ code: 'unreadable-numbers', weight: 'look', finding: '6 of 200 values are no numbers.', values: ['NaN', ' ', 'Inf', '0x10', '1e309', '-Inf'] }],
    suggestedRole: 'characteristic',
    suggestedProtected: false,
    suggestion: 'Nothing speaks against it.',
    hashed: false,
  }; // prettier-ignore
  const buttons = (): HTMLButtonElement[] => [
    ...(fixture.nativeElement as HTMLElement).querySelectorAll<HTMLButtonElement>('.flags button'),
  ];

  beforeEach(() => {
    fixture = TestBed.createComponent(ColumnEditor);
    fixture.componentRef.setInput('profile', profile);
  });

  it('offers to read again with all that is no number as missing', () => {
    const told: (readonly string[])[] = [];
    fixture.componentInstance.readAgain.subscribe((values) => told.push(values));
    fixture.componentRef.setInput('mayRead', true);
    fixture.detectChanges();
    expect(buttons().map(({ textContent }) => textContent.trim())).toEqual([
      'Read again with NaN, (blank), Inf, 0x10 and 2 more as missing',
    ]);
    buttons()[0].click();
    expect(told).toEqual([profile.flags[0].values]);
  });

  it('offers it to nobody who may not, and only where there is such a value', () => {
    fixture.detectChanges();
    expect(buttons()).toEqual([]);
    fixture.componentRef.setInput('mayRead', true);
    fixture.componentRef.setInput('profile', { ...profile, flags: [{ ...profile.flags[0], values: [] }] });
    fixture.detectChanges();
    expect(buttons()).toEqual([]);
  });
});
