import type { CorrelationStanding, Correlations } from '@tallystone/contracts/binnings/correlations';
import { clustersAt, hierarchy } from '@tallystone/numeric/diagnostics/clusters';
import { count, fixed, plural } from '../../../ui/numbers';

export interface Pair {
  readonly key: string;
  readonly first: string;
  readonly second: string;
  readonly correlation: number;
  readonly flagged: boolean;
}

export interface Standing {
  readonly id: string;
  readonly column: string;
  readonly informationValue: number;
  readonly inflation: number | null;
  readonly collinear: boolean;
  /** From 1; null alone. */
  readonly group: number | null;
  readonly nearest: string | null;
  readonly nearestCorrelation: number | null;
  /** True where no other of its group has a larger IV. */
  readonly strongest: boolean;
}

export interface CorrelationReading {
  /** Places of the characteristics, those of a group side by side. */
  readonly order: readonly number[];
  readonly groups: readonly (readonly number[])[];
  readonly pairs: readonly Pair[];
  readonly standings: readonly Standing[];
}

/** VIF above this is flagged. Common practice; a limit is the lender's to set. */
export const inflationLimit = 5;

/** What correlations say at a threshold: groups in which every two correlate by it, pairs by strength, and each characteristic's standing. */
export function readCorrelations(
  { characteristics, matrix }: Pick<Correlations, 'characteristics' | 'matrix'>,
  threshold: number,
): CorrelationReading {
  const size = characteristics.length;
  const flat = matrix.flatMap((line) => line.map((value) => value ?? NaN));
  const merges = hierarchy(flat, size);
  const groups = clustersAt(merges, size, threshold).filter(({ length }) => length > 1);
  // The whole hierarchy's own order puts near ones side by side.
  const last = merges.at(-1);
  const order = last ? leaves(last.left, last.right, merges) : characteristics.map((_, place) => place);
  const groupOf = new Map(groups.flatMap((group, index) => group.map((place) => [place, index] as const)));
  const pairs: Pair[] = [];
  for (let j = 0; j < size; j++) {
    for (let k = 0; k < j; k++) {
      const correlation = matrix[j][k];
      if (correlation === null) continue;
      const [first, second] = [characteristics[k].column, characteristics[j].column];
      pairs.push({ key: `${first}|${second}`, first, second, correlation, flagged: Math.abs(correlation) >= threshold });
    }
  }
  pairs.sort((a, b) => Math.abs(b.correlation) - Math.abs(a.correlation));
  const standings = characteristics.map((one, j): Standing => {
    let nearest: number | null = null;
    matrix[j].forEach((value, k) => {
      if (k !== j && value !== null && (nearest === null || Math.abs(value) > Math.abs(matrix[j][nearest] ?? 0))) nearest = k;
    });
    const group = groupOf.get(j);
    return {
      id: one.id,
      column: one.column,
      informationValue: one.informationValue,
      inflation: one.inflation,
      collinear: one.collinear,
      group: group === undefined ? null : group + 1,
      nearest: nearest === null ? null : characteristics[nearest].column,
      nearestCorrelation: nearest === null ? null : matrix[j][nearest],
      strongest: group !== undefined && groups[group].every((k) => characteristics[k].informationValue <= one.informationValue),
    };
  });
  return { order, groups, pairs, standings };
}

/** The columns of two joined sides, each side in the order in which it was itself joined. */
function leaves(left: readonly number[], right: readonly number[], merges: ReturnType<typeof hierarchy>): number[] {
  const of = (side: readonly number[]): number[] => {
    if (side.length < 2) return [...side];
    const made = merges.find(
      (merge) =>
        merge.left.length + merge.right.length === side.length &&
        merge.left.includes(side[0]) &&
        [...merge.left, ...merge.right].every((place) => side.includes(place)),
    );
    return made ? leaves(made.left, made.right, merges) : [...side];
  };
  return [...of(left), ...of(right)];
}

/** One sentence: groups first, else the strongest pair. */
export function correlationFinding({ groups, pairs, standings }: CorrelationReading, threshold: number): string {
  if (standings.length < 2) return 'Fewer than two characteristics are included: there is nothing to compare.';
  const inflated = standings.filter(({ inflation, collinear }) => collinear || (inflation ?? 0) > inflationLimit).length;
  const vif =
    inflated === 0
      ? `no VIF is above ${inflationLimit}`
      : `${count(inflated)} ${inflated === 1 ? 'has' : 'have'} a VIF above ${inflationLimit}`;
  if (groups.length === 0) {
    const [strongest] = pairs;
    return strongest
      ? `No two characteristics correlate by ${fixed(threshold, 2)} or more; ${strongest.first} and ${strongest.second} come nearest with ${fixed(strongest.correlation, 2)}; ${vif}.`
      : `No correlation can be told; ${vif}.`;
  }
  const within = groups.reduce((sum, { length }) => sum + length, 0);
  return `${plural(within, 'characteristic')} of ${standings.length} fall into ${plural(groups.length, 'group')} that ${groups.length === 1 ? 'says' : 'say'} nearly the same; ${vif}.`;
}

/** Which characteristics correlations no longer speak of: "age, home, region and 2 more have changed"; null where all is as it was. */
export function changedWords({ calculatedAt, changed }: CorrelationStanding): string | null {
  if (calculatedAt === null || changed.length === 0) return null;
  const names = changed.slice(0, 3).join(', ');
  return `${names}${changed.length > 3 ? ` and ${changed.length - 3} more` : ''} ${changed.length === 1 ? 'has' : 'have'} changed`;
}
