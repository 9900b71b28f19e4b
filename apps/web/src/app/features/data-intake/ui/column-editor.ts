import { ChangeDetectionStrategy, Component, computed, input, linkedSignal, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { ColumnProfile, ColumnRole } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, SpecialCode } from '@tallystone/contracts/samples/definition';
import { canBe } from '@tallystone/contracts/samples/kinds';
import { unnamedCode } from '@tallystone/contracts/samples/special-codes';
import { count } from '../../../ui/numbers';
import { plain } from './findings';
import { readListed, readNumber, writeListed } from './listed-values';
import { ColumnFigure } from './column-figure';

const roles: readonly ColumnRole[] = [
  'characteristic',
  'outcome',
  'decision',
  'incumbent score',
  'identifier',
  'group key',
  'weight',
  'partition',
  'application date',
  'segment',
  'not used',
];

/** One column: what its values say, what is suggested and why, and what it is taken for. */
@Component({
  selector: 'ts-column-editor',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatCheckboxModule, MatFormFieldModule, MatInputModule, MatSelectModule, ColumnFigure],
  template: `
    <ts-column-figure [profile]="profile()" />
    @if (profile().flags.length > 0) {
      <ul class="flags" aria-label="Flags">
        @for (flag of profile().flags; track flag.code) {
          <li>
            <b>{{ names[flag.weight] }}</b> {{ flag.finding }}
            @if (mayRead() && flag.values?.length) {
              <button matButton type="button" (click)="readAgain.emit(flag.values ?? [])">
                Read again with {{ tokens(flag.values) }} as missing
              </button>
            }
            @if (column() && editable() && nameable(flag.values).length > 0) {
              <button matButton type="button" (click)="nameAsCodes(nameable(flag.values))">
                Take {{ tokens(nameable(flag.values)) }} for special codes
              </button>
            }
          </li>
        }
      </ul>
    }
    @if (profile().numeric; as numeric) {
      <dl class="ts-pairs">
        <dt>Mean, deviation</dt>
        <dd>{{ write(numeric.mean) }}, {{ write(numeric.standardDeviation) }}</dd>
        <dt>5 %, median, 95 %</dt>
        <dd>{{ quantiles() }}</dd>
      </dl>
    }
    <p class="ts-caption">Suggested: {{ profile().suggestedRole }}. {{ profile().suggestion }}</p>
    @if (column(); as entry) {
      <div class="edit">
        <mat-form-field>
          <mat-label>Role</mat-label>
          <mat-select [value]="entry.role" [disabled]="!editable()" (selectionChange)="set({ role: $event.value })">
            @for (role of roles; track role) {
              <mat-option [value]="role">{{ role }}</mat-option>
            }
          </mat-select>
        </mat-form-field>
        <mat-form-field>
          <mat-label>Values are</mat-label>
          <mat-select [value]="entry.kind" [disabled]="!editable() || profile().hashed" (selectionChange)="setKind($event.value)">
            <mat-option value="numeric" [disabled]="!canBe('numeric', profile())">numeric</mat-option>
            <mat-option value="categorical">categorical</mat-option>
            <mat-option value="date" [disabled]="!canBe('date', profile())">date</mat-option>
          </mat-select>
        </mat-form-field>
        <mat-checkbox [checked]="entry.protected" [disabled]="!editable()" (change)="set({ protected: $event.checked })">
          Protected attribute
        </mat-checkbox>
        @if (entry.protected) {
          <p class="ts-caption">
            Barred from every binning and fit until somebody with the role of compliance permits it, with a citation, on the
            confirmed definition. Which attributes are protected is for the law that applies to the lender and its qualified
            staff.
          </p>
          @if (entry.role === 'characteristic') {
            <mat-form-field>
              <mat-label>Citation you propose to compliance</mat-label>
              <input
                matInput
                [value]="entry.citation ?? ''"
                [disabled]="!editable()"
                (change)="set({ citation: text($event) || null })"
              />
            </mat-form-field>
          }
        }
        <mat-form-field>
          <mat-label>{{ entry.role === 'not used' ? 'Why it is not used' : 'Note, such as why a flag is accepted' }}</mat-label>
          <textarea
            matInput
            rows="2"
            [value]="entry.reason ?? ''"
            [disabled]="!editable()"
            (change)="set({ reason: text($event) || null })"
          ></textarea>
        </mat-form-field>
        @if (entry.kind !== 'date' && !profile().hashed) {
          <fieldset>
            <legend>Special codes</legend>
            @for (special of entry.special; track $index; let place = $index) {
              <div class="code">
                <mat-form-field>
                  <mat-label>Code</mat-label>
                  <input matInput [value]="codes(special.values)" [disabled]="!editable()" (change)="setValues(place, $event)" />
                </mat-form-field>
                <mat-form-field>
                  <mat-label>Meaning</mat-label>
                  <input
                    matInput
                    placeholder="what the code stands for"
                    [value]="isNamed(special) ? special.label : ''"
                    [disabled]="!editable()"
                    [attr.aria-invalid]="isNamed(special) ? null : true"
                    (change)="setCode(place, { label: text($event) || unnamed })"
                  />
                </mat-form-field>
                @if (editable()) {
                  <button
                    matButton
                    type="button"
                    [attr.aria-label]="'Remove the code ' + special.values.join(', ')"
                    (click)="removeCode(place)"
                  >
                    Remove
                  </button>
                }
                @if (refused()?.place === place) {
                  <p class="refused" role="alert">{{ refused()?.message }}</p>
                } @else if (!isNamed(special)) {
                  <p class="refused">Say what {{ codes(special.values) }} means: no definition is confirmed before.</p>
                }
              </div>
            }
            @for (suspect of suspects(); track suspect.value) {
              <p class="ts-caption">
                {{ suspect.value }}: {{ suspect.reason }}
                @if (editable()) {
                  <button matButton type="button" (click)="addCode(suspect.value)">Treat as special code</button>
                  @if (entry.kind === 'numeric') {
                    <button matButton type="button" (click)="setAmount(suspect.value, true)">It is an amount</button>
                  }
                }
              </p>
            }
            @for (value of entry.amounts ?? []; track value) {
              <p class="ts-caption">
                {{ value }}: an amount, as was stated.
                @if (editable()) {
                  <button matButton type="button" (click)="setAmount(value, false)">Ask again</button>
                }
              </p>
            }
            @if (editable()) {
              <button matButton type="button" (click)="addCode('')">Add a special code</button>
            }
          </fieldset>
        }
      </div>
    }
  `,
  styles: `
    :host,
    .edit,
    fieldset {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      gap: 14px;
    }
    .flags {
      list-style: none;
      display: grid;
      gap: 6px;
    }
    .flags b {
      margin-right: 4px;
    }
    .refused {
      grid-column: 1 / -1;
      color: var(--mat-sys-error);
    }
    .code {
      display: grid;
      grid-template-columns: minmax(0, 110px) minmax(0, 1fr) auto;
      gap: 8px;
      align-items: center;
    }
    @media (max-width: 480px) {
      .code {
        grid-template-columns: minmax(0, 1fr);
      }
    }
    fieldset button {
      justify-self: start;
    }
  `,
})
export class ColumnEditor {
  readonly profile = input.required<ColumnProfile>();
  readonly column = input<DefinedColumn | null>(null);
  readonly editable = input(false);
  /** The file may be read again. */
  readonly mayRead = input(false);
  readonly changed = output<DefinedColumn>();
  /** The file is to be read again with these as missing tokens. */
  readonly readAgain = output<readonly string[]>();

  protected readonly roles = roles;
  protected readonly canBe = canBe;
  protected readonly unnamed = unnamedCode;
  protected readonly codes = writeListed;
  protected readonly isNamed = ({ label }: SpecialCode): boolean => label.trim() !== '' && label !== unnamedCode;
  /** What was typed as a code of the column that is shown, and could not be taken. */
  protected readonly refused = linkedSignal<string, { place: number; message: string } | null>({
    source: () => this.profile().column,
    computation: () => null,
  });
  protected readonly names = { stop: 'Not used:', look: 'Look:', note: 'Note:' } as const;
  protected readonly write = plain;
  protected readonly quantiles = computed(() => {
    const list = this.profile().numeric?.quantiles ?? [];
    return [0.05, 0.5, 0.95].map((at) => plain(list.find((quantile) => quantile.share === at)?.value ?? NaN)).join(', ');
  });
  protected readonly suspects = computed(() => {
    const { special = [], amounts = [] } = this.column() ?? {};
    const known = new Set([...special.flatMap(({ values }) => values.map(String)), ...amounts]);
    return this.profile()
      .specialSuspects.filter(({ value }) => !known.has(value))
      .map((suspect) => ({ ...suspect, count: count(suspect.count) }));
  });

  protected tokens(values: readonly string[] = []): string {
    const shown = values.slice(0, 4).map((value) => (value.trim() === '' ? '(blank)' : value));
    return shown.join(', ') + (values.length > 4 ? ` and ${count(values.length - 4)} more` : '');
  }

  protected set(change: Partial<DefinedColumn>): void {
    const column = this.column();
    if (column) this.changed.emit({ ...column, ...change });
  }

  /** Words among numbers that are no special codes yet, without blanks, which can be missing only. */
  protected nameable(values: readonly string[] = []): string[] {
    const known = new Set((this.column()?.special ?? []).flatMap((code) => code.values.map(String)));
    return values.filter((value) => value.trim() !== '' && codeOfNumbers(value) === value && !known.has(value));
  }

  /** Each becomes a code of its own, whose meaning is asked for, in a column of numbers. */
  protected nameAsCodes(values: readonly string[]): void {
    const column = this.column();
    if (!column) return;
    const special = values.map((value) => ({ label: unnamedCode, values: [value] }));
    this.set({ kind: 'numeric', special: [...column.special, ...special] });
  }

  /** Codes follow the kind: texts for categories, numbers for numbers, where words stay words. */
  protected setKind(kind: DefinedColumn['kind']): void {
    const column = this.column();
    if (!column) return;
    const as = (value: string | number): string | number => (kind === 'numeric' ? codeOfNumbers(String(value)) : null) ?? String(value);
    this.set({ kind, special: column.special.map((code) => ({ ...code, values: code.values.map(as) })) });
  }

  protected setCode(place: number, change: Partial<SpecialCode>): void {
    const special = (this.column()?.special ?? []).map((code, index) => (index === place ? { ...code, ...change } : code));
    this.refused.set(null);
    this.set({ special });
  }

  /** Codes of numbers are numbers; what cannot be taken is told, and the code stays as it was. */
  protected setValues(place: number, event: Event): void {
    const values = readListed((event.target as HTMLInputElement).value);
    const numeric = this.column()?.kind === 'numeric';
    const taken = values?.map((value) => (numeric ? codeOfNumbers(value) : value)).filter((value) => value !== null) ?? [];
    if (values && taken.length === values.length && taken.length > 0) this.setCode(place, { values: taken });
    else
      this.refused.set({
        place,
        message: `${numeric ? 'A code is a number such as -999, without thousands signs, or a word such as NTC; several are parted by commas.' : 'Type a code; several are parted by commas, in quotes where one holds a comma.'} It stays as it was.`,
      });
  }

  protected setAmount(value: string, isAmount: boolean): void {
    const others = (this.column()?.amounts ?? []).filter((one) => one !== value);
    this.set({ amounts: isAmount ? [...others, value] : others });
  }

  protected addCode(value: string): void {
    const column = this.column();
    if (!column) return;
    const values =
      value === '' ? [column.kind === 'numeric' ? -999 : 'UNKNOWN'] : [column.kind === 'numeric' ? Number(value) : value];
    this.set({ special: [...column.special, { label: unnamedCode, values }] });
  }

  protected removeCode(place: number): void {
    this.refused.set(null);
    this.set({ special: (this.column()?.special ?? []).filter((_, index) => index !== place) });
  }

  protected text(event: Event): string {
    return (event.target as HTMLInputElement).value.trim();
  }
}

/** A code among numbers: a number, or a word; null for what only looks like a number, which could mean two. */
function codeOfNumbers(text: string): number | string | null {
  const number = readNumber(text);
  if (number !== null) return number;
  return /^[\d\s.,'’+\u2212-]*$/.test(text) ? null : text;
}
