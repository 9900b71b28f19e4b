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

/** Which version of the model to validate. */
@Component({
  selector: 'ts-validations-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, CellTemplate, DenseTable, EmptyState, PageHeader, ProblemList, StatusMark],
  template: `
    <div class="ts-page ts-stack">
      <ts-page-header title="Validation" [finding]="finding()" />
      @if (list.error(); as error) {
        <ts-problems [error]="error"><button matButton type="button" (click)="list.reload()">Try again</button></ts-problems>
      }
      @if (list.hasValue()) {
        @if (versions().length === 0) {
          <ts-empty title="Nothing to validate yet" text="A version is validated: freeze a scorecard and submit it first.">
            <a matButton="filled" [routerLink]="['/models', modelId(), 'version']">Go to the versions</a>
          </ts-empty>
        } @else {
          <ts-table caption="Versions to validate" [columns]="columns" [rows]="versions()" [identify]="byId">
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
export class ValidationsPage {
  private readonly data = inject(Versions);
  readonly modelId = input.required<string>();
  protected readonly list = this.data.list(() => this.modelId());
  protected readonly versions = computed(() => (this.list.hasValue() ? this.list.value().versions : []));
  protected readonly finding = computed(() => versionsFinding(this.versions()));
  protected readonly columns: readonly Column<VersionSummary>[] = [
    { key: 'number', label: 'Validation of', value: (row) => `Version ${row.number}`, link: (row) => [row.id] },
    { key: 'state', label: 'State', value: (row) => row.state },
    { key: 'waits', label: 'Waits for', value: (row) => row.waitingFor },
    { key: 'kept', label: 'Characteristics', kind: 'count', value: (row) => row.kept },
    { key: 'by', label: 'Frozen by', value: (row) => row.frozenBy },
    { key: 'at', label: 'Frozen', kind: 'moment', value: (row) => row.frozenAt },
  ];
  protected readonly byId = (row: VersionSummary): string => row.id;
  protected readonly tone = (row: VersionSummary) => stateTone(row.state);
}
