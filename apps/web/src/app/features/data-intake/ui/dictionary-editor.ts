import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import type { DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import { unnamedCode } from '@tallystone/contracts/samples/special-codes';
import { written } from '../../../ui/numbers';

/** What one column means, in words: label, unit, description, and what is done about each special code. */
@Component({
  selector: 'ts-dictionary-editor',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatFormFieldModule, MatInputModule],
  template: `
    <fieldset>
      <legend>Dictionary</legend>
      <div class="pair">
        <mat-form-field>
          <mat-label>Label</mat-label>
          <input
            matInput
            maxlength="120"
            [placeholder]="entry().column"
            [value]="entry().label"
            [disabled]="!editable()"
            (change)="set({ label: text($event) })"
          />
        </mat-form-field>
        <mat-form-field>
          <mat-label>Unit</mat-label>
          <input matInput maxlength="40" [value]="entry().unit" [disabled]="!editable()" (change)="set({ unit: text($event) })" />
        </mat-form-field>
      </div>
      <mat-form-field>
        <mat-label>Description</mat-label>
        <textarea
          matInput
          rows="2"
          maxlength="2000"
          [value]="entry().description"
          [disabled]="!editable()"
          (change)="set({ description: text($event) })"
        ></textarea>
      </mat-form-field>
      @for (code of codes(); track code.code) {
        <mat-form-field>
          <mat-label>Treatment of {{ code.shown }}{{ code.meaning }}</mat-label>
          <input
            matInput
            maxlength="200"
            placeholder="a bin of its own"
            [value]="code.treatment"
            [disabled]="!editable()"
            (change)="setTreatment(code.code, text($event))"
          />
        </mat-form-field>
      }
    </fieldset>
  `,
  styles: `
    fieldset {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      gap: 14px;
      margin-top: 14px;
    }
    .pair {
      display: grid;
      grid-template-columns: minmax(0, 1fr) minmax(0, 110px);
      gap: 8px;
    }
  `,
})
export class DictionaryEditor {
  readonly entry = input.required<DictionaryEntry>();
  readonly column = input<DefinedColumn | null>(null);
  readonly editable = input(false);
  readonly changed = output<DictionaryEntry>();

  protected readonly codes = computed(() =>
    (this.column()?.special ?? []).flatMap(({ label, values }) =>
      values.map((value) => ({
        code: String(value),
        shown: written(value),
        meaning: label === unnamedCode ? '' : ` (${label})`,
        treatment: this.entry().treatments.find(({ code }) => code === String(value))?.treatment ?? '',
      })),
    ),
  );

  protected set(change: Partial<DictionaryEntry>): void {
    this.changed.emit({ ...this.entry(), ...change });
  }

  protected setTreatment(code: string, treatment: string): void {
    const others = this.entry().treatments.filter((one) => one.code !== code);
    this.set({ treatments: treatment === '' ? others : [...others, { code, treatment }] });
  }

  protected text(event: Event): string {
    return (event.target as HTMLInputElement).value.trim();
  }
}
