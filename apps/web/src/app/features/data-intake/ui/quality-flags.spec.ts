import type { ComponentRef } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { QualityFlag } from '@tallystone/contracts/samples/quality';
import { type AskedAnswer, QualityFlags } from './quality-flags';

const flag = (column: string | null, code: QualityFlag['code'], change: Partial<QualityFlag> = {}): QualityFlag => ({
  column,
  code,
  weight: 'look',
  finding: `${code} of ${column ?? 'the file'}.`,
  answer: null,
  ...change,
});

describe('flags of the quality report', () => {
  let fixture: ComponentFixture<QualityFlags>;
  let reference: ComponentRef<QualityFlags>;
  const list = (): HTMLElement[] => [...(fixture.nativeElement as HTMLElement).querySelectorAll('li')];

  beforeEach(() => {
    fixture = TestBed.createComponent(QualityFlags);
    reference = fixture.componentRef;
    reference.setInput('flags', [
      flag('income', 'outliers', { weight: 'note' }),
      flag('fee', 'leakage-value'),
      flag('branch', 'constant', { weight: 'stop' }),
      flag(null, 'duplicate-rows', {
        answer: { answer: 'accepted', reason: 'Two loans.', by: 'Marian', at: '2026-11-03T13:00:00Z' },
      }),
      flag('channel', 'drift'),
    ]);
    reference.setInput('roles', new Map([['income', 'characteristic'], ['fee', 'characteristic'], ['branch', 'not used'], ['channel', 'characteristic']])); // prettier-ignore
  });

  it('put what waits first, and say of the rest how it stands', () => {
    reference.setInput('answerable', true);
    fixture.detectChanges();
    expect(list().map((entry) => entry.classList.contains('waits'))).toEqual([true, true, false, false, false]);
    expect(list()[0].textContent).toContain('fee');
    expect(list()[2].textContent).toContain('The column takes no part.');
    expect(list()[2].querySelector('[matButton]')).toBeNull();
    expect(list()[3].textContent).toContain('Accepted: Two loans.');
  });

  it('ask for an answer, and offer to leave out columns alone', () => {
    const asked: AskedAnswer[] = [];
    fixture.componentInstance.answer.subscribe((answer) => asked.push(answer));
    reference.setInput('answerable', true);
    fixture.detectChanges();
    const buttons = list()[0].querySelectorAll<HTMLButtonElement>('.ts-actions button');
    expect([...buttons].map((button) => button.textContent?.trim())).toEqual(['Accept', 'Not used']);
    buttons[1].click();
    expect(asked).toEqual([{ flag: expect.objectContaining({ column: 'fee' }), answer: 'not used' }]);
    const ofFile = list()[3].querySelectorAll('.ts-actions button');
    expect([...ofFile].map((button) => button.textContent?.trim())).toEqual(['Answer anew']);
    // Whoever speaks to the page says what they see.
    for (const button of [...buttons, ...ofFile])
      expect(button.getAttribute('aria-label')).toMatch(new RegExp(`^${button.textContent?.trim()}: `));
  });

  it('offer nothing to those who only read', () => {
    fixture.detectChanges();
    expect(fixture.nativeElement.querySelector('.ts-actions')).toBeNull();
  });
});
