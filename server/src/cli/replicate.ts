import { readFile, writeFile } from 'node:fs/promises';
import { parseArgs } from 'node:util';
import { permissionLines } from '@tallystone/contracts/permissions/permission-words';
import { resultSchema } from '@tallystone/contracts/result/schema';
import type { Result } from '@tallystone/contracts/result/types';
import { parseSpecification } from '@tallystone/contracts/specification/schema';
import type { Specification } from '@tallystone/contracts/specification/types';
import { version } from '../../../package.json';
import { readForReplay, ReadingError } from '../reading/index';
import {
  compareResults,
  countNumbers,
  describeDifference,
  fingerprint,
  OTHER_METHOD,
  replay,
  ReplayError,
  SAME_METHOD,
  type Difference,
  type Method,
} from '../replay/index';

/**
 * Replays a specification from the raw file with no server and no database.
 *
 *   npm run replicate -- --specification spec.json --data sample.csv --out result.json [--expect earlier.json] [--method independent]
 *
 * Exit code 0: a result, and no difference where one was asked for. 1: no result, one line per problem on standard error.
 * 2: a result that differs from the expected one, one line per number on standard error.
 */
const USAGE =
  'Usage: npm run replicate -- --specification spec.json --data sample.csv --out result.json [--expect earlier.json] [--method independent]';

/** Problems that end the command, one line each. */
class Refusal extends Error {
  constructor(readonly lines: readonly string[]) {
    super(lines.join('\n'));
  }
}

interface Arguments {
  specification: string;
  data: string;
  out: string;
  expect: string | undefined;
  method: Method;
}

function readArguments(args: string[]): Arguments {
  let values: Record<string, string | undefined>;
  try {
    const text = { type: 'string' } as const;
    ({ values } = parseArgs({
      args,
      options: { specification: text, data: text, out: text, expect: text, method: text },
      strict: true,
    }));
  } catch (error) {
    throw new Refusal([`${error instanceof Error ? error.message : String(error)} ${USAGE}`]);
  }
  const { specification, data, out, expect, method = 'standard' } = values;
  const lines: string[] = [];
  for (const [name, value] of Object.entries({ specification, data, out }))
    if (value === undefined) lines.push(`--${name} is missing. ${USAGE}`);
  if (method !== 'standard' && method !== 'independent') lines.push(`--method is "standard" or "independent", not "${method}".`);
  if (specification === undefined || data === undefined || out === undefined || lines.length > 0) throw new Refusal(lines);
  return { specification, data, out, expect, method: method as Method };
}

async function readJson(path: string, what: string): Promise<unknown> {
  let text: string;
  try {
    text = await readFile(path, 'utf8');
  } catch (error) {
    throw new Refusal([`The ${what} cannot be read: ${reason(error)}`]);
  }
  try {
    return JSON.parse(text.replace(/^\ufeff/, '')) as unknown;
  } catch (error) {
    throw new Refusal([`The ${what} ${path} is not JSON: ${reason(error)}`]);
  }
}

function readSpecification(json: unknown): Specification {
  const parsed = parseSpecification(json);
  if ('specification' in parsed) return parsed.specification;
  throw new Refusal(parsed.problems.map(({ where, message }) => (where.path === '' ? message : `${where.path}: ${message}`)));
}

async function readExpected(path: string): Promise<Result> {
  const parsed = resultSchema.safeParse(await readJson(path, 'expected result'));
  if (parsed.success) return parsed.data;
  throw new Refusal(parsed.error.issues.map((issue) => `Expected result, ${issue.path.join('.')}: ${issue.message}`));
}

async function run(args: Arguments): Promise<number> {
  const json = await readJson(args.specification, 'specification');
  const specification = readSpecification(json);
  const expected = args.expect === undefined ? null : await readExpected(args.expect);
  for (const line of permissionLines(specification)) process.stdout.write(`${oneLine(line)}\n`);
  const { source, sha256, rows } = await readForReplay(args.data, specification);
  const replayed = (method: Method): Result =>
    replay({ specification, specificationSha256: fingerprint(json), dataSha256: sha256, source, version, method }).result;
  const result = replayed(args.method);
  await writeFile(args.out, `${JSON.stringify(result, null, 2)}\n`);
  process.stdout.write(
    `${rows} rows read, ${result.kept} of ${result.characteristics.length} characteristics kept, result in ${args.out}\n`,
  );

  const independent = args.method === 'independent';
  // Without a result to compare with, the second solver is held against the first.
  const against = expected ?? (independent ? replayed('standard') : null);
  if (against === null) return 0;
  const tolerance = independent || against.solver.name !== result.solver.name ? OTHER_METHOD : SAME_METHOD;
  return report(compareResults(against, result, tolerance), countNumbers(against), tolerance.tolerance);
}

function report(differences: readonly Difference[], numbers: number, tolerance: number): number {
  if (differences.length === 0) {
    process.stdout.write(`${numbers} numbers compared, all equal within ${tolerance} x max(1, |x|), whole numbers exactly\n`);
    return 0;
  }
  for (const difference of differences) process.stderr.write(`${oneLine(describeDifference(difference))}\n`);
  return 2;
}

function reason(error: unknown): string {
  return error instanceof Error ? error.message : String(error);
}

const oneLine = (text: string): string => text.replace(/\s*[\r\n]+\s*/g, ' ');

async function main(): Promise<number> {
  try {
    return await run(readArguments(process.argv.slice(2)));
  } catch (error) {
    let lines: readonly string[];
    if (error instanceof Refusal) lines = error.lines;
    else if (error instanceof ReadingError || error instanceof ReplayError)
      lines = error.problems.map((problem) => problem.message);
    else lines = [reason(error)];
    for (const line of lines) process.stderr.write(`${oneLine(line)}\n`);
    return 1;
  }
}

process.exitCode = await main();
