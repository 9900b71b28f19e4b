/**
 * Times classing: every characteristic of a sample from the column store, automatically, in the product's own worker threads; then one of them anew, from
 * its fine classes, in one of these threads. Then the same through the API of the built product, which such a sample was brought into as a file: what is
 * waited for until one characteristic is classed anew, p50 and p95 of 60 requests.
 *
 *   npm run bench:binning                                      1,000,000 rows of 100 characteristics, in words
 *   npm run bench:binning -- --rows 100000 --columns 40 --json one JSON object on standard output
 *   ... --trend cross-validated                                the trend of each characteristic chosen by cross-validation
 *   ... --only threads   or   --only api                       one of the two
 */
import { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import { Generator } from '@tallystone/numeric/random/generator';
import { Sequelize } from 'sequelize';
import type { RowMonths } from '../../../server/src/replay/row-months';
import { classCharacteristics } from '../../../server/src/services/binnings/class-characteristics';
import { stopThreads, runInThread, threadCount } from '../../../server/src/threads/run-in-thread';
import { createTestDatabase } from '../../support/database';
import { reclassings, waitsOf } from '../../support/reclassing';
import { storeSample } from './store';
import { throughApi } from './through-api';

const args = process.argv.slice(2);
const option = (name: string): string | null => (args.includes(name) ? args[args.indexOf(name) + 1] : null);
const rows = Number(option('--rows') ?? 1_000_000);
const count = Number(option('--columns') ?? 100);
const json = args.includes('--json');
const trend = option('--trend') ?? 'monotone';
const only = option('--only');
if (only !== null && only !== 'threads' && only !== 'api') throw new Error('--only takes threads or api');
const constraints = AskedConstraints.parse({ trend });
const data = {
  sha256: null,
  delimiter: ',',
  encoding: 'utf-8',
  decimal: '.',
  thousands: null,
  trim: true,
  missing: ['', 'NA'],
} as const;
const say = (line: string): void => console.error(line);

const threads = only === 'api' ? null : await inThreads();
const api = only === 'threads' ? null : await throughApi(rows, count, { trend }, say);
const ms = (value: number): string => `${value.toFixed(1)} ms`;
if (json) console.log(JSON.stringify({ rows, characteristics: count, trend, threads, api }));
else {
  console.log(`${rows} rows of ${count} characteristics, trend ${trend}`);
  if (threads) {
    const { seconds, cpuSeconds, millisecondsPerCharacteristic, reclass } = threads;
    console.log(`${threads.threads} threads of one process:`);
    console.log(
      `  classed in ${seconds.toFixed(2)} s, ${ms(millisecondsPerCharacteristic)} each, ${cpuSeconds.toFixed(2)} s of processors`,
    );
    console.log(`  one anew, of ${reclassings}: p50 ${ms(reclass.p50)}, p95 ${ms(reclass.p95)}`);
  }
  if (api) {
    const steps = Object.entries(api.seconds).map(([step, seconds]) => `${step} ${seconds.toFixed(2)} s`);
    console.log('through the API of the product:');
    console.log(`  ${steps.join(', ')}`);
    console.log(`  one anew, of ${reclassings} requests: p50 ${ms(api.reclass.p50)}, p95 ${ms(api.reclass.p95)}`);
  }
}

async function inThreads() {
  const database = await createTestDatabase();
  const sequelize = new Sequelize(database.appUrl, { logging: false, dialect: 'postgres' });
  try {
    say(`storing ${rows} rows of ${count} columns`);
    const sample = await storeSample(sequelize, database.ownerUrl, rows, count);
    const asked = {
      ...sample,
      data: { ...data, missing: [...data.missing] },
      constraints,
      months: monthsAtRandom(rows),
      earlier: new Map(),
    };
    const before = process.cpuUsage();
    const began = performance.now();
    const { classed, unusable } = await classCharacteristics(sequelize, asked, {
      signal: new AbortController().signal,
      onDone: () => undefined,
    });
    const seconds = (performance.now() - began) / 1000;
    // Of this process with its threads: a machine that others work on stretches the time, not this.
    const { user, system } = process.cpuUsage(before);
    if (classed.length !== count) throw new Error(`${unusable.length} columns could not be classed: ${unusable[0]?.reason}`);
    const milliseconds: number[] = [];
    for (let turn = 0; turn < reclassings; turn++) {
      const { fine, outOfTime, months } = classed[turn % classed.length];
      const from = performance.now();
      await runInThread('binning.reclass', {
        characteristics: [{ fine, outOfTime, months: months && months.counts, constraints }],
      });
      milliseconds.push(performance.now() - from);
    }
    return {
      threads: threadCount(),
      seconds,
      cpuSeconds: (user + system) / 1e6,
      millisecondsPerCharacteristic: (1000 * seconds) / count,
      reclass: waitsOf(milliseconds),
    };
  } finally {
    await stopThreads();
    await sequelize.close();
    await database.drop();
  }
}

/** Three years of applications. */
function monthsAtRandom(count: number): RowMonths {
  const random = new Generator(3);
  const names = Array.from(
    { length: 36 },
    (_, month) => `20${22 + Math.floor(month / 12)}-${String((month % 12) + 1).padStart(2, '0')}`,
  );
  const of = new Uint16Array(new SharedArrayBuffer(2 * count));
  for (let row = 0; row < count; row++) of[row] = Math.floor(random.uniform() * names.length);
  return { of, names };
}
