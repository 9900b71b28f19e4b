import { ChangeDetectionStrategy, Component, signal } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import { type Column } from './column';
import { CellTemplate, DenseTable } from './dense-table';

interface Row {
  readonly id: string;
  readonly name: string;
  readonly points: number | null;
}

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [DenseTable, CellTemplate],
  template: `
    <ts-table
      caption="Attributes"
      [columns]="columns"
      [rows]="rows()"
      [identify]="byId"
      [activatable]="true"
      [stacks]="stacks()"
      (activate)="opened = $event.id"
    >
      <ng-template tsCell="name" [tsCellRows]="rows()" let-row
        ><em>{{ row.name }}</em></ng-template
      >
    </ts-table>
  `,
})
class Host {
  readonly columns: readonly Column<Row>[] = [
    { key: 'name', label: 'Attribute', value: (row) => row.name, sortable: true },
    { key: 'points', label: 'Points', unit: 'whole', kind: 'points', value: (row) => row.points, sortable: true },
  ];
  readonly rows = signal<readonly Row[]>([
    { id: 'a', name: 'low', points: 1.25 },
    { id: 'b', name: '=high', points: 41.7512345 },
    { id: 'c', name: 'missing', points: null },
  ]);
  readonly stacks = signal(false);
  readonly byId = (row: Row): string => row.id;
  opened: string | null = null;
}

describe('DenseTable', () => {
  let fixture: ComponentFixture<Host>;
  let element: HTMLElement;

  beforeEach(async () => {
    TestBed.configureTestingModule({ providers: [provideRouter([])] });
    fixture = TestBed.createComponent(Host);
    element = fixture.nativeElement as HTMLElement;
    await fixture.whenStable();
  });

  const names = (): (string | undefined)[] => [...element.querySelectorAll('tbody th')].map((cell) => cell.textContent?.trim());

  it('has a caption, row headers, units, right-aligned figures and dashes', () => {
    expect(element.querySelector('caption')?.textContent).toContain('Attributes');
    expect(element.querySelector('tbody th[scope=row] em')?.textContent).toBe('low');
    expect(element.querySelector('thead .unit')?.textContent).toBe('whole');
    const figures = [...element.querySelectorAll('tbody td.number')].map((cell) => cell.textContent?.trim());
    expect(figures).toEqual(['1', '42', '\u2013']);
  });

  it('sorts by pressing the header: largest first, then smallest, then as given', async () => {
    const button = element.querySelectorAll<HTMLButtonElement>('thead button')[1];
    const header = (): string | null => element.querySelectorAll('thead th')[1].getAttribute('aria-sort');
    button.click();
    await fixture.whenStable();
    expect([header(), names()]).toEqual(['descending', ['=high', 'low', 'missing']]);
    button.click();
    await fixture.whenStable();
    expect([header(), names()]).toEqual(['ascending', ['low', '=high', 'missing']]);
    button.click();
    await fixture.whenStable();
    expect([header(), names()]).toEqual(['none', ['low', '=high', 'missing']]);
  });

  it('copies what is shown at full precision, formulas made harmless', async () => {
    const write = vi.fn().mockResolvedValue(undefined);
    Object.defineProperty(navigator, 'clipboard', { value: { writeText: write }, configurable: true });
    const copy = [...element.querySelectorAll<HTMLButtonElement>('.foot button')].find(
      (button) => button.textContent === 'Copy CSV',
    );
    copy?.click();
    await fixture.whenStable();
    expect(write).toHaveBeenCalledWith("Attribute,Points (whole)\r\nlow,1.25\r\n'=high,41.7512345\r\nmissing,\r\n");
    expect(element.querySelector('.foot')?.textContent).toContain('Copied');
  });

  it('opens a row by press and by Enter', async () => {
    const row = element.querySelectorAll<HTMLElement>('tbody tr')[1];
    row.dispatchEvent(new KeyboardEvent('keydown', { key: 'Enter', bubbles: true }));
    expect(fixture.componentInstance.opened).toBe('b');
    element.querySelectorAll<HTMLElement>('tbody tr')[2].click();
    expect(fixture.componentInstance.opened).toBe('c');
  });

  it('says that it is a table where its rows are laid out as blocks, with the names of figures in front of them', async () => {
    const roles = (): (string | null)[] =>
      [
        ...element.querySelectorAll('table, thead, tbody, thead tr, thead th, tbody tr:first-child, tbody tr:first-child > *'),
      ].map((part) => part.getAttribute('role'));
    expect(new Set(roles())).toEqual(new Set([null]));
    fixture.componentInstance.stacks.set(true);
    await fixture.whenStable();
    expect(roles()).toEqual(['table', 'rowgroup', 'row', 'columnheader', 'columnheader', 'rowgroup', 'row', 'rowheader', 'cell']);
    expect(element.querySelector('td.number')?.getAttribute('data-label')).toBe('Points');
  });

  it('keeps only the rows in view once there are many, and says how many there are', async () => {
    const many = Array.from({ length: 5000 }, (_, i) => ({ id: String(i), name: `row ${i}`, points: i }));
    fixture.componentInstance.rows.set(many);
    await fixture.whenStable();
    expect(names().length).toBeLessThan(80);
    expect(element.querySelector('table')?.getAttribute('aria-rowcount')).toBe('5001');
    const scroller = element.querySelector<HTMLElement>('.scroller');
    if (!scroller) throw new Error('no scroller');
    scroller.scrollTop = 33 * 2000;
    scroller.dispatchEvent(new Event('scroll'));
    await fixture.whenStable();
    expect(names()).toContain('row 2000');
    const first = element.querySelector('tbody tr[aria-rowindex]');
    expect(first?.getAttribute('aria-rowindex')).toBe('1990');
    const spaces = [...element.querySelectorAll<HTMLElement>('.space td')].map((cell) => Number.parseFloat(cell.style.height));
    expect(spaces[0] + spaces[1] + names().length * 33).toBe(5000 * 33);
  });
});
