import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import type { FitPath } from '@tallystone/contracts/fits/schema';
import { DASH, fixed, metric, points, share, significant } from '../../../ui/numbers';
import { PartitionMark } from '../../../ui/partition-mark';
import { Refits } from './refits-table';
import { entryOrder, scorecardAt } from './path-view';

/**
 * What the scorecard is at the penalty under the notch: how many are kept, discrimination and calibration by partition, and every
 * characteristic with its coefficient and the range of its points. Changes with the notch, asks nothing of the server. What is projected into
 * it, the choice, stands before the characteristics.
 */
@Component({
  selector: 'ts-at-penalty',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, PartitionMark, Refits],
  templateUrl: './at-penalty.html',
  styleUrl: './at-penalty.scss',
})
export class AtPenalty {
  readonly path = input.required<FitPath>();
  readonly index = input.required<number>();
  readonly mayOpenOutOfTime = input(false);
  readonly openOutOfTime = output<void>();

  protected readonly partitions = computed(() => {
    const path = this.path();
    const i = this.index();
    const all = [
      { partition: 'development' as const, at: path.development[i], covered: false },
      { partition: 'holdOut' as const, at: path.holdOut[i], covered: false },
      { partition: 'outOfTime' as const, at: path.outOfTime?.[i] ?? null, covered: path.outOfTimeState === 'covered' },
    ];
    return all.filter((entry) => entry.partition === 'development' || entry.at !== null || entry.covered);
  });
  protected readonly measures = computed(() => {
    const columns = this.partitions();
    const row = (label: string, hint: string, text: (at: NonNullable<(typeof columns)[number]['at']>) => string) => ({
      label,
      hint,
      cells: columns.map(({ at, covered }) => (at === null ? (covered ? 'covered' : DASH) : text(at))),
    });
    return [
      row('AUC', 'area under the ROC curve, ties one half', (at) => metric(at.auc)),
      row('95 % interval', 'DeLong 1988', (at) => `${metric(at.aucLower)}\u2013${metric(at.aucUpper)}`),
      row('KS', 'largest distance of the two distributions', (at) => metric(at.ks)),
      row('Slope', 'calibration slope; 1 is calibrated, above 1 over-shrunk', (at) => fixed(at.calibrationSlope, 2)),
      row('In the large', 'positive: more bads than predicted', (at) => fixed(at.calibrationInTheLarge, 2)),
      row('Bad rate', 'bads among goods and bads', (at) => share(at.bads / (at.goods + at.bads))),
    ];
  });
  protected readonly covered = computed(() => this.path().outOfTimeState === 'covered');
  protected readonly facts = computed(() => {
    const path = this.path();
    const i = this.index();
    const explained = 1 - path.deviance[i] / path.nullDeviance;
    return `penalty ${significant(path.lambdas[i], 2)}, deviance explained ${share(explained)}, optimality residual ${significant(path.optimalityResidual[i], 1)}`;
  });
  protected readonly characteristics = computed(() => {
    const rows = scorecardAt(this.path(), this.index());
    return entryOrder(this.path())
      .map((j) => rows[j])
      .sort((a, b) => Number(b.kept) - Number(a.kept));
  });
  protected readonly keptCount = computed(() => this.path().kept[this.index()]);

  protected readonly coefficient = (value: number): string => (value === 0 ? '0' : fixed(value, 3));
  protected readonly whole = points;
}
