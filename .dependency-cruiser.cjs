/**
 * Which room may import which. Imports point one way:
 *   sparse <- network <- transient <- steady, design <- plant -> network,
 *   components -> stores -> sim-core/index.ts, and one worker -> sim-core/solve.ts.
 * Type-only imports count too: a type that points the wrong way is a design that does.
 */

/** Inside sim-core, a room sees itself and the rooms named, nothing else. */
const room = (name, ...sees) => ({
  name: `${name}-sees-${['only-itself', ...sees].join('-')}`,
  comment: `sim-core/${name} builds on ${sees.join(' and ') || 'nothing'}.`,
  severity: 'error',
  from: { path: `^sim-core/${name}/` },
  to: { path: '^sim-core/', pathNot: `^sim-core/(${[name, ...sees].join('|')})/` },
});

module.exports = {
  forbidden: [
    room('sparse'),
    room('network', 'sparse'),
    room('transient', 'network', 'sparse'),
    room('steady', 'transient', 'network', 'sparse'),
    room('design'),
    room('plant', 'design', 'network'),
    {
      name: 'sim-core-stands-alone',
      comment:
        'The engine runs in a worker, in Node and in tests: no app, no package, no built-in.',
      severity: 'error',
      from: { path: '^sim-core/' },
      to: { pathNot: '^sim-core/' },
    },
    {
      name: 'two-doors',
      comment: 'The app enters the engine by index.ts or solve.ts.',
      severity: 'error',
      from: { path: '^(app|e2e)/' },
      to: { path: '^sim-core/', pathNot: '^sim-core/(index|solve)\\.ts$' },
    },
    {
      name: 'solve-in-the-worker-only',
      comment: 'A solve on the page would freeze it: only the worker and the command line call it.',
      severity: 'error',
      from: { pathNot: '^(app/run/worker\\.ts$|app/headless/|tests/)' },
      to: { path: '^sim-core/solve\\.ts$' },
    },
    {
      name: 'light-door',
      comment: 'The page loads index.ts: it must not pull the solver in behind it.',
      severity: 'error',
      from: { path: '^sim-core/index\\.ts$' },
      to: {
        path: '^sim-core/(sparse|network|transient|steady)/',
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'worker-behind-the-session',
      comment: 'Components talk to the session and the run store, which own the worker.',
      severity: 'error',
      from: { path: '^app/', pathNot: '^app/run/' },
      to: { path: '^app/run/worker|/comlink/' },
    },
    {
      name: 'document-knows-no-run',
      comment: 'A design is edited, kept and linked whether or not anything runs.',
      severity: 'error',
      from: { path: '^app/document/' },
      to: { path: '^app/(run|power-path|lanes|ledger|pages)/' },
    },
    {
      name: 'headless-sees-documents-only',
      comment: 'The command line has no page: of the app it knows the document and its quantities.',
      severity: 'error',
      from: { path: '^app/headless/' },
      to: { path: '^app/', pathNot: '^app/(headless|document|quantity)/' },
    },
    {
      name: 'page-without-node',
      comment: 'What the browser loads must not reach for Node.',
      severity: 'error',
      from: { path: '^app/', pathNot: '^app/(headless/|start\\.mjs$)' },
      to: { dependencyTypes: ['core'] },
    },
    {
      name: 'page-without-headless',
      comment: 'The command line is an entry of its own.',
      severity: 'error',
      from: { path: '^app/', pathNot: '^app/(headless/|start\\.mjs$)' },
      to: { path: '^app/headless/' },
    },
    {
      name: 'sources-know-no-tests',
      severity: 'error',
      from: { path: '^(app|sim-core)/' },
      to: { path: '^(tests|e2e)/' },
    },
    {
      name: 'page-without-build-tools',
      comment: 'A package that reaches the reader belongs in dependencies.',
      severity: 'error',
      from: { path: '^app/', pathNot: '^app/(headless/|start\\.mjs$)' },
      to: {
        dependencyTypes: ['npm-dev', 'npm-no-pkg', 'npm-unknown'],
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'no-cycles',
      severity: 'error',
      from: {},
      to: { circular: true },
    },
    {
      name: 'no-orphans',
      comment: 'A file nothing imports and that imports nothing is a left-over.',
      severity: 'error',
      from: {
        orphan: true,
        pathNot: '\\.d\\.ts$|^app/main\\.tsx$|^tests/|^e2e/',
      },
      to: {},
    },
    {
      name: 'resolvable',
      severity: 'error',
      from: {},
      to: { couldNotResolve: true },
    },
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    tsPreCompilationDeps: true,
    tsConfig: { fileName: 'tsconfig.json' },
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'browser', 'node', 'default', 'types'],
      extensions: ['.ts', '.tsx', '.mjs', '.js', '.json', '.d.ts'],
    },
  },
};
