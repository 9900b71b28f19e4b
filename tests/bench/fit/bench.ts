/**
 * Times the engine against glmnet on invented binned samples.
 *
 *   npm run bench:fit                      all cases
 *   npm run bench:fit -- --case b          one (a, b, b-ridge, b-net, c, d, bootstrap, refit)
 *   npm run bench:fit -- --case b --json   one JSON object on standard output
 *   npm run bench:fit -- --case b --alone  without glmnet; --threads 1 without a helper
 */
import { parseArgs } from 'node:util';
import { CASES, type BenchCase } from './cases';
import { hasGlmnet, timeGlmnet, type GlmnetTimes } from './glmnet';
import { PROOFS, timeBootstrap, timeOurs, timeRefit, type OurTimes, type Timed } from './ours';
import { benchSample, type BenchSample } from './sample';
import { Alone } from '@tallystone/numeric/engine/crew';
import { crewFor, warmCrew } from '../../../server/src/threads/crew';

const { values: given } = parseArgs({
  options: {
    case: { type: 'string' },
    json: { type: 'boolean', default: false },
    alone: { type: 'boolean', default: false },
    threads: { type: 'string', default: '2' },
  },
});
const { json, alone } = given;
const chosen = CASES.filter(({ name }) => (given.case ?? name) === name);
if (chosen.length === 0)
  throw new Error(`There is no case ${given.case}; there are ${CASES.map(({ name }) => name).join(', ')}.`);
const threads = Number(given.threads);
const crew = (cells: number) => (threads > 1 ? crewFor(cells) : new Alone());
if (threads > 1) {
  warmCrew();
  // A warm thread, as in the product: what is started while a fit runs is not what is measured.
  await new Promise((resolve) => setTimeout(resolve, 1500));
}
const withGlmnet = !alone && hasGlmnet();
if (!withGlmnet && !alone) console.error('R with glmnet is not installed (Debian: r-base-core r-cran-glmnet); ours alone.');

const seconds = (value: number): string => (value < 1 ? `${(1000 * value).toFixed(0)} ms` : `${value.toFixed(2)} s`);
const figure = (value: number): string => value.toExponential(1);
let memory = 0;
/** What path points and folds are asked for, with room for the rounding of the proof. */
const LARGEST_RESIDUAL = 1.01e-6;
/** Long enough for the compiler to have seen the code of small cases. */
const WARM_MS = 4000;
const AGAIN_WARM_MS = 1500;
const median = (values: readonly number[]): number => [...values].sort((a, b) => a - b)[Math.floor((values.length - 1) / 2)];
const peakMemoryMB = (): number => process.resourceUsage().maxRSS / 1024;

const results: BenchResult[] = [];
for (const of of chosen) {
  const sample = benchSample(of.rows, of.columns, 20261201);
  const result = of.kind === 'path' ? measurePath(of, sample) : measureOther(of, sample);
  results.push(result);
  if (json) console.log(JSON.stringify(result.json));
  else console.log(describe(result));
}

interface BenchResult {
  readonly json: Record<string, unknown>;
  readonly lines: readonly string[];
}

function describe({ lines }: BenchResult): string {
  return lines.join('\n');
}

function measureOther(of: BenchCase, sample: BenchSample): BenchResult {
  const measure = of.kind === 'bootstrap' ? timeBootstrap : timeRefit;
  measure(of, sample, () => crew(of.rows * of.columns));
  const times = Array.from({ length: of.rounds }, () => measure(of, sample, () => crew(of.rows * of.columns)));
  const timed = {
    seconds: median(times.map(({ seconds }) => seconds)),
    residual: Math.max(...times.map(({ residual }) => residual)),
  };
  const peak = peakMemoryMB();
  const what = of.kind === 'bootstrap' ? '200 resamples at 20 penalties' : 'one penalty again after a changed bin, warm';
  return {
    json: {
      case: of.name,
      rows: of.rows,
      columns: of.columns,
      ours: { [of.kind]: timed, peakMemoryMB: peak },
      glmnet: null,
      ratio: null,
    },
    lines: [
      `${of.name}: ${of.rows} x ${of.columns}, ${what}: ${seconds(timed.seconds)}, residual ${figure(timed.residual)}, ${peak.toFixed(0)} MB`,
    ],
  };
}

function measurePath(of: BenchCase, sample: BenchSample): BenchResult {
  const ours: OurTimes[] = [];
  const theirs: GlmnetTimes[] = [];
  /** Runs that began when this process had stood still. */
  const still: OurTimes[] = [];
  // The product's threads live on from fit to fit, so the compiler has seen the code before; small cases are over before it has.
  const until = performance.now() + WARM_MS;
  while (of.rows < 100_000 && performance.now() < until) timeOurs(of, sample, () => crew(of.rows * of.columns));
  for (let round = 0; round < of.rounds; round++) {
    // While glmnet ran, this process stood still: its first runs after that take up to twice as long as those of a process at work, which are measured. The
    // first is told beside them.
    if (of.rows < 100_000) {
      still.push(timeOurs(of, sample, () => crew(of.rows * of.columns)));
      const again = performance.now() + AGAIN_WARM_MS;
      while (performance.now() < again) timeOurs(of, sample, () => crew(of.rows * of.columns));
    }
    ours.push(timeOurs(of, sample, () => crew(of.rows * of.columns)));
    if (round === of.rounds - 1) memory = peakMemoryMB();
    if (withGlmnet) theirs.push(timeGlmnet(of, sample, of.extrapolateFrom ? 'path' : 'cv'));
  }
  const own = {
    path: { seconds: median(ours.map(({ path }) => path.seconds)), residual: Math.max(...ours.map(({ path }) => path.residual)) },
    cv: { seconds: median(ours.map(({ cv }) => cv.seconds)), residual: Math.max(...ours.map(({ cv }) => cv.residual)) },
    peakMemoryMB: memory,
  };
  const glmnet = theirs.length > 0 ? glmnetTimes(of, theirs) : null;
  const ratio = glmnet
    ? { path: glmnet.path.seconds / own.path.seconds, cv: glmnet.cv ? glmnet.cv.seconds / own.cv.seconds : null }
    : null;
  const cpu = glmnet
    ? { path: median(theirs.map(({ path }) => path.cpu)) / median(ours.map(({ path }) => path.cpu)), cv: cpuRatio(ours, theirs) }
    : null;
  const difference = differenceOf(ours[0], theirs[0]);
  const table = [
    ['', 'path', 'residual', 'cross-validation', 'residual', 'peak memory', 'processor time'],
    rowOf('ours', own.path, own.cv, own.peakMemoryMB, [
      median(ours.map(({ path }) => path.cpu)),
      median(ours.map(({ cv }) => cv.cpu)),
    ]),
    ...(glmnet && ratio && cpu
      ? [
          rowOf('glmnet', glmnet.path, glmnet.cv, glmnet.peakMemoryMB, [
            median(theirs.map(({ path }) => path.cpu)),
            glmnet.cvExtrapolated ? null : median(theirs.flatMap(({ cv }) => (cv ? [cv.cpu] : []))),
          ]),
          ['ratio', times(ratio.path), '', times(ratio.cv), '', '', `${times(cpu.path)}, ${times(cpu.cv)}`],
        ]
      : []),
  ];
  if (Math.max(own.path.residual, own.cv.residual) > LARGEST_RESIDUAL) {
    process.exitCode = 1;
    console.error(`${of.name}: a residual is above ${figure(LARGEST_RESIDUAL)}, so the times are those of another task.`);
  }
  return {
    json: { case: of.name, rows: of.rows, columns: of.columns, ours: own, glmnet, ratio },
    lines: [
      `${of.name}: ${of.rows} x ${of.columns}, mixing ${of.mixing}, ${ours[0].fits.length} penalties, ${threads} threads, ${of.rounds === 1 ? 'one run' : `medians of ${of.rounds}`}; passes ${ours[0].passes.path} and ${ours[0].passes.cv}`,
      ...aligned(table),
      `  Residuals: ours of every point of the path and of ${PROOFS} fits of folds, glmnet's of twelve points and of the first fold.`,
      ...(still.length > 0 && withGlmnet
        ? [
            `  Ours, the first run after standing still: path ${seconds(median(still.map((one) => one.path.seconds)))}, cross-validation ${seconds(median(still.map((one) => one.cv.seconds)))}.`,
          ]
        : []),
      ...(glmnet?.cvExtrapolated
        ? [`  glmnet's cross-validation is extrapolated from its path by the ratio of case ${of.extrapolateFrom}.`]
        : []),
      ...(glmnet ? [`  Largest relative difference in deviance ${difference === null ? '-' : figure(difference)}.`] : []),
    ],
  };
}

function times(value: number | null | undefined): string {
  return value === null || value === undefined ? '-' : `${value.toFixed(2)} x`;
}

function rowOf(name: string, path: Timed, cv: Timed | null, peak: number, cpus: readonly (number | null)[]): string[] {
  return [
    name,
    seconds(path.seconds),
    figure(path.residual),
    cv ? seconds(cv.seconds) : 'not measured',
    cv ? figure(cv.residual) : '',
    `${peak.toFixed(0)} MB`,
    cpus.map((value) => (value === null ? '-' : seconds(value))).join(', '),
  ];
}

/** Columns under each other, the first to the left. */
function aligned(table: readonly (readonly string[])[]): string[] {
  const widths = table[0].map((_, column) => Math.max(...table.map((row) => row[column].length)));
  return table.map(
    (row) => `  ${row.map((cell, column) => (column === 0 ? cell.padEnd(widths[0]) : cell.padStart(widths[column]))).join('  ')}`,
  );
}

function cpuRatio(ours: readonly OurTimes[], theirs: readonly GlmnetTimes[]): number | null {
  const times = theirs.flatMap(({ cv }) => (cv ? [cv.cpu] : []));
  return times.length === 0 ? null : median(times) / median(ours.map(({ cv }) => cv.cpu));
}

function glmnetTimes(
  of: BenchCase,
  theirs: readonly GlmnetTimes[],
): { path: Timed; cv: Timed | null; peakMemoryMB: number; cvExtrapolated?: true } {
  const path = { seconds: median(theirs.map((one) => one.path.seconds)), residual: theirs[0].path.residual };
  const peak = Math.max(...theirs.map((one) => one.peakMemoryMB));
  const measured = theirs.flatMap(({ cv }) => (cv ? [cv] : []));
  if (measured.length > 0)
    return {
      path,
      cv: { seconds: median(measured.map((cv) => cv.seconds)), residual: measured[0].residual },
      peakMemoryMB: peak,
    };
  const basis = CASES.find(({ name }) => name === of.extrapolateFrom);
  if (!basis) return { path, cv: null, peakMemoryMB: peak };
  const known = results.find(({ json: { case: name } }) => name === basis.name)?.json['glmnet'] as
    { path: Timed; cv: Timed } | undefined;
  const other = known ?? glmnetTimes(basis, [timeGlmnet(basis, benchSample(basis.rows, basis.columns, 20261201), 'cv')]);
  const factor = (other.cv?.seconds ?? NaN) / other.path.seconds;
  return {
    path,
    cv: { seconds: path.seconds * factor, residual: other.cv?.residual ?? NaN },
    peakMemoryMB: peak,
    cvExtrapolated: true,
  };
}

/** Over the lambdas both have. */
function differenceOf(ours: OurTimes, theirs: GlmnetTimes | undefined): number | null {
  if (!theirs) return null;
  let largest = 0;
  ours.fits.forEach((fit, k) => {
    if (k >= theirs.lambdas.length || Math.abs(theirs.lambdas[k] / fit.lambda - 1) > 1e-6) return;
    largest = Math.max(largest, Math.abs(theirs.deviances[k] / fit.deviance - 1));
  });
  return largest;
}
