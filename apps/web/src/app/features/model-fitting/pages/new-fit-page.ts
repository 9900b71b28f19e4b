import { ChangeDetectionStrategy, Component, computed, effect, inject, input, signal } from '@angular/core';
import { takeUntilDestroyed, toSignal } from '@angular/core/rxjs-interop';
import { type AbstractControl, FormArray, FormControl, FormGroup, ReactiveFormsModule, type ValidationErrors, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatRadioModule } from '@angular/material/radio';
import { MatSelectModule } from '@angular/material/select';
import { Router, RouterLink } from '@angular/router';
import type { DeclinedMethod, NewFit } from '@tallystone/contracts/fits/schema';
import { CurrentModel } from '../../../core/current-model';
import { newIdempotencyKey } from '../../../core/http/etag';
import { warnBeforeUnload } from '../../../core/unsaved-changes';
import { EmptyState } from '../../../ui/empty-state';
import { inferenceCaution } from '../../../ui/inference';
import { plural, share, woe } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { Fits } from '../data/fits';

type Treatment = 'free' | 'always kept' | 'left out';

/** Whoever keeps or leaves out a characteristic by hand says why. */
function reasonWhereByHand(group: AbstractControl): ValidationErrors | null {
  const reason = group.get('reason');
  const missing = group.get('treatment')?.value !== 'free' && !(reason?.value as string).trim();
  reason?.setErrors(missing ? { required: true } : null);
  return missing ? { reason: true } : null;
}

const treatmentGroup = (column: string) =>
  new FormGroup(
    {
      column: new FormControl(column, { nonNullable: true }),
      treatment: new FormControl<Treatment>('free', { nonNullable: true }),
      signConstraint: new FormControl(false, { nonNullable: true }),
      reason: new FormControl('', { nonNullable: true }),
    },
    { validators: reasonWhereByHand },
  );

const number = (value: number, low: number, high: number) =>
  new FormControl(value, { nonNullable: true, validators: [Validators.required, Validators.min(low), Validators.max(high)] });

/** Text that is asked for only while another control has a certain value; blanks are no text. */
const neededWhile = (other: string, holds: (value: unknown) => boolean) =>
  new FormControl('', {
    nonNullable: true,
    validators: [
      ({ parent, value }: AbstractControl<string>): ValidationErrors | null =>
        parent && holds(parent.get(other)?.value) && value.trim() === '' ? { required: true } : null,
    ],
  });

/** The settings of a new fit: penalty, path, folds, and how each characteristic enters. */
@Component({
  selector: 'ts-new-fit-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    MatButtonModule,
    MatCheckboxModule,
    MatFormFieldModule,
    MatInputModule,
    MatRadioModule,
    MatSelectModule,
    ReactiveFormsModule,
    RouterLink,
    EmptyState,
    PageHeader,
    ProblemList,
  ],
  templateUrl: './new-fit-page.html',
  styleUrl: './new-fit-page.scss',
})
export class NewFitPage {
  private readonly fits = inject(Fits);
  private readonly router = inject(Router);
  private readonly current = inject(CurrentModel);

  readonly modelId = input.required<string>();
  /** From the URL: the binning to start from. */
  readonly binning = input<string | undefined>(undefined);

  protected readonly treatments = new FormArray<ReturnType<typeof treatmentGroup>>([]);
  protected readonly form = new FormGroup({
    name: new FormControl('', { nonNullable: true, validators: [Validators.required, Validators.maxLength(120)] }),
    binningId: new FormControl('', { nonNullable: true, validators: [Validators.required] }),
    penalty: new FormControl<'lasso' | 'ridge' | 'net'>('lasso', { nonNullable: true }),
    mixing: number(0.5, 0, 1),
    count: number(100, 2, 200),
    smallestRatio: number(0.0001, 1e-8, 0.5),
    folds: number(10, 2, 50),
    seed: number(1, 0, 2147483647),
    classing: new FormControl<'once' | 'woe' | 'cuts'>('woe', { nonNullable: true }),
    smoothing: number(0.5, 0, 10),
    standardize: new FormControl(true, { nonNullable: true }),
    declined: new FormControl<DeclinedMethod>('none', { nonNullable: true }),
    bands: number(10, 2, 100),
    uplift: number(1.5, 0.1, 20),
    declinedReason: neededWhile('declined', (method) => method !== 'none'),
    corrected: new FormControl(false, { nonNullable: true }),
    populationPercent: number(5, 0.001, 99.999),
    correctionReason: neededWhile('corrected', (on) => on === true),
    treatments: this.treatments,
  });

  protected readonly binnings = this.fits.binnings(() => this.modelId());
  protected readonly ready = computed(() => (this.binnings.hasValue() ? this.binnings.value().binnings.filter((entry) => entry.state === 'ready' && entry.erased === null) : []));
  private readonly binningId = toSignal(this.form.controls.binningId.valueChanges, { initialValue: '' });
  protected readonly characteristics = this.fits.characteristics(() => this.binningId() || null);
  private readonly basisOfBinning = this.fits.basis(() => this.ready().find((entry) => entry.id === this.binningId())?.definitionId ?? null);
  protected readonly basis = computed(() => (this.basisOfBinning.hasValue() ? this.basisOfBinning.value() : null));
  protected readonly caution = inferenceCaution;
  protected readonly rows = (n: number): string => plural(n, 'applicant is', 'applicants are');
  protected readonly percent = share;
  private readonly included = computed(() =>
    this.characteristics.hasValue() ? this.characteristics.value().characteristics.filter((entry) => entry.included) : [],
  );
  private readonly values = toSignal(this.form.valueChanges);
  protected readonly allSigns = computed(() => this.signs() === 'all');
  protected readonly someSigns = computed(() => this.signs() === 'some');
  protected readonly finding = computed(() => {
    const n = this.included().length;
    return n === 0 ? 'A penalty path with cross-validation, over the characteristics of one binning.' : `${plural(n, 'characteristic')} of this binning enter the fit.`;
  });
  protected readonly problem = signal<unknown>(null);
  protected readonly starting = signal(false);
  protected readonly sent = signal(false);
  private started = false;
  private key = newIdempotencyKey();

  constructor() {
    warnBeforeUnload(() => this.unsaved());
    this.resetHidden();
    effect(() => {
      const ready = this.ready();
      if (ready.length === 0 || this.form.controls.binningId.value !== '') return;
      this.form.controls.binningId.setValue((ready.find((entry) => entry.id === this.binning()) ?? ready[0]).id);
    });
    effect(() => {
      const columns = this.included().map((entry) => entry.column);
      const before = new Map(this.treatments.controls.map((group) => [group.controls.column.value, group]));
      this.treatments.clear({ emitEvent: false });
      for (const column of columns) this.treatments.push(before.get(column) ?? treatmentGroup(column), { emitEvent: false });
      this.treatments.updateValueAndValidity();
    });
  }

  /** What is not asked for any more cannot stand in the way, and what is asked for now has to be there. */
  private resetHidden(): void {
    const { corrected, populationPercent, correctionReason, declined, bands, uplift, declinedReason } = this.form.controls;
    corrected.valueChanges.pipe(takeUntilDestroyed()).subscribe((on) => {
      if (!on) populationPercent.reset();
      correctionReason.updateValueAndValidity();
    });
    declined.valueChanges.pipe(takeUntilDestroyed()).subscribe((method) => {
      if (method !== 'parcelling') {
        bands.reset();
        uplift.reset();
      }
      declinedReason.updateValueAndValidity();
    });
  }

  readonly unsaved = (): boolean => !this.started && this.form.dirty;

  protected iv(column: string): string {
    return woe(this.included().find((entry) => entry.column === column)?.informationValue);
  }

  protected constrainAll(on: boolean): void {
    for (const group of this.treatments.controls) group.controls.signConstraint.setValue(on);
  }

  protected async start(): Promise<void> {
    this.sent.set(true);
    this.form.markAllAsTouched();
    if (this.form.invalid || this.starting()) return;
    this.starting.set(true);
    this.problem.set(null);
    try {
      const fit = await this.fits.start(this.modelId(), this.settings(), this.key);
      this.started = true;
      await this.current.reload();
      await this.router.navigate(['/models', this.modelId(), 'fit', fit.id]);
    } catch (error) {
      // What was sent was refused: the next attempt is another intention.
      this.key = newIdempotencyKey();
      this.problem.set(error);
    } finally {
      this.starting.set(false);
    }
  }

  private signs(): 'all' | 'some' | 'none' {
    const entries = this.values()?.treatments ?? [];
    const on = entries.filter((entry) => entry.signConstraint).length;
    if (on === 0) return 'none';
    return on === entries.length ? 'all' : 'some';
  }

  private settings(): NewFit {
    const value = this.form.getRawValue();
    return {
      binningId: value.binningId,
      settings: {
        name: value.name,
        mixing: value.penalty === 'lasso' ? 1 : value.penalty === 'ridge' ? 0 : value.mixing,
        standardize: value.standardize,
        lambda: { count: value.count, smallestRatio: value.smallestRatio, earlyStop: true },
        folds: { count: value.folds, seed: value.seed, classing: value.classing },
        woe: { smoothing: value.smoothing, when: 'zero-cell' },
        // Nobody can be inferred on a sample that treats nobody as declined, whatever was chosen on another binning.
        declined:
          this.basis()?.declined && value.declined !== 'none'
            ? { method: value.declined, bands: value.bands, uplift: value.uplift, reason: value.declinedReason }
            : undefined,
        priorCorrection: value.corrected ? { populationBadRate: value.populationPercent / 100, reason: value.correctionReason } : null,
        characteristics: value.treatments
          .filter((entry) => entry.treatment !== 'free' || entry.signConstraint)
          .map((entry) => ({ column: entry.column, treatment: entry.treatment, signConstraint: entry.signConstraint, reason: entry.reason })),
      },
    };
  }
}
