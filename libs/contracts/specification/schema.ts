import { z } from 'zod';
import { problemsOf, repeated, type Finding } from './issues';
import { outcomeColumns } from './outcome';
import { sections } from './sections';
import { pathText } from './issues';
import type { Specification, SpecificationProblem } from './types';

export { MOST_BINS } from './characteristic';
export { isIsoDate } from './primitives';

/**
 * Validates a specification and applies its defaults.
 *
 * Every problem is reported at once, each with its place: sections are judged independently of one another, then whatever
 * spans sections is judged on those that are sound.
 *
 * @param input what JSON.parse gave (or a complete specification: parsing is idempotent)
 * @example
 * const parsed = parseSpecification(JSON.parse(text));
 * if ('problems' in parsed) parsed.problems.forEach((problem) => console.error(problem.where.path, problem.message));
 */
export function parseSpecification(input: unknown): { specification: Specification } | { problems: SpecificationProblem[] } {
  if (typeof input !== 'object' || input === null || Array.isArray(input)) {
    return { problems: [{ code: 'wrong-type', message: 'A specification is a JSON object.', where: { path: '' } }] };
  }
  const problems: SpecificationProblem[] = [];
  const sound: Record<string, unknown> = {};
  for (const key of Object.keys(input)) {
    if (!Object.hasOwn(sections, key)) {
      problems.push({ code: 'unknown-key', message: `"${key}" is not a key of the format.`, where: { path: key } });
    }
  }
  for (const [key, section] of Object.entries(sections)) {
    const present = Object.hasOwn(input, key);
    if (!present && section.required) {
      problems.push({ code: 'missing-key', message: `"${key}" is required.`, where: { path: key } });
      continue;
    }
    const value: unknown = present
      ? (input as Record<string, unknown>)[key]
      : 'whenAbsent' in section
        ? section.whenAbsent
        : undefined;
    const parsed = section.schema.safeParse(value);
    if (parsed.success) {
      if (parsed.data !== undefined) sound[key] = parsed.data;
    } else problems.push(...problemsOf(parsed.error.issues, [key]));
  }
  for (const finding of acrossSections(sound)) {
    problems.push({ code: finding.code, message: finding.message, where: { path: pathText(finding.path) } });
  }
  return problems.length > 0 ? { problems } : { specification: sound as unknown as Specification };
}

/** What no single section can judge. */
function acrossSections(given: Partial<Specification>): Finding[] {
  const findings: Finding[] = [];
  const { characteristics, outcome, declined, weight, partition, fit, reasons, cutOff } = given;
  if (characteristics !== undefined) {
    for (const column of repeated(characteristics.map((entry) => entry.column))) {
      findings.push({
        path: ['characteristics'],
        code: 'listed-twice',
        message: `The column "${column}" is listed more than once.`,
      });
    }
    const barred = new Map<string, string>();
    if (weight) barred.set(weight.column, 'the weight');
    if (partition && 'column' in partition) barred.set(partition.column, 'the partition');
    if (declined) barred.set(declined.column, 'the decision');
    for (const column of outcome ? outcomeColumns(outcome) : []) barred.set(column, 'the outcome');
    characteristics.forEach((entry, index) => {
      const use = barred.get(entry.column);
      if (use !== undefined) {
        findings.push({
          path: ['characteristics', index, 'column'],
          code: 'leaks',
          message: `"${entry.column}" is ${use} and cannot also be a characteristic.`,
        });
      }
    });
    if (fit !== undefined && 'grid' in fit.lambda && fit.lambda.grid.length > 1 && fit.lambda.grid.includes(0)) {
      characteristics.forEach((entry, index) => {
        if (entry.coding === 'indicator' && entry.penaltyMultiplier > 0) {
          findings.push({
            path: ['characteristics', index, 'coding'],
            code: 'not-identified',
            message: `"${entry.column}" has an indicator for every bin, which has no unique fit at penalty 0: end the grid above 0.`,
          });
        }
      });
    }
  }
  if (characteristics !== undefined && given.data !== undefined) {
    const missing = new Set(given.data.missing);
    characteristics.forEach((entry, index) => {
      if (entry.coding === 'linear') return;
      const groups = entry.kind === 'categorical' ? entry.groups.flat() : [];
      for (const text of [...groups, ...entry.special.flatMap((special) => special.values.map(String))]) {
        if (!missing.has(text)) continue;
        findings.push({
          path: ['characteristics', index],
          code: 'listed-as-missing',
          message: `${JSON.stringify(text)} is listed for "${entry.column}" and as missing (data.missing): it can be one only.`,
        });
      }
    });
  }
  if (reasons?.baseline === 'cut-off' && cutOff === null) {
    findings.push({ path: ['reasons', 'baseline'], code: 'needs-cut-off', message: 'The baseline "cut-off" needs a cut-off.' });
  }
  return findings;
}

/** The same as a zod schema, for routes and generated descriptions: problems become issues with their path as message. */
export const specificationSchema: z.ZodType<Specification, unknown> = z.unknown().transform((value, context): Specification => {
  const parsed = parseSpecification(value);
  if ('specification' in parsed) return parsed.specification;
  for (const problem of parsed.problems) {
    context.issues.push({
      code: 'custom',
      input: value,
      path: pathSteps(problem.where.path),
      message: problem.message,
      params: { code: problem.code },
    });
  }
  return z.NEVER;
});

function pathSteps(path: string): (string | number)[] {
  return [...path.matchAll(/\[(\d+)\]|[^.[\]]+/g)].map((step) => (step[1] === undefined ? step[0] : Number(step[1])));
}
