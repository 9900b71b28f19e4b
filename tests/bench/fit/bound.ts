/**
 * What bounds a pass: the bytes that it moves against what memory moves, on this machine in the same run.
 *
 *   npm run bench:bound             cases b, c and d
 *   npm run bench:bound -- --json   one JSON object for each line on standard output
 *
 * Memory is measured by copying 256 MiB that no cache holds: each byte is read once and written once, and both count. A pass reads of each row one byte for each
 * pack of columns and four of its signed weight, once from memory: what it reads again lies in the cache, a block of 256 rows.
 */
import { Worker } from 'node:worker_threads';
import { parseArgs } from 'node:util';
import { Generator } from '@tallystone/numeric';
import { Alone } from '@tallystone/numeric/engine/crew';
import type { Lane } from '@tallystone/numeric/engine/lane';
import { pointOf } from '@tallystone/numeric/engine/lane';
import { layOut } from '@tallystone/numeric/engine/layout';
import { Passes } from '@tallystone/numeric/engine/passes';
import { fullStandardisation } from '@tallystone/numeric/engine/standardisation';
import { crewFor, warmCrew } from '../../../server/src/threads/crew';
import { CASES } from './cases';
import { benchSample } from './sample';

const { json } = parseArgs({ options: { json: { type: 'boolean', default: false } } }).values;
const MEBIBYTES = 256;
const COPIES = 8;
/** Lanes of a cross-validation: ten folds and those that ride along; three vectors of four. */
const LANES = 12;
const ROUNDS = 25;

const median = (values: readonly number[]): number => [...values].sort((a, b) => a - b)[Math.floor((values.length - 1) / 2)];

/** Copies and says how long the copies took, in seconds, by the median. The same text runs in this thread and in others. */
const copying = `
  const from = new Uint8Array(${MEBIBYTES} << 20).fill(7);
  const to = new Uint8Array(from.length).fill(1);
  const times = [];
  for (let k = 0; k < ${COPIES}; k++) {
    const began = performance.now();
    to.set(from);
    times.push((performance.now() - began) / 1000);
  }
  times.sort((a, b) => a - b)[${COPIES / 2}];
`;

/** Bytes read and written in a second, by as many threads at once. */
async function memory(threads: number): Promise<number> {
  const code = `require('node:worker_threads').parentPort.postMessage(eval(${JSON.stringify(copying)}))`;
  const seconds = await Promise.all(
    Array.from(
      { length: threads },
      () =>
        new Promise<number>((resolve, reject) => {
          const worker = new Worker(code, { eval: true, execArgv: [] });
          worker.once('message', resolve);
          worker.once('error', reject);
        }),
    ),
  );
  return seconds.reduce((sum, each) => sum + (2 * MEBIBYTES * 2 ** 20) / each, 0);
}

interface Pass {
  readonly case: string;
  readonly rows: number;
  readonly packs: number;
  readonly threads: number;
  readonly bytes: number;
  readonly seconds: number;
}

function pass(name: string, threads: number): Pass {
  const { rows, columns } = CASES.find((each) => each.name === name)!;
  const sample = benchSample(rows, columns, 20261201);
  const problem = { columns: sample.columns, outcome: sample.outcome, penalty: { mixing: 1, standardize: true } };
  const layout = layOut(problem, { folds: sample.folds, workers: threads });
  const crew = threads > 1 ? crewFor(rows * columns) : new Alone();
  const passes = new Passes(layout, crew);
  const standardisation = fullStandardisation(problem, layout);
  const chance = new Generator(1, 1);
  const lanes = Array.from({ length: LANES }, (): Lane => {
    const point = pointOf(layout.columns.length);
    point.intercept = 2;
    // A third of the columns are in, as at the penalties that matter.
    for (let j = 0; j < point.t.length; j += 3) point.t[j] = 0.2 * (chance.uniform() - 0.5);
    return { point, standardisation, leftOut: -1, heldOut: 0 };
  });
  for (let k = 0; k < ROUNDS; k++) passes.run(lanes, 'single');
  const times = Array.from({ length: ROUNDS }, () => {
    const began = performance.now();
    passes.run(lanes, 'single');
    return (performance.now() - began) / 1000;
  });
  passes.close();
  return {
    case: name,
    rows,
    packs: layout.packs.length,
    threads,
    bytes: rows * (layout.packs.length + 4),
    seconds: median(times),
  };
}

const GIGA = 1e9;
const one = await memory(1);
const two = await memory(2);
if (json) console.log(JSON.stringify({ memory: { copiedBytesPerSecond: { threads1: one, threads2: two } } }));
else
  console.log(
    `memory, read and written: ${(one / GIGA).toFixed(1)} GB/s by one thread, ${(two / GIGA).toFixed(1)} GB/s by two\n`,
  );
if (!json) console.log("case     rows  packs  threads  bytes of a pass  its time     GB/s  of memory's  ns a row and vector");

warmCrew();
await new Promise((resolve) => setTimeout(resolve, 1500));
for (const name of ['b', 'c', 'd'])
  for (const threads of [1, 2]) {
    const found = pass(name, threads);
    const rate = found.bytes / found.seconds;
    const share = rate / (threads > 1 ? two : one);
    if (json) console.log(JSON.stringify({ ...found, bytesPerSecond: rate, shareOfMemory: share }));
    else
      console.log(
        [
          name.padEnd(4),
          String(found.rows).padStart(8),
          String(found.packs).padStart(6),
          String(found.threads).padStart(8),
          `${(found.bytes / 1e6).toFixed(2)} MB`.padStart(16),
          `${(1000 * found.seconds).toFixed(2)} ms`.padStart(9),
          (rate / GIGA).toFixed(2).padStart(8),
          `${(100 * share).toFixed(1)} %`.padStart(11),
          ((found.seconds * 1e9) / found.rows / (LANES / 4)).toFixed(1).padStart(20),
        ].join(' '),
      );
  }
process.exit(0);
