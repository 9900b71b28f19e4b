import {
  ChangeDetectionStrategy,
  Component,
  type ElementRef,
  computed,
  effect,
  inject,
  input,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { Router, RouterLink } from '@angular/router';
import { Problem } from '../../../core/http/problem';
import { warnBeforeUnload } from '../../../core/unsaved-changes';
import { Ask } from '../../../ui/ask';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { SortInAddress } from '../../../ui/sort-in-address';
import { Tombstone } from '../../../ui/tombstone';
import { DecisionNotice } from '../../../ui/decision-notice';
import { DictionaryStore } from '../data/dictionary-store';
import { DraftStore } from '../data/draft-store';
import { type ColumnProfile, columnsOf, oneSample, unreadOf } from '../data/samples';
import { ColumnEditor } from '../ui/column-editor';
import { dictionaryText } from '../ui/dictionary-text';
import { DictionaryEditor } from '../ui/dictionary-editor';
import { NotReadYet } from '../ui/not-read-yet';
import { WordsConflictNote } from '../ui/words-conflict';
import { flagsOf, mostFrequentOf, rangeOf } from '../ui/findings';
import { SampleSteps } from '../ui/sample-steps';
import { SaveStateNote } from '../ui/save-state';
import { StaleNotice } from '../ui/stale-notice';
import { TakenOverNote, carriedOver, keptOver } from '../ui/taken-over';
import { asksWhenStale } from './stale-draft';
import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import { labelWords } from '@tallystone/contracts/samples/labels';
import { withColumns } from '@tallystone/contracts/samples/role-holders';

interface Row {
  readonly profile: ColumnProfile;
  readonly defined: DefinedColumn | null;
  readonly label: string;
}

/** The quality of each column and what it is taken for. The chosen column stands in the address. */
@Component({
  selector: 'ts-columns-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { class: 'ts-page' },
  imports: [
    SortInAddress,
    RouterLink,
    MatButtonModule,
    CellTemplate,
    ColumnEditor,
    DenseTable,
    DictionaryEditor,
    WordsConflictNote,
    DecisionNotice,
    NotReadYet,
    PageHeader,
    ProblemList,
    SampleSteps,
    SaveStateNote,
    StaleNotice,
    TakenOverNote,
    Tombstone,
  ],
  template: `
    @if (draft.saveState() === 'stale') {
      <ts-stale-notice [theirs]="draft.theirs()" (settled)="settle()" />
    }
    <div class="ts-stack">
      <ts-sample-steps
        [modelId]="modelId()"
        [sampleId]="sampleId()"
        [fileName]="sampleValue()?.fileName ?? ''"
        [read]="unread() === null"
      />
      <ts-page-header title="Columns" [finding]="finding()">
        @if (!unread()) {
          <ts-save-state
            [state]="draft.saveState()"
            [savedAt]="draft.savedAt()"
            [savedBy]="draft.savedBy()"
            [aside]="draft.setAside()?.whose ?? null"
            (broughtBack)="draft.bringBack()"
          />
          <a matButton="filled" [routerLink]="['/models', modelId(), 'sample', sampleId(), 'definition']"
            >Outcome and partition</a
          >
        }
      </ts-page-header>
      @if (unread(); as waiting) {
        <ts-not-read-yet [sample]="waiting" />
      } @else if (sampleValue()?.erased; as erased) {
        <ts-tombstone [erased]="erased"
          >Profiles stay, without values that fewer than five rows hold; roles and labels are read and no longer
          changed.</ts-tombstone
        >
      }
      <ts-problems [error]="sample.error() ?? columns.error()" />
      <ts-problems [error]="draft.error()" />
      <ts-problems [error]="words.error()" next="Mend the file and import it again: nothing of it was taken." [limit]="60" />
      <ts-problems [error]="notText()" />
      @for (conflict of words.conflicts(); track conflict.mine.column) {
        <ts-words-conflict
          [conflict]="conflict"
          (theirs)="words.takeTheirs(conflict.mine.column)"
          (mine)="words.keepMine(conflict.mine.column)"
        />
      }
      @if (words.fileRefused()) {
        <ts-decision>
          Someone else saved the dictionary meanwhile. Your file has not been imported: leave theirs, or import the file over it.
          <button tsDecide matButton="outlined" type="button" (click)="words.dropFile()">Leave theirs</button>
          <button tsDecide matButton="outlined" type="button" (click)="importAgain()">Import mine</button>
        </ts-decision>
      }
      @for (note of takenOver(); track $index) {
        <ts-taken-over [note]="note" />
      }
      @if (rows().length > 0) {
        <div class="ts-split">
          <ts-table
            caption="Columns of the sample"
            [columns]="table()"
            [rows]="rows()"
            [identify]="byColumn"
            [quiet]="isQuiet"
            [selected]="isSelected"
            [activatable]="true"
            tsSortInAddress
            (activate)="choose($event.profile.column)"
          >
            <ng-template tsCell="column" [tsCellRows]="rows()" let-row>
              <button class="name" type="button" [attr.aria-pressed]="isSelected(row)" (click)="choose(row.profile.column)">
                {{ row.profile.column }}
              </button>
            </ng-template>
          </ts-table>
          @if (chosen(); as row) {
            <div class="chosen" [class.below-notice]="draft.saveState() === 'stale'" #part>
              <ts-column-editor
                [profile]="row.profile"
                [column]="row.defined"
                [editable]="editable()"
                [mayRead]="mayRead()"
                (changed)="change($event)"
                (readAgain)="readAgain($event)"
              />
              @if (words.dictionary()) {
                <ts-dictionary-editor
                  [entry]="words.entry(row.profile.column)"
                  [column]="row.defined"
                  [editable]="words.editable()"
                  (changed)="words.change($event)"
                />
              }
            </div>
          }
        </div>
      }
      @if (words.dictionary()) {
        <section aria-labelledby="dictionary">
          <h3 id="dictionary">Data dictionary</h3>
          <p class="ts-second">
            Labels, units, descriptions, roles and special codes as one CSV file, to be read or filled in elsewhere. An import
            that has a problem changes nothing.
          </p>
          <div class="ts-actions">
            <a matButton="outlined" [href]="file()" download="dictionary.csv">Export the dictionary</a>
            @if (words.editable()) {
              <button matButton="outlined" type="button" [disabled]="words.unsaved()" (click)="picker.click()">
                Import a dictionary
              </button>
            }
            <input #picker type="file" accept=".csv,text/csv" aria-label="Dictionary file" hidden (change)="importFile(picker)" />
            @if (imported()) {
              <span class="ts-second" role="status">The dictionary was imported.</span>
            }
          </div>
        </section>
      }
    </div>
  `,
  styles: `
    section {
      display: grid;
      gap: 10px;
    }
    .chosen {
      position: sticky;
      top: 16px;
      max-height: calc(100vh - 32px);
      overflow-y: auto;
      scroll-margin-top: 16px;
      padding: 2px;
    }
    // The notice of a stale draft stays in sight above it.
    .chosen.below-notice {
      top: 112px;
      max-height: calc(100vh - 128px);
    }
    @media (max-width: 899px) {
      .chosen {
        position: static;
        max-height: none;
      }
    }
    .name {
      font: inherit;
      color: var(--ts-primary);
      background: none;
      border: 0;
      // 24 px to hit, without moving the words
      padding: 2px 0;
      margin: -2px 0;
      cursor: pointer;
      text-align: left;
      text-decoration: underline;
      text-decoration-thickness: 1px;
      text-underline-offset: 3px;
    }
    .name[aria-pressed='true'] {
      font-weight: 600;
    }
  `,
})
export class ColumnsPage {
  private readonly router = inject(Router);
  private readonly asking = inject(Ask);
  protected readonly draft = inject(DraftStore);
  protected readonly settle = asksWhenStale(this.draft);
  protected readonly words = inject(DictionaryStore);

  readonly modelId = input.required<string>();
  readonly sampleId = input.required<string>();
  readonly column = input<string>();

  private readonly editor = viewChild<ElementRef<HTMLElement>>('part');
  protected readonly imported = signal(false);
  /** A file that is no text as it stands: nothing of it was sent. */
  protected readonly notText = signal<Problem | null>(null);
  protected readonly file = computed(() => `/api/models/${this.modelId()}/samples/${this.sampleId()}/dictionary/file`);
  protected readonly sample = oneSample(
    () => this.modelId(),
    () => this.sampleId(),
  );
  /** Null while it is asked for, and where it cannot be read: the resource's own value throws then. */
  protected readonly sampleValue = computed(() => (this.sample.hasValue() ? this.sample.value() : null));
  protected readonly unread = unreadOf(this.sample);
  protected readonly columns = columnsOf(
    () => this.modelId(),
    () => this.sampleId(),
  );
  protected readonly finding = computed(() => (this.columns.hasValue() && !this.unread() ? this.columns.value().finding : null));
  /** Before that there is neither draft nor dictionary to ask for. */
  private readonly isRead = computed(() => this.sample.hasValue() && this.unread() === null);
  readonly unsaved = computed(() => this.draft.unsaved() || this.words.unsaved());
  protected readonly editable = computed(() => this.sample.hasValue() && this.sample.value().abilities.includes('define'));
  protected readonly mayRead = computed(() => this.sample.hasValue() && this.sample.value().abilities.includes('read-file'));
  protected readonly rows = computed<readonly Row[]>(() => {
    const profiles = this.columns.hasValue() ? this.columns.value().columns : [];
    const defined = new Map((this.draft.content()?.columns ?? []).map((entry) => [entry.column, entry]));
    return profiles.map((profile) => {
      const entry = this.words.entry(profile.column);
      return {
        profile,
        defined: defined.get(profile.column) ?? null,
        label: entry.label || entry.unit ? labelWords(entry) : '',
      };
    });
  });
  protected readonly takenOver = computed(() => {
    const { carried, readAgain } = this.words.dictionary() ?? { carried: null, readAgain: null };
    return [...(carried ? [carriedOver(carried)] : []), ...(readAgain ? [keptOver(readAgain)] : [])];
  });
  protected readonly chosen = computed(
    () => this.rows().find(({ profile }) => profile.column === this.column()) ?? this.rows()[0] ?? null,
  );

  protected readonly table = computed<readonly Column<Row>[]>(() => [
    { key: 'column', label: 'Column', value: (row) => row.profile.column, sortable: true },
    // Without a label for any column it would only take room.
    ...(this.rows().some(({ label }) => label !== '')
      ? [{ key: 'label', label: 'Label', value: (row: Row) => row.label, sortable: true }]
      : []),
    {
      key: 'role',
      label: 'Role',
      value: (row) => (row.defined ? row.defined.role + (row.defined.protected ? ', protected' : '') : null),
      sortable: true,
    },
    { key: 'type', label: 'Type', value: (row) => row.defined?.kind ?? row.profile.kind, sortable: true },
    // Before the figures: a table too wide for its place hides what stands last, and this is what asks for a look.
    {
      key: 'flags',
      label: 'Flags',
      value: (row) => flagsOf(row.profile),
      width: 30,
      sortable: true,
    },
    { key: 'distinct', label: 'Distinct', kind: 'count', value: (row) => row.profile.distinct, sortable: true },
    {
      key: 'missing',
      label: 'Missing',
      kind: 'share',
      value: (row) => row.profile.missing / Math.max(1, row.profile.rows),
      sortable: true,
    },
    { key: 'special', label: 'Special', kind: 'count', value: (row) => specialRows(row), sortable: true },
    { key: 'range', label: 'Range', value: (row) => rangeOf(row.profile) },
    { key: 'frequent', label: 'Most frequent', value: (row) => mostFrequentOf(row.profile), width: 24 },
  ]);

  constructor() {
    warnBeforeUnload(() => this.unsaved());
    effect(() => {
      const [modelId, sampleId] = [this.modelId(), this.sampleId()];
      if (!this.isRead()) return;
      untracked(() => {
        void this.draft.open(modelId, sampleId);
        void this.words.open(modelId, sampleId);
      });
    });
  }

  protected readonly byColumn = (row: Row): string => row.profile.column;
  protected readonly isQuiet = (row: Row): boolean => row.defined?.role === 'not used';
  protected readonly isSelected = (row: Row): boolean => row === this.chosen();

  protected async choose(column: string): Promise<void> {
    await this.router.navigate([], { queryParams: { column }, queryParamsHandling: 'merge', replaceUrl: true });
    // On a narrow screen the column's own part stands below the table.
    if (globalThis.innerWidth < 900) this.editor()?.nativeElement.scrollIntoView({ block: 'start' });
  }

  /** Roles and codes of the file go into the draft, which is saved first and read anew afterwards. */
  protected async importFile(picker: HTMLInputElement): Promise<void> {
    const file = picker.files?.[0];
    if (!file) return;
    this.imported.set(false);
    this.notText.set(null);
    const read = dictionaryText(new Uint8Array(await file.arrayBuffer()));
    picker.value = '';
    if ('refused' in read) {
      this.notText.set(new Problem(422, 'not-text', read.refused, ''));
      return;
    }
    if ('line' in read && !(await this.mayRead1252(read))) return;
    await this.draft.flush();
    await this.afterImport(await this.words.importFile('text' in read ? read.text : read.asWindows1252));
  }

  /** Which signs were meant only a person can say: the line is shown as it would read. */
  private async mayRead1252({ line, words }: { readonly line: number; readonly words: string }): Promise<boolean> {
    const answer = await this.asking.for({
      title: `Line ${line} is not UTF-8; read as Windows-1252?`,
      text: `It would read: ${words.slice(0, 300)}`,
      accept: 'Read as Windows-1252',
    });
    if (answer) return true;
    this.notText.set(
      new Problem(
        422,
        'not-text',
        `Line ${line} is not UTF-8: nothing was imported.`,
        'Save the file as CSV in UTF-8 and import it again.',
      ),
    );
    return false;
  }

  protected async importAgain(): Promise<void> {
    await this.draft.flush();
    await this.afterImport(await this.words.importAgain());
  }

  private async afterImport(taken: boolean): Promise<void> {
    if (!taken) return;
    this.imported.set(true);
    // What could not be saved here is still to be decided on, now beside what the file changed.
    await (this.draft.saveState() === 'stale' ? this.draft.compare() : this.draft.reload());
  }

  /** The reading choices open with these tokens entered: there they are seen on the first rows, and confirmed. */
  protected readAgain(missing: readonly string[]): void {
    void this.router.navigate(['/models', this.modelId(), 'sample', this.sampleId(), 'reading'], { queryParams: { missing } });
  }

  protected change(entry: DefinedColumn): void {
    this.draft.change((content) =>
      withColumns(
        content,
        content.columns.map((column) => (column.column === entry.column ? entry : column)),
      ),
    );
  }
}

/** Rows that hold one of the special codes named so far, as far as the profile lists them. */
function specialRows({ profile, defined }: Row): number | null {
  const codes = new Set((defined?.special ?? []).flatMap(({ values }) => values.map(String)));
  if (codes.size === 0) return null;
  const listed = [...profile.mostFrequent, ...profile.specialSuspects].filter(({ value }) => codes.has(value));
  return [...new Map(listed.map(({ value, count }) => [value, count])).values()].reduce((sum, count) => sum + count, 0);
}
