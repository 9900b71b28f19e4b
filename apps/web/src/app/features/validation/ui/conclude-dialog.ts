import { ChangeDetectionStrategy, Component, ElementRef, computed, inject } from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { FormControl, FormGroup, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatDialogModule, MatDialogRef } from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatRadioModule } from '@angular/material/radio';
import type { Conclusion, NewAct } from '@tallystone/contracts/versions/schema';
import { showInvalid } from '../../../ui/show-invalid';

export type Concluding = Extract<NewAct, { act: 'conclude' }>;

/** One condition a line, empty lines left out. */
export const conditionsOf = (text: string): string[] =>
  text
    .split('\n')
    .map((line) => line.trim())
    .filter((line) => line !== '');

/** The first signature: conclusion, opinion, and conditions where there are any. */
@Component({
  selector: 'ts-conclude-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatDialogModule, MatFormFieldModule, MatInputModule, MatRadioModule],
  template: `
    <h2 mat-dialog-title>Conclude the validation</h2>
    <form [formGroup]="form" (ngSubmit)="sign()">
      <mat-dialog-content>
        <p class="ts-second">
          This is the first signature, kept as it stands. The numbers are aids to judgement; the law that applies to the lender governs, and
          qualified staff decide.
        </p>
        <mat-radio-group formControlName="conclusion" aria-label="Conclusion">
          <mat-radio-button value="fit for use">Fit for use</mat-radio-button>
          <mat-radio-button value="fit with conditions">Fit with conditions</mat-radio-button>
          <mat-radio-button value="not fit">Not fit: the version is rejected</mat-radio-button>
        </mat-radio-group>
        <!-- Keeps its line while empty: pressing the mouse on a choice takes the focus from another, and what moves then is not clicked. -->
        <p class="wrong" role="alert">
          @if (form.controls.conclusion.touched && form.controls.conclusion.invalid) {
            Choose a conclusion.
          }
        </p>
        @if (conditional()) {
          <mat-form-field>
            <mat-label>Conditions, one a line</mat-label>
            <textarea matInput rows="3" formControlName="conditions"></textarea>
            <mat-error>Name at least one condition.</mat-error>
          </mat-form-field>
        }
        <mat-form-field>
          <mat-label>Opinion and scope</mat-label>
          <textarea matInput rows="5" formControlName="statement" maxlength="8000"></textarea>
          <mat-hint>What was tested, what was found, what it means. Printed in the documentation.</mat-hint>
          <mat-error>The opinion needs a sentence at least.</mat-error>
        </mat-form-field>
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>Cancel</button>
        <button matButton="filled" type="submit">Sign</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    mat-dialog-content {
      display: grid;
      gap: 16px;
    }
    mat-radio-group {
      display: grid;
    }
    .wrong {
      min-height: 1.5em;
      margin: 0;
      color: var(--ts-bad);
      font-size: 13px;
    }
  `,
})
export class ConcludeDialog {
  private readonly reference = inject<MatDialogRef<ConcludeDialog, Concluding>>(MatDialogRef);
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);
  protected readonly form = new FormGroup({
    conclusion: new FormControl<Conclusion | null>(null, { validators: [Validators.required] }),
    conditions: new FormControl('', { nonNullable: true }),
    statement: new FormControl('', { nonNullable: true, validators: [Validators.required, Validators.minLength(20)] }),
  });
  private readonly conclusion = toSignal(this.form.controls.conclusion.valueChanges);
  protected readonly conditional = computed(() => this.conclusion() === 'fit with conditions');

  protected sign(): void {
    const { conclusion, conditions, statement } = this.form.getRawValue();
    const named = this.conditional() ? conditionsOf(conditions) : [];
    this.form.controls.conditions.setErrors(this.conditional() && named.length === 0 ? { required: true } : null);
    if (this.form.invalid || conclusion === null) {
      showInvalid(this.form, this.element.nativeElement);
      return;
    }
    this.reference.close({ act: 'conclude', conclusion, statement, conditions: named });
  }
}
