import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { ColumnQualityDetail } from '@tallystone/contracts/samples/quality';
import { QualityGroupMonths } from './quality-group-months';
import { QualityGroups } from './quality-groups';
import { QualityHistogram } from './quality-histogram';
import { type MonthValue, QualityMonths } from './quality-months';

/** All figures of one column of the report. */
@Component({
  selector: 'ts-column-quality',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { class: 'ts-columns' },
  imports: [QualityGroupMonths, QualityGroups, QualityHistogram, QualityMonths],
  template: `
    <ts-quality-groups [detail]="detail()" />
    @if (detail().histogram; as histogram) {
      <ts-quality-histogram [histogram]="histogram" />
    }
    @if (detail().months.length > 0) {
      <ts-quality-group-months [detail]="detail()" />
      <ts-quality-months
        title="Stability by month"
        note="PSI against the first year"
        label="PSI"
        kind="number"
        [finding]="driftFinding()"
        [values]="stability()"
        [lines]="[0.1, 0.25]"
      />
    }
  `,
  styles: `
    // A figure stays on one page: a grid does not break that way.
    @media print {
      :host {
        display: block;
      }
      ts-quality-group-months,
      ts-quality-groups,
      ts-quality-histogram,
      ts-quality-months {
        display: block;
        break-inside: avoid;
        margin-bottom: 16px;
      }
    }
  `,
})
export class ColumnQualityFigures {
  readonly detail = input.required<ColumnQualityDetail>();

  protected readonly stability = computed<readonly MonthValue[]>(() =>
    this.detail().months.map(({ month, psi, rows }) => ({
      month,
      value: psi,
      words: `${month}: ${psi === null ? (rows === 0 ? 'no rows' : 'within the first year') : `PSI ${psi.toFixed(3)}`}`,
    })),
  );
  protected readonly driftFinding = computed(() => {
    const drift = this.detail().drift;
    if (!drift) return 'No month has enough rows to be compared with the first year.';
    return `PSI is largest in ${drift.month} (${drift.psi.toFixed(3)}); by chance it would stay below ${drift.critical.toFixed(3)}.`;
  });
}
