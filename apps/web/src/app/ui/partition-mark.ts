import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';

export type Partition = 'development' | 'holdOut' | 'outOfTime';
export const partitions: readonly Partition[] = ['development', 'holdOut', 'outOfTime'];

const names: Readonly<Record<Partition, string>> = {
  development: 'Development',
  holdOut: 'Hold-out',
  outOfTime: 'Out-of-time',
};

/** The partition's name as people read it. */
export const partitionName = (partition: Partition): string => names[partition];

/**
 * Paths of the partition's mark about the origin, size given as half its height: a bar for development, a circle for hold-out, a diamond
 * for out-of-time. Charts draw them with the classes ts-mark and ts-mark-<partition> (styled globally through partition-mark.scss).
 *
 * @example <svg:path [attr.d]="partitionPath('holdOut', 5)" class="ts-mark ts-mark-holdOut" [attr.transform]="…" />
 */
export function partitionPath(partition: Partition, r: number): string {
  if (partition === 'development') return `M${-r * 1.6} ${-r * 0.35}h${r * 3.2}v${r * 0.7}h${-r * 3.2}z`;
  if (partition === 'holdOut') return `M${-r} 0a${r} ${r} 0 1 0 ${2 * r} 0a${r} ${r} 0 1 0 ${-2 * r} 0z`;
  return `M0 ${-r * 1.25}l${r * 1.25} ${r * 1.25}l${-r * 1.25} ${r * 1.25}l${-r * 1.25} ${-r * 1.25}z`;
}

/**
 * A partition with its mark, for table headers and captions. Covered until opened: out-of-time figures stay hidden, and the mark says so.
 *
 * @example <ts-partition partition="outOfTime" [covered]="!opened()" />
 */
@Component({
  selector: 'ts-partition',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg width="18" height="14" viewBox="-9 -7 18 14" aria-hidden="true" focusable="false">
      <path [attr.d]="path()" class="ts-mark" [class]="'ts-mark-' + partition()" />
    </svg>
    <span>{{ words() }}</span>
  `,
  styles: `
    :host {
      display: inline-flex;
      align-items: center;
      gap: 4px;
      white-space: nowrap;
    }
  `,
})
export class PartitionMark {
  readonly partition = input.required<Partition>();
  readonly covered = input(false);
  protected readonly path = computed(() => partitionPath(this.partition(), 4.2));
  protected readonly words = computed(() => partitionName(this.partition()) + (this.covered() ? ', covered' : ''));
}
