// @ts-check
import withNuxt from './.nuxt/eslint.config.mjs'

/**
 * A failure is handled, passed on, or said to be harmless. A catch with nothing in it, not even the reason, hides
 * which of the three was meant.
 */
const noSilentCatch = {
  meta: { type: 'problem', schema: [], messages: { silent: 'A silent catch hides a failure. Handle it, pass it on, or say in a comment why it does no harm.' } },
  create: context => ({
    CatchClause(node) {
      if (node.body.body.length === 0 && context.sourceCode.getCommentsInside(node.body).length === 0) {
        context.report({ node: node.body, messageId: 'silent' })
      }
    },
  }),
}

const clockMessage = 'Time comes in as `now`. Only server/utils/clock.ts and app/composables/useClock.ts read the clock of the machine.'
/** The ways to read the machine's clock: every one of them makes a rule answer differently tomorrow. */
const ambientClock = [
  { selector: 'NewExpression[callee.name="Date"][arguments.length=0]', message: clockMessage },
  { selector: 'CallExpression[callee.name="Date"]', message: clockMessage },
  { selector: 'CallExpression[callee.object.name="Date"][callee.property.name="now"]', message: clockMessage },
  { selector: 'CallExpression[callee.name="dayjs"][arguments.length=0]', message: clockMessage },
  { selector: 'CallExpression[callee.object.name="dayjs"][callee.property.name="utc"][arguments.length=0]', message: clockMessage },
  { selector: 'MemberExpression[object.name="Temporal"][property.name="Now"]', message: clockMessage },
]

/** A pure rule gives the same answer to the same question, so that a decision can be worked out again years later. */
const ambientChance = [
  { selector: 'CallExpression[callee.object.name="Math"][callee.property.name="random"]', message: 'No chance in shared: a seed comes in (shared/domain/theatre/seeded-random).' },
  { selector: 'CallExpression[callee.object.name="crypto"]', message: 'No chance in shared: an id or a seed comes in.' },
  { selector: 'MemberExpression[object.name="process"]', message: 'Shared code runs in the browser too: settings come in as arguments.' },
]

export default withNuxt(
  { name: 'dawnward/ignored', ignores: ['.data/**', '.output/**', 'drizzle/meta/**', 'reports/**', 'coverage/**', '.stryker-tmp/**'] },
  {
    name: 'dawnward/everywhere',
    linterOptions: { reportUnusedDisableDirectives: 'error' },
    plugins: { dawnward: { rules: { 'no-silent-catch': noSilentCatch } } },
    rules: {
      'dawnward/no-silent-catch': 'error',
      'eqeqeq': ['error', 'always', { null: 'ignore' }],
    },
  },
  {
    name: 'dawnward/typescript',
    files: ['**/*.ts', '**/*.vue'],
    rules: { '@typescript-eslint/no-explicit-any': 'error' },
  },
  {
    name: 'dawnward/time-comes-in',
    files: ['app/**/*.{ts,vue}', 'server/**/*.ts', 'shared/**/*.ts'],
    ignores: ['server/utils/clock.ts', 'app/composables/useClock.ts'],
    rules: { 'no-restricted-syntax': ['error', ...ambientClock] },
  },
  {
    name: 'dawnward/shared-is-pure',
    files: ['shared/**/*.ts'],
    rules: { 'no-restricted-syntax': ['error', ...ambientClock, ...ambientChance] },
  },
  {
    name: 'dawnward/pages-do-not-fetch',
    files: ['app/pages/**/*.vue', 'app/components/**/*.vue', 'app/layouts/**/*.vue'],
    rules: {
      'no-restricted-syntax': ['error', ...ambientClock, {
        selector: 'CallExpression[callee.name=/^(\\$fetch|fetch|useFetch|useLazyFetch|useAsyncData|useRequestFetch)$/]',
        message: 'Pages and components never fetch. Ask a composable of the area (app/composables/use<Area>Queries).',
      }],
    },
  },
)
