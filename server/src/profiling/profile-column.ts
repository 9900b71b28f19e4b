import type { ColumnFlag, ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { numberReader } from '../reading/index';
import type { TextColumn } from '../replay/source';
import { type CountedNumbers, countNumbers, withoutPlaces } from './counted-numbers';
import { type Counted, isIsoDate, judgeKind, thin } from './kind';
import { likeCategories } from './like-categories';
import type { Personal } from './personal';
import { PersonalValues, type PersonalValuesFound } from './personal-values';
import { suspectSpecials } from './specials';
import { suggestRole } from './suggest-role';

/** Values listed with their counts. */
export const mostListed = 50;
const quantileShares = [0, 0.01, 0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95, 0.99, 1];
const histogramBins = 30;

/**
 * Everything the quality table says of one column. Leakage needs the outcome and is judged afterwards (leakage.ts).
 *
 * @param personal what identifies people; the texts are then keyed hashes and are counted, not shown
 * @param writings how many different ones there are of them when it does not count how they are written; null where that was not counted
 */
export function profileColumn(
  name: string,
  position: number,
  column: TextColumn,
  choices: ReadingChoices,
  personal: Personal | null,
  writings: number | null = null,
): ColumnProfile {
  const counts = new Uint32Array(column.texts.length);
  for (const code of column.codes) counts[code]++;
  const missingTexts = new Set(choices.missing);
  const all: Counted[] = [];
  const missingTokens: { value: string; count: number }[] = [];
  column.texts.forEach((text, place) => {
    const count = counts[place];
    if (count === 0) return;
    if (text === '' || missingTexts.has(text)) missingTokens.push({ value: text, count });
    else all.push({ text, count });
  });
  const reader = numberReader(choices);
  const values = new PersonalValues();
  if (!personal) for (const { text, count } of all) values.add(text, count);
  const judged = personal ? { kind: 'categorical' as const, flags: [] } : judgeKind(all, reader);
  const alike = personal || judged.kind !== 'categorical' ? null : likeCategories(all);
  return describeColumn({
    name,
    position,
    personal,
    writings,
    personalValues: values.found(),
    rows: column.codes.length,
    missingTokens,
    kind: judged.kind,
    kindFlags: alike ? [...judged.flags, alike] : judged.flags,
    distinct: all.length,
    mostFrequent: mostFrequentOf(all, mostListed),
    numbers: judged.kind === 'numeric' ? countNumbers(all, reader.read) : null,
    date: judged.kind === 'date' ? describeDates(all) : null,
    text: judged.kind === 'categorical' && all.length > 0 && !personal ? describeTexts(all) : null,
  });
}

/** What has been counted in a column, however that was done. */
export interface ColumnFacts {
  readonly name: string;
  readonly position: number;
  readonly personal: Personal | null;
  /** Of identifiers: how many there are when it does not count how they are written. */
  readonly writings: number | null;
  /** Of a column that is not hashed: what its values seem to hold. */
  readonly personalValues: readonly PersonalValuesFound[];
  readonly rows: number;
  /** In any order. */
  readonly missingTokens: readonly { readonly value: string; readonly count: number }[];
  readonly kind: ColumnProfile['kind'];
  readonly kindFlags: readonly ColumnFlag[];
  /** Different texts that are not missing. */
  readonly distinct: number;
  /** The most frequent of them, at most `mostListed`; the same count in the order of the texts. */
  readonly mostFrequent: readonly Counted[];
  /** Of a numeric column. */
  readonly numbers: CountedNumbers | null;
  readonly date: ColumnProfile['date'];
  readonly text: ColumnProfile['text'];
}

export function describeColumn(facts: ColumnFacts): ColumnProfile {
  const { name, position, personal, personalValues, rows, missingTokens, kind, distinct, mostFrequent, numbers } = facts;
  const hidden = personal !== null || personalValues.length > 0;
  const missing = missingTokens.reduce((total, { count }) => total + count, 0);
  const amountsHidden = personalValues.some(({ asNumbers }) => asNumbers);
  const codes = numbers && !amountsHidden ? suspectSpecials(numbers) : null;
  const specialSuspects = codes?.suspects ?? [];
  const amounts = numbers && codes ? withoutPlaces(numbers, codes.places) : null;
  const flags: ColumnFlag[] = [
    ...shape(rows, missing, mostFrequent[0], distinct, kind, hidden),
    ...facts.kindFlags.map((flag) => (personalValues.length > 0 ? withoutExamples(flag) : flag)),
  ];
  if (specialSuspects.length > 0) {
    const listed = specialSuspects.map(({ value, count }) => `${value.replace('-', '\u2212')} (${thin(count)})`).join(', ');
    flags.push({
      code: 'special-code-suspected',
      weight: 'look',
      finding: `May be special codes rather than amounts: ${listed}.`,
    });
  }
  if (personal) flags.push(...personalFlags(personal, rows - missing, distinct, facts.writings));
  if (personalValues.length > 0) flags.push(personalValuesFlag(personalValues));
  const suggestion = suggestRole({ name, kind, rows, missing, distinct, personal, flags });
  if (suggestion.protectedFinding)
    flags.push({ code: 'looks-like-protected', weight: 'look', finding: suggestion.protectedFinding });
  return {
    position,
    column: name,
    kind,
    rows,
    distinct,
    missing,
    // Of one count by their text: the order must not depend on how a segment happens to be stored.
    missingTokens: [...missingTokens].sort((a, b) => b.count - a.count || (a.value < b.value ? -1 : 1)),
    specialSuspects,
    mostFrequent: mostFrequent
      .filter(({ text }) => !hidden || (numbers !== null && !amountsHidden && plainAmount.test(text)))
      .map(({ text, count }) => ({ value: text, count })),
    valuesComplete: !hidden && distinct <= mostListed,
    numeric: amounts && amounts.length > 0 ? describeNumbers(amounts) : null,
    date: facts.date,
    text: facts.text,
    flags,
    suggestedRole: suggestion.role,
    suggestedProtected: suggestion.protected,
    suggestion: suggestion.reason,
    hashed: personal !== null,
  };
}

/** The `most` most frequent, those of one count in the order of their texts. */
export function mostFrequentOf(all: readonly Counted[], most: number): Counted[] {
  const before = (a: Counted, b: Counted): boolean => a.count > b.count || (a.count === b.count && a.text < b.text);
  const top: Counted[] = [];
  for (const one of all) {
    if (top.length === most && !before(one, top[most - 1])) continue;
    let place = top.length;
    while (place > 0 && before(one, top[place - 1])) place--;
    top.splice(place, 0, one);
    if (top.length > most) top.pop();
  }
  return top;
}

function shape(
  rows: number,
  missing: number,
  first: Counted | undefined,
  distinct: number,
  kind: ColumnProfile['kind'],
  hidden: boolean,
): ColumnFlag[] {
  const known = rows - missing;
  if (first === undefined) return [{ code: 'all-missing', weight: 'stop', finding: `All ${thin(rows)} values are missing.` }];
  const flags: ColumnFlag[] = [];
  const shown = hidden ? 'one and the same' : JSON.stringify(first.text.slice(0, 60));
  if (distinct === 1) {
    const rest = missing > 0 ? ` where it is not missing` : '';
    const weight = missing > 0 ? ('look' as const) : ('stop' as const);
    flags.push({ code: 'constant', weight, finding: `Always ${shown}${rest}.` });
  } else if (first.count >= 0.99 * known) {
    flags.push({
      code: 'near-constant',
      weight: 'look',
      finding: `${share(first.count, known)} of the values are ${shown}.`,
    });
  }
  if (missing >= 0.5 * rows)
    flags.push({ code: 'mostly-missing', weight: 'look', finding: `${share(missing, rows)} of the values are missing.` });
  if (kind === 'categorical' && known >= 30 && distinct >= 0.95 * known) {
    flags.push({
      code: 'near-unique',
      weight: 'stop',
      finding: `${thin(distinct)} different texts in ${thin(known)} rows: no group has any size.`,
    });
  }
  return flags;
}

function personalFlags(personal: Personal, known: number, distinct: number, writings: number | null): ColumnFlag[] {
  const code =
    personal.kind === 'email' ? 'looks-like-email' : personal.kind === 'name' ? 'looks-like-name' : 'looks-like-identifier';
  const flags: ColumnFlag[] = [
    { code, weight: 'stop', finding: `${personal.finding} Kept as keyed hashes; the values are shown nowhere.` },
  ];
  if (personal.kind === 'identifier' && distinct < known) {
    const finding = `${thin(known - distinct)} rows repeat an identifier that stood before: one applicant may be in the file several times.`;
    flags.push({ code: 'repeated-identifiers', weight: 'look', finding });
  }
  const near = writings === null ? 0 : distinct - writings;
  if (near > 0) {
    const differ = near === 1 ? 'identifier differs from another' : 'identifiers differ from others';
    const finding = `${thin(near)} ${differ} only in how ${near === 1 ? 'it is' : 'they are'} written (case, blanks, punctuation, leading zeros): one applicant may be in the file several times.`;
    flags.push({ code: 'near-duplicate-identifiers', weight: 'look', finding });
  }
  return flags;
}

/** A warning that somebody answers: a form can fit by chance, and nothing is refused for it. */
function personalValuesFlag(found: readonly PersonalValuesFound[]): ColumnFlag {
  const listed = found.map(({ kind, standard, rows }) => `${kind} in ${thin(rows)} row${rows === 1 ? '' : 's'} (${standard})`);
  const finding = `Seems to hold ${listed.join('; ')}. Its values are not listed; take it out of the file, make it an identifier, or do not use it, if that is so.`;
  return { code: 'holds-personal-data', weight: 'look', finding };
}

/** Listed of a numeric column even where other texts in it are personal data. */
const plainAmount = /^-?[\d.,]+$/;

const unexampled: Partial<Record<ColumnFlag['code'], string>> = {
  'ambiguous-numbers': 'Every number with the decimal sign has exactly three digits after it: the sign may part thousands. If it does, read the file again with it as thousands sign; otherwise accept this.',
  'like-categories': 'Some of its values differ only in case or in blanks and signs between words.',
  'doubtful-dates': 'Some of its values are no dates, or doubtful ones.',
  'mixed-numbers': 'Numbers are written in more than one way: write them in one way in the file and bring it in again, or do not use the column.',
  'numbers-as-text': 'Some of its values are numbers, or written like numbers, and others are not.',
  'unreadable-numbers': 'Some of its values are no numbers.',
};

/** The finding of its kind without the values that it quotes. */
const withoutExamples = ({ code, weight, finding }: ColumnFlag): ColumnFlag => ({ code, weight, finding: unexampled[code] ?? finding });

/** Mean and deviation in one pass over distinct values (weighted Welford 1962); quantiles are type 7 of Hyndman and Fan 1996. */
function describeNumbers({ values, counts, length }: CountedNumbers): NonNullable<ColumnProfile['numeric']> {
  let n = 0;
  let mean = 0;
  let squares = 0;
  let integers = true;
  for (let place = 0; place < length; place++) {
    const value = values[place];
    const count = counts[place];
    n += count;
    const distance = value - mean;
    mean += (distance * count) / n;
    squares += count * distance * (value - mean);
    integers &&= Number.isInteger(value);
  }
  const smallest = values[0];
  const largest = values[length - 1];
  return {
    smallest,
    largest,
    mean,
    standardDeviation: n > 1 ? Math.sqrt(squares / (n - 1)) : 0,
    quantiles: quantiles(values, counts, length, n),
    histogram: histogram(values, counts, length),
    integers,
  };
}

function quantiles(values: Float64Array, counts: Float64Array, length: number, n: number): { share: number; value: number }[] {
  let place = 0;
  let seen = counts[0];
  return quantileShares.map((share) => {
    const at = share * (n - 1);
    const below = Math.floor(at);
    while (below >= seen && place + 1 < length) seen += counts[++place];
    const value = values[place];
    if (below + 1 < seen || place + 1 === length) return { share, value };
    return { share, value: value + (at - below) * (values[place + 1] - value) };
  });
}

function histogram(values: Float64Array, counts: Float64Array, length: number): { edges: number[]; counts: number[] } {
  const smallest = values[0];
  const largest = values[length - 1];
  // A few distinct values get a bar each; otherwise bars of equal width.
  const bins = smallest === largest ? 1 : histogramBins;
  const edges = Array.from({ length: bins + 1 }, (_, k) => (k === bins ? largest : smallest + ((largest - smallest) * k) / bins));
  const bars = Array.from({ length: bins }, () => 0);
  for (let place = 0; place < length; place++) {
    const value = values[place];
    let bin = largest === smallest ? 0 : Math.min(bins - 1, Math.floor(((value - smallest) / (largest - smallest)) * bins));
    // Division rounds: the edge decides.
    if (bin + 1 < bins && value >= edges[bin + 1]) bin++;
    else if (bin > 0 && value < edges[bin]) bin--;
    bars[bin] += counts[place];
  }
  return { edges, counts: bars };
}

function describeDates(values: readonly Counted[]): NonNullable<ColumnProfile['date']> {
  const dates = values.filter(({ text }) => isIsoDate(text)).sort((a, b) => (a.text < b.text ? -1 : 1));
  const months = new Map<string, number>();
  for (const { text, count } of dates) months.set(text.slice(0, 7), (months.get(text.slice(0, 7)) ?? 0) + count);
  return {
    first: dates[0].text,
    last: dates[dates.length - 1].text,
    months: [...months].map(([month, count]) => ({ month, count })).slice(0, 600),
  };
}

function describeTexts(values: readonly Counted[]): { shortest: number; longest: number } {
  let shortest = Infinity;
  let longest = 0;
  for (const { text } of values) {
    shortest = Math.min(shortest, text.length);
    longest = Math.max(longest, text.length);
  }
  return { shortest, longest };
}

const share = (part: number, whole: number): string => `${((100 * part) / whole).toFixed(1)} %`;
