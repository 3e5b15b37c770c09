import withNuxt from './.nuxt/eslint.config.mjs'

/** The arrows of DEVELOPERS.md: what a layer must not import. */
const forbid = (...patterns) => ({ 'no-restricted-imports': ['error', { patterns: patterns.map(([group, message]) => ({ group, message })) }] })

export default withNuxt(
  { ignores: ['.output*/**', '.data/**', 'coverage/**', 'fixtures/**'] },
  {
    rules: {
      '@typescript-eslint/no-explicit-any': 'error',
      'no-console': ['error', { allow: ['error'] }],
      'no-empty': 'error',
      'max-lines': ['error', { max: 350, skipBlankLines: true, skipComments: true }],
      'vue/multi-word-component-names': 'off',
      'vue/no-multiple-template-root': 'off',
      'vue/html-self-closing': 'off',
      'vue/first-attribute-linebreak': 'off',
      'vue/max-attributes-per-line': 'off',
      'vue/singleline-html-element-content-newline': 'off',
    },
  },
  { files: ['scripts/**', 'tests/**', 'bench/**'], rules: { 'no-console': 'off' } },
  { files: ['shared/**'], rules: forbid([['vue', 'nuxt*', 'h3', 'knex', 'mysql2', 'node:*', '**/server/**', '#imports'], 'shared/ runs anywhere: no framework, no Node, no database']) },
  { files: ['shared/science/**'], rules: forbid([['../../*', '#shared/**', 'vue', 'h3', 'knex', 'node:*'], 'shared/science imports only itself'], [['../../../**'], 'shared/science imports only itself']) },
  { files: ['server/api/**'], rules: forbid([['**/queries/**', 'knex'], 'routes call services; SQL lives in server/queries']) },
  { files: ['server/services/**'], rules: forbid([['**/server/api/**', 'h3'], 'services know nothing of HTTP']) },
  { files: ['pages/**', 'components/**', 'stores/**', 'composables/**'], rules: forbid([['**/server/**'], 'the browser talks to the server over HTTP only']) },
)
