/**
 * Which way imports point (DEVELOPERS.md, "Boundaries"). Every rule is an error.
 *
 * `spec` files may reach further than the code beside them: they build what they test.
 */
const spec = '\\.spec\\.ts$|/testing/';
const except = (...folders) => folders.join('|');

/** @type {import('dependency-cruiser').IConfiguration} */
module.exports = {
  forbidden: [
    {
      name: 'no-cycles',
      comment: 'Two files that need each other are one file, or hide a third. Types alone do no harm.',
      severity: 'error',
      from: {},
      to: { circular: true, viaOnly: { dependencyTypesNot: ['type-only'] } },
    },
    {
      name: 'resolvable',
      comment: 'An import that leads nowhere.',
      severity: 'error',
      from: {},
      to: { couldNotResolve: true },
    },
    {
      name: 'shipped-code-needs-no-development-package',
      comment:
        'npm installs development packages for work on the project; what is served must do without them. The thread entries outside the bundle are for work on the project.',
      severity: 'error',
      from: { path: '^(server/src|libs)/', pathNot: except('^server/src/threads/(helper-)?entry\\.mjs$', spec) },
      to: { dependencyTypes: ['npm-dev', 'npm-no-pkg', 'npm-unknown'], dependencyTypesNot: ['type-only'] },
    },

    // --- Between the parts
    {
      name: 'numeric-imports-nothing',
      comment: 'Numbers stay pure: nothing of the project, no Node.js, of packages the numerical ones alone.',
      severity: 'error',
      from: { path: '^libs/numeric/', pathNot: spec },
      to: { pathNot: '^libs/numeric/|node_modules/(ml-matrix|ml-logistic-regression|@stdlib)/' },
    },
    {
      name: 'independent-shares-no-solver',
      comment: 'The second solver proves the first only while they share nothing but types and the check of what they are given.',
      severity: 'error',
      from: { path: '^libs/numeric/independent/', pathNot: spec },
      to: { path: '^libs/numeric/', pathNot: '^libs/numeric/(independent/|errors|penalised/(problem|validation)\\.ts)' },
    },
    {
      name: 'contracts-import-types-of-numeric-alone',
      severity: 'error',
      from: { path: '^libs/contracts/', pathNot: spec },
      to: { path: '^libs/numeric/', dependencyTypesNot: ['type-only'] },
    },
    {
      name: 'contracts-stand-alone',
      severity: 'error',
      from: { path: '^libs/contracts/', pathNot: spec },
      to: { pathNot: '^libs/(contracts|numeric)/|node_modules/(zod|canonicalize)/' },
    },
    {
      name: 'web-never-server',
      severity: 'error',
      from: { path: '^apps/' },
      to: { path: '^(server|tools|tests|data-demo)/' },
    },
    {
      name: 'server-never-web',
      severity: 'error',
      from: { path: '^server/' },
      to: { path: '^apps/' },
    },
    {
      name: 'server-never-tests-or-tools',
      severity: 'error',
      from: { path: '^(server/src|libs)/', pathNot: spec },
      to: { path: '^(tests|tools)/' },
    },
    {
      name: 'web-uses-no-node',
      severity: 'error',
      from: { path: '^apps/web/src/', pathNot: spec },
      to: { dependencyTypes: ['core'] },
    },

    // --- In the client
    {
      name: 'features-never-import-each-other',
      comment: 'What two features share moves to ui/ or core/.',
      severity: 'error',
      from: { path: '^apps/web/src/app/features/([^/]+)/' },
      to: { path: '^apps/web/src/app/features/([^/]+)/', pathNot: '^apps/web/src/app/features/$1/' },
    },
    {
      name: 'feature-data-reaches-core-alone',
      severity: 'error',
      from: { path: '^apps/web/src/app/features/([^/]+)/data/', pathNot: spec },
      to: { path: ['^apps/web/src/app/(ui|shell)/', '^apps/web/src/app/features/[^/]+/(pages|ui)/'] },
    },
    {
      name: 'ui-never-reaches-data-or-pages',
      severity: 'error',
      from: { path: ['^apps/web/src/app/ui/', '^apps/web/src/app/features/[^/]+/ui/'], pathNot: spec },
      to: {
        path: ['^apps/web/src/app/shell/', '^apps/web/src/app/features/[^/]+/(data|pages)/'],
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'shared-ui-and-core-know-no-feature',
      severity: 'error',
      from: { path: '^apps/web/src/app/(ui|core)/' },
      to: { path: '^apps/web/src/app/(features|shell)/' },
    },
    {
      name: 'core-draws-nothing',
      severity: 'error',
      from: { path: '^apps/web/src/app/core/', pathNot: spec },
      to: { path: '^apps/web/src/app/ui/' },
    },

    // --- In the server
    {
      name: 'only-routes-know-express',
      severity: 'error',
      from: { path: '^server/src/', pathNot: except('^server/src/(routes/|app\\.ts|main\\.ts)', spec) },
      to: {
        path: 'node_modules/(@types/)?(express|express-session|express-rate-limit|helmet|multer|passport|passport-local|connect-pg-simple|pino-http|swagger-ui-express)/',
      },
    },
    {
      name: 'routes-reach-policies-and-services',
      severity: 'error',
      from: { path: '^server/src/routes/', pathNot: spec },
      to: {
        path: '^server/src/(models|migrations|storage|documents|jobs/handlers|cli|demo)/',
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'services-reach-down',
      severity: 'error',
      from: { path: '^server/src/services/', pathNot: spec },
      to: {
        path: '^server/src/(routes|migrations|documents|jobs/handlers|cli|demo|app\\.ts|main\\.ts)',
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'handlers-reach-services-documents-and-mail',
      severity: 'error',
      from: { path: '^server/src/jobs/handlers/', pathNot: spec },
      to: {
        path: '^server/src/(routes|policies|models|migrations|cli|demo|app\\.ts|main\\.ts)',
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'job-definitions-know-no-work',
      severity: 'error',
      from: { path: '^server/src/jobs/definitions/', pathNot: spec },
      to: { path: '^server/src/(routes|policies|services|models|storage|documents|mail|jobs/handlers)/' },
    },
    {
      name: 'policies-decide-and-do-nothing-else',
      severity: 'error',
      from: { path: '^server/src/policies/', pathNot: spec },
      to: { path: '^server/src/(routes|services|storage|documents|mail|jobs|migrations)/', dependencyTypesNot: ['type-only'] },
    },
    {
      name: 'models-and-migrations-stand-alone',
      comment: 'The list of queues is the exception: a migration makes them, as the owner.',
      severity: 'error',
      from: { path: '^server/src/(models|migrations)/', pathNot: spec },
      to: {
        path: '^server/src/(routes|policies|services|storage|documents|mail|jobs)/',
        pathNot: '^server/src/jobs/(queues\\.ts|definitions/)',
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'documents-never-query',
      severity: 'error',
      from: { path: '^server/src/documents/', pathNot: spec },
      to: {
        path: '^server/src/(routes|policies|services|models|storage|database|mail|jobs)/|node_modules/(sequelize|pg|pg-boss)/',
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'replay-needs-no-server',
      comment: 'A specification is replayed from the command line with no server and no database.',
      severity: 'error',
      from: { path: '^server/src/(replay|reading)/', pathNot: spec },
      to: {
        path: '^server/src/(routes|policies|services|models|migrations|storage|database|documents|mail|jobs|config)/|node_modules/(sequelize|pg|pg-boss|express)/',
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'threads-touch-no-database',
      severity: 'error',
      from: { path: '^server/src/threads/', pathNot: spec },
      to: {
        path: '^server/src/(routes|policies|services|models|migrations|database)/|node_modules/(sequelize|pg|pg-boss|express)/',
        dependencyTypesNot: ['type-only'],
      },
    },
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '^(dist|coverage|\\.angular)/' },
    tsPreCompilationDeps: true,
    tsConfig: { fileName: 'tsconfig.json' },
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'node', 'default', 'types'],
      mainFields: ['module', 'main', 'types'],
    },
  },
};
