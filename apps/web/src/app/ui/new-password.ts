import { ChangeDetectionStrategy, Component, input, signal } from '@angular/core';
import { FormControl, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';

/** As the server demands (libs/contracts/session): long instead of complicated. */
export const shortestPassword = 15;

/** A control for a password to be set; the server also refuses common ones and says why. */
export function newPasswordControl(): FormControl<string> {
  return new FormControl('', {
    nonNullable: true,
    validators: [Validators.required, Validators.minLength(shortestPassword), Validators.maxLength(200)],
  });
}

/**
 * The field in which a password is chosen: at least 15 characters, no rules of composition, paste allowed, shown on request.
 *
 * @example <ts-new-password label="Password" [control]="form.controls.password" [problem]="task.problem()?.forField('password')?.message" />
 */
@Component({
  selector: 'ts-new-password',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatFormFieldModule, MatInputModule],
  template: `
    <mat-form-field>
      <mat-label>{{ label() }}</mat-label>
      <input
        matInput
        [type]="shown() ? 'text' : 'password'"
        [formControl]="control()"
        autocomplete="new-password"
        spellcheck="false"
      />
      <button matButton matSuffix type="button" [attr.aria-pressed]="shown()" (click)="shown.set(!shown())">
        {{ shown() ? 'Hide' : 'Show' }}
      </button>
      <mat-hint>At least {{ shortest }} characters; a few words you remember are best.</mat-hint>
      <mat-error>Use at least {{ shortest }} characters.</mat-error>
    </mat-form-field>
  `,
})
export class NewPassword {
  readonly label = input('Password');
  readonly control = input.required<FormControl<string>>();
  protected readonly shown = signal(false);
  protected readonly shortest = shortestPassword;
}
