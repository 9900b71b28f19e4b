import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { Challenge } from '@tallystone/contracts/validation/schema';
import { type Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { fixed } from '../../../ui/numbers';
import { type ChallengeRow, challengeFinding, challengeRows, foreignNote } from './challenge-view';

/** Beside the independent replication: collinearity of what is kept, and the unpenalised fit of a foreign library. */
@Component({
  selector: 'ts-challenge-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [DenseTable],
  template: `
    <h3>Collinearity and a foreign challenger</h3>
    <p class="ts-second">{{ finding() }}</p>
    @if (rows().length > 0) {
      <ts-table
        caption="Variance inflation and the unpenalised fit by two libraries"
        [columns]="columns"
        [rows]="rows()"
        [identify]="byColumn"
      />
      <p class="ts-caption">
        {{ note() }} A VIF above 5 is flagged (common practice). Without a penalty the coefficients differ from those of the
        version.
      </p>
    }
  `,
  styles: `
    :host {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      gap: 8px;
    }
  `,
})
export class ChallengeTable {
  readonly challenge = input.required<Challenge>();

  protected readonly finding = computed(() => challengeFinding(this.challenge()));
  protected readonly rows = computed(() => challengeRows(this.challenge()));
  protected readonly note = computed(() => foreignNote(this.challenge()));
  protected readonly byColumn = (row: ChallengeRow): string => row.column;
  protected readonly columns: readonly Column<ChallengeRow>[] = [
    { key: 'column', label: 'Characteristic', value: (row) => row.column },
    {
      key: 'inflation',
      label: 'VIF',
      kind: 'number',
      value: (row) => row.inflation,
      format: ({ collinear, inflation }) => (collinear ? 'collinear' : fixed(inflation, 2)),
    },
    {
      key: 'own',
      label: 'Unpenalised',
      unit: 'this library',
      kind: 'number',
      value: (row) => row.own,
      format: (row) => fixed(row.own, 5),
    },
    {
      key: 'foreign',
      label: 'Unpenalised',
      unit: 'foreign library',
      kind: 'number',
      value: (row) => row.foreign,
      format: (row) => fixed(row.foreign, 5),
    },
    { key: 'difference', label: 'Difference', kind: 'number', value: (row) => row.difference },
  ];
}
