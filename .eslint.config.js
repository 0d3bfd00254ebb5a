import tseslint from 'typescript-eslint';
import { chanceBans, clockBans, importEffectBans, orderBans, shellBans } from './.ci/bans.mjs';

/** Rules of the linter's core that typescript-eslint does not bring along. */
const core = {
  curly: ['error', 'multi-line'],
  eqeqeq: 'error',
  'no-constant-condition': ['error', { checkLoops: 'allExceptWhileTrue' }],
  'no-dupe-else-if': 'error',
  'no-empty': 'error',
  'no-fallthrough': 'error',
  'no-loss-of-precision': 'error',
  'no-self-assign': 'error',
  'no-self-compare': 'error',
  'no-unsafe-finally': 'error',
  'no-unsafe-optional-chaining': 'error',
  'no-useless-escape': 'error',
  'no-warning-comments': ['error', { terms: ['todo', 'fixme'], location: 'anywhere' }],
  'max-len': ['error', { code: 100, ignoreUrls: true }],
};

const sizes = (file, fn) => ({
  'max-lines': ['error', { max: file, skipBlankLines: true, skipComments: true }],
  'max-lines-per-function': ['error', { max: fn, skipBlankLines: true, skipComments: true }],
});

const typed = {
  '@typescript-eslint/ban-ts-comment': ['error', { 'ts-expect-error': true, 'ts-ignore': true }],
  '@typescript-eslint/consistent-type-imports': 'error',
  '@typescript-eslint/switch-exhaustiveness-check': [
    'error',
    { considerDefaultExhaustiveForUnions: true },
  ],
  '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_' }],
  '@typescript-eslint/no-confusing-void-expression': ['error', { ignoreArrowShorthand: true }],
  '@typescript-eslint/restrict-template-expressions': [
    'error',
    { allowNumber: true, allowBoolean: true },
  ],
  '@typescript-eslint/no-invalid-void-type': ['error', { allowAsThisParameter: true }],
  // The compiler types list[i] as always there, so this rule would forbid the guards we want.
  '@typescript-eslint/no-unnecessary-condition': 'off',
  // A synchronous form of an asynchronous interface is `async` without `await`.
  '@typescript-eslint/require-await': 'off',
};

const banned = (...groups) => ({ 'no-restricted-syntax': ['error', ...groups.flat()] });

export default tseslint.config(
  { ignores: ['dist/', 'var/', 'coverage/', 'node_modules/'] },
  {
    // Exceptions are made here, in sight, never in the file that wants one.
    linterOptions: { noInlineConfig: true, reportUnusedDisableDirectives: 'error' },
    rules: { ...core, ...sizes(300, 50) },
  },
  {
    files: ['**/*.ts'],
    extends: [tseslint.configs.strictTypeChecked],
    languageOptions: {
      parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname },
    },
    rules: typed,
  },
  {
    files: ['src/**/*.ts'],
    rules: banned(clockBans, chanceBans, shellBans, orderBans, importEffectBans),
  },
  {
    files: ['src/clock/clock.ts'],
    rules: banned(orderBans, importEffectBans),
  },
  {
    files: ['src/cli/**/*.ts'],
    rules: banned(clockBans, chanceBans, orderBans, importEffectBans),
  },
  {
    files: ['src/cli/main.ts'],
    rules: banned(clockBans, chanceBans, orderBans),
  },
  {
    // A describe block is one function, and a test may read the clock or wait for a process.
    files: ['test/**/*.ts'],
    rules: {
      ...sizes(400, 300),
      ...banned(chanceBans),
      // expect(port.method) names a method without calling it.
      '@typescript-eslint/unbound-method': 'off',
    },
  },
);
