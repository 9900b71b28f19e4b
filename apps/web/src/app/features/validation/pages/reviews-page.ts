import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { VersionSummary } from '@tallystone/contracts/versions/schema';
import { type Column } from '../../../ui/column';
import { EmptyState } from '../../../ui/empty-state';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { VersionTable, versionColumns } from '../../../ui/version-table';
import { Versions } from '../data/versions';
import { reviewsFinding } from '../ui/version-view';

/** Versions under review in every model one reads: whose turn it is. */
@Component({
  selector: 'ts-reviews-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, EmptyState, PageHeader, ProblemList, VersionTable],
  template: `
    <div class="ts-page ts-stack">
      <ts-page-header title="Reviews" [finding]="finding()" />
      @if (list.error(); as error) {
        <ts-problems [error]="error"><button matButton type="button" (click)="list.reload()">Try again</button></ts-problems>
      }
      @if (list.hasValue()) {
        @if (versions().length === 0) {
          <ts-empty title="Nothing under review" text="A version stands here from its submission to its second signature.">
            <a matButton="outlined" routerLink="/models">Go to the models</a>
          </ts-empty>
        } @else {
          <ts-version-table caption="Versions under review" [columns]="columns" [versions]="versions()" />
        }
      } @else if (list.isLoading()) {
        <p class="ts-second" role="status">Reading the reviews</p>
      }
    </div>
  `,
})
export class ReviewsPage {
  protected readonly list = inject(Versions).reviews();
  protected readonly versions = computed(() => (this.list.hasValue() ? this.list.value().versions : []));
  protected readonly finding = computed(() => reviewsFinding(this.versions()));
  protected readonly columns: readonly Column<VersionSummary>[] = [
    { key: 'model', label: 'Model', value: (row) => row.modelName, link: (row) => ['/models', row.modelId] },
    { key: 'inventory', label: 'Number', value: (row) => row.inventoryNumber },
    {
      key: 'version',
      label: 'Version',
      value: (row) => `Version ${row.number}`,
      link: (row) => ['/models', row.modelId, row.state === 'In validation' && !row.awaitingCompliance ? 'validation' : 'version', row.id],
    },
    versionColumns.state,
    versionColumns.waits,
    versionColumns.kept,
    versionColumns.by,
    versionColumns.at,
  ];
}
