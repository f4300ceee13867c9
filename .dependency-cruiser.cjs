/**
 * The arrows between the rooms (DEVELOPERS.md, "The rooms"), one named rule for each arrow that is forbidden.
 * Nuxt's auto-imports are invisible here; our own server and shared code is always imported by name (`#server/...`,
 * `#shared/...`), so nothing of ours hides behind them.
 * @type {import('dependency-cruiser').IConfiguration}
 */
const queryLibraries = '^node_modules/(drizzle-orm|pg|pg-pool)/'
const webLibraries = '^node_modules/(h3|nitropack|nuxt|ofetch|#app|#imports)(/|$)'
const screens = '^app/(pages|components|layouts|app\\.vue|error\\.vue)'

module.exports = {
  forbidden: [
    // From the screen inwards
    {
      name: 'screens-take-only-types-from-presenters',
      comment: 'A page knows the server by the shape of its answers, nothing more; code of the server in the browser leaks queries, secrets and weight.',
      severity: 'error',
      from: { path: '^app/' },
      to: { path: '^server/', pathNot: '^server/presenters/' },
    },
    {
      name: 'screens-do-not-run-presenters',
      comment: 'The shape of an answer is a type. A presenter that runs in the browser would need the row, and the row stays on the server.',
      severity: 'error',
      from: { path: '^app/' },
      to: { path: '^server/presenters/', dependencyTypesNot: ['type-only'] },
    },
    {
      name: 'screens-do-not-query',
      comment: 'Pages and components ask a composable; two places that fetch one thing show two answers.',
      severity: 'error',
      from: { path: screens },
      to: { path: `${queryLibraries}|^node_modules/(ofetch|@tanstack/vue-query)/` },
    },
    {
      name: 'components-stay-in-their-area',
      comment: 'A component uses its own area and ui; another area\'s inner parts may change without asking. A page puts areas side by side.',
      severity: 'error',
      from: { path: '^app/components/([^/]+)/' },
      to: { path: '^app/components/', pathNot: '^app/components/(ui|$1)/' },
    },
    {
      name: 'ui-parts-are-dumb',
      comment: 'A ui part is given what it shows; one that asks for data cannot be used where that data is absent.',
      severity: 'error',
      from: { path: '^app/components/ui/' },
      to: { path: '^app/composables/use[A-Za-z]*(Queries|Draft|Search)\\.ts$' },
    },
    {
      name: 'composables-do-not-know-components',
      comment: 'Behaviour that knows its looks cannot be shared by two screens.',
      severity: 'error',
      from: { path: '^app/(composables|stores|utils)/' },
      to: { path: '^app/(components|pages|layouts)/' },
    },
    {
      name: 'stores-hold-no-server-data',
      comment: 'A store keeps what the screen itself made (filters, unsent drafts, theme); answers of the server live in the query cache alone.',
      severity: 'error',
      from: { path: '^app/stores/' },
      to: { path: '^node_modules/@tanstack/vue-query/|^app/composables/use[A-Za-z]*Queries\\.ts$' },
    },

    // The server, from the address to the row
    {
      name: 'handlers-do-not-query',
      comment: 'A handler says who calls, parses, asks one service, presents. A query there escapes scope, policy, transaction and audit.',
      severity: 'error',
      from: { path: '^server/api/' },
      to: { path: `^server/db/|${queryLibraries}` },
    },
    {
      name: 'handlers-do-not-send',
      comment: 'What leaves the machine is a row first (a message, an alert), so that it is sent once and can be proved.',
      severity: 'error',
      from: { path: '^server/api/' },
      to: { path: '^server/gateways/' },
    },
    {
      name: 'jobs-do-not-query',
      comment: 'A job is a wake-up: it calls a service that can run twice, late, and on two machines. Only its connection comes from db/client.',
      severity: 'error',
      from: { path: '^server/jobs/' },
      to: { path: `^server/db/|^server/gateways/|${queryLibraries}`, pathNot: '^server/db/client\\.ts$', dependencyTypesNot: ['type-only'] },
    },
    {
      name: 'services-know-nothing-of-http',
      comment: 'A service is called by a handler, a job and a test alike; the request stays outside.',
      severity: 'error',
      from: { path: '^server/services/' },
      to: { path: `${webLibraries}|^server/(api|routes|middleware|plugins|utils)/` },
    },
    {
      name: 'services-do-not-present',
      comment: 'What a caller may see is decided once, on the way out; a service that presents decides it in the middle.',
      severity: 'error',
      from: { path: '^server/services/' },
      to: { path: '^server/(presenters|jobs)/' },
    },
    {
      name: 'policies-do-not-query',
      comment: 'A policy answers over rows that are already loaded, so that it can be tested without a database. Types of rows are welcome.',
      severity: 'error',
      from: { path: '^server/policies/' },
      to: { path: `^server/(db|services|gateways|presenters|api|utils)/|${queryLibraries}|${webLibraries}`, dependencyTypesNot: ['type-only'] },
    },
    {
      name: 'presenters-do-not-query',
      comment: 'A presenter names the fields that leave; one that loads more cannot be read for what it leaks.',
      severity: 'error',
      from: { path: '^server/presenters/' },
      to: { path: `^server/(db|services|gateways|api|jobs)/|${queryLibraries}`, dependencyTypesNot: ['type-only'] },
    },
    {
      name: 'gateways-know-no-rows',
      comment: 'A gateway speaks to one outside system. It is handed plain values, so that a provider can be changed without touching a rule.',
      severity: 'error',
      from: { path: '^server/gateways/' },
      to: { path: `^server/(db|services|api|jobs|presenters|policies|utils)/|${queryLibraries}` },
    },
    {
      name: 'tables-know-no-services',
      comment: 'The schema lies at the bottom; what it would call from above could not be migrated alone.',
      severity: 'error',
      from: { path: '^server/db/schema/' },
      to: { path: '^server/', pathNot: '^server/db/schema/' },
    },
    {
      name: 'server-does-not-know-screens',
      comment: 'The server answers whoever asks; a screen is only one of them.',
      severity: 'error',
      from: { path: '^server/' },
      to: { path: '^app/' },
    },

    // Shared by both sides
    {
      name: 'domain-knows-only-domain',
      comment: 'A clinical rule is worked out from what it is given, on both sides and years later: no framework, no table, no contract.',
      severity: 'error',
      from: { path: '^shared/domain/' },
      to: { path: '^(app|server|mocks|scripts|tests|shared/contracts)/' },
    },
    {
      name: 'domain-uses-general-libraries-only',
      comment: 'Statistics, calendar arithmetic and the length of a text are solved problems; everything else in a rule is ours to read.',
      severity: 'error',
      from: { path: '^shared/domain/' },
      to: { path: '^node_modules/', pathNot: '^node_modules/(@types/)?(simple-statistics|jstat|temporal-polyfill|temporal-spec|sms-segments-calculator)/' },
    },
    {
      name: 'domain-runs-in-a-browser',
      comment: 'Files, sockets and random bytes of Node are absent where the sheet says what it will raise.',
      severity: 'error',
      from: { path: '^shared/' },
      to: { dependencyTypes: ['core'] },
    },
    {
      name: 'contracts-know-only-shared',
      comment: 'Both sides parse with the same schema; one that needs the server cannot be used by a form.',
      severity: 'error',
      from: { path: '^shared/contracts/' },
      to: { path: '^(app|server|mocks|scripts|tests)/' },
    },

    // The house as a whole
    {
      name: 'product-does-not-know-its-tests',
      comment: 'What is served must not carry fakes, factories or scripts.',
      severity: 'error',
      from: { path: '^(app|server|shared)/' },
      to: { path: '^(tests|mocks|scripts)/' },
    },
    {
      name: 'no-circles',
      comment: 'Two files that need each other are one file, or lack a third; types alone may point back.',
      severity: 'error',
      from: { path: '^(app|server|shared)/' },
      to: { circular: true, viaOnly: { dependencyTypesNot: ['type-only'] } },
    },
    {
      name: 'everything-resolves',
      comment: 'An import that leads nowhere fails only when the line runs; and an arrow that cannot be followed is not checked.',
      severity: 'error',
      from: { path: '^(app|server|shared|mocks|scripts)/' },
      to: { couldNotResolve: true, pathNot: '^#(imports|app|build)' },
    },
    {
      name: 'no-undeclared-packages',
      comment: 'A package that only happens to be installed is gone after the next update.',
      severity: 'error',
      from: { path: '^(server|shared)/' },
      to: { dependencyTypes: ['npm-no-pkg', 'npm-dev'], dependencyTypesNot: ['type-only'] },
    },
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '^(\\.nuxt|\\.output|\\.data|coverage|reports)/' },
    // Types count: an arrow in the wrong direction is one even when the compiler erases it.
    tsPreCompilationDeps: true,
    detectProcessBuiltinModuleCalls: true,
    webpackConfig: { fileName: 'scripts/lib/resolve-aliases.cjs' },
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'require', 'node', 'default', 'types'],
      extensions: ['.ts', '.mjs', '.js', '.cjs', '.vue', '.json'],
      mainFields: ['module', 'main', 'types'],
    },
    cache: false,
  },
}
