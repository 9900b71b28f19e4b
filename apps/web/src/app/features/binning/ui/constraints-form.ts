import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule, Validators, type ValidatorFn } from '@angular/forms';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';

type Trend = AskedConstraints['trend'];
type Criterion = NonNullable<AskedConstraints['criterion']>;

export const trendChoices: readonly { readonly value: Trend; readonly label: string }[] = [
  { value: 'monotone', label: 'Monotone, whichever way tells more' },
  { value: 'cross-validated', label: 'Whichever predicts best in cross-validation' },
  { value: 'any', label: 'Any' },
  { value: 'rising', label: 'WOE rises: risk falls along the values' },
  { value: 'falling', label: 'WOE falls: risk rises along the values' },
  { value: 'one-peak', label: 'One peak: risk falls, then rises' },
  { value: 'one-valley', label: 'One valley: risk rises, then falls' },
];

export const usualConstraints: AskedConstraints = {
  fineClasses: 100,
  smallestShare: 0.05,
  smallestGoods: 20,
  smallestBads: 20,
  mostBins: 8,
  smallestDifference: 0.05,
  trend: 'monotone',
};

const number = (value: number, ...validators: ValidatorFn[]): FormControl<number> =>
  new FormControl(value, { nonNullable: true, validators: [Validators.required, ...validators] });

/** Constraints as they are asked for, or as a characteristic was classed: there the trend has been chosen, and `trendBy` says how. */
export type KnownConstraints = AskedConstraints & { readonly trendBy?: 'cross-validation' | undefined };

/** The share is typed in per cent. A trend that was chosen by cross-validation is asked for again. */
export function constraintsForm(from: KnownConstraints = usualConstraints) {
  return new FormGroup({
    fineClasses: number(from.fineClasses, Validators.min(2), Validators.max(200)),
    smallestShare: number(Math.round(from.smallestShare * 1e6) / 1e4, Validators.min(0), Validators.max(50)),
    smallestGoods: number(from.smallestGoods, Validators.min(0)),
    smallestBads: number(from.smallestBads, Validators.min(0)),
    mostBins: number(from.mostBins, Validators.min(1), Validators.max(50)),
    smallestDifference: number(from.smallestDifference, Validators.min(0), Validators.max(5)),
    trend: new FormControl<Trend>(from.trendBy === 'cross-validation' ? 'cross-validated' : from.trend, { nonNullable: true }),
    criterion: new FormControl<Criterion>(from.criterion ?? 'information value', { nonNullable: true }),
  });
}
export type ConstraintsForm = ReturnType<typeof constraintsForm>;

export const constraintsOf = (form: ConstraintsForm): AskedConstraints => {
  const values = form.getRawValue();
  const { criterion, ...rest } = values;
  return { ...rest, smallestShare: values.smallestShare / 100, ...(criterion === 'deviance' ? { criterion } : {}) };
};

/** Fields for the constraints of automatic classing. */
@Component({
  selector: 'ts-constraints',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatFormFieldModule, MatInputModule, MatSelectModule],
  template: `
    <div class="fields" [formGroup]="form()">
      <mat-form-field>
        <mat-label>Smallest share of a bin</mat-label>
        <input matInput type="number" step="0.5" formControlName="smallestShare" />
        <span matTextSuffix>%</span>
        <mat-error>Between 0 and 50 %</mat-error>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Most bins</mat-label>
        <input matInput type="number" step="1" formControlName="mostBins" />
        <mat-error>Between 1 and 50</mat-error>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Fewest goods in a bin</mat-label>
        <input matInput type="number" step="1" formControlName="smallestGoods" />
        <mat-error>0 or more</mat-error>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Fewest bads in a bin</mat-label>
        <input matInput type="number" step="1" formControlName="smallestBads" />
        <mat-error>0 or more</mat-error>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Smallest difference of WOE</mat-label>
        <input matInput type="number" step="0.01" formControlName="smallestDifference" />
        <mat-error>Between 0 and 5</mat-error>
      </mat-form-field>
      @if (withFineClasses()) {
        <mat-form-field>
          <mat-label>Fine classes</mat-label>
          <input matInput type="number" step="1" formControlName="fineClasses" />
          <mat-error>Between 2 and 200</mat-error>
        </mat-form-field>
      }
      <mat-form-field class="wide">
        <mat-label>Trend of numeric characteristics</mat-label>
        <mat-select formControlName="trend">
          @for (choice of trends; track choice.value) {
            <mat-option [value]="choice.value">{{ choice.label }}</mat-option>
          }
        </mat-select>
      </mat-form-field>
      <mat-form-field class="wide">
        <mat-label>Best is</mat-label>
        <mat-select formControlName="criterion">
          <mat-option value="information value">The largest information value</mat-option>
          <mat-option value="deviance">The smallest deviance</mat-option>
        </mat-select>
      </mat-form-field>
    </div>
    <p class="ts-caption method">
      The best of all partitions of the fine classes under these constraints, found exactly by dynamic programming (R. Bellman,
      1957; W. D. Fisher, 1958). Categories stand in order of bad rate, rare ones pooled (L. Breiman and others, 1984, from
      memory). A trend by cross-validation has the smallest deviance over five folds, classed anew in each (M. Stone, 1974).
    </p>
  `,
  styles: `
    .fields {
      display: grid;
      grid-template-columns: repeat(auto-fit, minmax(min(100%, 200px), 1fr));
      gap: 16px;
    }
    .method {
      margin-top: 8px;
      max-width: 64ch;
    }
    .wide {
      grid-column: 1 / -1;
    }
  `,
})
export class ConstraintsFields {
  readonly form = input.required<ConstraintsForm>();
  readonly withFineClasses = input(true);
  protected readonly trends = trendChoices;
}
