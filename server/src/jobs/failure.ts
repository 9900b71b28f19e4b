import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { problemFrom } from '../problems/from-error';
import { TaskMemoryError } from '../threads/pool';

/** What a person is told about work that failed. */
export function problemOfFailure(cause: unknown): ProblemItem {
  if (cause instanceof TaskMemoryError)
    return {
      code: 'memory',
      message: `${cause.message} Fewer rows, characteristics or penalties need less.`,
      where: { memoryMb: cause.memoryMb },
    };
  const problem = problemFrom(cause);
  if (problem) return { code: problem.code, message: problem.detail, where: {} };
  return {
    code: problemCodes.internal,
    message: 'The work failed on our side. The log says why under the id of this run.',
    where: {},
  };
}
