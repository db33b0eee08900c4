import js from '@eslint/js';
import { defineConfig, globalIgnores } from 'eslint/config';
import prettier from 'eslint-config-prettier';
import reactHooks from 'eslint-plugin-react-hooks';
import tseslint from 'typescript-eslint';
import { arrows } from './.lint/arrows.mjs';

const ground = ['shared/limits', 'shared/contracts', 'shared/lattice', 'shared/algebra'];
const become = ['shared/maps', 'shared/effective', 'shared/typeset'];
const judged = [...become, 'shared/spectra', 'shared/language', ...ground];
const nodePackages = ['*', 'node:'];
const features = ['src/hand', 'src/reading', 'src/api', 'src/components', 'shared/contracts', 'shared/notebook'];
const page = ['src/features', 'src/reading', 'src/hand', 'src/api', 'src/components', 'shared/contracts'];

/**
 * The allowed arrows: one row is one zone, and what is not listed is an error (DEVELOPERS.md, "Arrows").
 * `may`: folders or files that the zone may import; `types`: the same, types only; `never`: exceptions to `may`;
 * `packages`: npm packages, `*` for any, `node:` for the built-in modules. `*` in a path makes one zone of each name.
 */
export const table = {
  // ground
  'shared/limits': {},
  'shared/contracts': { packages: ['zod'] },
  'shared/lattice': { may: ['shared/limits'] },
  grammar: { packages: ['nearley', 'moo'] },
  'shared/algebra/numbers': { may: ['shared/limits'] },
  'shared/algebra/f2': { may: ['shared/limits'] },
  'shared/algebra/pauli': {
    may: ['shared/limits', 'shared/lattice', 'shared/algebra/numbers', 'shared/algebra/f2'],
  },
  'shared/algebra/finite': { may: ['shared/limits', 'shared/lattice', 'shared/algebra'] },
  'shared/notebook': { may: ['shared/contracts'] },
  'shared/checker': { types: ['shared/contracts/certificate'] },
  // what was said, and the numbers of a finite model
  'shared/language': { may: ['grammar', ...ground], never: ['shared/algebra/finite'], packages: ['nearley'] },
  'shared/spectra': { may: ['shared/limits', 'shared/lattice', 'shared/algebra'] },
  // what becomes what, and how it reads
  'shared/maps': { may: ['shared/language', ...ground] },
  'shared/effective': { may: ['shared/language', ...ground] },
  'shared/typeset': { may: ['shared/language', ...ground, 'grammar/words'] },
  // what is true, and how we know
  'shared/audits': { may: judged },
  // front doors
  'shared/derivation': { may: ['shared/audits', ...judged], never: ['shared/spectra/solvers'] },
  'shared/repairs': { may: ['shared/audits', ...judged], never: ['shared/spectra/solvers'] },
  'shared/exports': {
    may: [
      'shared/notebook',
      'shared/contracts',
      'shared/typeset',
      'shared/language/values',
      'shared/algebra',
      'shared/spectra/hamiltonian',
    ],
  },
  // the server's frame
  'server/settings': { packages: nodePackages },
  'server/rights': { may: ['shared/contracts'] },
  'server/db': { may: ['server/rights', 'server/settings', 'shared/contracts'], packages: nodePackages },
  'server/middleware': { may: ['server/db', 'server/settings', 'shared/contracts'], packages: nodePackages },
  'server/evaluation': {
    may: [
      'shared/derivation',
      'shared/repairs',
      'shared/spectra/kernel',
      'shared/contracts',
      'server/db',
      'server/settings',
    ],
    packages: nodePackages,
  },
  'server/mail': { may: ['server/settings'], packages: nodePackages },
  'server/live': { may: ['server/settings', 'server/db'], packages: nodePackages },
  'server/page': {},
  'server/fakes': { may: ['server/settings', 'server/page'], packages: nodePackages },
  'server/catalogue': { may: ['server/settings', 'shared/notebook', 'shared/contracts'], packages: nodePackages },
  'server/services': {
    may: [
      'server/db',
      'server/evaluation',
      'server/mail',
      'server/live',
      'server/catalogue',
      'shared/notebook',
      'shared/exports',
      'shared/contracts',
    ],
    packages: nodePackages,
  },
  'server/routes': {
    may: ['server/services', 'server/middleware', 'server/live', 'server/page', 'shared/contracts'],
    packages: nodePackages,
  },
  'server/program': { may: ['server/settings'], packages: nodePackages },
  'server/app': { may: ['server'], packages: nodePackages },
  'server/index': { may: ['server'], packages: nodePackages },
  'server/worker': { may: ['server'], packages: nodePackages },
  'server/commands': { may: ['server'], packages: nodePackages },
  'server/commands/report': { may: ['server', 'shared/derivation', 'shared/contracts'], packages: nodePackages },
  'server/commands/check': { may: ['shared/checker', 'server/commands'], packages: nodePackages },
  // the client's frame
  'src/components': { packages: ['*'] },
  'src/api': { may: ['shared/contracts'], packages: ['*'] },
  'src/reading': { may: ['src/worker/messages', 'shared/notebook', 'shared/contracts'], packages: ['*'] },
  'src/hand': { may: ['src/reading'], packages: ['*'] },
  'src/features/*': { may: features, packages: ['*'] },
  'src/features/plate': { may: [...features, 'shared/lattice/drawing'], packages: ['*'] },
  'src/features/writing': { may: [...features, 'grammar/words', 'src/worker/messages'], packages: ['*'] },
  'src/routes': { may: page, packages: ['*'] },
  'src/routes/guide': { may: [...page, 'src/routes', 'shared/language/reference'], packages: ['*'] },
  'src/App': { may: ['src/routes', ...page], packages: ['*'] },
  'src/main': { may: ['src/App', 'src/api', 'src/components'], packages: ['*'] },
  'src/worker/messages': { may: ['shared/contracts'] },
  'src/worker': {
    may: [
      'shared/contracts',
      'shared/derivation',
      'shared/repairs',
      'shared/language/assist',
      'shared/typeset',
      'shared/exports',
      'shared/checker',
      'shared/spectra/kernel',
    ],
    packages: ['*'],
  },
};

/** Names that the engine must not know: whatever belongs to a browser, to Node, to the clock or to chance. */
const outside = [
  ...['window', 'document', 'navigator', 'location', 'localStorage', 'sessionStorage', 'indexedDB', 'fetch', 'self'],
  ...['postMessage', 'Worker', 'requestAnimationFrame', 'process', 'Buffer', 'require', '__dirname', 'global'],
  ...['setTimeout', 'setInterval', 'setImmediate', 'queueMicrotask', 'Date', 'performance', 'crypto', 'console'],
];

const environment = {
  selector: "MemberExpression[object.name='process'][property.name='env']",
  message: 'Settings are parsed once, in server/settings.ts; take them from there.',
};

export default defineConfig(
  globalIgnores([
    'dist',
    'coverage',
    'drizzle',
    '**/*.grammar.ts',
    'shared/spectra/kernel/assembly',
    'tests/support/arrows/**',
  ]),
  js.configs.recommended,
  tseslint.configs.recommendedTypeChecked,
  {
    languageOptions: {
      parserOptions: {
        projectService: { allowDefaultProject: ['eslint.config.js'] },
        tsconfigRootDir: import.meta.dirname,
      },
    },
    linterOptions: { reportUnusedDisableDirectives: 'error' },
    rules: {
      eqeqeq: ['error', 'always', { null: 'ignore' }],
      'no-eval': 'error',
      'no-restricted-syntax': ['error', environment],
      '@typescript-eslint/consistent-type-imports': 'error',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      '@typescript-eslint/restrict-template-expressions': ['error', { allowNumber: true, allowBoolean: true }],
      // Repeated squaring and its kin begin with `let power = this`.
      '@typescript-eslint/no-this-alias': 'off',
      // Handlers may be async: React and Express 5 both take care of what they return.
      '@typescript-eslint/no-misused-promises': ['error', { checksVoidReturn: false }],
    },
  },
  {
    files: ['{grammar,shared,server,src}/**/*.{ts,tsx,mjs}'],
    plugins: { house: { rules: { arrows } } },
    rules: { 'house/arrows': ['error', table] },
  },
  {
    files: ['{grammar,shared}/**/*.ts'],
    rules: {
      'no-restricted-globals': [
        'error',
        ...outside.map((name) => ({ name, message: 'The engine knows no frame, clock or chance; pass it in.' })),
      ],
      'no-restricted-properties': [
        'error',
        { object: 'Math', property: 'random', message: 'The engine knows no chance; take a seed.' },
      ],
    },
  },
  {
    files: ['src/**/*.{ts,tsx}', 'tests/**/*.tsx'],
    extends: [reactHooks.configs.flat.recommended],
  },
  {
    // The one place that reads the environment, and the commands that start others with it.
    files: ['server/settings.ts', 'server/commands/**', 'tests/**', '*.config.*'],
    rules: { 'no-restricted-syntax': 'off' },
  },
  {
    files: ['**/*.{mjs,js}'],
    extends: [tseslint.configs.disableTypeChecked],
    languageOptions: {
      globals: Object.fromEntries(
        [
          'process',
          'console',
          'URL',
          'Buffer',
          'setTimeout',
          'clearTimeout',
          'setInterval',
          'fetch',
          'AbortSignal',
        ].map((name) => [name, 'readonly']),
      ),
    },
    rules: { '@typescript-eslint/consistent-type-imports': 'off' },
  },
  prettier,
);
