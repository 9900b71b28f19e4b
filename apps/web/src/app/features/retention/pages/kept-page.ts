import { ChangeDetectionStrategy, Component, Injector, computed, inject, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { RouterLink } from '@angular/router';
import { firstValueFrom } from 'rxjs';
import { CurrentModel } from '../../../core/current-model';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { bytes } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { StatusMark } from '../../../ui/status-mark';
import { Erasures, type KeptSample, type KeptUpload, keptSamplesOf } from '../data/kept-samples';
import { EraseDialog, type EraseQuestion } from '../ui/erase-dialog';
import { keptFinding, restingWords } from '../ui/kept-words';

const erasedColumns: readonly Column<KeptSample>[] = [
  { key: 'erased', label: 'Erased', kind: 'moment', value: (row) => row.erased?.at },
  { key: 'by', label: 'By', value: (row) => row.erased?.by },
  { key: 'why', label: 'Why', value: (row) => row.erased?.reason, width: 40 },
];

/** What is kept of applicants in a model: files, dates, rows and what rests on them, no value of any row. An admin erases rows here. */
@Component({
  selector: 'ts-kept-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, CellTemplate, DenseTable, EmptyState, PageHeader, ProblemList, StatusMark],
  host: { class: 'ts-page' },
  template: `
    <div class="ts-stack">
      <ts-page-header title="Kept of applicants" [finding]="finding()">
        <a matButton [routerLink]="['/models', modelId()]">About this model</a>
      </ts-page-header>
      <ts-problems [error]="list.error()">
        <button matButton="outlined" type="button" (click)="list.reload()">Try again</button>
      </ts-problems>
      @if (samples(); as samples) {
        @if (samples.length > 0) {
          <ts-table caption="Samples kept" [columns]="columns()" [rows]="samples" [identify]="byId" [quiet]="isErased">
            <ng-template tsCell="state" [tsCellRows]="samples" let-row>
              <ts-status [tone]="row.erased ? 'ended' : 'kept'">{{ row.erased ? 'erased' : 'kept' }}</ts-status>
            </ng-template>
            <ng-template tsCell="erase" [tsCellRows]="samples" let-row>
              @if (row.abilities.includes('erase')) {
                <button class="act" matButton type="button" [attr.aria-label]="'Erase the rows of ' + row.fileName" (click)="erase(row)">
                  Erase the rows
                </button>
              }
            </ng-template>
          </ts-table>
        } @else {
          <ts-empty title="Nothing is kept" text="No sample has been brought in: this model holds nothing of any applicant." />
        }
        @if (uploads().length > 0) {
          <section aria-label="Arrived in part">
            <h3>Arrived in part</h3>
            <ts-table caption="Files on their way" [columns]="uploadColumns" [rows]="uploads()" [identify]="byId" />
            <p class="ts-caption">Whoever sends a file can drop it; one that nobody has gone on with for a week is dropped when the next begins.</p>
          </section>
        }
        <p class="ts-second words">
          Nothing of any row is shown here. How long rows are kept is for the lender’s retention policy and the law that applies; copies of the
          database keep them for as long as its operator keeps those copies.
        </p>
      }
    </div>
  `,
  styles: `
    section {
      display: grid;
      gap: 8px;
    }
    .act {
      margin: -7px 0 -7px -12px;
    }
    .words {
      max-width: var(--ts-measure);
    }
  `,
})
export class KeptPage {
  private readonly erasures = inject(Erasures);
  private readonly current = inject(CurrentModel);
  private readonly dialog = inject(MatDialog);
  private readonly injector = inject(Injector);

  readonly modelId = input.required<string>();

  protected readonly list = keptSamplesOf(() => this.modelId());
  protected readonly samples = computed(() => (this.list.hasValue() ? this.list.value().samples : null));
  protected readonly uploads = computed(() => (this.list.hasValue() ? this.list.value().uploads : []));
  protected readonly finding = computed(() => (this.list.hasValue() ? keptFinding(this.list.value()) : null));
  protected readonly columns = computed<readonly Column<KeptSample>[]>(() => {
    const samples = this.samples() ?? [];
    return [
      { key: 'file', label: 'File', value: (row) => row.fileName, width: 40 },
      { key: 'number', label: 'Number', kind: 'count', value: (row) => row.number },
      { key: 'state', label: 'Rows are', value: (row) => (row.erased ? 'erased' : 'kept') },
      { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.rows },
      { key: 'size', label: 'Size', kind: 'number', value: (row) => row.size, format: (row) => bytes(row.size) },
      { key: 'received', label: 'Received', kind: 'moment', value: (row) => row.receivedAt },
      { key: 'from', label: 'From', value: (row) => row.receivedFrom },
      { key: 'resting', label: 'What rests on it', value: restingWords, width: 32 },
      { key: 'sha256', label: 'SHA-256', value: (row) => row.sha256, format: (row) => `${row.sha256.slice(0, 12)}…` },
      // What only some of the rows have takes room only where there are some.
      ...(samples.some(({ erased }) => erased) ? erasedColumns : []),
      ...(samples.some(({ abilities }) => abilities.includes('erase')) ? [{ key: 'erase', label: 'Erase', value: () => '' }] : []),
    ];
  });
  protected readonly uploadColumns: readonly Column<KeptUpload>[] = [
    { key: 'file', label: 'File', value: (row) => row.fileName },
    { key: 'arrived', label: 'Arrived', value: (row) => row.arrived, format: (row) => `${bytes(row.arrived)} of ${bytes(row.size)}` },
    { key: 'from', label: 'From', value: (row) => row.from },
    { key: 'seen', label: 'Last sent', kind: 'moment', value: (row) => row.seenAt },
  ];

  protected readonly byId = (row: { readonly id: string }): string => row.id;
  protected readonly isErased = (row: KeptSample): boolean => row.erased !== null;

  protected async erase(sample: KeptSample): Promise<void> {
    const data: EraseQuestion = { sample, erase: (erasure) => this.erasures.erase(this.modelId(), sample.id, erasure) };
    const reference = this.dialog.open<EraseDialog, EraseQuestion, boolean>(EraseDialog, { data, width: '600px', injector: this.injector });
    if (!(await firstValueFrom(reference.afterClosed()))) return;
    this.list.reload();
    void this.current.reload();
  }
}
