import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { EmptyState } from '../../../ui/empty-state';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { Documents } from '../data/documents';
import { DocumentTable } from '../ui/document-table';
import { documentsFinding } from '../ui/document-view';

/** Documents of every model one reads. */
@Component({
  selector: 'ts-documents-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, DocumentTable, EmptyState, PageHeader, ProblemList],
  template: `
    <div class="ts-page ts-stack">
      <ts-page-header title="Documents" [finding]="finding()" />
      @if (list.error(); as error) {
        <ts-problems [error]="error"><button matButton type="button" (click)="list.reload()">Try again</button></ts-problems>
      }
      @if (list.hasValue()) {
        @if (documents().length === 0) {
          <ts-empty title="No documents yet" text="The model-governance document is made from the evidence of a version, on its documentation page.">
            <a matButton="outlined" routerLink="/models">Go to the models</a>
          </ts-empty>
        } @else {
          <ts-document-table caption="Documents" [documents]="documents()" [across]="true" />
        }
      } @else if (list.isLoading()) {
        <p class="ts-second" role="status">Reading the documents</p>
      }
    </div>
  `,
})
export class DocumentsPage {
  protected readonly list = inject(Documents).all();
  protected readonly documents = computed(() => (this.list.hasValue() ? this.list.value().documents : []));
  protected readonly finding = computed(() => documentsFinding(this.documents()));
}
