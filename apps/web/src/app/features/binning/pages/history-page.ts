import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { Bins } from '@tallystone/contracts/binnings/bins';
import type { Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { plural } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { type BinningHistory, historyOf } from '../data/binnings';
import { reasonWords } from '../ui/reason-words';

type Row = BinningHistory['edits'][number];

/** Every edit by hand of a binning: who, when, why, before and after. */
@Component({
  selector: 'ts-history-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [RouterLink, MatButtonModule, DenseTable, PageHeader, ProblemList],
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
    if (!edits) return null;
    const now = edits.filter(({ inEffect }) => inEffect);
    const open = now.filter(({ reason }) => reason === null).length;
    const why = open === 0 ? 'each with its reason' : `${open} without a reason yet`;
    return now.length === 0
      ? `No edit by hand is in effect, of ${plural(edits.length, 'edit')} made.`
      : `${plural(now.length, 'edit')} of ${edits.length} ${now.length === 1 ? 'is' : 'are'} in effect, ${why}.`;
  });
  protected readonly columns: readonly Column<Row>[] = [
    {
      key: 'column',
      label: 'Characteristic',
      value: (row) => row.column,
      link: (row) => ['..', row.characteristicId],
      sortable: true,
    },
    { key: 'what', label: 'Edit', value: (row) => row.what, width: 36 },
    { key: 'state', label: 'State', value: (row) => stateOf(row), width: 36, sortable: true },
    { key: 'reason', label: 'Why', value: (row) => (row.reason ? reasonWords(row.reason) : null), width: 36 },
    { key: 'by', label: 'By', value: (row) => row.by, sortable: true },
    { key: 'at', label: 'When', kind: 'moment', value: (row) => row.at, sortable: true },
    { key: 'before', label: 'Before', value: (row) => binsWords(row.before), width: 48 },
    { key: 'after', label: 'After', value: (row) => binsWords(row.after), width: 48 },
  ];

  protected readonly identify = (row: Row): string => row.id;
  protected readonly quiet = (row: Row): boolean => !row.inEffect;
}

function stateOf({ inEffect, notCarried, carriedFrom }: Row): string {
  if (notCarried !== null) return `not carried over: ${notCarried}`;
  if (!inEffect) return 'undone';
  return carriedFrom ? `carried over from ${carriedFrom.binning}` : 'in effect';
}

/** Bins in one line: the cuts, or the groups. */
function binsWords(bins: Bins): string {
  return bins.kind === 'numeric'
    ? bins.edges.length === 0
      ? 'no cut'
      : bins.edges.join(' | ')
    : bins.groups.map((group) => group.join(', ')).join(' | ');
}
