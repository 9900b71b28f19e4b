import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { EmptyState } from '../../../ui/empty-state';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { VersionTable, versionColumns, versionLink } from '../../../ui/version-table';
import { Versions } from '../data/versions';
import { versionsFinding } from '../ui/version-view';

/** Which version of the model to validate. */
@Component({
  selector: 'ts-validations-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, EmptyState, PageHeader, ProblemList, VersionTable],
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
          <ts-version-table caption="Versions to validate" [columns]="columns" [versions]="versions()" />
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
  protected readonly columns = [versionLink('Validation of'), versionColumns.state, versionColumns.waits, versionColumns.kept, versionColumns.by, versionColumns.at];
}
