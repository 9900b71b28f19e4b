import type { ComparedCharacteristic, ComparedIncumbent, ComparedMetrics, Comparison, PairedTest } from '@tallystone/contracts/comparison/schema';
import { DASH, fixed, metric, pValue, plural, signed } from '../../../ui/numbers';

/**
 * The sentence of the page, the first rule that holds: coefficients that change sign; a hold-out difference that chance hardly explains
 * (p below 0.05, a usual reading, common practice); else how far apart the hold-out AUC values are.
 */
export function comparisonFinding(comparison: Comparison): string {
  const flips = comparison.characteristics.filter((entry) => entry.signFlip);
  if (flips.length > 0) {
    return `${plural(flips.length, 'coefficient')} ${flips.length === 1 ? 'changes' : 'change'} sign between the fits: ${flips.map((entry) => entry.label).join(', ')}.`;
  }
  const tests = comparison.tests.filter((test) => test.partition === 'holdOut');
  const clear = tests.filter((test) => test.pValue !== null && test.pValue < 0.05);
  const name = (id: string): string => comparison.fits.find((fit) => fit.id === id)?.name ?? id;
  if (clear.length > 0) {
    const largest = [...clear].sort((a, b) => Math.abs(b.difference) - Math.abs(a.difference))[0];
    return `On hold-out ${name(largest.fitId)} ${largest.difference > 0 ? 'separates better' : 'separates worse'} than ${comparison.fits[0].name} by ${fixed(Math.abs(largest.difference), 4)} of AUC (${pValue(largest.pValue)}).`;
  }
  const values = comparison.fits.map((fit) => fit.holdOut?.auc).filter((value) => value !== undefined);
  if (values.length < 2) return `${plural(comparison.fits.length, 'fit')} side by side.`;
  return `Hold-out AUC differs by ${fixed(Math.max(...values) - Math.min(...values), 4)} at most, no more than chance would explain.`;
}

/** "0.781 (0.770 to 0.792)". */
export function aucText(at: ComparedMetrics | null): string {
  if (!at) return DASH;
  return at.aucLower === null ? metric(at.auc) : `${metric(at.auc)} (${metric(at.aucLower)} to ${metric(at.aucUpper)})`;
}

/** "+0.0031, p = 0.04"; on rows that both were developed on there is no p-value, and the text says why. */
export function testText(test: PairedTest | undefined): string {
  if (!test) return DASH;
  if (test.partition === 'development') return signed(test.difference, 4);
  return test.pValue === null ? `${signed(test.difference, 4)}, no test` : `${signed(test.difference, 4)}, ${pValue(test.pValue)}`;
}

/** Out: not part of the fit. Zero: shrunk to exactly zero. */
export function coefficientText(value: number | null): string {
  if (value === null) return 'not in fit';
  return value === 0 ? '0' : fixed(value, 3);
}

/** Kept by some and not by others: what a choice between the fits decides. First those, then the rest in the order given. */
export function contested(entry: ComparedCharacteristic): boolean {
  const kept = entry.coefficients.map((value) => value !== null && value !== 0);
  return kept.some(Boolean) && !kept.every(Boolean);
}

/** "26 characteristics" for a setting that lists more names than one reads in passing; null for any other. */
export function namedIn(setting: string): string | null {
  const names = setting.split(', ');
  return names.length > 6 ? plural(names.length, 'characteristic') : null;
}

const partitions = ['development', 'holdOut', 'outOfTime'] as const;

/** One line for each partition that the incumbent can be read on: its AUC, then each fit less the incumbent. */
export function incumbentRows(incumbent: ComparedIncumbent): { readonly partition: (typeof partitions)[number]; readonly cells: string[] }[] {
  return partitions.flatMap((partition) => {
    const at = incumbent[partition];
    if (at === null) return [];
    const own = `${at.aucLower === null ? metric(at.auc) : `${metric(at.auc)} (${metric(at.aucLower)} to ${metric(at.aucUpper)})`}, KS ${metric(at.ks)}`;
    return [{ partition, cells: [own, ...at.tests.map((test) => testText({ partition, ...test }))] }];
  });
}

/** Hold-out first: which way the score ranks, on how many rows; an incumbent below 0.5 ranks the other way and is said to. */
export function incumbentFinding(incumbent: ComparedIncumbent): string {
  const at = incumbent.holdOut ?? incumbent.development;
  const where = incumbent.holdOut ? 'hold-out' : 'development';
  if (at === null) return `${incumbent.column} stands in too few rows with a known outcome to be compared.`;
  const rows = `${plural(at.rows, 'row')} of ${where}${at.missing > 0 ? `, ${plural(at.missing, 'row')} without the score left out` : ''}`;
  return at.auc < 0.5
    ? `${incumbent.column} ranks the other way: its AUC is ${metric(at.auc)} on ${rows}. Turn its sign in the file to compare it.`
    : `${incumbent.column} reaches an AUC of ${metric(at.auc)} on ${rows}.`;
}
