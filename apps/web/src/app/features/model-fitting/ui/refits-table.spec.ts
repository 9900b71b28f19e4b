import { TestBed } from '@angular/core/testing';
import type { OutcomeRefits, Refit } from '@tallystone/contracts/fits/outcome-refits';
import { Refits } from './refits-table';

const refit = (indeterminates: Refit['indeterminates'], more: Partial<Refit>): Refit => ({
  indeterminates,
  goods: 900,
  bads: 1100,
  kept: 7,
  converged: true,
  gini: 0.5,
  rankCorrelation: 1,
  decisionsChanged: null,
  ...more,
});
const refits: OutcomeRefits = {
  partition: 'holdOut',
  rows: 640,
  approvalRate: null,
  at: [
    {
      index: 4,
      lambda: 0.01,
      cases: [
        refit('as they are', {}),
        refit('as good', { gini: 0.512, rankCorrelation: 0.993 }),
        refit('as bad', { bads: 1300, gini: 0.48, converged: false }),
      ],
    },
  ],
};

function shown(index: number): HTMLElement {
  const fixture = TestBed.createComponent(Refits);
  fixture.componentRef.setInput('refits', refits);
  fixture.componentRef.setInput('index', index);
  fixture.detectChanges();
  return fixture.nativeElement as HTMLElement;
}

describe('the fit with indeterminates read otherwise', () => {
  it('says how far the Gini moves and lists each reading', () => {
    const page = shown(4);
    const text = page.textContent.replaceAll(/\s+/g, ' ');
    expect(text).toContain('moves by +0.012 with every indeterminate good, by \u22120.020 with every one bad');
    expect(text).toContain('scored on the 640 applicants of the hold-out');
    const rows = [...page.querySelectorAll('tbody tr')].map((row) =>
      [...row.children].map((cell) => cell.textContent.replaceAll(/\s+/g, ' ').trim()),
    );
    expect(rows).toEqual([
      ['left out, as defined', '1 100', '7', '0.500', '1.000'],
      ['all good', '1 100', '7', '0.512', '0.993'],
      ['all bad not converged', '1 300', '7', '0.480', '1.000'],
    ]);
  });

  it('says where it is worked out at a penalty that no rule points to', () => {
    const page = shown(5);
    expect(page.querySelector('table')).toBeNull();
    expect(page.textContent).toContain('at the penalties of both rules');
  });
});
