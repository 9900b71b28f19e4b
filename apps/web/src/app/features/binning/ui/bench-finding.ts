import {
  benchWarnings,
  type BenchReading,
  type BenchWarning,
  type FineClasses,
  type MonthlyDrift,
  type PartitionName,
  type SizeLimits,
} from '@tallystone/numeric/bench';
import { binWords, share, written } from '../../../ui/numbers';

/** What is to be looked at, with the numbers of bins as they are read. */
export function warningsOf(reading: BenchReading, limits: SizeLimits, drift: MonthlyDrift | null): BenchWarning[] {
  const bins = reading.bins.map((bin) => (bin.kind === 'cut' ? { ...bin, label: binWords(bin.label) } : bin));
  return benchWarnings({ ...reading, bins }, limits, drift);
}

/** The one sentence over a characteristic: how risk runs, whether it holds elsewhere, what is small. */
export function benchFinding(fine: FineClasses, reading: BenchReading, warnings: readonly BenchWarning[]): string {
  const has = (code: BenchWarning['code']): BenchWarning | undefined => warnings.find((warning) => warning.code === code);
  const alone = has('one-bin');
  if (alone) return alone.message;
  const parts = [fine.kind === 'numeric' ? trendSentence(reading) : rangeSentence(reading)];
  const holdOut = has('reversed-in-hold-out');
  const outOfTime = has('reversed-out-of-time');
  const seen = [reading.totals.holdOut?.informationValue, fine.outOfTime ? reading.totals.outOfTime?.informationValue : null];
  if (holdOut || outOfTime)
    parts.push(`the order is reversed ${[holdOut && 'in hold-out', outOfTime && 'out-of-time'].filter(Boolean).join(' and ')}`);
  else if (seen[0] != null) parts.push(`and holds in hold-out${seen[1] != null ? ' and out-of-time' : ''}`);
  const small = has('small-bin');
  if (small)
    parts.push(
      small.bins.length === 1
        ? 'one bin is smaller than the constraints allow'
        : `${small.bins.length} bins are smaller than the constraints allow`,
    );
  const joined = parts[1]?.startsWith('and') ? [`${parts[0]} ${parts[1]}`, ...parts.slice(2)] : parts;
  return `${joined.join('; ')}.`;
}

/** WOE rises as risk falls. */
function trendSentence({ trend }: BenchReading): string {
  if (trend === 'rising') return 'Risk falls steadily along the values';
  if (trend === 'falling') return 'Risk rises steadily along the values';
  if (trend === 'one-peak') return 'Risk falls along the values, then rises';
  if (trend === 'one-valley') return 'Risk rises along the values, then falls';
  if (trend === 'mixed') return 'Risk goes up and down along the values';
  return 'All known values lie in one bin';
}

function rangeSentence({ bins }: BenchReading): string {
  const groups = bins
    .filter(({ kind, figures }) => kind === 'group' && figures.development?.badRate != null)
    .sort((a, b) => (a.figures.development?.badRate ?? 0) - (b.figures.development?.badRate ?? 0));
  if (groups.length < 2) return 'All categories lie in one group';
  const [low, high] = [groups[0], groups[groups.length - 1]];
  const name = (label: string): string => (label.length > 30 ? `${label.slice(0, 28)}…` : label);
  return `Bad rate runs from ${share(low.figures.development?.badRate)} (${name(low.label)}) to ${share(high.figures.development?.badRate)} (${name(high.label)})`;
}

/** What WOE of a partition is calculated with: whether anything is added to its counts, and how much. */
export function smoothingWords({ smoothing, totals }: BenchReading, partition: PartitionName): string {
  const added = `${written(smoothing.amount)} is added to goods and bads of each bin`;
  return totals[partition]?.smoothed
    ? `For WOE, ${added}, as one has no good or no bad.`
    : `WOE is of the counts as they are; ${added} only where one has no good or no bad.`;
}

/** "numeric, risk rises" beside the title. */
export function trendWords(fine: FineClasses, reading: BenchReading): string {
  if (fine.kind === 'categorical') return 'categorical';
  const words = {
    rising: 'risk falls',
    falling: 'risk rises',
    'one-peak': 'risk falls, then rises',
    'one-valley': 'risk rises, then falls',
    mixed: 'no one trend',
    none: 'one bin',
  };
  return `numeric, ${words[reading.trend]}`;
}
