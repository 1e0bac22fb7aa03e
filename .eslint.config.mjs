import { readdirSync } from 'node:fs';
import importX, { createNodeResolver } from 'eslint-plugin-import-x';
import reactHooks from 'eslint-plugin-react-hooks';
import globals from 'globals';
import tseslint from 'typescript-eslint';

const features = readdirSync('src/features');
const questionsAndActs = [
  'auth',
  'intake',
  'sites',
  'audit',
  'findings',
  'caps',
  'weeks',
  'reports',
  'mail',
];

/** Who may import whom: `target` may not reach `from`. */
const zones = [
  { target: './shared', from: ['./server', './src'] },
  { target: './src', from: './server' },
  { target: './server', from: './src' },
  { target: ['./shared', './server', './src'], from: './tests' },
  { target: './server/setup', from: './server', except: ['./setup'] },
  { target: './server/methods', from: './server', except: ['./methods'] },
  { target: './server/db', from: './server', except: ['./db', './setup', './jobs/queues.ts'] },
  { target: './server/flow', from: './server', except: ['./flow', './db', './methods'] },
  ...questionsAndActs.flatMap((name) => [
    { target: `./server/${name}`, from: './server/http' },
    { target: `./server/${name}`, from: './server/jobs', except: ['./queues.ts'] },
  ]),
  { target: './server/jobs', from: './server/http' },
  { target: './src/ui', from: './src', except: ['./ui', './lib'] },
  { target: './src/lib', from: './src', except: ['./lib'] },
  { target: './src/api', from: './src', except: ['./api', './lib'] },
  { target: './src/charts', from: './src', except: ['./charts', './lib', './ui'] },
  { target: './src/features', from: './src/pages' },
  { target: ['./src/features', './src/pages'], from: './src/app', except: ['./paths.ts'] },
  ...features.map((name) => ({
    target: `./src/features/${name}`,
    from: './src/features',
    except: [`./${name}`],
  })),
];

export default tseslint.config(
  { ignores: ['dist/', 'drizzle/', '.data/', '.artifacts/', 'node_modules/'] },
  ...tseslint.configs.recommendedTypeChecked,
  {
    languageOptions: {
      parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname },
    },
    plugins: { 'import-x': importX },
    settings: {
      'import-x/resolver-next': [
        createNodeResolver({ extensions: ['.ts', '.tsx', '.mjs', '.js'] }),
      ],
      'import-x/parsers': { '@typescript-eslint/parser': ['.ts', '.tsx'] },
    },
    rules: {
      eqeqeq: 'error',
      // The router's way to go elsewhere is to throw a response.
      '@typescript-eslint/only-throw-error': [
        'error',
        { allow: [{ from: 'lib', name: 'Response' }] },
      ],
      'no-console': 'error',
      // An underscore stands for what a form of the language asks for and nothing needs.
      '@typescript-eslint/no-unused-vars': [
        'error',
        { varsIgnorePattern: '^_$', argsIgnorePattern: '^_' },
      ],
      '@typescript-eslint/consistent-type-imports': 'error',
      '@typescript-eslint/no-unnecessary-condition': 'off',
      'import-x/no-cycle': 'error',
      'import-x/no-default-export': 'error',
      'import-x/no-restricted-paths': ['error', { basePath: '.', zones }],
      'no-restricted-syntax': [
        'error',
        {
          selector: "MemberExpression[object.name='sql'][property.name='raw']",
          message: 'Values are bound; nothing is spliced into a statement.',
        },
      ],
    },
  },
  { files: ['src/**/*.{ts,tsx}'], ...reactHooks.configs.flat['recommended-latest'] },
  {
    files: ['*.config.ts', 'tests/support/global-setup.ts', '.eslint.config.mjs'],
    rules: { 'import-x/no-default-export': 'off' },
  },
  {
    files: ['tests/**/*.{ts,tsx}'],
    rules: { 'no-console': 'off', '@typescript-eslint/unbound-method': 'off' },
  },
  {
    files: ['**/*.mjs'],
    ...tseslint.configs.disableTypeChecked,
    languageOptions: { globals: globals.node, parserOptions: { projectService: false } },
  },
  {
    files: ['server/setup/*.mjs'],
    rules: {
      'no-restricted-imports': [
        'error',
        {
          patterns: [
            {
              regex: '^(?!node:|\\./)',
              message: 'It runs before there are packages: built-ins only.',
            },
          ],
        },
      ],
    },
  },
);
