import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import type { VersionSummary } from '@tallystone/contracts/versions/schema';
import { type Column } from './column';
import { CellTemplate, DenseTable } from './dense-table';
import { StatusMark } from './status-mark';
import { stateTone } from './version-state';

/** Columns that several lists of versions have. */
export const versionColumns = {
  state: { key: 'state', label: 'State', value: (row) => (row.erased ? `${row.state}, no longer replicable` : row.state) },
  waits: { key: 'waits', label: 'Waits for', value: (row) => row.waitingFor },
  fit: { key: 'fit', label: 'Fit', value: (row) => row.fitName },
  kept: { key: 'kept', label: 'Characteristics', kind: 'count', value: (row) => row.kept },
  fingerprint: {
    key: 'fingerprint',
    label: 'Fingerprint',
    unit: 'first 12',
    value: (row) => row.fingerprint,
    format: (row) => row.fingerprint.slice(0, 12),
  },
  by: { key: 'by', label: 'Frozen by', value: (row) => row.frozenBy },
  at: { key: 'at', label: 'Frozen', kind: 'moment', value: (row) => row.frozenAt },
} as const satisfies Readonly<Record<string, Column<VersionSummary>>>;

/** The column that leads from a version to a page beside its list. */
export const versionLink = (label: string): Column<VersionSummary> => ({
  key: 'number',
  label,
  value: (row) => `Version ${row.number}`,
  link: (row) => [row.id],
});

/** Versions as a dense table, each with the mark of its state. */
@Component({
  selector: 'ts-version-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [CellTemplate, DenseTable, StatusMark],
  template: `
    <ts-table [caption]="caption()" [columns]="columns()" [rows]="versions()" [identify]="byId">
      <ng-template tsCell="state" [tsCellRows]="versions()" let-row>
        <ts-status [tone]="tone(row)">{{ row.state }}</ts-status>
        @if (row.erased) {
          <ts-status class="gone" tone="ended">no longer replicable</ts-status>
        }
      </ng-template>
    </ts-table>
  `,
  styles: `
    .gone {
      margin-left: 12px;
    }
  `,
})
export class VersionTable {
  readonly caption = input.required<string>();
  readonly columns = input.required<readonly Column<VersionSummary>[]>();
  readonly versions = input.required<readonly VersionSummary[]>();

  protected readonly byId = (row: VersionSummary): string => row.id;
  protected readonly tone = (row: VersionSummary) => stateTone(row.state);
}
