import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { EmptyState } from '../../../ui/empty-state';
import { plural } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { VersionTable, versionColumns, versionLink } from '../../../ui/version-table';
import { Documents } from '../data/documents';

/** Which version of the model to document. */
@Component({
  selector: 'ts-versions-to-document-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, EmptyState, PageHeader, ProblemList, VersionTable],
  template: `
    <div class="ts-page ts-stack">
      <ts-page-header title="Documentation" [finding]="finding()" />
      @if (list.error(); as error) {
        <ts-problems [error]="error"><button matButton type="button" (click)="list.reload()">Try again</button></ts-problems>
      }
      @if (list.hasValue()) {
        @if (versions().length === 0) {
          <ts-empty title="Nothing to document yet" text="The document is made from a version and its evidence: freeze a scorecard first.">
            <a matButton="filled" [routerLink]="['/models', modelId(), 'version']">Go to the versions</a>
          </ts-empty>
        } @else {
          <ts-version-table caption="Versions to document" [columns]="columns" [versions]="versions()" />
        }
      } @else if (list.isLoading()) {
        <p class="ts-second" role="status">Reading the versions</p>
      }
    </div>
  `,
})
export class VersionsToDocumentPage {
  private readonly data = inject(Documents);
  readonly modelId = input.required<string>();
  protected readonly list = this.data.versions(() => this.modelId());
  protected readonly versions = computed(() => (this.list.hasValue() ? this.list.value().versions : []));
  protected readonly finding = computed(() => {
    const versions = this.versions();
    return versions.length === 0 ? null : `${plural(versions.length, 'version')}; each has documents of its own, made from its evidence.`;
  });
  protected readonly columns = [versionLink('Documents of'), versionColumns.state, versionColumns.kept, versionColumns.by, versionColumns.at];
}
