import { ChangeDetectionStrategy, Component, computed, input, output, signal } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ColumnTest, ExclusionRule } from '@tallystone/contracts/samples/definition';
import { type Condition, type Held, conditionOf, conditions, notHeld, testWith, valueOf } from './exclusion-test';
import type { NumberSigns } from './listed-numbers';

/** A test as its fields show it: as it is, or as it was typed with why it could not be taken. */
interface ShownTest {
  readonly column: string;
  readonly condition: Condition;
  readonly value: string;
  readonly message: string | null;
}

/** Rules that take rows out, in the order in which they are asked; a row counts at the first that takes it out. */
@Component({
  selector: 'ts-exclusion-list',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatFormFieldModule, MatInputModule, MatSelectModule],
  template: `
    <ol>
      @for (rule of rules(); track $index; let place = $index; let first = $first; let last = $last) {
        <li>
          <div class="head">
            <mat-form-field>
              <mat-label>Reason</mat-label>
              <input
                matInput
                [value]="rule.reason"
                [disabled]="!editable()"
                maxlength="300"
                placeholder="staff loans"
                (change)="set(place, { reason: text($event) })"
              />
            </mat-form-field>
            @if (rule.tests.length > 1) {
              <mat-form-field class="combine">
                <mat-label>Rows for which</mat-label>
                <mat-select
                  [value]="rule.combine"
                  [disabled]="!editable()"
                  (selectionChange)="set(place, { combine: $event.value })"
                >
                  <mat-option value="all">all of these hold</mat-option>
                  <mat-option value="any">any of these holds</mat-option>
                </mat-select>
              </mat-form-field>
            }
          </div>
          @for (test of rule.tests; track $index; let index = $index) {
            <div class="test">
              <mat-form-field>
                <mat-label>Column</mat-label>
                <mat-select
                  [value]="shown(place, index, test).column"
                  [disabled]="!editable()"
                  (selectionChange)="setTest(place, index, $event.value, shown(place, index, test).condition, value(test))"
                >
                  @for (profile of columns(); track profile.column) {
                    <mat-option [value]="profile.column">{{ profile.column }}</mat-option>
                  }
                </mat-select>
              </mat-form-field>
              <mat-form-field>
                <mat-label>Test</mat-label>
                <mat-select
                  [value]="shown(place, index, test).condition"
                  [disabled]="!editable()"
                  (selectionChange)="setTest(place, index, shown(place, index, test).column, $event.value, value(test))"
                >
                  @for (entry of allowed(shown(place, index, test).column); track entry.key) {
                    <mat-option [value]="entry.key">{{ entry.label }}</mat-option>
                  }
                </mat-select>
              </mat-form-field>
              @if (isValued(shown(place, index, test).condition)) {
                <mat-form-field>
                  <mat-label>{{
                    isListed(shown(place, index, test).condition) ? 'Values, parted by commas' : 'Value'
                  }}</mat-label>
                  <input
                    matInput
                    [value]="shown(place, index, test).value"
                    [disabled]="!editable()"
                    [attr.aria-invalid]="shown(place, index, test).message ? true : null"
                    (change)="
                      setTest(place, index, shown(place, index, test).column, shown(place, index, test).condition, raw($event))
                    "
                  />
                </mat-form-field>
              }
              @if (editable()) {
                <button
                  matButton
                  type="button"
                  [attr.aria-label]="'Remove this test of ' + test.column"
                  (click)="removeTest(place, index)"
                >
                  Remove
                </button>
              }
              @if (shown(place, index, test).message; as message) {
                <p class="refused" role="alert">{{ message }} Until then the test stays as it was: {{ words(test) }}.</p>
              } @else if (strangers(test); as unheld) {
                <p class="unheld" role="status">{{ unheld }}</p>
              }
            </div>
          }
          @if (editable()) {
            <div class="ts-actions">
              <button matButton type="button" (click)="addTest(place)">Add a test</button>
              <button matButton type="button" [disabled]="first" (click)="move(place, -1)">Earlier</button>
              <button matButton type="button" [disabled]="last" (click)="move(place, 1)">Later</button>
              <button matButton type="button" (click)="remove(place)">Remove the exclusion</button>
            </div>
          }
        </li>
      }
    </ol>
    @if (rules().length === 0) {
      <p class="ts-second">Nothing is excluded.</p>
    }
    @if (editable()) {
      <button matButton="outlined" type="button" (click)="add()">Add an exclusion</button>
    }
  `,
  styles: `
    :host {
      display: grid;
      gap: 12px;
      justify-items: start;
      grid-template-columns: minmax(0, 1fr);
    }
    ol {
      list-style: none;
      display: grid;
      gap: 20px;
      width: 100%;
    }
    li {
      display: grid;
      gap: 10px;
      border-left: 3px solid var(--ts-hairline);
      padding-left: 14px;
    }
    .head,
    .test {
      display: grid;
      grid-template-columns: repeat(3, minmax(0, 240px)) max-content;
      gap: 10px;
      align-items: center;
    }
    .test button {
      justify-self: start;
    }
    .refused,
    .unheld {
      grid-column: 1 / -1;
    }
    .refused {
      color: var(--mat-sys-error);
    }
    .head mat-form-field:first-child {
      grid-column: span 2;
    }
    @media (max-width: 640px) {
      .head,
      .test {
        grid-template-columns: minmax(0, 1fr);
      }
      .head mat-form-field:first-child {
        grid-column: auto;
      }
    }
  `,
})
export class ExclusionList {
  readonly rules = input.required<readonly ExclusionRule[]>();
  readonly columns = input.required<readonly ColumnProfile[]>();
  /** How numbers are written in the file; null while that is not known. */
  readonly signs = input<NumberSigns | null>(null);
  readonly editable = input(false);
  readonly changed = output<ExclusionRule[]>();

  protected readonly value = valueOf;
  /** What was typed and could not be taken: shown where it was typed, while the rule keeps what it had. */
  private readonly refused = signal<(ShownTest & { readonly place: number; readonly index: number }) | null>(null);
  private readonly byName = computed(() => new Map(this.columns().map((profile) => [profile.column, profile])));

  /** Limits are for numbers and dates; values of hashed columns are shown nowhere and cannot be named. */
  protected allowed(column: string) {
    const profile = this.byName().get(column);
    return conditions.filter(({ key, kind }) => {
      if (kind === 'limit') return profile?.kind !== 'categorical';
      if (kind === 'values') return !profile?.hashed || key === conditionOf({ column });
      return true;
    });
  }

  protected text(event: Event): string {
    return this.raw(event).trim();
  }

  protected raw(event: Event): string {
    return (event.target as HTMLInputElement).value;
  }

  protected isValued(condition: Condition): boolean {
    return condition !== 'missing' && condition !== 'not missing';
  }

  protected isListed(condition: Condition): boolean {
    return condition === 'in' || condition === 'notIn';
  }

  protected shown(place: number, index: number, test: ColumnTest): ShownTest {
    const refused = this.refused();
    if (refused?.place === place && refused.index === index) return refused;
    return { column: test.column, condition: conditionOf(test), value: valueOf(test), message: null };
  }

  protected words(test: ColumnTest): string {
    const label = conditions.find(({ key }) => key === conditionOf(test))?.label ?? '';
    return `${test.column} ${label} ${valueOf(test)}`.trim();
  }

  protected strangers(test: ColumnTest): string | null {
    return notHeld(test, this.byName().get(test.column));
  }

  private held(profile: ColumnProfile | undefined): Held | null {
    const signs = this.signs();
    return profile && signs
      ? { signs, texts: [...profile.mostFrequent, ...profile.missingTokens].map(({ value }) => value) }
      : null;
  }

  protected set(place: number, change: Partial<ExclusionRule>): void {
    this.changed.emit(this.rules().map((rule, index) => (index === place ? { ...rule, ...change } : rule)));
  }

  protected setTest(place: number, index: number, column: string, condition: Condition, value: string): void {
    const profile = this.byName().get(column);
    const test = testWith(column, profile?.kind ?? 'categorical', condition, value, this.held(profile));
    if ('message' in test) {
      this.refused.set({ place, index, column, condition, value, message: test.message });
      return;
    }
    this.refused.set(null);
    this.set(place, { tests: this.rules()[place].tests.map((entry, at) => (at === index ? test : entry)) });
  }

  protected addTest(place: number): void {
    const column = this.columns()[0]?.column ?? '';
    this.set(place, { tests: [...this.rules()[place].tests, { column, missing: true }] });
  }

  protected removeTest(place: number, index: number): void {
    this.refused.set(null);
    this.set(place, { tests: this.rules()[place].tests.filter((_, at) => at !== index) });
  }

  protected add(): void {
    const column = this.columns()[0]?.column ?? '';
    this.changed.emit([...this.rules(), { reason: '', combine: 'all', tests: [{ column, missing: true }] }]);
  }

  protected remove(place: number): void {
    this.refused.set(null);
    this.changed.emit(this.rules().filter((_, index) => index !== place));
  }

  protected move(place: number, by: number): void {
    this.refused.set(null);
    const rules = [...this.rules()];
    const [rule] = rules.splice(place, 1);
    rules.splice(place + by, 0, rule);
    this.changed.emit(rules);
  }
}
