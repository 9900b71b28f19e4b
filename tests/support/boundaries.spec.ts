import { execFile } from 'node:child_process';
import { mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';

const root = fileURLToPath(new URL('../..', import.meta.url));

/** One file per forbidden import, with the rule that has to object; those without a rule are allowed. */
const imports: readonly (readonly [file: string, imported: string, rule?: string])[] = [
  ['libs/numeric/reads-files.ts', 'node:fs', 'numeric-imports-nothing'],
  ['libs/numeric/knows-contracts.ts', '@tallystone/contracts/fits/schema', 'numeric-imports-nothing'],
  ['libs/numeric/matrix.ts', 'ml-matrix'],
  ['libs/numeric/independent/borrows.ts', '../penalised/solver', 'independent-shares-no-solver'],
  ['libs/numeric/independent/checks.ts', '../penalised/validation'],
  ['libs/contracts/fits/runs-numbers.ts', '@tallystone/numeric', 'contracts-import-types-of-numeric-alone'],
  ['server/src/services/fits/knows-web.ts', '../../../../apps/web/src/app/core/session', 'server-never-web'],
  ['server/src/services/fits/knows-routes.ts', '../../routes/fits', 'services-reach-down'],
  ['server/src/services/fits/knows-express.ts', 'express', 'only-routes-know-express'],
  ['server/src/services/fits/knows-numbers.ts', '@tallystone/numeric'],
  ['server/src/routes/fits/knows-models.ts', '../../models/fit', 'routes-reach-policies-and-services'],
  ['server/src/models/knows-services.ts', '../services/fits/knows-numbers', 'models-and-migrations-stand-alone'],
  ['server/src/jobs/handlers/knows-models.ts', '../../models/fit', 'handlers-reach-services-documents-and-mail'],
  ['server/src/documents/queries.ts', '../models/fit', 'documents-never-query'],
  ['server/src/replay/knows-database.ts', 'sequelize', 'replay-needs-no-server'],
  ['apps/web/src/app/core/knows-server.ts', '../../../../../server/src/models/fit', 'web-never-server'],
  ['apps/web/src/app/features/binning/pages/knows-fits.ts', '../../model-fitting/data/fits', 'features-never-import-each-other'],
  ['apps/web/src/app/features/binning/ui/knows-data.ts', '../data/binnings', 'ui-never-reaches-data-or-pages'],
  ['apps/web/src/app/features/binning/data/knows-ui.ts', '../ui/table', 'feature-data-reaches-core-alone'],
  ['apps/web/src/app/features/binning/pages/allowed.ts', '../data/binnings'],
  ['apps/web/src/app/ui/knows-feature.ts', '../features/binning/ui/table', 'shared-ui-and-core-know-no-feature'],
];

const targets = [
  'libs/numeric/index.ts',
  'libs/numeric/penalised/solver.ts',
  'libs/numeric/penalised/validation.ts',
  'libs/contracts/fits/schema.ts',
  'server/src/routes/fits/index.ts',
  'server/src/models/fit.ts',
  'apps/web/src/app/core/session.ts',
  'apps/web/src/app/features/model-fitting/data/fits.ts',
  'apps/web/src/app/features/binning/data/binnings.ts',
  'apps/web/src/app/features/binning/ui/table.ts',
];

interface Violation {
  readonly from: string;
  readonly rule: { readonly name: string };
}

describe('import boundaries', () => {
  const folder = mkdtempSync(join(tmpdir(), 'tallystone-boundaries-'));
  let violations: readonly Violation[] = [];

  beforeAll(async () => {
    const write = (file: string, text: string): void => {
      mkdirSync(dirname(join(folder, file)), { recursive: true });
      writeFileSync(join(folder, file), text);
    };
    for (const file of targets) write(file, 'export const value = 1;\n');
    for (const [file, imported] of imports)
      write(file, `import * as imported from '${imported}';\nexport const used = imported;\n`);
    write('libs/numeric/one.ts', `import { b } from './other';\nexport const a = (): number => b;\n`);
    write('libs/numeric/other.ts', `import { a } from './one';\nexport const b = 1;\nexport const c = a;\n`);
    symlinkSync(join(root, 'node_modules'), join(folder, 'node_modules'));
    symlinkSync(join(root, 'package.json'), join(folder, 'package.json'));
    symlinkSync(join(root, 'tsconfig.json'), join(folder, 'tsconfig.json'));
    const cruise = join(root, 'node_modules', 'dependency-cruiser', 'bin', 'dependency-cruise.mjs');
    const output = await new Promise<string>((resolve) => {
      // It ends with the number of violations as its exit code, so an error is what is hoped for here.
      execFile(
        process.execPath,
        [cruise, '--config', join(root, '.dependency-cruiser.cjs'), '--output-type', 'json', 'libs', 'server', 'apps'],
        { cwd: folder, maxBuffer: 1 << 26 },
        (_error, stdout) => resolve(stdout),
      );
    });
    violations = (JSON.parse(output) as { summary: { violations: Violation[] } }).summary.violations;
  });
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  const rulesAgainst = (file: string): string[] => violations.filter(({ from }) => from === file).map(({ rule }) => rule.name);

  it.each(imports.filter(([, , rule]) => rule))('%s may not import %s', (file = '', _imported, rule = '') => {
    expect(rulesAgainst(file)).toContain(rule);
  });

  it.each(imports.filter(([, , rule]) => !rule))('%s may import %s', (file = '') => {
    expect(rulesAgainst(file)).toEqual([]);
  });

  it('two files may not need each other', () => {
    expect([...rulesAgainst('libs/numeric/one.ts'), ...rulesAgainst('libs/numeric/other.ts')]).toContain('no-cycles');
  });
});
