import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { SortInAddress } from '../../../ui/sort-in-address';
import { type BinningHistory, historyOf } from '../data/binnings';
import { editWords } from '../ui/edit-words';
import { changeWords, endWords, historyFinding, stateWords } from '../ui/history-words';
import { reasonWords } from '../ui/reason-words';

type Row = BinningHistory['edits'][number];

/** Every edit by hand of a binning: who, when, why, before and after. */
@Component({
  selector: 'ts-history-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [SortInAddress, RouterLink, MatButtonModule, DenseTable, PageHeader, ProblemList],
  host: { class: 'ts-page' },
  template: `
    <div class="ts-stack">
      <ts-page-header title="History of edits" [finding]="finding()">
        <a matButton="outlined" [routerLink]="['/models', modelId(), 'binning', binningId()]">All characteristics</a>
      </ts-page-header>
      <ts-problems [error]="history.error()">
        <button matButton="outlined" type="button" (click)="history.reload()">Try again</button>
      </ts-problems>
      @if (edits(); as edits) {
        <ts-table
          tsSortInAddress
          caption="Edits by hand"
          [columns]="columns"
          [rows]="edits"
          [identify]="identify"
          [quiet]="quiet"
          empty="No bins have been edited by hand. Edits show here with who made them and why."
        />
      } @else if (!history.error()) {
        <div class="loading" aria-busy="true"></div>
      }
    </div>
  `,
  styles: `
    .loading {
      min-height: 160px;
    }
  `,
})
export class HistoryPage {
  readonly modelId = input.required<string>();
  readonly binningId = input.required<string>();

  protected readonly history = historyOf(() => this.binningId());
  protected readonly edits = computed(() => (this.history.hasValue() ? this.history.value().edits : null));
  protected readonly finding = computed(() => {
    const edits = this.edits();
    return edits && historyFinding(edits);
  });
  protected readonly columns: readonly Column<Row>[] = [
    {
      key: 'column',
      label: 'Characteristic',
      value: (row) => row.column,
      link: (row) => ['..', row.characteristicId],
      sortable: true,
    },
    { key: 'what', label: 'Edit', value: (row) => row.what, format: editWords, width: 36 },
    { key: 'by', label: 'By', value: (row) => row.by, sortable: true },
    { key: 'at', label: 'When', kind: 'moment', value: (row) => row.at, sortable: true },
    { key: 'reason', label: 'Why', value: (row) => (row.reason ? reasonWords(row.reason) : null), width: 32 },
    { key: 'state', label: 'State', value: (row) => stateWords(row), sortable: true },
    { key: 'ended', label: 'Taken back', value: (row) => endWords(row), width: 36 },
    { key: 'before', label: 'Before', value: (row) => changeWords(row).before, width: 44 },
    { key: 'after', label: 'After', value: (row) => changeWords(row).after, width: 44 },
  ];

  protected readonly identify = (row: Row): string => row.id;
  protected readonly quiet = (row: Row): boolean => !row.inEffect;
}
