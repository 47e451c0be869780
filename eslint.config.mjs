import expo from 'eslint-config-expo/flat.js';
import prettier from 'eslint-config-prettier/flat';

const typescript = ['**/*.ts', '**/*.tsx'];

export default [
  { ignores: ['node_modules/**', 'dist/**', 'data/**', '.expo/**', 'expo-env.d.ts'] },
  ...expo,
  {
    files: typescript,
    languageOptions: { parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname } },
    rules: {
      '@typescript-eslint/no-explicit-any': 'error',
      '@typescript-eslint/no-non-null-assertion': 'error',
      '@typescript-eslint/no-floating-promises': 'error',
      '@typescript-eslint/no-misused-promises': ['error', { checksVoidReturn: { attributes: false } }],
      '@typescript-eslint/switch-exhaustiveness-check': ['error', { considerDefaultExhaustiveForUnions: true }],
      '@typescript-eslint/consistent-type-imports': 'error',
      '@typescript-eslint/ban-ts-comment': 'error',
      'no-empty': ['error', { allowEmptyCatch: false }],
    },
  },
  {
    rules: {
      // The TypeScript compiler resolves imports, with the package.json subpaths that this rule does not know.
      'import/no-unresolved': 'off',
      'no-console': 'error',
      eqeqeq: 'error',
    },
  },
  {
    files: ['app/**', 'components/**', 'hooks/**', 'lib/**', 'server/**', 'broker/**', 'shared/**', 'simulators/**'].flatMap((folder) => [
      `${folder}/*.ts`,
      `${folder}/*.tsx`,
    ]),
    ignores: ['server/main.ts', 'simulators/main.ts', 'simulators/demo-fleet.ts'],
    rules: {
      'no-restricted-properties': [
        'error',
        { object: 'process', property: 'env', message: 'The environment is read once, in server/config.ts by server/main.ts.' },
        { object: 'process', property: 'exit', message: 'Only an entry point ends the process.' },
      ],
    },
  },
  {
    files: ['app/**/*.tsx', 'components/**/*.ts', 'components/**/*.tsx', 'hooks/**/*.ts', 'hooks/**/*.tsx'],
    rules: {
      'no-restricted-syntax': [
        'error',
        { selector: 'Literal[value=/^#(?:[0-9a-fA-F]{3,4}|[0-9a-fA-F]{6}|[0-9a-fA-F]{8})$/]', message: 'Colours live in constants/ only.' },
        { selector: 'Literal[value=/^(?:rgb|hsl)a?\\(/]', message: 'Colours live in constants/ only.' },
      ],
    },
  },
  {
    files: ['shared/**/*.ts'],
    rules: {
      'no-restricted-globals': ['error', 'process', 'window', 'document', 'localStorage', 'fetch'],
      'no-restricted-properties': ['error', { object: 'Date', property: 'now', message: 'Pure code gets the time as an argument.' }],
    },
  },
  {
    files: ['scripts/**', 'tests/**', 'server/main.ts', 'simulators/main.ts', 'simulators/demo-fleet.ts', '*.config.*'],
    rules: { 'no-console': 'off' },
  },
  prettier,
];
