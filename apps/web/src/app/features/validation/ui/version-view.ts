import type { Gate, GateItem, Version, VersionAct, VersionSummary, VersionTextKey, VersionTexts } from '@tallystone/contracts/versions/schema';
import { day, plural, significant } from '../../../ui/numbers';

/** The author's sections, in the order in which the document prints them. */
export const textSections: readonly { readonly key: VersionTextKey; readonly title: string; readonly section: number; readonly asks: string }[] = [
  { key: 'recommendation', title: 'Recommendation', section: 1, asks: 'What is recommended, and for which decisions.' },
  { key: 'exclusionsRationale', title: 'Rationale of the exclusions', section: 4, asks: 'Why each rule takes rows out, and that only facts known at application do.' },
  { key: 'outcomeJustification', title: 'Justification of the outcome', section: 5, asks: 'Why good, bad and indeterminate are defined as they are, and the window.' },
  { key: 'sourcesSuitability', title: 'Suitability of the sources', section: 6, asks: 'Where the data come from and why they stand for future applicants.' },
  { key: 'trendExceptions', title: 'Trends that are not monotone', section: 8, asks: 'Why risk may rise and fall along the values of a characteristic, where it does.' },
  { key: 'penaltyReason', title: 'Why this penalty', section: 9, asks: 'Why this point of the path, against the two rules.' },
  { key: 'businessSense', title: 'Business sense of each characteristic', section: 10, asks: 'Why each characteristic kept should tell risk.' },
  { key: 'signExceptions', title: 'Sign exceptions', section: 10, asks: 'Why a coefficient may run against WOE, where one does.' },
  { key: 'performanceInterpretation', title: 'Interpretation of the performance', section: 11, asks: 'What discrimination and calibration mean for the use.' },
  { key: 'limitations', title: 'Limitations and assumptions', section: 14, asks: 'Where the scorecard should not be relied on.' },
  { key: 'monitoringPlan', title: 'Monitoring plan', section: 17, asks: 'What is watched, how often, and what triggers a redevelopment.' },
  { key: 'changeReasons', title: 'Reasons for the change', section: 18, asks: 'What changed against the version before, and why.' },
];

const actNames: Readonly<Record<VersionAct, string>> = {
  freeze: 'Frozen',
  submit: 'Submitted',
  withdraw: 'Withdrawn',
  start: 'Taken into validation',
  conclude: 'Concluded',
  accept: 'Documentation accepted',
  return: 'Returned for texts',
};
export const actName = (act: VersionAct): string => actNames[act];

/** Concluding and accepting are the two signatures. */
export const isSignature = (act: VersionAct): boolean => act === 'conclude' || act === 'accept';

export const missing = (gate: Gate): readonly GateItem[] => gate.items.filter((item) => !item.holds);

/** The gate that stands before a version next, or null once it is past all of them. */
export function gateAhead(version: Version): Gate | null {
  const act = version.state === 'In development' ? 'submit' : version.state === 'In validation' ? (version.awaitingCompliance ? 'accept' : 'conclude') : null;
  return version.gates.find((gate) => gate.act === act) ?? null;
}

const gateTitles: Readonly<Record<Gate['act'], string>> = {
  submit: 'Before it is submitted',
  conclude: 'Before it is concluded',
  accept: 'Before the documentation is accepted',
};
export const gateTitle = (gate: Gate): string => gateTitles[gate.act];

/** "All seven hold." or "2 of 7 are missing: …" */
export function gateWords(gate: Gate): string {
  const gaps = missing(gate);
  if (gaps.length === 0) return gate.items.length === 1 ? 'What is needed is there.' : `All ${gate.items.length} are there.`;
  return `${gaps.length} of ${gate.items.length} ${gaps.length === 1 ? 'is' : 'are'} missing.`;
}

/**
 * The sentence of a version's page, the first rule that holds: it has ended (rejected, approved …); texts were returned; something is missing
 * at the gate ahead; else whom it waits for.
 */
export function versionFinding(version: Version): string {
  const made = `${plural(version.kept, 'characteristic')} of fit “${version.fitName}” at penalty ${significant(version.lambda, 2)}, frozen ${day(version.frozenAt)} by ${version.frozenBy}.`;
  if (version.returned) return `${made} Compliance has returned it for its texts.`;
  if (version.waitingFor === null) {
    const last = version.acts[version.acts.length - 1];
    return last ? `${made} ${actName(last.act)} by ${last.by}.` : made;
  }
  const gate = gateAhead(version);
  const gaps = gate ? missing(gate).length : 0;
  if (gaps > 0) return `${made} ${plural(gaps, 'thing')} ${gaps === 1 ? 'is' : 'are'} missing before it can go on.`;
  return `${made} It waits for ${version.waitingFor}.`;
}

/** The sentence over a list of versions. */
export function versionsFinding(versions: readonly VersionSummary[]): string | null {
  if (versions.length === 0) return null;
  const [latest] = versions;
  const waits = latest.waitingFor === null ? '' : `, and waits for ${latest.waitingFor}`;
  return `Version ${latest.number} is the latest: ${latest.state.toLowerCase()}${waits}.`;
}

/** The sentence over what is under review across models: for whom, most first. */
export function reviewsFinding(versions: readonly VersionSummary[]): string | null {
  if (versions.length === 0) return null;
  const waits = new Map<string, number>();
  for (const { waitingFor } of versions) if (waitingFor !== null) waits.set(waitingFor, (waits.get(waitingFor) ?? 0) + 1);
  const parts = [...waits].sort((a, b) => b[1] - a[1]).map(([who, n]) => `${n} ${n === 1 ? 'waits' : 'wait'} for ${who}`);
  return `${plural(versions.length, 'version')} under review${parts.length === 0 ? '' : `: ${parts.join(', ')}`}.`;
}

/** One text that both sides changed, differently. */
export interface TextConflict {
  readonly key: VersionTextKey;
  readonly theirs: string;
  readonly mine: string;
}

/**
 * Two people wrote at once: a section that only one of them changed is that one's; one that both changed alike is settled; what both changed
 * differently is a conflict, and stands as mine until a person says which stays.
 */
export function mergeTexts(base: VersionTexts, theirs: VersionTexts, mine: VersionTexts): { readonly texts: VersionTexts; readonly conflicts: TextConflict[] } {
  const texts: VersionTexts = {};
  const conflicts: TextConflict[] = [];
  for (const { key } of textSections) {
    const [was, other, own] = [base[key] ?? '', theirs[key] ?? '', mine[key] ?? ''];
    const taken = own === was ? other : own;
    if (own !== was && other !== was && own !== other) conflicts.push({ key, theirs: other, mine: own });
    if (taken !== '') texts[key] = taken;
  }
  return { texts, conflicts };
}
