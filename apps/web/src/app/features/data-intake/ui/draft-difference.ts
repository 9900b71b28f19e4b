import type { ColumnRole } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent, DraftPartition, ExclusionRule } from '@tallystone/contracts/samples/definition';
import { sameValue } from '../../../core/same-value';
import { share } from '../../../ui/numbers';
import { conditionOf, conditions, valueOf } from './exclusion-test';

/** One thing that two drafts say differently, in words, and who of the two changed it. */
export interface DraftDifference {
  /** "home: role", "Exclusions". */
  readonly what: string;
  readonly theirs: string;
  readonly mine: string;
  readonly by: 'theirs' | 'mine' | 'both';
}

/** Lists of hundreds of values are cut: who differs is what is to be seen. */
const shownValues = 8;

function list(values: readonly (string | number)[]): string {
  if (values.length === 0) return 'none';
  const rest = values.length - shownValues;
  return values.slice(0, shownValues).join(', ') + (rest > 0 ? ` and ${rest} more` : '');
}

const columnParts: readonly {
  readonly what: string;
  readonly of: (column: DefinedColumn) => unknown;
  readonly say: (column: DefinedColumn) => string;
}[] = [
  { what: 'role', of: ({ role }) => role, say: ({ role }) => role },
  { what: 'type', of: ({ kind }) => kind, say: ({ kind }) => kind },
  {
    what: 'protected',
    of: (column) => [column.protected, column.citation],
    say: (column) => (column.protected ? `yes${column.citation ? `, by ${column.citation}` : ''}` : 'no'),
  },
  {
    what: 'special codes',
    of: ({ special }) => special,
    say: ({ special }) => special.map(({ label, values }) => `${list(values)} = ${label}`).join('; ') || 'none',
  },
  { what: 'amounts, not codes', of: ({ amounts }) => amounts ?? [], say: ({ amounts }) => list(amounts ?? []) },
  { what: 'reason', of: ({ reason }) => reason, say: ({ reason }) => reason || 'none' },
];

const holder = (content: DraftContent, role: ColumnRole): string =>
  content.columns.find((entry) => entry.role === role)?.column ?? 'the column with that role';

/** "staff loans: segment is one of STAFF". */
export function exclusionWords({ reason, combine, tests }: ExclusionRule): string {
  const asked = tests.map((test) => {
    const label = conditions.find(({ key }) => key === conditionOf(test))?.label ?? '';
    return `${test.column} ${label} ${valueOf(test)}`.trim();
  });
  return `${reason || 'no reason yet'}: ${asked.join(combine === 'all' ? ' and ' : ' or ') || 'no test yet'}`;
}

function ruleWords(content: DraftContent): string {
  const { rule } = content.outcome;
  if (!rule) return 'by the values of a column';
  const days = holder(content, 'outcome');
  return [
    `bad from ${rule.bad} of ${days}`,
    rule.indeterminate === null ? 'nothing indeterminate' : `indeterminate from ${rule.indeterminate}`,
    ...(rule.monthsOnBook ? [`excluded below ${rule.monthsOnBook.least} of ${rule.monthsOnBook.column}`] : []),
    rule.missing === 'excluded' ? 'missing excluded' : 'missing to be settled',
  ].join(', ');
}

function partitionWords(content: DraftContent): string {
  const { partition } = content;
  if (partition.by === 'column')
    return `by the values of ${holder(content, 'partition')}: development ${list(partition.development)}; hold-out ${list(partition.holdOut)}; out-of-time ${list(partition.outOfTime)}`;
  return `hold-out ${share(partition.holdOutShare)} by seed ${partition.seed}, ${periodWords(partition.outOfTime)}`;
}

function periodWords(period: Extract<DraftPartition, { by: 'seed' }>['outOfTime']): string {
  if (!period) return 'nothing out-of-time';
  const ends = [...(period.from ? [`from ${period.from}`] : []), ...(period.to ? [`to ${period.to}`] : [])];
  return `out-of-time ${ends.join(' ') || 'without a limit'}`;
}

const sections: readonly {
  readonly what: string;
  readonly of: (content: DraftContent) => unknown;
  readonly say: (content: DraftContent) => string;
}[] = [
  ...(['good', 'bad', 'indeterminate', 'excluded'] as const).map((means) => ({
    what: `Outcome: ${means}`,
    of: ({ outcome }: DraftContent) => [...outcome[means]].sort(),
    say: ({ outcome }: DraftContent) => list(outcome[means]),
  })),
  { what: 'Outcome: rule', of: ({ outcome }) => outcome.rule, say: ruleWords },
  { what: 'Declined', of: ({ declined }) => declined, say: ({ declined }) => (declined ? list(declined.values) : 'not stated') },
  {
    what: 'Exclusions',
    of: ({ exclusions }) => exclusions,
    say: ({ exclusions }) => exclusions.map((rule, place) => `${place + 1}. ${exclusionWords(rule)}`).join('; ') || 'none',
  },
  { what: 'Partition', of: ({ partition }) => partition, say: partitionWords },
];

/** Everything that two drafts say differently, those that both changed first. `before` is the draft that both began from. */
export function draftDifferences(before: DraftContent, theirs: DraftContent, mine: DraftContent): DraftDifference[] {
  const compare = <T>(
    what: string,
    of: (side: T) => unknown,
    say: (side: T) => string,
    sides: readonly [T | null, T | null, T | null],
  ): DraftDifference[] => {
    const [was, there, here] = sides.map((side) => (side === null ? null : of(side)));
    if (sameValue(there, here)) return [];
    const by = sameValue(was, there) ? 'mine' : sameValue(was, here) ? 'theirs' : 'both';
    const words = (side: T | null): string => (side === null ? 'no such column' : say(side));
    return [{ what, theirs: words(sides[1]), mine: words(sides[2]), by }];
  };
  const names = new Set([...theirs.columns, ...mine.columns].map(({ column }) => column));
  const found = [
    ...[...names].flatMap((name) => {
      const sides = [before, theirs, mine].map(({ columns }) => columns.find(({ column }) => column === name) ?? null) as [
        DefinedColumn | null,
        DefinedColumn | null,
        DefinedColumn | null,
      ];
      // In one of the two only: said once, not of each part.
      if (!sides[1] || !sides[2])
        return compare(
          name,
          () => true,
          ({ role }: DefinedColumn) => role,
          sides,
        );
      return columnParts.flatMap(({ what, of, say }) => compare(`${name}: ${what}`, of, say, sides));
    }),
    ...sections.flatMap(({ what, of, say }) => compare(what, of, say, [before, theirs, mine])),
  ];
  const order = ['both', 'theirs', 'mine'];
  return found.sort((a, b) => order.indexOf(a.by) - order.indexOf(b.by));
}
