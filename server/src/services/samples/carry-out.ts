import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { DraftContent, SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { Context } from '../../context';
import type { SourceColumn } from '../../replay/source';
import { openSample } from '../../storage/columnStore';
import type { PrepareAnswer } from '../../threads/prepare-sample';
import { runInThread } from '../../threads/run-in-thread';
import { profilesOf } from './columns-of';
import { define } from './define';
import type { FoundSample } from './find-sample';
import { problemItem } from './problem-item';
import { columnsOfSettled } from './settled';
import { weightFaultsOf } from './weight-faults';

export type CarriedOut =
  | { readonly problems: ProblemItem[]; readonly content: null; readonly answer: null }
  | {
      readonly problems: null;
      readonly content: SampleDefinitionContent;
      readonly answer: Extract<PrepareAnswer, { problems: null }>;
    };

/** Defines a draft and carries it out on the rows, in a thread: everything that stands in the way, or the partitions with their counts. */
export async function carryOut(
  context: Context,
  sample: FoundSample,
  draft: DraftContent,
  signal?: AbortSignal,
): Promise<CarriedOut> {
  const refused = (problems: ProblemItem[]): CarriedOut => ({ problems, content: null, answer: null });
  if (sample.readingId === null || sample.reading === null || sample.rows === null) {
    return refused([{ code: 'not-read', message: 'The file has not been read yet. Confirm how it is read first.', where: {} }]);
  }
  const profiles = await profilesOf(context.sequelize, sample.readingId);
  const weights = await weightFaultsOf(context.sequelize, sample, draft, profiles);
  const { content, problems } = define(draft, { sha256: sample.sha256, reading: sample.reading, profiles, weights });
  if (!content) return refused(problems);
  const names = columnsOf(content);
  const source = await openSample(context.sequelize, sample.id, names);
  const columns = new Map<string, SourceColumn>();
  for (const name of names) {
    const column = source.column(name);
    if (column) columns.set(name, column);
  }
  const answer = await runInThread('sample.prepare', { content, rows: sample.rows, columns }, signal ? { signal } : {});
  return answer.problems === null ? { problems: null, content, answer } : refused(answer.problems.map(problemItem));
}

/** Every column that the head of a specification reads. */
export function columnsOf(content: SampleDefinitionContent): Set<string> {
  const names = columnsOfSettled(content);
  if (content.weight) names.add(content.weight.column);
  if ('column' in content.partition) names.add(content.partition.column);
  else {
    if (content.partition.outOfTime) names.add(content.partition.outOfTime.column);
    if (content.partition.groups !== undefined) names.add(content.partition.groups);
  }
  return names;
}
