import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';

const run = (program: string, args: string[]) =>
  spawnSync(program, args, { encoding: 'utf8', maxBuffer: 1 << 28, env: { ...process.env, OMP_NUM_THREADS: '1', LC_ALL: 'C' } });

const script = (name: string): string => fileURLToPath(new URL(name, import.meta.url));

// Debian's packages belong to its own Python, which need not be the first on the path.
const pythons = ['/usr/bin/python3', 'python3'];
const findPython = (): string | undefined =>
  pythons.find((program) => run(program, ['-c', 'import sklearn, scipy']).status === 0);

/** Versions of what is compared with, for the head of the report. */
export function versions(): string {
  const r =
    "cat(R.version.string, ', glmnet ', format(packageVersion('glmnet')), ', pROC ', format(packageVersion('pROC')), sep = '')";
  const python = findPython();
  const own = python
    ? run(python, ['-c', 'import sklearn, scipy; print(f", scikit-learn {sklearn.__version__}, SciPy {scipy.__version__}")'])
        .stdout
    : '';
  return run('Rscript', ['-e', r]).stdout + own.trimEnd();
}

/** What a script printed: lines of a name and numbers. */
export type Answers = ReadonlyMap<string, number[]>;

function answersOf(program: string, name: string, folder: string): Answers {
  const done = run(program, [script(name), folder]);
  if (done.status !== 0) throw new Error(`${name} ended with ${done.status ?? done.signal}:\n${done.stderr}`);
  const number = (text: string): number =>
    ({ Inf: Infinity, '-Inf': -Infinity, inf: Infinity, '-inf': -Infinity })[text] ?? Number(text);
  return new Map(
    done.stdout
      .trimEnd()
      .split('\n')
      .map((line) => line.trimEnd().split(' '))
      .map(([key, ...values]) => [key, values.map(number)]),
  );
}

/** Runs a script of this folder by R on files in `folder`. */
export const answersOfR = (name: string, folder: string): Answers => answersOf('Rscript', name, folder);

/** The same by Python; undefined where scikit-learn is missing. */
export function answersOfPython(name: string, folder: string): Answers | undefined {
  const python = findPython();
  return python === undefined ? undefined : answersOf(python, name, folder);
}

/** Numbers of an answer that has to be there. */
export function answer(answers: Answers, key: string): number[] {
  const values = answers.get(key);
  if (!values) throw new Error(`the script printed no ${key}`);
  return values;
}
