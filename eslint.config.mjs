// @ts-check
import withNuxt from './.nuxt/eslint.config.mjs'

/** Files whose tools ask for a default export. Everywhere else exports are named. */
const defaultExports = [
  '*.config.{ts,mjs}',
  'app/**/*.vue',
  'app/{plugins,middleware,layouts,pages}/**',
  'app/router.options.ts',
  'server/{api,routes,middleware,plugins}/**',
  'scripts/nuxt-server-extras.ts',
  'tests/**/global-setup.ts',
  'server/error-handler.ts',
  'workers/**',
]

export default withNuxt(
  { ignores: ['drizzle/**', 'coverage/**', 'tests/engine/reference/**/*.json'] },
  {
    rules: {
      eqeqeq: ['error', 'always', { null: 'ignore' }],
      'no-console': 'error',
      'no-var': 'error',
      'prefer-const': 'error',
      'object-shorthand': 'error',
      'no-eval': 'error',
      'no-implied-eval': 'error',
      'no-new-func': 'error',
      'max-lines': ['error', { max: 400 }],
      'no-restricted-syntax': [
        'error',
        {
          selector: "CallExpression[callee.name='parseFloat']",
          message: 'parseFloat("1,5") is 1; use the checked readers.',
        },
        { selector: 'ForInStatement', message: 'for..in walks inherited keys; use Object.entries or for..of.' },
      ],
    },
  },
  {
    files: ['**/*.{ts,mts,vue}'],
    rules: {
      '@typescript-eslint/consistent-type-imports': ['error', { fixStyle: 'inline-type-imports' }],
      '@typescript-eslint/no-explicit-any': 'error',
    },
  },
  {
    // Loops over typed arrays in shared/ index what they sized; elsewhere a missing value is a case to handle.
    files: ['{app,server,workers}/**/*.{ts,vue}'],
    rules: { '@typescript-eslint/no-non-null-assertion': 'error' },
  },
  {
    files: ['**/*.{ts,mts,mjs,vue}'],
    ignores: defaultExports,
    rules: {
      'no-restricted-exports': [
        'error',
        { restrictDefaultExports: { direct: true, named: true, defaultFrom: true, namedFrom: true } },
      ],
    },
  },
  {
    // Same numbers in, same numbers out: no clock, no unseeded chance, nothing of the environment.
    files: ['shared/engine/**/*.ts'],
    rules: {
      'no-restricted-globals': [
        'error',
        'performance',
        'process',
        'window',
        'document',
        'self',
        'globalThis',
        'setTimeout',
        'fetch',
      ],
      'no-restricted-properties': [
        'error',
        {
          object: 'Math',
          property: 'random',
          message: 'The engine is deterministic; take a seeded source as an argument.',
        },
        { object: 'Date', property: 'now', message: 'The engine has no clock.' },
      ],
    },
  },
  {
    files: ['app/**/*.vue'],
    rules: {
      'vue/multi-word-component-names': 'off',
      'vue/no-v-html': 'error',
      'vue/component-api-style': ['error', ['script-setup']],
      'vue/block-order': ['error', { order: ['script', 'template', 'style'] }],
      // Layout is prettier's.
      'vue/html-self-closing': 'off',
    },
  },
  { files: ['scripts/**', 'tests/**'], rules: { 'no-console': 'off' } },
)
