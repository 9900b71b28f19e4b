import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { binWords, fixed, points, share, woe } from '../../../ui/numbers';
import { type PointsBlock } from './scorecard-view';

/** Points by characteristic and attribute: one small table each, the bar beside the points drawn from the neutral points on one common scale. */
@Component({
  selector: 'ts-points-list',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @for (block of drawn(); track block.column) {
      <table>
        <caption>
          <span class="name">{{ block.label }}</span>
          <span class="ts-caption">coefficient {{ coefficient(block.coefficient) }}, IV {{ woe(block.informationValue) }}</span>
          @if (block.againstWoe) {
            <span class="ts-caption against">against WOE</span>
          }
        </caption>
        <thead>
          <tr>
            <th scope="col">Attribute</th>
            <th scope="col" class="n">Share</th>
            <th scope="col" class="n">WOE</th>
            <th scope="col" class="n">Points</th>
            <td></td>
          </tr>
        </thead>
        <tbody>
          @for (row of block.rows; track $index) {
            <tr>
              <th scope="row">
                {{ row.words }}
                @if (row.rest) {
                  <details>
                    <summary>All of them</summary>
                    {{ row.label }}
                  </details>
                }
              </th>
              <td class="n second">{{ share(row.share) }}</td>
              <td class="n second">{{ woe(row.woe) }}</td>
              <td class="n strong">{{ whole(row.points) }}</td>
              <td class="bar">
                <svg width="72" height="14" aria-hidden="true" focusable="false">
                  <path class="neutral" [attr.d]="block.neutralPath" />
                  <path [class.loss]="row.points < block.neutral" [attr.d]="row.path" />
                </svg>
              </td>
            </tr>
          }
        </tbody>
      </table>
    }
  `,
  styleUrl: './points-list.scss',
})
export class PointsList {
  readonly blocks = input.required<readonly PointsBlock[]>();

  protected readonly drawn = computed(() => {
    const blocks = this.blocks();
    const all = blocks.flatMap((block) => block.attributes.map((attribute) => attribute.points - block.neutral));
    const low = Math.min(0, ...all);
    const span = Math.max(0, ...all) - low || 1;
    const x = (value: number): number => 3 + (66 * (value - low)) / span;
    const zero = x(0).toFixed(1);
    return blocks.map((block) => ({
      ...block,
      neutralPath: `M${zero} 0v14`,
      rows: block.attributes.map((attribute) => {
        const end = x(attribute.points - block.neutral);
        // Shorter than the line of the neutral points is wide, a bar would only blur it.
        const words = binWords(attribute.label);
        return {
          ...attribute,
          words,
          rest: words.endsWith(' and others') && words !== attribute.label,
          path: Math.abs(end - x(0)) < 1.5 ? '' : `M${zero} 7H${end.toFixed(1)}`,
        };
      }),
    }));
  });

  protected readonly woe = woe;
  protected readonly whole = points;
  protected readonly share = share;
  protected readonly coefficient = (value: number): string => fixed(value, 3);
}
