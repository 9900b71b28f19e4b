import { Directive, effect, inject, input } from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { ActivatedRoute, Router } from '@angular/router';
import { DenseTable, type TableSort } from './dense-table';

/**
 * Keeps the order of a table in the address, as `sort=KEY.up` or `sort=KEY.down`: a link, a reload and the way back show it again. The value is the
 * order while the address has none. For one table of a page.
 *
 * @example <ts-table tsSortInAddress="iv.down" caption="Characteristics" [columns]="columns" [rows]="rows()" />
 */
@Directive({ selector: 'ts-table[tsSortInAddress]' })
export class SortInAddress {
  readonly tsSortInAddress = input('');
  private readonly router = inject(Router);
  private readonly route = inject(ActivatedRoute);
  private readonly table = inject<DenseTable<unknown>>(DenseTable);
  private readonly address = toSignal(this.route.queryParamMap, { initialValue: this.route.snapshot.queryParamMap });

  constructor() {
    effect(() => {
      const [key, direction] = (this.address().get('sort') ?? this.tsSortInAddress()).split('.');
      const known = this.table.columns().some((column) => column.key === key && column.sortable);
      const sort = known ? { key, descending: direction === 'down' } : null;
      if (spoken(sort) !== spoken(this.table.sort())) this.table.sort.set(sort);
    });
    this.table.sort.subscribe((sort) => {
      const said = spoken(sort);
      if (said === (this.address().get('sort') ?? (this.tsSortInAddress() || null))) return;
      void this.router.navigate([], { queryParams: { sort: said }, queryParamsHandling: 'merge', replaceUrl: true });
    });
  }
}

const spoken = (sort: TableSort | null): string | null => (sort ? `${sort.key}.${sort.descending ? 'down' : 'up'}` : null);
