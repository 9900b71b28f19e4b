import type { ColumnFlag, ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { numberReader } from '../reading/index';
import type { TextColumn } from '../replay/source';
import { type Counted, isIsoDate, judgeKind, thin } from './kind';
import type { Personal } from './personal';
import { suspectSpecials } from './specials';
import { suggestRole } from './suggest-role';

/** Values listed with their counts. */
const mostListed = 50;
const quantileShares = [0, 0.01, 0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95, 0.99, 1];
const histogramBins = 30;

/**
 * Everything the quality table says of one column. Leakage needs the outcome and is judged afterwards (leakage.ts).
 *
 * @param personal what identifies people; the texts are then keyed hashes and are counted, not shown
 */
export function profileColumn(
  name: string,
  position: number,
  column: TextColumn,
  choices: ReadingChoices,
  personal: Personal | null,
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
  const rows = column.codes.length;
  const missing = missingTokens.reduce((total, { count }) => total + count, 0);
  const ranked = [...all].sort((a, b) => b.count - a.count || (a.text < b.text ? -1 : 1));
  const reader = numberReader(choices);
  const judged = personal ? { kind: 'categorical' as const, flags: [] } : judgeKind(all, reader);
  const numbers = judged.kind === 'numeric' ? numbersOf(all, reader.read) : null;
  const specialSuspects = numbers ? suspectSpecials(numbers) : [];
  const suspected = new Set(specialSuspects.map(({ value }) => value));
  const amounts = numbers?.filter(({ text }) => !suspected.has(text)) ?? null;
  const flags: ColumnFlag[] = [...shape(rows, missing, ranked, judged.kind), ...judged.flags];
  if (specialSuspects.length > 0) {
    const codes = specialSuspects.map(({ value, count }) => `${value.replace('-', '\u2212')} (${thin(count)})`).join(', ');
    flags.push({
      code: 'special-code-suspected',
      weight: 'look',
      finding: `May be special codes rather than amounts: ${codes}.`,
    });
  }
  if (personal) flags.push(...personalFlags(personal, rows - missing, all.length));
  const suggestion = suggestRole({ name, kind: judged.kind, rows, missing, ranked, personal, flags });
  if (suggestion.protectedFinding)
    flags.push({ code: 'looks-like-protected', weight: 'look', finding: suggestion.protectedFinding });
  return {
    position,
    column: name,
    kind: judged.kind,
    rows,
    distinct: all.length,
    missing,
    missingTokens: missingTokens.sort((a, b) => b.count - a.count),
    specialSuspects,
    mostFrequent: personal ? [] : ranked.slice(0, mostListed).map(({ text, count }) => ({ value: text, count })),
    valuesComplete: !personal && ranked.length <= mostListed,
    numeric: amounts && amounts.length > 0 ? describeNumbers(amounts) : null,
    date: judged.kind === 'date' ? describeDates(all) : null,
    text: judged.kind === 'categorical' && all.length > 0 && !personal ? describeTexts(all) : null,
    flags,
    suggestedRole: suggestion.role,
    suggestedProtected: suggestion.protected,
    suggestion: suggestion.reason,
    hashed: personal !== null,
  };
}

export interface CountedNumber {
  readonly value: number;
  readonly text: string;
  readonly count: number;
}

/** Distinct numbers ascending; texts that spell the same number are one. */
function numbersOf(values: readonly Counted[], read: (text: string) => number): CountedNumber[] {
  const byValue = new Map<number, { value: number; text: string; count: number }>();
  for (const { text, count } of values) {
    const value = read(text);
    if (Number.isNaN(value)) continue;
    const known = byValue.get(value);
    if (known) known.count += count;
    else byValue.set(value, { value, text, count });
  }
  return [...byValue.values()].sort((a, b) => a.value - b.value);
}

function shape(rows: number, missing: number, ranked: readonly Counted[], kind: ColumnProfile['kind']): ColumnFlag[] {
  const known = rows - missing;
  if (known === 0) return [{ code: 'all-missing', weight: 'stop', finding: `All ${thin(rows)} values are missing.` }];
  const flags: ColumnFlag[] = [];
  const [first] = ranked;
  if (ranked.length === 1) {
    const rest = missing > 0 ? ` where it is not missing` : '';
    const weight = missing > 0 ? ('look' as const) : ('stop' as const);
    flags.push({ code: 'constant', weight, finding: `Always ${JSON.stringify(first.text.slice(0, 60))}${rest}.` });
  } else if (first.count >= 0.99 * known) {
    flags.push({
      code: 'near-constant',
      weight: 'look',
      finding: `${share(first.count, known)} of the values are ${JSON.stringify(first.text.slice(0, 60))}.`,
    });
  }
  if (missing >= 0.5 * rows)
    flags.push({ code: 'mostly-missing', weight: 'look', finding: `${share(missing, rows)} of the values are missing.` });
  if (kind === 'categorical' && known >= 30 && ranked.length >= 0.95 * known) {
    flags.push({
      code: 'near-unique',
      weight: 'stop',
      finding: `${thin(ranked.length)} different texts in ${thin(known)} rows: no group has any size.`,
    });
  }
  return flags;
}

function personalFlags(personal: Personal, known: number, distinct: number): ColumnFlag[] {
  const code =
    personal.kind === 'email' ? 'looks-like-email' : personal.kind === 'name' ? 'looks-like-name' : 'looks-like-identifier';
  const flags: ColumnFlag[] = [
    { code, weight: 'stop', finding: `${personal.finding} Kept as keyed hashes; the values are shown nowhere.` },
  ];
  if (personal.kind === 'identifier' && distinct < known) {
    const finding = `${thin(known - distinct)} rows repeat an identifier that stood before: one applicant may be in the file several times.`;
    flags.push({ code: 'repeated-identifiers', weight: 'look', finding });
  }
  return flags;
}

/** Mean and deviation in one pass over distinct values (weighted Welford 1962); quantiles are type 7 of Hyndman and Fan 1996. */
function describeNumbers(numbers: readonly CountedNumber[]): NonNullable<ColumnProfile['numeric']> {
  let n = 0;
  let mean = 0;
  let squares = 0;
  for (const { value, count } of numbers) {
    n += count;
    const distance = value - mean;
    mean += (distance * count) / n;
    squares += count * distance * (value - mean);
  }
  const smallest = numbers[0].value;
  const largest = numbers[numbers.length - 1].value;
  return {
    smallest,
    largest,
    mean,
    standardDeviation: n > 1 ? Math.sqrt(squares / (n - 1)) : 0,
    quantiles: quantileShares.map((part) => ({ share: part, value: quantile(numbers, n, part) })),
    histogram: histogram(numbers, smallest, largest),
    integers: numbers.every(({ value }) => Number.isInteger(value)),
  };
}

function quantile(numbers: readonly CountedNumber[], n: number, part: number): number {
  const at = part * (n - 1);
  const below = Math.floor(at);
  let seen = 0;
  for (let place = 0; place < numbers.length; place++) {
    seen += numbers[place].count;
    if (below >= seen) continue;
    const { value } = numbers[place];
    if (below + 1 < seen || place + 1 === numbers.length) return value;
    return value + (at - below) * (numbers[place + 1].value - value);
  }
  return numbers[numbers.length - 1].value;
}

function histogram(numbers: readonly CountedNumber[], smallest: number, largest: number): { edges: number[]; counts: number[] } {
  // A few distinct values get a bar each; otherwise bars of equal width.
  const bins = smallest === largest ? 1 : histogramBins;
  const edges = Array.from({ length: bins + 1 }, (_, k) => (k === bins ? largest : smallest + ((largest - smallest) * k) / bins));
  const counts = Array.from({ length: bins }, () => 0);
  for (const { value, count } of numbers) {
    let bin = largest === smallest ? 0 : Math.min(bins - 1, Math.floor(((value - smallest) / (largest - smallest)) * bins));
    // Division rounds: the edge decides.
    if (bin + 1 < bins && value >= edges[bin + 1]) bin++;
    else if (bin > 0 && value < edges[bin]) bin--;
    counts[bin] += count;
  }
  return { edges, counts };
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
