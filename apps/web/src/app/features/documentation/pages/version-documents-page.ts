import { ChangeDetectionStrategy, Component, computed, effect, inject, input, signal, untracked } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { CurrentModel } from '../../../core/current-model';
import { Runs, hasEnded } from '../../../core/events/runs';
import { newIdempotencyKey } from '../../../core/http/etag';
import { Task } from '../../../core/task';
import { DecisionNotice } from '../../../ui/decision-notice';
import { EmptyState } from '../../../ui/empty-state';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { Documents } from '../data/documents';
import { DocumentTable } from '../ui/document-table';
import { staleness, versionDocumentsFinding } from '../ui/document-view';

/** The documents of one version: make the next edition, and take those that were made. */
@Component({
  selector: 'ts-version-documents-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, DecisionNotice, DocumentTable, EmptyState, PageHeader, ProblemList, RunProgress],
  template: `
    <div class="ts-page ts-stack">
      <ts-page-header [title]="title()" [finding]="finding()">
        <a matButton [routerLink]="['/models', modelId(), 'version', versionId()]">Version</a>
        <a matButton [routerLink]="['/models', modelId(), 'validation', versionId()]">Validation</a>
        @if (mayMake() && documents().length > 0) {
          <button matButton="outlined" type="button" [disabled]="busy()" (click)="make()">Make a new edition</button>
        }
      </ts-page-header>
      @if (list.error(); as error) {
        <ts-problems [error]="error"><button matButton type="button" (click)="list.reload()">Try again</button></ts-problems>
      }
      <ts-problems [error]="making.error()" />
      @if (run(); as run) {
        <ts-run-progress [run]="run" title="Making the document" />
      }
      @if (list.hasValue()) {
        @if (stale(); as words) {
          <ts-decision>{{ words }}</ts-decision>
        }
        @if (documents().length === 0) {
          <ts-empty
            title="No document yet"
            text="The model-governance document is made from the evidence, the author’s texts and the record: no figure is typed. What is missing is printed as “not evidenced”."
          >
            @if (mayMake()) {
              <button matButton="filled" type="button" [disabled]="busy()" (click)="make()">Make the document</button>
            }
          </ts-empty>
        } @else {
          <ts-document-table caption="Documents of this version" [documents]="documents()" />
        }
        <p class="ts-caption">
          Every number cites its evidence, and the SHA-256 of the bytes is in the record, as is every download. The document is an aid to
          judgement: the law that applies to the lender governs, and qualified legal, compliance and validation staff decide.
        </p>
      } @else if (list.isLoading()) {
        <p class="ts-second" role="status">Reading the documents</p>
      }
    </div>
  `,
})
export class VersionDocumentsPage {
  private readonly data = inject(Documents);
  private readonly runs = inject(Runs);
  private readonly current = inject(CurrentModel);
  readonly modelId = input.required<string>();
  readonly versionId = input.required<string>();

  protected readonly list = this.data.ofVersion(() => this.versionId());
  private readonly version = this.data.version(() => this.versionId());
  protected readonly documents = computed(() => (this.list.hasValue() ? this.list.value().documents : []));
  protected readonly mayMake = computed(() => this.list.hasValue() && this.list.value().abilities.includes('make'));
  protected readonly title = computed(() => (this.version.hasValue() ? `Documentation of version ${this.version.value().number}` : 'Documentation'));
  protected readonly finding = computed(() => (this.list.hasValue() ? versionDocumentsFinding(this.documents()) : null));
  protected readonly stale = computed(() => (this.mayMake() && this.version.hasValue() ? staleness(this.documents(), this.version.value()) : null));

  protected readonly making = new Task();
  private readonly runId = signal<string | null>(null);
  protected readonly run = this.runs.run(() => this.runId());
  protected readonly busy = computed(() => {
    const run = this.run();
    return this.making.busy() || (run !== null && !hasEnded(run));
  });

  constructor() {
    effect(() => {
      const run = this.run();
      if (run?.state === 'succeeded') {
        untracked(() => {
          this.list.reload();
          void this.current.reload();
        });
      }
    });
  }

  protected async make(): Promise<void> {
    const key = newIdempotencyKey();
    const run = await this.making.run(() => this.data.make(this.versionId(), key));
    if (!run) return;
    this.runs.follow(run);
    this.runId.set(run.id);
  }
}
