import { probabilityOfBad } from '@tallystone/numeric';
import type { OutcomeRefits } from '@tallystone/contracts/fits/outcome-refits';
import type { PartitionName, Result } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { evaluateFit, evaluatorOf, PARTITION_NAMES, type Evaluator, type Evaluation } from '../replay/evaluate';
import { ReplayError, type ReplayProblem } from '../replay/problems';
import { outcomeRefits } from '../replay/outcome-refits';
import { replay } from '../replay/replay';
import { scoreFingerprint } from '../replay/score-fingerprint';
import type { SourceColumn } from '../replay/source';
import { NO_BIN } from '../replay/types';
import { crewFor } from './crew';
import type { Task } from './task';

export interface FreezePayload {
  readonly specification: Specification;
  readonly specificationSha256: string;
  readonly dataSha256: string;
  readonly rows: number;
  readonly columns: ReadonlyMap<string, SourceColumn>;
  readonly version: string;
}

/** Figures of a version beyond its result, for the documentation. */
export interface VersionFigures {
  /** Counts by bin on the other partitions, in the order of the result's characteristics and bins. */
  readonly bins: readonly { column: string; holdOut: BinCounts[] | null; outOfTime: BinCounts[] | null }[];
  readonly distributions: readonly { partition: PartitionName; edges: number[]; goods: number[]; bads: number[] }[];
  /** By band of the result. */
  readonly bandCalibrations: readonly { partition: PartitionName; bands: { rows: number; bads: number; meanPd: number | null }[] }[];
}
interface BinCounts {
  rows: number;
  goods: number;
  bads: number;
}

export type FreezeAnswer =
  | { readonly problems: readonly ReplayProblem[] }
  | { readonly problems: null; readonly result: Result; readonly scores: { sha256: string; count: number }; readonly figures: VersionFigures; readonly refits: OutcomeRefits | null };

/** Replays the specification of a version from the stored columns: the modeller's half. */
export const freezeVersion: Task<FreezePayload, FreezeAnswer> = ({ specification, rows, columns, ...rest }, { cancelled, progress }) => {
  const goOn = (): void => {
    if (cancelled()) throw new Error('Freezing was cancelled');
  };
  try {
    progress('Replaying the specification', 0);
    const replayed = replay({
      specification,
      ...rest,
      source: { rows, column: (name) => columns.get(name) },
      crewFor,
      onFit: (done, count) => {
        goOn();
        progress('Fitting the path', (0.12 * done) / count);
      },
      onFold: (done, count) => {
        goOn();
        progress('Cross-validating', 0.12 + (0.8 * done) / count);
      },
    });
    progress('Gathering the evidence', 0.94);
    const scores = scoreFingerprint(replayed, specification);
    if (!scores) throw new Error('A version has a scorecard: no linear characteristic can be in it');
    const evaluator = evaluatorOf(specification, replayed.prepared, replayed.coded, replayed.fitted.trained.tables);
    const evaluation = evaluateFit(evaluator, replayed.fitted.terms, replayed.fitted.model, { figures: 'path' });
    const { prepared, coded, fitted } = replayed;
    const { trained, index } = fitted;
    const approvalRate = approvedAt(specification.cutOff, evaluator, evaluation);
    const refits = outcomeRefits({ specification, prepared, coded, trained, indices: [index], approvalRate, crewFor, onFit: goOn });
    return { problems: null, result: replayed.result, scores, figures: figuresOf(replayed.result, evaluator, evaluation), refits };
  } catch (error) {
    if (error instanceof ReplayError) return { problems: error.problems };
    throw error;
  }
};

/** Share of the applicants that the refits are held against whose score before rounding reaches the cut-off. */
function approvedAt(cutOff: number | null, { partitions }: Evaluator, { scores }: Evaluation): number | undefined {
  if (cutOff === null) return undefined;
  const both = (name: PartitionName): boolean => partitions[name].outcome.includes(0) && partitions[name].outcome.includes(1);
  const held = scores[both('holdOut') ? 'holdOut' : 'development'].scores;
  return held.reduce((count, score) => count + Number(score >= cutOff), 0) / held.length;
}

function figuresOf(result: Result, evaluator: Evaluator, evaluation: Evaluation): VersionFigures {
  const present = PARTITION_NAMES.filter((name) => evaluator.partitions[name].rows.length > 0);
  return {
    bins: result.characteristics.map(({ column, bins }, index) => {
      const { codes } = evaluator.coded.characteristics[index];
      const counted = (name: PartitionName): BinCounts[] | null => (present.includes(name) && codes !== null ? countBins(codes, bins.length, evaluator, name) : null);
      return { column, holdOut: counted('holdOut'), outOfTime: counted('outOfTime') };
    }),
    distributions: present.map((partition) => distributionOf(partition, evaluation, evaluator)),
    bandCalibrations: present.map((partition) => ({ partition, bands: calibrateBands(result, evaluator, evaluation, partition) })),
  };
}

function countBins(codes: Uint8Array, bins: number, evaluator: Evaluator, name: PartitionName): BinCounts[] {
  const counts = Array.from({ length: bins }, () => ({ rows: 0, goods: 0, bads: 0 }));
  const { rows, outcome } = evaluator.partitions[name];
  rows.forEach((row, place) => {
    if (codes[row] === NO_BIN) return;
    const bin = counts[codes[row]];
    bin.rows++;
    if (outcome[place] === 1) bin.goods++;
    else bin.bads++;
  });
  return counts;
}

const classes = 40;

function distributionOf(partition: PartitionName, evaluation: Evaluation, evaluator: Evaluator): VersionFigures['distributions'][number] {
  const { scores } = evaluation.scores[partition];
  const { outcome } = evaluator.partitions[partition];
  let [low, high] = [Infinity, -Infinity];
  for (const score of scores) {
    if (score < low) low = score;
    if (score > high) high = score;
  }
  const width = high > low ? (high - low) / classes : 1;
  const goods = new Array<number>(classes).fill(0);
  const bads = new Array<number>(classes).fill(0);
  scores.forEach((score, place) => {
    (outcome[place] === 1 ? goods : bads)[Math.min(classes - 1, Math.floor((score - low) / width))]++;
  });
  return { partition, edges: Array.from({ length: classes + 1 }, (_, k) => low + k * width), goods, bads };
}

function calibrateBands(result: Result, evaluator: Evaluator, evaluation: Evaluation, partition: PartitionName): { rows: number; bads: number; meanPd: number | null }[] {
  const { scores, eta } = evaluation.scores[partition];
  const { outcome } = evaluator.partitions[partition];
  const sums = result.bands.map(() => ({ rows: 0, bads: 0, pd: 0 }));
  scores.forEach((score, place) => {
    let band = 0;
    while (band < result.bands.length - 1 && score >= (result.bands[band].to ?? Infinity)) band++;
    sums[band].rows++;
    sums[band].bads += 1 - outcome[place];
    sums[band].pd += probabilityOfBad(eta[place]);
  });
  return sums.map(({ rows, bads, pd }) => ({ rows, bads, meanPd: rows === 0 ? null : pd / rows }));
}
