/**
 * The steps of `npm test`: what each runs, what has to be done before it, and how its results are counted.
 */
import * as fs from 'node:fs';
import * as path from 'node:path';
import { ROOT } from './install.mjs';

/**
 * @typedef {{ passed: number, failed: number, skipped: number, notes: string[] }} Count
 * @typedef {{
 *   name: string, title: string, after?: string[], slots: number, command: string[], env?: Record<string, string>,
 *   limitMinutes?: number, report?: string, folders?: string[], needs?: ('postgres' | 'browser')[], count: (done: { code: number, output: string }, report: unknown) => Count
 * }} Step `slots`: how many of the two lanes it takes
 */

const bin = (...parts) => [process.execPath, path.join(ROOT, 'node_modules', ...parts)];
const count = (passed, failed, skipped, notes = []) => ({ passed, failed, skipped, notes });

/** A tool that either finds something wrong or does not counts as one check. */
const oneCheck = ({ code }) => count(code === 0 ? 1 : 0, code === 0 ? 0 : 1, 0);

const missingReport = () => count(0, 1, 0, ['it wrote no report']);

function relative(file) {
  return path.isAbsolute(file) ? path.relative(ROOT, file) : file;
}

/** Counts a report of Vitest: a file that failed as a whole, and an error outside of every test, count as failures too. */
export function countVitest({ code }, report) {
  if (!report || !Array.isArray(report.testResults)) return missingReport();
  const tests = report.testResults.flatMap((file) => file.assertionResults);
  const of = (...states) => tests.filter(({ status }) => states.includes(status)).length;
  const brokenFiles = report.testResults.filter(
    (file) => file.status === 'failed' && !file.assertionResults.some(({ status }) => status === 'failed'),
  );
  const notes = [
    ...tests
      .filter(({ status }) => !['passed', 'failed'].includes(status))
      .map(({ fullName, status }) => `${status}: ${fullName}`),
    ...brokenFiles.map((file) => `did not run: ${relative(file.name)}`),
  ];
  const passed = of('passed');
  let failed = of('failed') + brokenFiles.length;
  if (code !== 0 && failed === 0) {
    failed += 1;
    notes.push(`it ended with code ${code} though no test failed`);
  }
  if (passed + failed === 0) return count(0, 1, 0, ['no test was found']);
  return count(passed, failed, tests.length - passed - of('failed'), notes);
}

/** Counts a report of Playwright; a test that passed at a second try counts as failed. */
export function countPlaywright({ code }, report) {
  if (!report?.stats) return missingReport();
  const { expected, unexpected, flaky, skipped } = report.stats;
  const notes = (report.errors ?? []).map((error) => String(error.message ?? error).split('\n')[0]);
  let failed = unexpected + flaky;
  if ((code !== 0 || notes.length > 0) && failed === 0) {
    failed += 1;
    if (notes.length === 0) notes.push(`it ended with code ${code} though no test failed`);
  }
  if (expected + failed + skipped === 0) return count(0, 1, 0, ['no test was found']);
  return count(expected, failed, skipped, notes);
}

/** Number of spec files under a folder: a folder of tests without any would otherwise pass in silence. */
export function specsUnder(folder) {
  const absolute = path.join(ROOT, folder);
  if (!fs.existsSync(absolute)) return 0;
  return fs
    .readdirSync(absolute, { recursive: true, encoding: 'utf8' })
    .filter((name) => name.endsWith('.spec.ts') && !name.includes('node_modules')).length;
}

/**
 * @param {{ work: string, long: boolean, filter: string[] }} options `work`: folder for the reports
 * @returns {Step[]}
 */
export function steps({ work, long, filter }) {
  const report = (name) => path.join(work, `${name}.json`);
  const ground = report('ground');
  const ng = bin('@angular/cli/bin/ng.js');
  return [
    {
      name: 'lint',
      title: 'ESLint',
      slots: 1,
      command: [...bin('eslint/bin/eslint.js'), '.', '--max-warnings=0'],
      count: oneCheck,
    },
    {
      name: 'types',
      title: 'Types, and the rules that need them',
      slots: 1,
      command: [...bin('oxlint/bin/oxlint'), '--type-check'],
      count: oneCheck,
    },
    {
      name: 'boundaries',
      title: 'Import boundaries',
      slots: 1,
      command: [
        ...bin('dependency-cruiser/bin/dependency-cruise.mjs'),
        '--config',
        '.dependency-cruiser.cjs',
        'libs',
        'server',
        'apps/web/src',
        'tests',
        'data-demo',
      ],
      count: oneCheck,
    },
    {
      name: 'build',
      title: 'Build of server and client, with the types of the client',
      slots: 1,
      command: [process.execPath, 'tools/build.mjs', 'server', 'web'],
      count: oneCheck,
    },
    {
      name: 'web',
      title: 'Unit tests of the client',
      slots: 1,
      folders: ['apps/web/src'],
      report: report('web'),
      command: [
        ...ng,
        'test',
        '--watch=false',
        '--progress=false',
        '--reporters=json',
        '--reporters=default',
        `--output-file=${report('web')}`,
      ],
      env: { NG_CLI_ANALYTICS: 'false' },
      count: countVitest,
    },
    {
      name: 'unit',
      title: 'Unit tests of libraries and server, API and reference checks',
      // One lane, though it works with two processes: it begins while the other lane ends, and browser tests wait for both.
      slots: 1,
      // Threads and processes of the tests start from the built server.
      after: ['build'],
      folders: ['libs', 'server/src', 'tests/reference', 'tests/api'],
      needs: ['postgres'],
      report: report('unit'),
      command: [
        ...bin('vitest/vitest.mjs'),
        'run',
        ...filter,
        '--maxWorkers=3',
        '--reporter=default',
        '--reporter=json',
        `--outputFile.json=${report('unit')}`,
      ],
      env: long ? { TALLYSTONE_LONG: '1' } : {},
      limitMinutes: long ? 90 : undefined,
      count: countVitest,
    },
    {
      name: 'demo',
      title: 'Demo that the browser tests start on',
      slots: 1,
      after: ['build'],
      needs: ['postgres'],
      command: [...bin('tsx/dist/cli.mjs'), 'tests/support/lay-ground.ts', ground],
      count: oneCheck,
    },
    {
      name: 'e2e',
      title: 'End-to-end tests in the browser',
      slots: 2,
      after: ['build', 'demo'],
      folders: ['tests/e2e'],
      needs: ['postgres', 'browser'],
      report: report('e2e'),
      command: [...bin('@playwright/test/cli.js'), 'test', '--reporter=list,json'],
      env: { TALLYSTONE_E2E_GROUND: ground, PLAYWRIGHT_JSON_OUTPUT_NAME: report('e2e'), PLAYWRIGHT_SKIP_BROWSER_DOWNLOAD: '1' },
      count: countPlaywright,
    },
  ];
}
