import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { FormControl, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MAT_DIALOG_DATA, MatDialogModule, MatDialogRef } from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import { plural } from '../../../ui/numbers';
import { ConstraintsFields, type KnownConstraints, constraintsForm, constraintsOf } from './constraints-form';

export interface ReclassQuestion {
  readonly columns: readonly string[];
  readonly constraints: KnownConstraints;
  /** Manual edits that would no longer be in effect. */
  readonly edits: number;
}

export interface ReclassAnswer {
  readonly constraints: AskedConstraints;
  readonly reason: string;
}

/** Asks under which constraints characteristics are classed anew, and why where manual edits would go. */
@Component({
  selector: 'ts-reclass-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatDialogModule, MatFormFieldModule, MatInputModule, ConstraintsFields],
  template: `
    <h2 mat-dialog-title>Class {{ what }} anew</h2>
    <form (submit)="accept($event)">
      <mat-dialog-content>
        @if (asked.edits > 0) {
          <p>{{ lost }}</p>
        }
        <ts-constraints [form]="form" [withFineClasses]="false" />
        <mat-form-field>
          <mat-label>{{ asked.edits > 0 ? 'Why' : 'Why (optional)' }}</mat-label>
          <textarea matInput rows="2" [formControl]="reason"></textarea>
          <mat-error>Say why; it is kept in the record.</mat-error>
        </mat-form-field>
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>Cancel</button>
        <button matButton="filled" type="submit">Class anew</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    mat-dialog-content {
      display: grid;
      gap: 16px;
    }
  `,
})
export class ReclassDialog {
  protected readonly asked = inject<ReclassQuestion>(MAT_DIALOG_DATA);
  private readonly reference = inject<MatDialogRef<ReclassDialog, ReclassAnswer>>(MatDialogRef);
  protected readonly form = constraintsForm(this.asked.constraints);
  protected readonly what =
    this.asked.columns.length === 1 ? this.asked.columns[0] : plural(this.asked.columns.length, 'characteristic');
  protected readonly lost = `${plural(this.asked.edits, 'manual edit')} will no longer be in effect; the history keeps ${this.asked.edits === 1 ? 'it' : 'them'}.`;
  protected readonly reason = new FormControl('', {
    nonNullable: true,
    validators: this.asked.edits > 0 ? [Validators.required, Validators.pattern(/\S/)] : [],
  });

  protected accept(event: Event): void {
    event.preventDefault();
    this.form.markAllAsTouched();
    this.reason.markAsTouched();
    if (this.form.invalid || this.reason.invalid) return;
    this.reference.close({ constraints: constraintsOf(this.form), reason: this.reason.value.trim() });
  }
}
