import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { VersionSummary } from '@tallystone/contracts/versions/schema';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { StatusMark } from '../../../ui/status-mark';
import { stateTone } from '../../../ui/version-state';
import { Versions } from '../data/versions';
import { versionsFinding } from '../ui/version-view';

/** Versions of a model, the latest first. */
@Component({
  selector: 'ts-versions-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, CellTemplate, DenseTable, EmptyState, PageHeader, ProblemList, StatusMark],
  template: `
    <div class="ts-page ts-stack">
      <ts-page-header title="Versions" [finding]="finding()">
        <a matButton="outlined" [routerLink]="['/models', modelId(), 'scorecard']">Scorecard</a>
      </ts-page-header>
      @if (list.error(); as error) {
        <ts-problems [error]="error"><button matButton type="button" (click)="list.reload()">Try again</button></ts-problems>
      }
      @if (list.hasValue()) {
        @if (versions().length === 0) {
          <ts-empty title="No version yet" text="Freezing a scorecard makes a version: data, bins, fit and points that nobody can change, with a fingerprint.">
            <a matButton="filled" [routerLink]="['/models', modelId(), 'scorecard']">Go to the scorecard</a>
          </ts-empty>
        } @else {
          <ts-table caption="Versions of this model" [columns]="columns" [rows]="versions()" [identify]="byId">
            <ng-template tsCell="state" [tsCellRows]="versions()" let-row>
              <ts-status [tone]="tone(row)">{{ row.state }}</ts-status>
            </ng-template>
          </ts-table>
        }
      } @else if (list.isLoading()) {
        <p class="ts-second" role="status">Reading the versions</p>
      }
    </div>
  `,
})
export class VersionsPage {
  private readonly data = inject(Versions);
  readonly modelId = input.required<string>();
  protected readonly list = this.data.list(() => this.modelId());
  protected readonly versions = computed(() => (this.list.hasValue() ? this.list.value().versions : []));
  protected readonly finding = computed(() => versionsFinding(this.versions()));
  protected readonly columns: readonly Column<VersionSummary>[] = [
    { key: 'number', label: 'Version', value: (row) => `Version ${row.number}`, link: (row) => [row.id] },
    { key: 'state', label: 'State', value: (row) => row.state },
    { key: 'waits', label: 'Waits for', value: (row) => row.waitingFor },
    { key: 'fit', label: 'Fit', value: (row) => row.fitName },
    { key: 'kept', label: 'Characteristics', kind: 'count', value: (row) => row.kept },
    { key: 'fingerprint', label: 'Fingerprint', unit: 'first 12', value: (row) => row.fingerprint, format: (row) => row.fingerprint.slice(0, 12) },
    { key: 'by', label: 'Frozen by', value: (row) => row.frozenBy },
    { key: 'at', label: 'Frozen', kind: 'moment', value: (row) => row.frozenAt },
  ];
  protected readonly byId = (row: VersionSummary): string => row.id;
  protected readonly tone = (row: VersionSummary) => stateTone(row.state);
}
