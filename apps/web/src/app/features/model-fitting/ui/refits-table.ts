import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { readingNames } from '@tallystone/contracts/fits/outcome-readings';
import type { OutcomeRefits } from '@tallystone/contracts/fits/outcome-refits';
import { fixed, metric, plural } from '../../../ui/numbers';
import { refitsFinding } from './refits-view';

/** The fit again with the indeterminates as good and as bad, at a penalty that a rule points to; at others, where to find it. */
@Component({
  selector: 'ts-refits',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @let at = here();
    @if (at) {
      <p class="ts-caption">{{ finding() }}</p>
      <div class="scroll">
        <table>
          <caption class="ts-hidden">
            The fit repeated with the indeterminates of development read otherwise
          </caption>
          <thead>
            <tr>
              <th scope="col">Indeterminates</th>
              <th scope="col" class="ts-number">Bads</th>
              <th scope="col" class="ts-number">Kept</th>
              <th scope="col" class="ts-number">Gini</th>
              <th scope="col" class="ts-number" title="Spearman, with the scores of the fit as it is defined">Rank corr.</th>
            </tr>
          </thead>
          <tbody>
            @for (row of at.cases; track row.indeterminates) {
              <tr>
                <th scope="row">
                  {{ words[row.indeterminates] }}
                  @if (!row.converged) {
                    <span class="ts-caption">not converged</span>
                  }
                </th>
                <td class="ts-number">{{ whole(row.bads) }}</td>
                <td class="ts-number">{{ row.kept }}</td>
                <td class="ts-number">{{ gini(row.gini) }}</td>
                <td class="ts-number">{{ gini(row.rankCorrelation) }}</td>
              </tr>
            }
          </tbody>
        </table>
      </div>
      <p class="ts-caption">
        Bins, partition and penalty held, WOE and coefficients anew; scored on the {{ applicants() }} of
        {{ refits().partition === 'holdOut' ? 'the hold-out' : 'development' }}.
      </p>
    } @else {
      <p class="ts-caption">
        The fit with indeterminates as good and as bad is worked out at the penalties of both rules, and for every version at its
        own.
      </p>
    }
  `,
  styles: `
    :host {
      display: block;
      margin-block: 8px;
    }
    .scroll {
      overflow-x: auto;
    }
    table {
      width: 100%;
      border-collapse: collapse;
    }
    th {
      font-weight: 400;
      text-align: start;
    }
    th.ts-number {
      text-align: end;
    }
    thead th {
      font-weight: 600;
      font-size: 13px;
      line-height: 17px;
    }
    td {
      font-size: 13px;
      line-height: 24px;
    }
    th,
    td {
      padding: 3px 6px 3px 0;
    }
  `,
})
export class Refits {
  readonly refits = input.required<OutcomeRefits>();
  /** Place on the path. */
  readonly index = input.required<number>();

  protected readonly here = computed(() => this.refits().at.find(({ index }) => index === this.index()) ?? null);
  protected readonly finding = computed(() => {
    const at = this.here();
    return at && refitsFinding(at.cases);
  });
  protected readonly applicants = computed(() => plural(this.refits().rows, 'applicant'));
  protected readonly words = readingNames;
  protected readonly gini = metric;
  protected readonly whole = (value: number): string => fixed(value, 0);
}
