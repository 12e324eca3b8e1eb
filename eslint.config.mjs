import eslint from '@eslint/js';
import angular from 'angular-eslint';
import tseslint from 'typescript-eslint';

/** Dependencies point one way: each folder names what it must not import. */
const boundary = (files, patterns) => ({
  files,
  rules: { 'no-restricted-imports': ['error', { patterns }] },
});
const ours = (names, message) => ({ group: names.flatMap((n) => [`@halfdeep/${n}`, `@halfdeep/${n}/*`]), message });

export default tseslint.config(
  {
    ignores: [
      ...['dist/', 'var/', 'node_modules/', '.angular/', 'coverage/', 'test-results/', 'playwright-report/'],
      // Compiled by AssemblyScript, and what that makes.
      ...['**/*.as.ts', 'libs/ocean/src/kernel/generated/'],
    ],
  },
  {
    files: ['**/*.ts'],
    extends: [eslint.configs.recommended, ...tseslint.configs.recommendedTypeChecked, ...tseslint.configs.stylistic],
    languageOptions: { parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname } },
    rules: {
      '@typescript-eslint/consistent-type-imports': [
        'error',
        { fixStyle: 'inline-type-imports', disallowTypeAnnotations: false },
      ],
      '@typescript-eslint/consistent-type-definitions': 'off',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      '@typescript-eslint/prefer-for-of': 'off',
      '@typescript-eslint/restrict-template-expressions': ['error', { allowNumber: true, allowBoolean: true }],
      '@typescript-eslint/unbound-method': ['error', { ignoreStatic: true }],
    },
  },
  {
    files: ['apps/web/**/*.ts'],
    extends: [...angular.configs.tsRecommended],
    processor: angular.processInlineTemplates,
    rules: {
      '@angular-eslint/component-selector': ['error', { type: 'element', prefix: 'app', style: 'kebab-case' }],
      '@angular-eslint/directive-selector': ['error', { type: 'attribute', prefix: 'app', style: 'camelCase' }],
      '@angular-eslint/prefer-on-push-component-change-detection': 'error',
    },
  },
  {
    files: ['apps/web/**/*.html'],
    extends: [...angular.configs.templateRecommended, ...angular.configs.templateAccessibility],
  },
  {
    files: ['**/*.spec.ts', 'tests/**/*.ts'],
    rules: {
      '@typescript-eslint/no-non-null-assertion': 'off',
      '@typescript-eslint/no-unsafe-assignment': 'off',
      '@typescript-eslint/no-unsafe-member-access': 'off',
      '@typescript-eslint/no-unsafe-argument': 'off',
    },
  },
  {
    files: ['**/*.mjs'],
    extends: [eslint.configs.recommended],
    languageOptions: {
      globals: {
        process: 'readonly',
        console: 'readonly',
        URL: 'readonly',
        setTimeout: 'readonly',
        clearTimeout: 'readonly',
        fetch: 'readonly',
        localStorage: 'readonly',
      },
    },
  },
  boundary(
    ['libs/ocean/**/*.ts'],
    [
      ours(['contracts', 'store', 'queue', 'api', 'web', 'worker'], 'libs/ocean uses nothing of ours.'),
      { group: ['node:*', '@angular/*', 'express', 'sequelize'], message: 'libs/ocean is pure: no I/O, no framework.' },
    ],
  ),
  boundary(
    ['libs/contracts/**/*.ts'],
    [
      ours(['store', 'queue', 'api', 'web', 'worker'], 'libs/contracts uses libs/ocean alone.'),
      { group: ['node:*'], message: 'libs/contracts runs in the browser too.' },
    ],
  ),
  boundary(
    ['libs/store/**/*.ts', 'libs/queue/**/*.ts'],
    [ours(['api', 'web', 'worker'], 'Libraries never import applications.')],
  ),
  boundary(
    ['apps/web/**/*.ts'],
    [
      ours(['store', 'queue', 'api', 'worker'], 'The client uses libs/ocean and libs/contracts alone.'),
      { group: ['node:*'], message: 'The client runs in a browser.' },
    ],
  ),
  boundary(['apps/api/**/*.ts'], [ours(['web', 'worker'], 'Applications do not import each other.')]),
  boundary(['worker/**/*.ts'], [ours(['web', 'api'], 'Applications do not import each other.')]),
);
