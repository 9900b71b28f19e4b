import { ChangeDetectionStrategy, Component, computed, inject, input, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { Router } from '@angular/router';
import { filter } from 'rxjs';
import { CurrentModel } from '../../../core/current-model';
import { Runs } from '../../../core/events/runs';
import { Ask } from '../../../ui/ask';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { bytes, share } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { StatusMark, type StatusTone } from '../../../ui/status-mark';
import { type SampleSummary, Samples, type UploadSummary, sampleList } from '../data/samples';
import { Uploads } from '../data/uploads';
import { samplesFinding } from '../ui/findings';
import { runTitles } from '../ui/run-titles';
import { UploadPanel } from '../ui/upload-panel';

/** Samples of the model: bring in a file, take up one that arrived in part, open one. */
@Component({
  selector: 'ts-samples-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { class: 'ts-page' },
  imports: [MatButtonModule, CellTemplate, DenseTable, PageHeader, ProblemList, RunProgress, StatusMark, UploadPanel],
  template: `
    <div class="ts-stack">
      <ts-page-header title="Sample" [finding]="finding()" />
      <ts-problems [error]="list.error()"
        ><button matButton="outlined" type="button" (click)="list.reload()">Try again</button></ts-problems
      >
      <ts-problems [error]="failure()" />

      @if (mayAdd()) {
        <ts-upload-panel
          [sending]="uploads.sending()"
          (file)="send($event)"
          (stop)="uploads.stop()"
          (goOn)="uploads.goOn()"
          (dropped)="drop()"
          (anew)="beginAnew()"
          (left)="leave()"
        />
      }
      @if (unfinished().length > 0) {
        <section aria-label="Unfinished uploads">
          <h3>Arrived in part</h3>
          <ts-table
            caption="Unfinished uploads"
            [columns]="uploadColumns"
            [rows]="unfinished()"
            [identify]="byId"
            [copyable]="false"
          >
            <ng-template tsCell="drop" [tsCellRows]="unfinished()" let-row>
              <button matButton type="button" (click)="forget(row)">Drop</button>
            </ng-template>
          </ts-table>
          <p class="ts-caption">
            Choose the same file again, and it goes on from where it stopped, once its beginning was found to be what has arrived.
          </p>
        </section>
      }
      @for (run of reading(); track run.id) {
        <ts-run-progress [run]="run" [title]="runWords(run.kind)" />
      }
      @if (samples(); as rows) {
        @if (rows.length > 0) {
          <ts-table caption="Samples" [columns]="columns()" [rows]="rows" [identify]="byId">
            <ng-template tsCell="state" [tsCellRows]="rows" let-row>
              <ts-status [tone]="tone(row)">{{ words(row) }}</ts-status>
            </ng-template>
          </ts-table>
        } @else if (!mayAdd()) {
          <p class="ts-second">No sample has been brought in yet. The modellers of this model do that.</p>
        }
      }
    </div>
  `,
  styles: `
    section {
      display: grid;
      gap: 8px;
    }
  `,
})
export class SamplesPage {
  private readonly samplesApi = inject(Samples);
  private readonly router = inject(Router);
  private readonly current = inject(CurrentModel);
  private readonly ask = inject(Ask);
  protected readonly uploads = inject(Uploads);
  private readonly runs = inject(Runs);

  readonly modelId = input.required<string>();

  protected readonly list = sampleList(() => this.modelId());
  protected readonly failure = signal<unknown>(null);
  private readonly value = computed(() => (this.list.hasValue() ? this.list.value() : null));
  protected readonly samples = computed(() => this.value()?.samples ?? null);
  protected readonly unfinished = computed(() => {
    const sending = this.uploads.sending();
    return (this.value()?.uploads ?? []).filter(
      ({ fileName, size }) => !(sending?.fileName === fileName && sending.size === size),
    );
  });
  protected readonly mayAdd = computed(() => this.value()?.abilities.includes('add') ?? false);
  protected readonly finding = computed(() => {
    const value = this.value();
    return value ? samplesFinding(value) : null;
  });
  protected readonly reading = computed(() =>
    this.underWay().filter(({ state }) => !['succeeded', 'failed', 'cancelled'].includes(state)),
  );
  private readonly underWay = this.runs.forModel(() => this.modelId());
  protected readonly columns = computed<readonly Column<SampleSummary>[]>(() => [
    {
      key: 'file',
      label: 'File',
      value: (row) => row.fileName,
      link: (row) => ['/models', this.modelId(), 'sample', row.id],
      width: 40,
    },
    { key: 'number', label: 'Number', kind: 'count', value: (row) => row.number },
    { key: 'state', label: 'State', value: (row) => (row.erased ? 'rows erased' : row.state) },
    { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.rows },
    { key: 'columns', label: 'Columns', kind: 'count', value: (row) => row.columns },
    { key: 'definitions', label: 'Definitions', kind: 'count', value: (row) => row.definitions },
    { key: 'size', label: 'Size', kind: 'number', value: (row) => row.size, format: (row) => bytes(row.size) },
    { key: 'sha256', label: 'SHA-256', value: (row) => row.sha256, format: (row) => `${row.sha256.slice(0, 12)}…` },
    { key: 'received', label: 'Received', kind: 'moment', value: (row) => row.receivedAt },
    { key: 'from', label: 'From', value: (row) => row.receivedFrom },
  ]);
  protected readonly uploadColumns: readonly Column<UploadSummary>[] = [
    { key: 'file', label: 'File', value: (row) => row.fileName },
    {
      key: 'arrived',
      label: 'Arrived',
      kind: 'share',
      value: (row) => row.offset / row.size,
      format: (row) => `${bytes(row.offset)} of ${bytes(row.size)} (${share(row.offset / row.size, 0)})`,
    },
    { key: 'seen', label: 'Last sent', kind: 'moment', value: (row) => row.seenAt },
    { key: 'drop', label: '', value: () => null },
  ];

  constructor() {
    this.runs.finished
      .pipe(
        filter(({ modelId, entity }) => modelId === this.modelId() && entity === 'sample'),
        takeUntilDestroyed(),
      )
      .subscribe(() => {
        this.list.reload();
        void this.current.reload();
      });
  }

  protected readonly byId = (row: { id: string }): string => row.id;
  protected readonly runWords = (kind: string): string => runTitles[kind] ?? 'Work on this model';

  protected tone(row: SampleSummary): StatusTone {
    if (row.erased) return 'ended';
    if (row.state === 'reading') return 'under-way';
    return row.state === 'ready' && row.definitions > 0 ? 'kept' : 'waiting';
  }

  protected words(row: SampleSummary): string {
    if (row.erased) return 'Rows erased';
    if (row.state === 'reading') return 'Being read';
    if (row.state === 'received') return 'Confirm how it is read';
    return row.definitions > 0 ? 'Defined' : 'Define it';
  }

  protected send(file: File): Promise<void> {
    return this.receive(() => this.uploads.send(this.modelId(), file, this.value()?.uploads ?? []));
  }

  protected beginAnew(): Promise<void> {
    return this.receive(() => this.uploads.beginAnew());
  }

  protected leave(): void {
    this.uploads.clear();
    this.list.reload();
  }

  private async receive(sent: () => Promise<'arrived' | 'differs' | 'dropped'>): Promise<void> {
    this.failure.set(null);
    try {
      const outcome = await sent();
      this.list.reload();
      if (outcome !== 'arrived') return;
      await this.current.reload();
      const list = await this.newest();
      if (list) await this.router.navigate(['/models', this.modelId(), 'sample', list, 'reading']);
    } catch (error) {
      this.failure.set(error);
      this.uploads.clear();
      this.list.reload();
    }
  }

  protected async drop(): Promise<void> {
    await this.uploads.drop();
    this.list.reload();
  }

  protected async forget(upload: UploadSummary): Promise<void> {
    const answer = await this.ask.for({
      title: `Drop ${upload.fileName}?`,
      text: `${bytes(upload.offset)} of it have arrived and will be removed. Sending it again starts from the beginning.`,
      accept: 'Drop it',
    });
    if (!answer) return;
    try {
      await this.uploads.forget(this.modelId(), upload.id);
    } catch (error) {
      this.failure.set(error);
    }
    this.list.reload();
  }

  /** The sample that has just arrived. */
  private async newest(): Promise<string | null> {
    const { samples } = await this.samplesApi.list(this.modelId());
    return samples[0]?.id ?? null;
  }
}
