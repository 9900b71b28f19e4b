import type { ComponentRef } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { PermissionAct, ProtectedColumn, ProtectedColumns } from '@tallystone/contracts/permissions/schema';
import { ProtectedList } from './protected-list';

const act = (change: Partial<PermissionAct>): PermissionAct => ({
  id: 'first',
  column: 'region',
  act: 'permitted',
  citation: 'Section 14',
  reason: 'Counsel confirmed it',
  by: 'Connie',
  at: '2026-11-03T13:00:00Z',
  ...change,
});
const column = (name: string, change: Partial<ProtectedColumn> = {}): ProtectedColumn => ({
  column: name,
  role: 'characteristic',
  proposed: null,
  permission: null,
  frozenIn: [],
  ...change,
});

describe('protected columns of a definition', () => {
  let fixture: ComponentFixture<ProtectedList>;
  let reference: ComponentRef<ProtectedList>;
  const show = (change: Partial<ProtectedColumns>): HTMLElement[] => {
    reference.setInput('protection', { definitionId: 'd', columns: [], acts: [], unflagged: [], abilities: [], ...change });
    fixture.detectChanges();
    return [...(fixture.nativeElement as HTMLElement).querySelectorAll('li')];
  };

  beforeEach(() => {
    fixture = TestBed.createComponent(ProtectedList);
    reference = fixture.componentRef;
  });

  it('say who has to permit what is barred, and that a proposal permits nothing', () => {
    const [barred, apart] = show({ columns: [column('region', { proposed: 'Section 1' }), column('sex', { role: 'not used' })] });
    expect(barred.textContent).toContain('Barred from every binning and fit until somebody with the role of compliance permits it, with a citation.');
    expect(barred.textContent).toContain('Proposed by the modeller: “Section 1”. A proposal permits nothing.');
    expect(apart.textContent).toContain('It has the role “not used” and enters no binning and no fit.');
    expect(fixture.nativeElement.querySelector('button')).toBeNull();
  });

  it('offer compliance to permit, and to withdraw until a version is frozen', () => {
    const holding = act({ id: 'second', citation: 'Section 15' });
    const columns = [
      column('region', { permission: holding }),
      column('age', { permission: act({ column: 'age' }), frozenIn: [2] }),
      column('sex'),
      column('home', { role: 'segment' }),
    ];
    const acts = [act({}), act({ id: 'between', act: 'withdrawn', reason: 'Wrong section.' }), holding];
    const items = show({ columns, acts, abilities: ['permit'] });
    const labels = items.map((item) => item.querySelector('button')?.getAttribute('aria-label') ?? null);
    expect(labels).toEqual(['Withdraw the permission of region', null, 'Permit sex', null]);
    expect(items[0].textContent).toMatch(/Permitted by Connie, .*, with “Section 15”\. Counsel confirmed it\./);
    const captions = [...items[0].querySelectorAll('.ts-caption')].map(({ textContent }) => textContent);
    expect(captions).toEqual([expect.stringMatching(/^“Section 14” withdrawn by Connie, .*\. Wrong section\.$/), expect.stringMatching(/^Permitted by Connie, .*with “Section 14”/)]);
    expect(items[1].textContent).toContain('Version 2 was frozen with it: that can no longer be withdrawn.');
    const asked: string[] = [];
    fixture.componentInstance.permit.subscribe(({ column: name }) => asked.push(`permit ${name}`));
    fixture.componentInstance.withdraw.subscribe(({ column: name }) => asked.push(`withdraw ${name}`));
    items[2].querySelector('button')?.click();
    items[0].querySelector('button')?.click();
    expect(asked).toEqual(['permit sex', 'withdraw region']);
  });

  it('show what an earlier definition flagged and this one does not', () => {
    const unflagged = { column: 'region', role: 'characteristic', reason: null, sample: 1, definition: 3 } as const;
    const [item] = show({ unflagged: [unflagged] });
    expect(item.textContent).toContain('Definition 3 of sample 1 flags it protected; this one does not, and takes it as “characteristic”. No reason is given.');
  });
});
