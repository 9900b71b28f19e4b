import { type ColumnProfile, type ColumnRole, singleRoles } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent, ExclusionRule } from '@tallystone/contracts/samples/definition';
import type { KeptDraft } from '@tallystone/contracts/samples/dictionary';
import type { ColumnKind } from '@tallystone/contracts/samples/reading';
import { withColumns } from '@tallystone/contracts/samples/role-holders';
import { type ReadKinds, codesOfNumbers, keptKind } from './keep-kind';
import { type Lost, keepDeclined, keepOutcome, keepParts, withPartition } from './keep-values';

const words = { gone: 'is not there any more', here: 'under these choices' };
const limits = ['below', 'atMost', 'above', 'atLeast'] as const;

/**
 * The draft of a sample whose file was read again: what was decided stays wherever its columns are still there and of a kind that fits, and the
 * rest is suggested anew, each with its reason.
 *
 * @param before the draft as it was under the reading before
 * @param suggested the draft that the new reading suggests
 * @param readBefore what the reading before took the columns for
 */
export function keepDraft(
  before: DraftContent,
  suggested: DraftContent,
  profiles: readonly ColumnProfile[],
  readBefore: ReadKinds,
): { content: DraftContent; kept: KeptDraft } {
  const lost: Lost = [];
  const here = new Map(profiles.map((profile) => [profile.column, profile]));
  const columns = keepColumns(before, suggested, here, readBefore, lost);
  const holder = (role: ColumnRole, list: readonly DefinedColumn[] = columns.list): string | undefined =>
    list.find((column) => column.role === role)?.column;
  /** The profile of the column that has this role now, where it is the one that had it before. */
  const same = (role: ColumnRole): ColumnProfile | undefined => {
    const name = holder(role);
    return name !== undefined && name === holder(role, before.columns) ? here.get(name) : undefined;
  };

  // What is suggested of values is suggested for the columns that have the roles there.
  const fresh = withPartition(withColumns(suggested, columns.list));
  const ofOutcome = same('outcome');
  const outcome = ofOutcome ? keepOutcome(before.outcome, ofOutcome, here, words, lost) : fresh.outcome;
  if (!ofOutcome && holder('outcome', before.columns) !== undefined)
    lost.push({ what: 'Outcome', why: 'Its column is another one now.' });

  const ofDecision = same('decision');
  const declined = ofDecision ? keepDeclined(before.declined, ofDecision, words, lost) : fresh.declined;
  if (!ofDecision && before.declined !== null) lost.push({ what: 'Declined', why: 'Its column is another one now.' });

  return {
    content: {
      columns: columns.list,
      outcome,
      declined,
      exclusions: before.exclusions.filter((rule) => fits(rule, here, lost)),
      partition: keepPartition(before, fresh, same('partition'), here, lost),
    },
    kept: { columns: columns.kept, lost },
  };
}

function keepColumns(
  before: DraftContent,
  suggested: DraftContent,
  here: ReadonlyMap<string, ColumnProfile>,
  readBefore: ReadKinds,
  lost: Lost,
): { list: DefinedColumn[]; kept: string[] } {
  const known = new Map(before.columns.map((column) => [column.column, column]));
  for (const { column } of before.columns)
    if (!here.has(column)) lost.push({ what: column, why: 'The file has no such column under these choices.' });
  const kept = new Map<string, DefinedColumn>();
  for (const fresh of suggested.columns) {
    const old = known.get(fresh.column);
    const profile = here.get(fresh.column);
    if (!old || !profile) continue;
    const readAs = readBefore[fresh.column];
    const why = obstacle(old, readAs, profile);
    if (why === null) kept.set(fresh.column, asNow(old, fresh, keptKind(old, readAs, profile) ?? profile.kind, lost));
    else lost.push({ what: fresh.column, why });
  }
  // A role that only one column can have stays with the column that was given it.
  const taken = new Set([...kept.values()].map(({ role }) => role).filter((role) => singleRoles.includes(role)));
  const list = suggested.columns.map(
    (fresh): DefinedColumn =>
      kept.get(fresh.column) ??
      (taken.has(fresh.role) ? { ...fresh, role: 'not used', reason: 'Another column has this role already.' } : fresh),
  );
  return { list, kept: [...kept.keys()] };
}

function obstacle(old: DefinedColumn, readAs: ColumnKind | undefined, profile: ColumnProfile): string | null {
  if (profile.hashed && !['identifier', 'group key', 'not used'].includes(old.role))
    return 'It identifies people under these choices, and is kept as keyed hashes.';
  const stop = profile.flags.find(({ weight }) => weight === 'stop');
  if (stop && old.role !== 'not used' && old.role !== 'identifier')
    return `It cannot be used under these choices: ${stop.finding}`;
  return keptKind(old, readAs, profile) === null ? `It is ${profile.kind} under these choices, and was ${old.kind}.` : null;
}

/** Texts that became numbers take their special codes with them where these are numbers too. */
function asNow(old: DefinedColumn, fresh: DefinedColumn, kind: ColumnKind, lost: Lost): DefinedColumn {
  const kept = { ...old, protected: old.protected || fresh.protected };
  if (old.kind === kind) return kept;
  const { special, someLost } = codesOfNumbers(old.special);
  if (someLost)
    lost.push({ what: old.column, why: 'It is numeric under these choices: special codes that are no numbers were left out.' });
  return { ...kept, kind, special };
}

/** An exclusion is kept as a whole or not at all: without one of its tests it would take out other rows. */
function fits(rule: ExclusionRule, here: ReadonlyMap<string, ColumnProfile>, lost: Lost): boolean {
  const what = rule.reason.trim() === '' ? 'An exclusion' : `Exclusion “${rule.reason.trim()}”`;
  for (const test of rule.tests) {
    const profile = here.get(test.column);
    const stated = limits.map((limit) => test[limit]).filter((value) => value !== undefined);
    const why = !profile
      ? `The file has no column ${test.column} under these choices.`
      : stated.some((value) => (typeof value === 'number' ? profile.kind !== 'numeric' : profile.kind !== 'date'))
        ? `${test.column} is ${profile.kind} under these choices, and cannot be compared with its limit.`
        : null;
    if (why === null) continue;
    lost.push({ what, why });
    return false;
  }
  return true;
}

function keepPartition(
  { partition }: DraftContent,
  fresh: DraftContent,
  profile: ColumnProfile | undefined,
  here: ReadonlyMap<string, ColumnProfile>,
  lost: Lost,
): DraftContent['partition'] {
  if (partition.by === 'column') {
    if (profile) return keepParts(partition, profile, words, lost);
    lost.push({ what: 'Partition', why: 'Its column is another one now.' });
    return fresh.partition;
  }
  const date = fresh.columns.find(({ role }) => role === 'application date');
  if (partition.outOfTime === null || (date && here.get(date.column)?.kind === 'date')) return partition;
  lost.push({ what: 'Out-of-time', why: 'No column of application dates holds dates under these choices.' });
  return { ...partition, outOfTime: null };
}
