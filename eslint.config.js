import boundaries from 'eslint-plugin-boundaries';
import vue from 'eslint-plugin-vue';
import tseslint from 'typescript-eslint';
import { layers, policies } from './eslint.layers.js';

const code = ['**/*.ts', '**/*.vue'];

export default tseslint.config(
  { ignores: ['node_modules', 'dist', '.cache', '.data', 'coverage'] },
  { linterOptions: { reportUnusedDisableDirectives: 'error' } },
  ...tseslint.configs.recommended.map((config) => ({ ...config, files: code })),
  ...vue.configs['flat/recommended'],
  {
    files: code,
    languageOptions: {
      parserOptions: {
        parser: tseslint.parser,
        extraFileExtensions: ['.vue'],
        projectService: true,
        tsconfigRootDir: import.meta.dirname,
      },
    },
    plugins: { boundaries },
    settings: {
      'boundaries/files': layers,
      'boundaries/files-single-match': true,
      'import/resolver': {
        typescript: { alwaysTryTypes: true, noWarnOnMultipleProjects: true, project: '*/tsconfig.json' },
      },
    },
    rules: {
      'boundaries/dependencies': ['error', { default: 'disallow', policies }],
      // Knex builders are thenables: one that nobody awaits never runs.
      '@typescript-eslint/no-floating-promises': ['error', { checkThenables: true }],
      '@typescript-eslint/no-misused-promises': [
        'error',
        { checksVoidReturn: { arguments: false, attributes: false } },
      ],
      '@typescript-eslint/consistent-type-imports': 'error',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      'no-empty': ['error', { allowEmptyCatch: false }],
      'no-restricted-exports': ['error', { restrictDefaultExports: { direct: true } }],
      complexity: ['error', 12],
      'max-lines': ['error', { max: 300, skipBlankLines: false, skipComments: false }],
    },
  },
  {
    files: ['**/*.vue', 'vite.config.ts'],
    rules: { 'no-restricted-exports': 'off' },
  },
  {
    files: ['**/*.vue'],
    rules: {
      // Prettier lays templates out.
      'vue/max-attributes-per-line': 'off',
      'vue/html-indent': 'off',
      'vue/html-self-closing': 'off',
      'vue/singleline-html-element-content-newline': 'off',
      'vue/multiline-html-element-content-newline': 'off',
      'vue/html-closing-bracket-newline': 'off',
      'vue/require-default-prop': 'off',
      // A type union in a template is not a filter of Vue 2.
      'vue/no-deprecated-filter': 'off',
      'vue/no-v-html': 'error',
    },
  },
  {
    files: ['workers/engine/**/*.ts'],
    rules: {
      complexity: ['error', 20],
      'no-restricted-globals': [
        'error',
        ...[
          'console',
          'process',
          'setTimeout',
          'setInterval',
          'setImmediate',
          'queueMicrotask',
          'performance',
          'Date',
          'fetch',
          'Buffer',
        ].map((name) => ({
          name,
          message:
            'The engine is pure: the clock, timers, process and console come in as arguments or not at all.',
        })),
      ],
      'no-restricted-properties': [
        'error',
        {
          object: 'Math',
          property: 'random',
          message: 'The engine is pure: a seed comes in as an argument.',
        },
      ],
    },
  },
  {
    files: ['workers/engine/**/*.ts'],
    rules: {
      'no-restricted-imports': [
        'error',
        {
          patterns: [
            {
              regex: '^(?!\\.|mathjs$)',
              message: 'The engine is pure: no package but mathjs, no node: modules.',
            },
          ],
        },
      ],
    },
  },
  {
    files: ['server/services/**/*.ts', 'db/**/*.ts', 'shared/**/*.ts'],
    rules: {
      'no-restricted-imports': [
        'error',
        {
          paths: [
            {
              name: 'express',
              message: 'Services and below know no HTTP: leave requests and answers to the routes.',
            },
          ],
        },
      ],
    },
  },
  {
    files: ['shared/**/*.ts'],
    rules: {
      'no-restricted-imports': [
        'error',
        {
          patterns: [
            {
              regex: '^(?!\\.|@sinclair/typebox$)',
              message: 'Shared runs anywhere: TypeBox is its only package.',
            },
          ],
        },
      ],
    },
  },
  {
    // Belongs to no layer's project: checked without types.
    files: ['vite.config.ts'],
    ...tseslint.configs.disableTypeChecked,
    rules: { ...tseslint.configs.disableTypeChecked.rules, 'boundaries/dependencies': 'off' },
  },
  {
    // A declaration file describes what a package exports, its default included.
    files: ['**/*.d.ts'],
    rules: { 'no-restricted-exports': 'off' },
  },
);
