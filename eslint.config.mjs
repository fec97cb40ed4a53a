import withNuxt from './.nuxt/eslint.config.mjs'

const engineMath = ['exp', 'log', 'pow', 'log1p', 'expm1', 'log2', 'log10', 'sin', 'cos', 'tan', 'asin', 'acos', 'atan',
  'atan2', 'sinh', 'cosh', 'tanh', 'hypot', 'cbrt', 'random']

/** Folders and what may not be imported there; DEVELOPERS.md draws the directions. */
const border = (files, patterns, message) => ({
  files,
  rules: { 'no-restricted-imports': ['error', { patterns: [{ regex: patterns, message }] }] },
})

export default withNuxt(
  {
    rules: {
      'max-lines': ['error', { max: 250, skipBlankLines: true, skipComments: true }],
      'max-lines-per-function': ['error', { max: 50, skipBlankLines: true, skipComments: true }],
      'vue/multi-word-component-names': 'off',
      'vue/max-attributes-per-line': 'off',
      'vue/singleline-html-element-content-newline': 'off',
      '@typescript-eslint/no-explicit-any': 'error',
    },
  },
  { files: ['tests/**', 'scripts/**', '**/*.vue'], rules: { 'max-lines-per-function': 'off' } },
  {
    files: ['shared/**/*.ts'],
    rules: {
      'no-restricted-globals': ['error', 'Date', 'process', 'fetch', 'window', 'document', 'setTimeout', 'setInterval', 'console'],
      'no-restricted-properties': ['error', ...engineMath.map(property => ({ object: 'Math', property, message: 'Engines differ: take @stdlib/math-base-special-*, or the seeded generator.' }))],
      'no-restricted-syntax': ['error',
        { selector: 'BinaryExpression[operator=\'**\']', message: 'Engines differ: write the product, or take @stdlib/math-base-special-pow.' },
        { selector: 'BinaryExpression[operator=\'-\'][left.value=1][right.type=\'CallExpression\'][right.callee.name=/Cdf$/]', message: 'Upper tails are computed, never subtracted: take the Sf.' },
      ],
    },
  },
  border(['shared/**/*.ts'], '^(node:|#|~|h3|vue|drizzle|nuxt|.*/server/|.*/app/)', 'shared/ is pure and imports relatively.'),
  border(['app/**/*.{ts,vue}'], '(^node:|/server/|^drizzle|^h3$|^postgres)', 'app/ reaches the server only through the contract.'),
  border(['server/services/**', 'server/workers/**', 'server/database/**', 'server/readers/**', 'server/memo/**', 'server/mail/**', 'server/jobs/**', 'server/cli/**'],
    '^(#imports|#auth|~)', 'These rooms run outside Nitro too: import explicitly.'),
)
