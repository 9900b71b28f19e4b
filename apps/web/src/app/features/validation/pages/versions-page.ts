import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { EmptyState } from '../../../ui/empty-state';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { VersionTable, versionColumns, versionLink } from '../../../ui/version-table';
import { Versions } from '../data/versions';
import { versionsFinding } from '../ui/version-view';

/** Versions of a model, the latest first. */
@Component({
  selector: 'ts-versions-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, EmptyState, PageHeader, ProblemList, VersionTable],
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
          <ts-version-table caption="Versions of this model" [columns]="columns" [versions]="versions()" />
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
  protected readonly columns = [versionLink('Version'), versionColumns.state, versionColumns.waits, versionColumns.fit, versionColumns.kept, versionColumns.fingerprint, versionColumns.by, versionColumns.at];
}
