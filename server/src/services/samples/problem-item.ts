import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { ReadingProblem } from '../../reading/index';
import type { ReplayProblem } from '../../replay/problems';

type Where = ProblemItem['where'];

/** A problem of reading or of replay as the API states it: places are texts and numbers, lists are joined. */
export function problemItem(problem: ReadingProblem | ReplayProblem): ProblemItem {
  const where: Where = {};
  for (const [key, value] of Object.entries(problem.where) as [string, unknown][]) {
    if (value === undefined) continue;
    if (Array.isArray(value)) where[key] = value.map(written).join(', ');
    else if (typeof value === 'string' || typeof value === 'number' || typeof value === 'boolean') where[key] = value;
  }
  return { code: problem.code, message: problem.message, where };
}

/** A line number, or a value with its rows. */
function written(one: unknown): string {
  if (typeof one !== 'object' || one === null || !('value' in one) || !('rows' in one)) return String(one);
  return `${JSON.stringify(one.value)} ${String(one.rows)}`;
}
