import tseslint from 'typescript-eslint';

/** Types catch most mistakes; these rules catch what types let through. */
export default tseslint.config(
  { ignores: ['dist/**', 'node_modules/**', 'reports/**', 'coverage/**', '.config/**', 'test/bench/*.mjs'] },
  ...tseslint.configs.recommendedTypeChecked,
  {
    languageOptions: { parserOptions: { projectService: true } },
    rules: {
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_' }],
      '@typescript-eslint/switch-exhaustiveness-check': 'error',
      '@typescript-eslint/no-unnecessary-condition': 'off',
      'no-console': 'error',
      eqeqeq: 'error',
      'prefer-const': 'error',
    },
  },
  { files: ['src/cli/**', 'test/**'], rules: { 'no-console': 'off' } },
);
