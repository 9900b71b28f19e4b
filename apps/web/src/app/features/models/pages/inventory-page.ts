import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import { Router, RouterLink } from '@angular/router';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { Subject, debounceTime } from 'rxjs';
import { Session } from '../../../core/session';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { SortInAddress } from '../../../ui/sort-in-address';
import { StatusMark } from '../../../ui/status-mark';
import { modelStates, stateTone } from '../../../ui/version-state';
import { type ModelSummary, inventory } from '../data/inventory';
import { inventoryFinding } from '../ui/inventory-finding';

const columns: readonly Column<ModelSummary>[] = [
  { key: 'name', label: 'Model', value: (row) => row.name, link: (row) => ['/models', row.id], sortable: true },
  { key: 'number', label: 'Number', value: (row) => row.inventoryNumber, sortable: true },
  { key: 'state', label: 'State', value: (row) => row.state, sortable: true },
  { key: 'product', label: 'Product', value: (row) => row.product, sortable: true },
  { key: 'jurisdiction', label: 'Jurisdiction', value: (row) => row.jurisdiction, sortable: true },
  { key: 'tier', label: 'Tier', kind: 'count', value: (row) => row.materialityTier, sortable: true },
  { key: 'owner', label: 'Owner', value: (row) => row.owner, sortable: true },
  { key: 'members', label: 'Modellers', value: (row) => row.members.join(', ') },
  { key: 'updated', label: 'Changed', kind: 'moment', value: (row) => row.updatedAt, sortable: true },
];

/** The model inventory: everything below belongs to one of these. Search, state and order stand in the address. */
@Component({
  selector: 'ts-inventory-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    SortInAddress,
    RouterLink,
    MatButtonModule,
    MatFormFieldModule,
    MatInputModule,
    MatSelectModule,
    CellTemplate,
    DenseTable,
    EmptyState,
    PageHeader,
    ProblemList,
    StatusMark,
  ],
  host: { class: 'ts-page' },
  templateUrl: './inventory-page.html',
  styles: `
    .search {
      display: grid;
      grid-template-columns: minmax(0, 360px) minmax(0, 240px);
      gap: 16px;
    }
    .loading {
      min-height: 120px;
    }
    @media (max-width: 480px) {
      .search {
        grid-template-columns: minmax(0, 1fr);
      }
    }
  `,
})
export class InventoryPage {
  private readonly router = inject(Router);
  private readonly session = inject(Session);

  readonly search = input<string>();
  readonly state = input<string>();

  protected readonly columns = columns;
  protected readonly states = modelStates;
  protected readonly tone = stateTone;
  protected readonly mayCreate = computed(() => this.session.can('models.create'));
  protected readonly models = inventory(() => ({ search: this.search() ?? '', state: this.state() ?? '' }));
  protected readonly filtered = computed(() => Boolean(this.search() || this.state()));
  protected readonly list = computed(() => (this.models.hasValue() ? this.models.value().models : null));
  protected readonly finding = computed(() => {
    const list = this.list();
    return list ? inventoryFinding(list, this.filtered()) : null;
  });
  private readonly typed = new Subject<string>();

  constructor() {
    this.typed.pipe(debounceTime(250), takeUntilDestroyed()).subscribe((search) => this.go({ search: search.trim() || null }));
  }

  protected readonly identify = (row: ModelSummary): string => row.id;

  protected type(event: Event): void {
    this.typed.next((event.target as HTMLInputElement).value);
  }

  protected go(queryParams: Record<string, string | null>): void {
    void this.router.navigate([], { queryParams, queryParamsHandling: 'merge', replaceUrl: true });
  }
}
