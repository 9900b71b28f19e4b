import { ChangeDetectionStrategy, Component } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { Router, provideRouter } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import { type Column } from './column';
import { DenseTable } from './dense-table';
import { SortInAddress } from './sort-in-address';

interface Row {
  readonly name: string;
  readonly points: number;
}

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [DenseTable, SortInAddress],
  template: `<ts-table tsSortInAddress="points.down" caption="Attributes" [columns]="columns" [rows]="rows" />`,
})
class Host {
  readonly columns: readonly Column<Row>[] = [
    { key: 'name', label: 'Attribute', value: (row) => row.name, sortable: true },
    { key: 'points', label: 'Points', kind: 'points', value: (row) => row.points, sortable: true },
  ];
  readonly rows = [
    { name: 'low', points: 1 },
    { name: 'high', points: 41 },
    { name: 'missing', points: 20 },
  ];
}

describe('SortInAddress', () => {
  let harness: RouterTestingHarness;
  let element: HTMLElement;

  const open = async (address: string): Promise<void> => {
    TestBed.configureTestingModule({ providers: [provideRouter([{ path: 'table', component: Host }])] });
    harness = await RouterTestingHarness.create();
    await harness.navigateByUrl(address);
    await harness.fixture.whenStable();
    element = harness.routeNativeElement!;
  };
  const names = (): (string | undefined)[] => [...element.querySelectorAll('tbody th')].map((cell) => cell.textContent?.trim());
  const press = async (label: string): Promise<void> => {
    [...element.querySelectorAll<HTMLButtonElement>('button.sort')]
      .find((button) => button.textContent?.includes(label))
      ?.click();
    await harness.fixture.whenStable();
  };
  const address = (): string => TestBed.inject(Router).url;

  it('shows the order of the address, and its own while the address has none', async () => {
    await open('/table?sort=name.up');
    expect(names()).toEqual(['high', 'low', 'missing']);
    await harness.navigateByUrl('/table?search=x');
    await harness.fixture.whenStable();
    expect(names()).toEqual(['high', 'missing', 'low']);
    // Nothing is written into the address that nobody asked for.
    expect(address()).toBe('/table?search=x');
  });

  it('writes what is pressed, beside what else the address says', async () => {
    await open('/table?search=x');
    await press('Attribute');
    expect(address()).toBe('/table?search=x&sort=name.up');
    expect(names()).toEqual(['high', 'low', 'missing']);
    await press('Attribute');
    expect(address()).toBe('/table?search=x&sort=name.down');
    expect(names()).toEqual(['missing', 'low', 'high']);
  });

  it('leaves an order that the table does not know aside', async () => {
    await open('/table?sort=nothing.up');
    expect(names()).toEqual(['low', 'high', 'missing']);
  });
});
