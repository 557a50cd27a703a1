import js from '@eslint/js';
import globals from 'globals';
import reactHooks from 'eslint-plugin-react-hooks';
import tseslint from 'typescript-eslint';
import { importDirection } from './scripts/lint/import-direction.mjs';

const processEnv = {
  selector: "MemberExpression[object.name='process'][property.name='env']",
  message:
    'Only server/config/ (and scripts/lib/settings.mjs for the start scripts) reads process.env. Take the value from the config that is passed in.',
};
const ownClock = [
  {
    selector: "CallExpression[callee.object.name='Date'][callee.property.name='now']",
    message: 'The clock is passed in: take it from server/lib/clock.ts.',
  },
  {
    selector: "NewExpression[callee.name='Date'][arguments.length=0]",
    message: 'The clock is passed in: take it from server/lib/clock.ts.',
  },
];
const noConditions = {
  selector: "Property[key.name='where']",
  message: 'Routes ask server/queries/ and server/services/; conditions on tables belong there.',
};
/** Packages that a room may not use, with the room where such work belongs. */
const notHere = (...entries) => ({
  'no-restricted-imports': [
    'error',
    { paths: entries.map(([name, message]) => ({ name, message })) },
  ],
});

export default tseslint.config(
  { ignores: ['dist/', '.data/', 'node_modules/'] },
  js.configs.recommended,
  tseslint.configs.recommendedTypeChecked,
  {
    languageOptions: {
      parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname },
    },
    linterOptions: { reportUnusedDisableDirectives: 'error' },
    plugins: { house: { rules: { 'import-direction': importDirection } } },
    rules: {
      'house/import-direction': 'error',
      '@typescript-eslint/consistent-type-imports': 'error',
      '@typescript-eslint/no-unused-vars': [
        'error',
        { argsIgnorePattern: '^_', varsIgnorePattern: '^_', ignoreRestSiblings: true },
      ],
      '@typescript-eslint/switch-exhaustiveness-check': [
        'error',
        { considerDefaultExhaustiveForUnions: true },
      ],
      '@typescript-eslint/restrict-template-expressions': ['error', { allowNumber: true }],
      '@typescript-eslint/no-misused-promises': [
        'error',
        { checksVoidReturn: { arguments: false, attributes: false } },
      ],
      eqeqeq: ['error', 'always', { null: 'ignore' }],
      'no-console': 'error',
      'no-restricted-syntax': ['error', processEnv],
    },
  },
  {
    files: ['server/**/*.ts'],
    languageOptions: { globals: globals.node },
    rules: { 'no-restricted-syntax': ['error', processEnv, ...ownClock] },
  },
  {
    files: ['server/lib/clock.ts'],
    rules: { 'no-restricted-syntax': ['error', processEnv] },
  },
  {
    files: ['server/config/**'],
    rules: { 'no-restricted-syntax': ['error', ...ownClock] },
  },
  {
    files: ['server/routes/**/*.ts'],
    rules: {
      'no-restricted-syntax': ['error', processEnv, ...ownClock, noConditions],
      ...notHere([
        'sequelize',
        'Routes ask server/queries/ and server/services/; Sequelize belongs there.',
      ]),
    },
  },
  {
    files: ['server/{presenters,policies,mail,contract,domain}/**/*.ts'],
    rules: notHere(
      [
        'sequelize',
        'This room is free of the database: server/queries/ and server/services/ ask it.',
      ],
      ['express', 'This room knows nothing of HTTP: server/routes/ and server/middleware/ do.'],
    ),
  },
  {
    files: ['server/{services,queries,projections,models}/**/*.ts'],
    rules: notHere([
      'express',
      'This room knows nothing of HTTP: server/routes/ and server/middleware/ do.',
    ]),
  },
  {
    files: ['src/**/*.{ts,tsx}'],
    languageOptions: { globals: globals.browser },
    plugins: { 'react-hooks': reactHooks },
    rules: {
      ...reactHooks.configs.recommended.rules,
      // Warns of libraries that the React compiler skips; this client is not compiled by it.
      'react-hooks/incompatible-library': 'off',
      // The hooks of form and table libraries hand out bound functions typed as methods.
      '@typescript-eslint/unbound-method': 'off',
    },
  },
  {
    files: ['tests/**/*.{ts,tsx}'],
    rules: {
      'no-console': 'off',
      // expect(spy.method) and supertest bodies are read untyped; a wrong shape fails the test itself.
      '@typescript-eslint/unbound-method': 'off',
      '@typescript-eslint/no-unsafe-assignment': 'off',
      '@typescript-eslint/no-unsafe-member-access': 'off',
      '@typescript-eslint/no-unsafe-argument': 'off',
      '@typescript-eslint/no-unsafe-return': 'off',
      '@typescript-eslint/no-unsafe-call': 'off',
    },
  },
  {
    files: ['bench/**/*.ts'],
    rules: { 'no-console': 'off' },
  },
  {
    files: ['**/*.{js,mjs,cjs}'],
    extends: [tseslint.configs.disableTypeChecked],
    languageOptions: { globals: globals.node },
    rules: { 'no-console': 'off' },
  },
  {
    files: ['scripts/lib/settings.mjs'],
    rules: { 'no-restricted-syntax': 'off' },
  },
  {
    files: ['**/*.cjs'],
    languageOptions: { sourceType: 'commonjs' },
    rules: { '@typescript-eslint/no-require-imports': 'off' },
  },
);
