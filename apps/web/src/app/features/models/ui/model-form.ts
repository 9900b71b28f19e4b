import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatRadioModule } from '@angular/material/radio';
import type { ModelFields } from '@tallystone/contracts/models/schema';

const line = (most: number): FormControl<string> =>
  new FormControl('', {
    nonNullable: true,
    validators: [Validators.required, Validators.pattern(/\S/), Validators.maxLength(most)],
  });
const text = (most: number): FormControl<string> =>
  new FormControl('', { nonNullable: true, validators: [Validators.maxLength(most)] });

export type ModelForm = FormGroup<{
  [K in keyof ModelFields]: FormControl<K extends 'materialityTier' ? ModelFields['materialityTier'] | null : string>;
}>;

/** A form of what people write about a model, with the limits the server holds too. */
export function modelForm(): ModelForm {
  return new FormGroup({
    name: line(120),
    purpose: line(2000),
    product: line(120),
    population: line(1000),
    jurisdiction: line(120),
    owner: line(120),
    materialityTier: new FormControl<ModelFields['materialityTier'] | null>(null, Validators.required),
    intendedUse: text(4000),
    prohibitedUse: text(4000),
  });
}

export const tiers: readonly { readonly tier: ModelFields['materialityTier']; readonly text: string }[] = [
  { tier: 1, text: 'Tier 1: most at stake' },
  { tier: 2, text: 'Tier 2' },
  { tier: 3, text: 'Tier 3: least at stake' },
];

/** The fields of a model, in the order one thinks of them. */
@Component({
  selector: 'ts-model-form',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatFormFieldModule, MatInputModule, MatRadioModule],
  template: `
    <ng-container [formGroup]="form()">
      <mat-form-field>
        <mat-label>Name</mat-label>
        <input matInput formControlName="name" autocomplete="off" />
        <mat-hint>What people will call it: “Personal loans, new customers”.</mat-hint>
        <mat-error>Give a name of at most 120 characters.</mat-error>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Purpose</mat-label>
        <textarea matInput rows="3" formControlName="purpose"></textarea>
        <mat-hint>The decision it supports, and what success would be.</mat-hint>
        <mat-error>Say what the model is for.</mat-error>
      </mat-form-field>
      <div class="pair">
        <mat-form-field>
          <mat-label>Product</mat-label>
          <input matInput formControlName="product" autocomplete="off" />
          <mat-error>Name the product.</mat-error>
        </mat-form-field>
        <mat-form-field>
          <mat-label>Jurisdiction</mat-label>
          <input matInput formControlName="jurisdiction" autocomplete="off" />
          <mat-hint>Whose law applies to the lending.</mat-hint>
          <mat-error>Name the jurisdiction.</mat-error>
        </mat-form-field>
      </div>
      <mat-form-field>
        <mat-label>Population</mat-label>
        <textarea matInput rows="2" formControlName="population"></textarea>
        <mat-hint>Who will be scored, and who will not.</mat-hint>
        <mat-error>Describe the population.</mat-error>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Owner</mat-label>
        <input matInput formControlName="owner" autocomplete="off" />
        <mat-hint>The person or function who answers for the model.</mat-hint>
        <mat-error>Name the owner.</mat-error>
      </mat-form-field>
      <fieldset>
        <legend id="tier">Materiality</legend>
        <mat-radio-group formControlName="materialityTier" aria-labelledby="tier">
          @for (entry of tiers; track entry.tier) {
            <mat-radio-button [value]="entry.tier">{{ entry.text }}</mat-radio-button>
          }
        </mat-radio-group>
        <!-- Keeps its line while empty: what is below must not move away from under a pressed mouse. -->
        <p class="wrong" role="alert">
          @if (form().controls.materialityTier.touched && form().controls.materialityTier.invalid) {
            Choose a tier. What each tier asks for is your policy.
          }
        </p>
      </fieldset>
      <mat-form-field>
        <mat-label>Intended use</mat-label>
        <textarea matInput rows="3" formControlName="intendedUse"></textarea>
        <mat-hint>May be written later; it is printed in the documentation.</mat-hint>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Prohibited use</mat-label>
        <textarea matInput rows="3" formControlName="prohibitedUse"></textarea>
        <mat-hint>What the score must not be used for.</mat-hint>
      </mat-form-field>
    </ng-container>
  `,
  styles: `
    :host {
      display: grid;
      gap: 18px;
    }
    .pair {
      display: grid;
      grid-template-columns: repeat(auto-fit, minmax(min(100%, 220px), 1fr));
      gap: 18px;
      align-items: start;
    }
    mat-radio-group {
      display: flex;
      flex-wrap: wrap;
      gap: 0 16px;
    }
    .wrong {
      min-height: 1.5em;
      margin: 0;
      color: var(--ts-bad);
      font-size: 13px;
    }
  `,
})
export class ModelFormFields {
  readonly form = input.required<ModelForm>();
  protected readonly tiers = tiers;
}
