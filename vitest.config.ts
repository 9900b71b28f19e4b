import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

const at = (path: string): string => fileURLToPath(new URL(path, import.meta.url));

/** Long corpora (`*.long.spec.ts`) run with `npm run test:long` only. */
const long = process.env['TALLYSTONE_LONG'] === '1';

/** Unit tests of libs and server, and the reference checks. Web tests run through the Angular builder, browser tests through Playwright. */
export default defineConfig({
  resolve: {
    alias: [
      // Threads and processes start from the built server.
      { find: /^(?:\.\.\/)+running\/entry-files$/, replacement: at('./tests/support/built-entry-files.ts') },
      { find: /^@tallystone\/numeric$/, replacement: at('./libs/numeric/index.ts') },
      { find: /^@tallystone\/numeric\/(.*)$/, replacement: `${at('./libs/numeric')}/$1` },
      { find: /^@tallystone\/contracts\/(.*)$/, replacement: `${at('./libs/contracts')}/$1` },
    ],
  },
  test: {
    include: [
      'libs/**/*.spec.ts',
      'server/**/*.spec.ts',
      'data-demo/**/*.spec.ts',
      'tests/{reference,api,faults,support}/**/*.spec.ts',
    ],
    globalSetup: ['./tests/support/built-server.ts'],
    exclude: ['**/node_modules/**', ...(long ? [] : ['**/*.long.spec.ts'])],
    // One process for many files, which shares what they import: importing took longer than testing. Each file opens and closes what it uses.
    isolate: false,
    // Less is copied from young space to young space: a fortieth of the processor time of all tests.
    execArgv: ['--max-semi-space-size=32'],
    passWithNoTests: false,
    testTimeout: 30_000,
    hookTimeout: 60_000,
  },
});
