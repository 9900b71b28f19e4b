import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatSelectModule } from '@angular/material/select';
import { Router, RouterLink } from '@angular/router';
import type { ComparedCharacteristic, ComparedSegment, ComparedFit } from '@tallystone/contracts/comparison/schema';
import { inferenceNames } from '@tallystone/contracts/fits/inference';
import { type Column } from '../../../ui/column';
import { DecisionNotice } from '../../../ui/decision-notice';
import { DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { inferenceCaution } from '../../../ui/inference';
import { fixed, metric, significant } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { PartitionMark } from '../../../ui/partition-mark';
import { ProblemList } from '../../../ui/problem-list';
import { Comparisons } from '../data/comparisons';
import { aucText, coefficientText, comparisonFinding, contested, incumbentFinding, incumbentRows, namedIn, testText } from '../ui/comparison-view';

type Partition = 'development' | 'holdOut' | 'outOfTime';

/** Two to five fits side by side on the same rows. Which fits is in the URL. */
@Component({
  selector: 'ts-comparison-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    MatButtonModule,
    MatFormFieldModule,
    MatSelectModule,
    RouterLink,
    DecisionNotice,
    DenseTable,
    EmptyState,
    PageHeader,
    PartitionMark,
    ProblemList,
  ],
  templateUrl: './comparison-page.html',
  styleUrl: './comparison-page.scss',
})
export class ComparisonPage {
  private readonly comparisons = inject(Comparisons);
  private readonly router = inject(Router);

  readonly modelId = input.required<string>();
  /** From the URL: ids of fits, comma-separated. */
  readonly fits = input<string | undefined>(undefined);

  protected readonly ids = computed(() => (this.fits() ?? '').split(',').filter((id) => id !== ''));
  private readonly list = this.comparisons.fits(() => this.modelId());
  protected readonly available = computed(() => (this.list.hasValue() ? this.list.value().fits.filter((fit) => fit.state === 'ready') : []));
  protected readonly comparison = this.comparisons.compare(
    () => this.modelId(),
    () => this.ids(),
  );
  protected readonly value = computed(() => (this.comparison.hasValue() ? this.comparison.value() : null));
  protected readonly finding = computed(() => {
    const value = this.value();
    return value ? comparisonFinding(value) : null;
  });

  /** In the order of choosing, as the columns stand: the first is the one that the others are held against. */
  protected readonly pickedWords = computed(() => {
    const available = new Map(this.available().map((fit) => [fit.id, `${fit.number}. ${fit.name}`]));
    return this.ids()
      .map((id) => available.get(id))
      .filter(Boolean)
      .join('; ');
  });

  protected readonly measures = computed(() => {
    const value = this.value();
    if (!value) return [];
    const covered = value.outOfTimeState === 'covered';
    const parts: Partition[] = value.outOfTimeState === 'none' ? ['development', 'holdOut'] : ['development', 'holdOut', 'outOfTime'];
    const row = (label: string, text: (fit: ComparedFit) => string) => ({ label, cells: value.fits.map(text) });
    return parts.map((partition) => {
      if (partition === 'outOfTime' && covered) return { partition, covered, rows: [] };
      const test = (fit: ComparedFit) => value.tests.find((entry) => entry.partition === partition && entry.fitId === fit.id);
      const rows = [
        row('AUC', (fit) => aucText(fit[partition])),
        row('Difference in AUC', (fit) => testText(test(fit))),
        row('KS', (fit) => metric(fit[partition]?.ks)),
        row('Calibration slope', (fit) => fixed(fit[partition]?.calibrationSlope, 2)),
        row('Calibration in the large', (fit) => fixed(fit[partition]?.calibrationInTheLarge, 3)),
      ];
      return { partition, covered: false, rows };
    });
  });

  protected readonly rows = computed(() => {
    const all = this.value()?.characteristics ?? [];
    return [...all.filter(contested), ...all.filter((entry) => !contested(entry))];
  });
  protected readonly columns = computed<Column<ComparedCharacteristic>[]>(() => {
    const fits = this.value()?.fits ?? [];
    return [
      { key: 'label', label: 'Characteristic', value: (row) => row.label },
      {
        key: 'note',
        label: 'Differs in',
        value: (row) =>
          [row.signFlip ? 'sign' : null, contested(row) ? 'kept or not' : null, row.binsDiffer ? 'bins' : null].filter(Boolean).join(', '),
      },
      ...fits.map(
        (fit, k): Column<ComparedCharacteristic> => ({
          key: `coefficient-${fit.id}`,
          label: fit.name,
          unit: 'coefficient',
          kind: 'number',
          value: (row) => row.coefficients[k],
          format: (row) => coefficientText(row.coefficients[k]),
        }),
      ),
      ...fits.map(
        (fit, k): Column<ComparedCharacteristic> => ({
          key: `points-${fit.id}`,
          label: fit.name,
          unit: 'points range',
          kind: 'points',
          value: (row) => row.pointsRange[k],
        }),
      ),
    ];
  });

  protected readonly incumbentSentence = incumbentFinding;
  protected readonly incumbentRows = incumbentRows;
  protected readonly bySegment = (row: ComparedSegment): string => `${row.column} ${row.value}`;
  protected readonly segmentColumns = computed<Column<ComparedSegment>[]>(() => [
    { key: 'value', label: 'Segment', value: (row) => `${row.column}: ${row.value}` },
    { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.rows },
    { key: 'bads', label: 'Bads', kind: 'count', value: (row) => row.bads },
    ...(this.value()?.fits ?? []).map(
      (fit, k): Column<ComparedSegment> => ({ key: `auc-${fit.id}`, label: fit.name, unit: 'AUC', kind: 'metric', value: (row) => row.auc[k] }),
    ),
  ]);
  protected readonly inferring = computed(() => this.value()?.fits.some((fit) => fit.inference !== 'none') ?? false);
  protected readonly inferenceNames = inferenceNames;
  protected readonly caution = inferenceCaution;
  protected readonly named = namedIn;
  protected readonly byColumn = (row: ComparedCharacteristic): string => row.column;
  protected readonly isOut = (row: ComparedCharacteristic): boolean => row.coefficients.every((value) => value === null || value === 0);

  protected penalty(lambda: number): string {
    return significant(lambda, 2);
  }

  protected pick(ids: string[]): void {
    // The order of choosing stays, so that the first one picked remains the one that the others are held against.
    const kept = this.ids().filter((id) => ids.includes(id));
    const added = ids.filter((id) => !kept.includes(id));
    void this.router.navigate([], { queryParams: { fits: [...kept, ...added].join(',') || null } });
  }
}
