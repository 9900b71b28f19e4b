import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ExclusionRule } from '@tallystone/contracts/samples/definition';
import { type Condition, conditionOf, conditions, testWith, valueOf } from './exclusion-test';

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
                  [value]="test.column"
                  [disabled]="!editable()"
                  (selectionChange)="setTest(place, index, $event.value, condition(test), value(test))"
                >
                  @for (profile of columns(); track profile.column) {
                    <mat-option [value]="profile.column">{{ profile.column }}</mat-option>
                  }
                </mat-select>
              </mat-form-field>
              <mat-form-field>
                <mat-label>Test</mat-label>
                <mat-select
                  [value]="condition(test)"
                  [disabled]="!editable()"
                  (selectionChange)="setTest(place, index, test.column, $event.value, value(test))"
                >
                  @for (entry of allowed(test.column); track entry.key) {
                    <mat-option [value]="entry.key">{{ entry.label }}</mat-option>
                  }
                </mat-select>
              </mat-form-field>
              @if (condition(test) !== 'missing' && condition(test) !== 'not missing') {
                <mat-form-field>
                  <mat-label>{{
                    condition(test) === 'in' || condition(test) === 'notIn' ? 'Values, parted by commas' : 'Value'
                  }}</mat-label>
                  <input
                    matInput
                    [value]="value(test)"
                    [disabled]="!editable()"
                    (change)="setTest(place, index, test.column, condition(test), text($event))"
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
  readonly editable = input(false);
  readonly changed = output<ExclusionRule[]>();

  protected readonly condition = conditionOf;
  protected readonly value = valueOf;
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
    return (event.target as HTMLInputElement).value.trim();
  }

  protected set(place: number, change: Partial<ExclusionRule>): void {
    this.changed.emit(this.rules().map((rule, index) => (index === place ? { ...rule, ...change } : rule)));
  }

  protected setTest(place: number, index: number, column: string, condition: Condition, value: string): void {
    const kind = this.byName().get(column)?.kind ?? 'categorical';
    const test = testWith(column, kind, condition, value);
    this.set(place, { tests: this.rules()[place].tests.map((entry, at) => (at === index ? test : entry)) });
  }

  protected addTest(place: number): void {
    const column = this.columns()[0]?.column ?? '';
    this.set(place, { tests: [...this.rules()[place].tests, { column, missing: true }] });
  }

  protected removeTest(place: number, index: number): void {
    this.set(place, { tests: this.rules()[place].tests.filter((_, at) => at !== index) });
  }

  protected add(): void {
    const column = this.columns()[0]?.column ?? '';
    this.changed.emit([...this.rules(), { reason: '', combine: 'all', tests: [{ column, missing: true }] }]);
  }

  protected remove(place: number): void {
    this.changed.emit(this.rules().filter((_, index) => index !== place));
  }

  protected move(place: number, by: number): void {
    const rules = [...this.rules()];
    const [rule] = rules.splice(place, 1);
    rules.splice(place + by, 0, rule);
    this.changed.emit(rules);
  }
}
