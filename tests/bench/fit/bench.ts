/**
 * Times the engine against glmnet on invented binned samples.
 *
 *   npm run bench:fit                      all cases
 *   npm run bench:fit -- --case b          one (a, b, b-ridge, b-net, c, d, bootstrap, refit)
 *   npm run bench:fit -- --case b --json   one JSON object on standard output
 *   npm run bench:fit -- --case b --alone  without glmnet; --threads 1 without a helper
 */
import { CASES, type BenchCase } from './cases';
import { hasGlmnet, timeGlmnet, type GlmnetTimes } from './glmnet';
import { timeOurs, type OurTimes } from './ours';
import { benchSample } from './sample';
import { Alone } from '@tallystone/numeric/engine/crew';
import { crewFor, warmCrew } from '../../../server/src/threads/crew';

const args = process.argv.slice(2);
const option = (name: string): string | undefined => (args.includes(name) ? args[args.indexOf(name) + 1] : undefined);
const json = args.includes('--json');
const alone = args.includes('--alone');
const chosen = CASES.filter(({ name }) => (option('--case') ?? name) === name);
if (chosen.length === 0) throw new Error(`There is no case ${option('--case')}; there are ${CASES.map(({ name }) => name).join(', ')}.`);
const threads = Number(option('--threads') ?? 2);
const crew = (cells: number) => (threads > 1 ? crewFor(cells) : new Alone());
if (threads > 1) {
  warmCrew();
  // A warm thread, as in the product: what is started while a fit runs is not what is measured.
  await new Promise((resolve) => setTimeout(resolve, 1500));
}
const withGlmnet = !alone && hasGlmnet();
if (!withGlmnet && !alone) console.error('R with glmnet is not installed (Debian: r-base-core r-cran-glmnet); ours alone.');

const median = (values: readonly number[]): number => [...values].sort((a, b) => a - b)[Math.floor((values.length - 1) / 2)];
const peakMemoryMB = (): number => process.resourceUsage().maxRSS / 1024;

for (const of of chosen) {
  const sample = benchSample(of.rows, of.columns, 20261201);
  const ours: OurTimes[] = [];
  const theirs: GlmnetTimes[] = [];
  for (let round = 0; round < of.rounds; round++) {
    ours.push(timeOurs(of, sample, () => crew(of.rows * of.columns)));
    if (withGlmnet) theirs.push(timeGlmnet(of, sample, of.extrapolateFrom ? 'path' : 'cv'));
  }
  const memory = peakMemoryMB();
  const timed = (part: 'path' | 'cv') => ({
    seconds: median(ours.map((one) => one[part].seconds)),
    residual: Math.max(...ours.map((one) => one[part].residual)),
  });
  const result = {
    case: of.name,
    rows: of.rows,
    columns: of.columns,
    ours: { path: timed('path'), cv: timed('cv'), peakMemoryMB: memory },
    ...glmnetPart(of, theirs, timed('path').seconds, timed('cv').seconds),
  };
  if (json) console.log(JSON.stringify(result));
  else console.log(result, ours.map(({ passes }) => passes), 'largest relative difference in deviance', differenceOf(ours[0], theirs[0]));
}

function glmnetPart(of: BenchCase, theirs: readonly GlmnetTimes[], path: number, cv: number) {
  if (theirs.length === 0) return { glmnet: null, ratio: null };
  const pathSeconds = median(theirs.map((one) => one.path.seconds));
  const cvTimes = theirs.flatMap((one) => (one.cv ? [one.cv] : []));
  const cvSeconds = cvTimes.length > 0 ? median(cvTimes.map(({ seconds }) => seconds)) : null;
  return {
    glmnet: {
      path: { seconds: pathSeconds, residual: theirs[0].path.residual },
      cv: cvSeconds === null ? null : { seconds: cvSeconds, residual: cvTimes[0].residual },
      peakMemoryMB: Math.max(...theirs.map((one) => one.peakMemoryMB)),
    },
    ratio: { path: pathSeconds / path, cv: cvSeconds === null ? null : cvSeconds / cv },
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
