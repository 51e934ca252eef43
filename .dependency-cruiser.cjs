// One direction of imports (DEVELOPERS.md, "Layers"). `npm run lint` runs it; tests/support/lint.test.ts plants a violation.
const layer = (name, from, allowed, comment) => ({
  name,
  comment,
  severity: 'error',
  from: { path: from, pathNot: '\\.test\\.tsx?$' },
  to: { path: '^(src|db|workers|tests)/', pathNot: [...allowed, '\\.(css|svg)$'] },
});

module.exports = {
  forbidden: [
    {
      name: 'no-circular',
      severity: 'error',
      from: {},
      to: { circular: true, viaOnly: { dependencyTypesNot: ['type-only'] } },
    },
    { name: 'not-to-unresolvable', severity: 'error', from: {}, to: { couldNotResolve: true, pathNot: '^astro(:|$)' } },
    layer('domain-imports-itself', '^src/domain/', ['^src/domain/'], 'domain decides; it knows nothing else'),
    layer(
      'engine-imports-network',
      '^src/engine/',
      ['^src/engine/', '^src/domain/network/', '^src/domain/limits\\.ts'],
      'engine computes',
    ),
    layer('formats-import-domain', '^src/formats/', ['^src/formats/', '^src/domain/'], 'formats read and write'),
    layer('contracts-import-domain', '^src/contracts/', ['^src/contracts/', '^src/domain/'], 'contracts speak'),
    layer('db-imports-domain', '^db/', ['^db/', '^src/domain/'], 'db remembers'),
    layer(
      'archives-import-pure-code',
      '^src/archives/',
      ['^src/archives/', '^src/domain/', '^src/engine/', '^src/formats/', '^src/charts/', '^src/contracts/'],
      'archives deliver; they know no database and no server',
    ),
    layer(
      'workers-import-engine',
      '^workers/',
      ['^workers/', '^src/engine/', '^src/domain/', '^src/archives/'],
      'workers carry',
    ),
    layer(
      'server-imports-below',
      '^src/server/',
      [
        '^src/server/',
        '^src/domain/',
        '^src/engine/',
        '^src/formats/',
        '^src/archives/',
        '^src/contracts/',
        '^src/paths\\.ts',
        '^db/',
        '^workers/protocol\\.ts',
        '^src/charts/',
      ],
      'server does',
    ),
    layer(
      'components-import-pure-code',
      '^src/components/',
      [
        '^src/components/',
        '^src/domain/',
        '^src/engine/',
        '^src/contracts/',
        '^src/formats/',
        '^src/paths\\.ts',
        '^src/charts/',
        '^src/styles/',
      ],
      'components show; they never reach server, db or workers',
    ),
    layer(
      'charts-import-pure-code',
      '^src/charts/',
      ['^src/charts/', '^src/domain/', '^src/engine/', '^src/contracts/'],
      'chart options are pure',
    ),
    layer(
      'pages-do-not-touch-db',
      '^src/(pages|layouts|middleware\\.ts)',
      ['^src/'],
      'pages call services, never the database',
    ),
    {
      name: 'pure-code-has-no-node',
      comment: 'domain, engine and contracts run in the browser too',
      severity: 'error',
      from: { path: '^src/(domain|engine|contracts|charts)/', pathNot: '\\.test\\.tsx?$' },
      to: { dependencyTypes: ['core'] },
    },
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '(^|/)(node_modules|dist|\\.astro)/' },
    tsPreCompilationDeps: true,
    tsConfig: { fileName: 'tsconfig.json' },
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'node', 'types', 'default', 'require'],
      extensions: ['.ts', '.tsx', '.mjs', '.js', '.astro', '.json'],
    },
  },
};
