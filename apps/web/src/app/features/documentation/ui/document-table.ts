import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import type { DocumentSummary } from '@tallystone/contracts/documents/schema';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { bytes } from '../../../ui/numbers';

/** Documents with what they can be told by; each is downloaded as the bytes that were kept, and the download is recorded. */
@Component({
  selector: 'ts-document-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, CellTemplate, DenseTable],
  template: `
    <ts-table [caption]="caption()" [columns]="columns()" [rows]="documents()" [identify]="byId">
      <ng-template tsCell="file" [tsCellRows]="documents()" let-row>
        <a class="file" [href]="'/api/documents/' + row.id + '/file'" download [attr.aria-label]="'Download ' + row.fileName">PDF</a>
      </ng-template>
      <ng-template tsCell="sha" [tsCellRows]="documents()" let-row>
        <span class="sha">{{ row.sha256 }}</span>
      </ng-template>
    </ts-table>
  `,
  styles: `
    .sha {
      display: block;
      font-size: 13px;
      line-height: 18px;
      min-width: 34ch;
      max-width: 34ch;
      overflow-wrap: anywhere;
    }
    .file {
      white-space: nowrap;
    }
  `,
})
export class DocumentTable {
  readonly caption = input.required<string>();
  readonly documents = input.required<readonly DocumentSummary[]>();
  /** Names the model and version of each document as well. */
  readonly across = input(false);
  protected readonly columns = computed<Column<DocumentSummary>[]>(() => [
    ...(this.across()
      ? [
          { key: 'model', label: 'Model', value: (row: DocumentSummary) => row.modelName, link: (row: DocumentSummary) => ['/models', row.modelId] },
          {
            key: 'version',
            label: 'Version',
            value: (row: DocumentSummary) => `Version ${row.versionNumber}`,
            link: (row: DocumentSummary) => ['/models', row.modelId, 'documentation', row.versionId],
          },
        ]
      : []),
    { key: 'edition', label: 'Edition', value: (row) => `Edition ${row.number}` },
    { key: 'file', label: 'File', value: (row) => row.fileName },
    { key: 'pages', label: 'Pages', kind: 'count', value: (row) => row.pages },
    { key: 'bytes', label: 'Size', kind: 'number', value: (row) => row.bytes, format: (row) => bytes(row.bytes) },
    { key: 'sha', label: 'SHA-256', value: (row) => row.sha256 },
    { key: 'by', label: 'Made by', value: (row) => row.madeBy },
    { key: 'at', label: 'Made', kind: 'moment', value: (row) => row.madeAt },
  ]);
  protected readonly byId = (row: DocumentSummary): string => row.id;
}
