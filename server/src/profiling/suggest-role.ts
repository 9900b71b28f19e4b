import type { ColumnFlag, ColumnRole } from '@tallystone/contracts/samples/columns';
import type { ColumnKind } from '@tallystone/contracts/samples/reading';
import type { Personal } from './personal';

export interface RoleEvidence {
  readonly name: string;
  readonly kind: ColumnKind;
  readonly rows: number;
  readonly missing: number;
  /** Different values that are not missing. */
  readonly distinct: number;
  readonly personal: Personal | null;
  readonly flags: readonly ColumnFlag[];
}

export interface RoleSuggestion {
  readonly role: ColumnRole;
  readonly protected: boolean;
  readonly protectedFinding: string | null;
  /** One sentence, shown beside the suggestion. */
  readonly reason: string;
}

/** Headings in words, lower case: "appliedOn", "applied_on" and "Applied on" are one. */
const spoken = (name: string): string =>
  name
    .replace(/([a-z0-9])([A-Z])/g, '$1 $2')
    .replace(/[^\p{L}\p{N}]+/gu, ' ')
    .trim()
    .toLowerCase();

const protectedWords =
  /\b(gender|sex|race|ethnic\w*|religio\w*|nationalit\w*|citizenship|marital|married|disab\w*|pregnan\w*|sexual orientation|birth ?date|date of birth|dob)\b/;

const single = (heading: RegExp, mostValues: number | null, kinds: readonly ColumnKind[] | null) => ({
  heading,
  mostValues,
  kinds,
});

/** In order: the first that fits names the role. Single roles are kept to one column later. */
const byHeading: readonly [ColumnRole, ReturnType<typeof single>, string][] = [
  [
    'outcome',
    single(/^(bad|good bad|good|default|defaulted|default flag|bad flag|target|performance)$|\boutcome\b/, 10, null),
    'Its heading names an outcome and it has few values.',
  ],
  [
    'decision',
    single(/\b(decision|decided|accepted|approved|declined|accept)\b/, 6, null),
    'Its heading names a decision and it has few values.',
  ],
  [
    'partition',
    single(/^(partition|part|split|sample|sample part|set)$/, 6, ['categorical']),
    'Its heading names a partition and it has few values.',
  ],
  [
    'weight',
    single(/^(weight|weights|w|sampling weight|sample weight|observation weight)$/, null, ['numeric']),
    'Its heading names a weight.',
  ],
  [
    'application date',
    single(/\b(application|applied|apply|app) ?(date|on|at|day)?\b|^date$/, null, ['date']),
    'A date whose heading names the application.',
  ],
  [
    'incumbent score',
    single(/\b(incumbent|current|old|existing|previous|legacy) ?score\b|^score$/, null, ['numeric']),
    'Its heading names a score that exists already.',
  ],
  [
    'group key',
    single(/\b(household|group|customer|client|borrower) (id|key|no|number)\b/, null, null),
    'Its heading names a group of applications.',
  ],
  ['segment', single(/^segment\b|\bsegment$/, 30, ['categorical']), 'Its heading names a segment.'],
];

/** Whether a column of this heading may be suggested as the outcome, once its values are known. */
export const headingNamesOutcome = (name: string): boolean => byHeading[0][1].heading.test(spoken(name));

export function suggestRole(evidence: RoleEvidence): RoleSuggestion {
  const heading = spoken(evidence.name);
  const isProtected = protectedWords.test(heading);
  const age =
    /\bage\b/.test(heading) &&
    !/\b(account|loan|vehicle|car|bureau|file|record) age\b|\bage of (account|loan|vehicle|car|file)\b/.test(heading);
  const protectedFinding = isProtected
    ? 'Its heading names an attribute that the law of many places protects: barred from any fit unless compliance permits it.'
    : age
      ? 'Age is protected or restricted in many places: let compliance say whether it may be used.'
      : null;
  const common = { protected: isProtected, protectedFinding };
  if (evidence.personal) {
    return evidence.personal.kind === 'identifier'
      ? { ...common, role: 'identifier', reason: evidence.personal.finding }
      : { ...common, role: 'not used', reason: `${evidence.personal.finding} Nothing is fitted on it.` };
  }
  // Numbers of mixed spelling are nearly all different texts, too: what can be done about it is said.
  const stop = evidence.flags.find(({ code }) => code === 'mixed-numbers') ?? evidence.flags.find(({ weight }) => weight === 'stop');
  if (stop) return { ...common, role: 'not used', reason: stop.finding };
  for (const [role, fits, reason] of byHeading) {
    if (!fits.heading.test(heading)) continue;
    if (fits.mostValues !== null && evidence.distinct > fits.mostValues) continue;
    if (fits.kinds !== null && !fits.kinds.includes(evidence.kind)) continue;
    return { ...common, role, reason };
  }
  const held = evidence.flags.find(({ code }) => code === 'holds-personal-data');
  if (held && evidence.kind === 'categorical') return { ...common, role: 'not used', reason: held.finding };
  if (evidence.kind === 'date') return { ...common, role: 'not used', reason: 'A date is no characteristic as it stands.' };
  return { ...common, role: 'characteristic', reason: 'Nothing speaks against it.' };
}
