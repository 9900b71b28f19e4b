import js from '@eslint/js';
import angular from 'angular-eslint';
import prettier from 'eslint-config-prettier/flat';
import tseslint from 'typescript-eslint';

/** A rule switched off in place has to say why: `// eslint-disable-next-line name -- reason`. */
const reasons = {
  rules: {
    'disable-with-reason': {
      meta: {
        type: 'problem',
        schema: [],
        messages: { missing: 'Say why the rule does not apply here: {{directive}} name -- reason' },
      },
      create: (context) => ({
        Program() {
          for (const comment of context.sourceCode.getAllComments()) {
            const directive = /^\s*((?:es|ox)lint-disable(?:-next-line|-line)?)\b/.exec(comment.value)?.[1];
            if (directive && !/\s--\s+\S/.test(comment.value))
              context.report({ loc: comment.loc, messageId: 'missing', data: { directive } });
          }
        },
      }),
    },
  },
};

/** Names of a browser or of Node.js. Code under libs runs in both, so it may use neither; numbers know no clock and no chance either. */
const hostNames = [
  'window', 'document', 'navigator', 'location', 'localStorage', 'sessionStorage', 'indexedDB', 'fetch', 'XMLHttpRequest', 'HTMLElement', 'Worker', 'postMessage', 'self',
  'requestAnimationFrame', 'process', 'Buffer', 'require', 'module', 'global', '__dirname', '__filename', 'setTimeout', 'setInterval', 'setImmediate', 'queueMicrotask',
  'performance', 'console', 'crypto',
]; // prettier-ignore
const noHost = hostNames.map((name) => ({ name, message: 'Code in libs/ belongs to neither the browser nor Node.js.' }));

/** What holds for every TypeScript file; the rules that need types stand in .oxlintrc.json. */
const strictness = {
  '@typescript-eslint/no-explicit-any': 'error',
  '@typescript-eslint/consistent-type-imports': ['error', { fixStyle: 'inline-type-imports', disallowTypeAnnotations: false }],
  '@typescript-eslint/no-unused-vars': [
    'error',
    { argsIgnorePattern: '^_', varsIgnorePattern: '^_', caughtErrors: 'none', ignoreRestSiblings: true },
  ],
  eqeqeq: ['error', 'always', { null: 'ignore' }],
  'no-console': 'error',
  'no-warning-comments': ['error', { terms: ['todo', 'fixme', 'xxx', 'hack'], location: 'start' }],
  'reasons/disable-with-reason': 'error',
};

export default tseslint.config(
  {
    ignores: [
      'dist/',
      'node_modules/',
      '.angular/',
      '.tallystone/',
      'coverage/',
      'test-results/',
      'playwright-report/',
      '**/fixtures/**',
      // AssemblyScript: its compiler and the tests of its bits look after it.
      '**/*.assembly.ts',
    ],
  },
  { linterOptions: { reportUnusedDisableDirectives: 'error' }, plugins: { reasons } },

  // --- Plain JavaScript: tools and configuration
  {
    files: ['**/*.{js,mjs,cjs}'],
    extends: [js.configs.recommended],
    languageOptions: {
      ecmaVersion: 2023,
      sourceType: 'module',
      globals: Object.fromEntries(
        [
          'process',
          'console',
          'Buffer',
          'URL',
          'setTimeout',
          'clearTimeout',
          'setInterval',
          'clearInterval',
          'fetch',
          'AbortSignal',
          'performance',
          'structuredClone',
        ].map((name) => [name, 'readonly']),
      ),
    },
    rules: {
      'no-unused-vars': ['error', { argsIgnorePattern: '^_', caughtErrors: 'none' }],
      eqeqeq: ['error', 'always', { null: 'ignore' }],
      'reasons/disable-with-reason': 'error',
    },
  },
  { files: ['**/*.cjs'], languageOptions: { sourceType: 'commonjs', globals: { module: 'writable', require: 'readonly' } } },

  // --- TypeScript everywhere
  {
    files: ['**/*.ts', '**/*.mts'],
    extends: [js.configs.recommended, tseslint.configs.recommended],
    rules: strictness,
  },
  // --- Libraries: neither browser nor Node.js
  { files: ['libs/**/*.ts'], ignores: ['**/*.spec.ts'], rules: { 'no-restricted-globals': ['error', ...noHost] } },
  {
    files: ['libs/numeric/**/*.ts'],
    ignores: ['**/*.spec.ts'],
    rules: {
      'no-restricted-globals': ['error', ...noHost, { name: 'Date', message: 'Numbers know no clock.' }],
      'no-restricted-properties': [
        'error',
        { object: 'Math', property: 'random', message: 'Use a seeded generator: results have to be repeatable.' },
      ],
    },
  },

  // --- Command-line entries and tests speak to the console
  { files: ['server/src/cli/**/*.ts', 'data-demo/**/*.ts', 'tests/**/*.ts'], rules: { 'no-console': 'off' } },
  // Bodies of HTTP answers and mocks of streams come untyped; what a test expects of them is checked when it runs.
  {
    files: ['**/*.spec.ts', 'tests/**/*.ts', '**/testing/**/*.ts'],
    rules: {
      '@typescript-eslint/no-non-null-assertion': 'off',
    },
  },
  {
    files: ['**/*.spec.ts'],
    rules: {
      'no-restricted-syntax': [
        'error',
        {
          selector:
            'CallExpression > MemberExpression[property.name=/^(only|skip|todo|fixme|skipIf|runIf)$/][object.name=/^(it|test|describe|suite)$/]',
          message: 'A test runs, always and with the others.',
        },
      ],
    },
  },

  // --- Client
  {
    files: ['apps/web/src/**/*.ts'],
    extends: [angular.configs.tsRecommended],
    processor: angular.processInlineTemplates,
    rules: {
      '@angular-eslint/component-selector': ['error', { type: 'element', prefix: 'ts', style: 'kebab-case' }],
      '@angular-eslint/directive-selector': ['error', { type: 'attribute', prefix: 'ts', style: 'camelCase' }],
      '@angular-eslint/prefer-on-push-component-change-detection': 'error',
      '@angular-eslint/prefer-inject': 'error',
      '@angular-eslint/prefer-output-readonly': 'error',
      // A browser has no log but this one.
      'no-console': ['error', { allow: ['error', 'warn'] }],
      '@typescript-eslint/no-extraneous-class': 'off',
    },
  },
  {
    files: ['apps/web/src/**/*.ts'],
    ignores: ['**/*.spec.ts', '**/testing/**', '**/data/**', 'apps/web/src/app/core/**'],
    rules: {
      '@typescript-eslint/no-restricted-imports': [
        'error',
        {
          patterns: [
            {
              group: ['zod', 'zod/*', '@tallystone/contracts/*/schema', '@tallystone/contracts/*/endpoints'],
              allowTypeImports: true,
              message: 'Schemas are heavy: they are loaded by data/ code, and elsewhere their types alone.',
            },
          ],
        },
      ],
    },
  },
  {
    files: ['apps/web/src/**/*.html'],
    extends: [angular.configs.templateRecommended, angular.configs.templateAccessibility],
    rules: {
      '@angular-eslint/template/prefer-control-flow': 'error',
      '@angular-eslint/template/no-inline-styles': ['error', { allowNgStyle: false, allowBindToStyle: true }],
      '@angular-eslint/template/no-duplicate-attributes': ['error', { ignore: ['class'] }],
      '@angular-eslint/template/button-has-type': 'error',
    },
  },

  prettier,
);
