import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { FormControl, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MAT_DIALOG_DATA, MatDialogModule, MatDialogRef } from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import type { Role } from '@tallystone/contracts/people/schema';
import { Task } from '../../../core/task';
import { ProblemList } from '../../../ui/problem-list';
import { RoleChoice } from './role-choice';

export interface RolesQuestion {
  readonly name: string;
  readonly roles: readonly Role[];
  /** Saves, and rejects with a Problem that the dialog shows. */
  readonly save: (roles: readonly Role[], reason: string) => Promise<unknown>;
}

/** Gives and takes roles, with the reason that the record keeps. */
@Component({
  selector: 'ts-roles-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatDialogModule, MatFormFieldModule, MatInputModule, ProblemList, RoleChoice],
  template: `
    <h2 mat-dialog-title>Roles of {{ question.name }}</h2>
    <form (submit)="submit($event)">
      <mat-dialog-content>
        <p class="ts-second">A change ends the sessions of this person; they sign in again with their new roles.</p>
        <ts-role-choice [(chosen)]="roles" />
        <mat-form-field>
          <mat-label>Why</mat-label>
          <textarea matInput rows="2" [formControl]="reason"></textarea>
          <mat-error>Say why; it is kept in the record.</mat-error>
        </mat-form-field>
        <ts-problems [error]="task.error()" />
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>Cancel</button>
        <button matButton="filled" type="submit" [disabled]="task.busy()">Change roles</button>
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
export class RolesDialog {
  protected readonly question = inject<RolesQuestion>(MAT_DIALOG_DATA);
  private readonly reference = inject<MatDialogRef<RolesDialog, boolean>>(MatDialogRef);
  protected readonly roles = signal<readonly Role[]>(this.question.roles);
  protected readonly reason = new FormControl('', {
    nonNullable: true,
    validators: [Validators.required, Validators.pattern(/\S/)],
  });
  protected readonly task = new Task();

  protected submit(event: Event): void {
    event.preventDefault();
    if (this.reason.invalid) {
      this.reason.markAsTouched();
      return;
    }
    void this.task.run(async () => {
      await this.question.save(this.roles(), this.reason.value.trim());
      this.reference.close(true);
    });
  }
}
