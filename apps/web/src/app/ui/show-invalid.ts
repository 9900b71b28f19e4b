import type { AbstractControl } from '@angular/forms';

/**
 * Call when a form is submitted with something missing: every message shows, and the first field that wants attention takes the focus.
 *
 * @example if (this.form.invalid) return showInvalid(this.form, this.element.nativeElement);
 */
export function showInvalid(form: AbstractControl, element: HTMLElement): void {
  form.markAllAsTouched();
  const control = element.querySelector<HTMLElement>(
    'input.ng-invalid, textarea.ng-invalid, mat-select.ng-invalid, .ng-invalid input',
  );
  control?.focus();
}
