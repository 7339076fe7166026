import js from '@eslint/js';
import prettier from 'eslint-config-prettier';
import svelte from 'eslint-plugin-svelte';
import globals from 'globals';
import ts from 'typescript-eslint';
import svelteConfig from './svelte.config.js';

/**
 * The floors of the house, lowest first. Imports go strictly down; each floor lists what it may NOT reach. Regular
 * expressions are used because the rule's globs give false alarms on negated patterns. A path is written as
 * `$lib/x` or relative: `lib('x')` matches both.
 */
const lib = (/** @type {string} */ names) => `^(\\$lib/|(\\.\\./)+|\\./(.*/)?(\\.\\./)+)(${names})(/|$)`;
const PURE = 'spectra, identity and domain run the same in browser and server:';
const PURE_PACKAGES = '^(?!\\.{1,2}/|\\$lib/|ml-|zod$|zod/|@stdlib/)';
const SRC_ONLY = {
  regex: '^(\\.\\./)+(tests|reference|scripts)(/|$)',
  message: 'Sources do not import tests, reference or scripts.'
};

/**
 * The two rules that keep a floor: what it may not import, in value or type.
 * @param {string[]} files @param {{ regex: string, message: string }[]} patterns @param {string[]} [ignores]
 */
const floor = (files, patterns, ignores = []) => ({
  files,
  ignores,
  rules: { '@typescript-eslint/no-restricted-imports': ['error', { patterns: [SRC_ONLY, ...patterns] }] }
});

const ROLES = '/^(operator|method_owner|approver|auditor|administrator)$/';
const ROLE_MESSAGE =
  "Ask can(user, 'lot.release') instead of comparing a role's name: domain/roles.ts alone does that.";
const ROLE_COMPARISONS = [
  `BinaryExpression[operator=/^[!=]==?$/] > Literal[value=${ROLES}]`,
  `SwitchCase > Literal.test[value=${ROLES}]`,
  `CallExpression[callee.property.name=/^(includes|indexOf|has)$/] > Literal.arguments[value=${ROLES}]`
].map((selector) => ({ selector, message: ROLE_MESSAGE }));

const CLOCK_MESSAGE = `${PURE} the time is an argument.`;
const CHANCE_MESSAGE = `${PURE} random numbers and ids are arguments.`;
const NO_CLOCK_NO_CHANCE = [
  { selector: "NewExpression[callee.name='Date'][arguments.length=0]", message: CLOCK_MESSAGE },
  { selector: "CallExpression[callee.name='Date']", message: CLOCK_MESSAGE },
  { selector: "MemberExpression[object.name='Date'][property.name='now']", message: CLOCK_MESSAGE },
  { selector: "MemberExpression[object.name='Math'][property.name='random']", message: CHANCE_MESSAGE },
  { selector: 'MemberExpression[property.name=/^(randomUUID|getRandomValues)$/]', message: CHANCE_MESSAGE },
  { selector: "MetaProperty[meta.name='import']", message: `${PURE} no import.meta.` }
];
const IMPURE_GLOBALS = [
  'Buffer',
  'process',
  'performance',
  'global',
  'require',
  '__dirname',
  'window',
  'document'
];
IMPURE_GLOBALS.push(
  'navigator',
  'localStorage',
  'sessionStorage',
  'fetch',
  'setTimeout',
  'setInterval',
  'setImmediate'
);

const TRANSACTION = {
  selector: "CallExpression[callee.property.name='transaction']",
  message: 'Only commands and platform open transactions.'
};
const STATEMENTS = {
  selector: 'CallExpression[callee.property.name=/^(select|selectDistinct|insert|execute)$/]',
  message: 'Routes ask queries and commands; they write no statements of their own.'
};

const PURE_FLOORS = ['src/lib/spectra/**/*.ts', 'src/lib/identity/**/*.ts', 'src/lib/domain/**/*.ts'];
const SERVER_ROUTES = ['src/routes/**/*.server.ts', 'src/routes/**/+server.ts', 'src/hooks.server.ts'];

export default ts.config(
  {
    ignores: [
      'build/',
      '.svelte-kit/',
      'node_modules/',
      'data/',
      'drizzle/',
      'coverage/',
      'test-results/',
      'static/'
    ]
  },
  js.configs.recommended,
  ...ts.configs.recommended,
  ...svelte.configs.recommended,
  prettier,
  ...svelte.configs.prettier,
  {
    languageOptions: { globals: { ...globals.node, ...globals.browser } },
    rules: {
      // TypeScript itself finds names that are not defined, and knows the generated types.
      'no-undef': 'off',
      eqeqeq: ['error', 'always'],
      'no-console': 'off',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      '@typescript-eslint/consistent-type-imports': [
        'error',
        { fixStyle: 'separate-type-imports', disallowTypeAnnotations: false }
      ]
    }
  },
  {
    files: ['**/*.svelte', '**/*.svelte.ts'],
    languageOptions: {
      parserOptions: { extraFileExtensions: ['.svelte'], parser: ts.parser, svelteConfig }
    },
    rules: {
      // The application is served at the root of its address; links are plain paths.
      'svelte/no-navigation-without-resolve': 'off',
      // It takes the words that explain an ignored warning for warnings; svelte-check reports those that matter.
      'svelte/no-unused-svelte-ignore': 'off'
    }
  },
  {
    // A promise that nobody waits for would write outside its transaction or fail unheard.
    files: ['src/lib/server/**/*.ts', ...SERVER_ROUTES],
    languageOptions: { parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname } },
    rules: {
      '@typescript-eslint/no-floating-promises': 'error',
      '@typescript-eslint/await-thenable': 'error',
      '@typescript-eslint/no-misused-promises': 'error'
    }
  },

  {
    files: ['src/**'],
    ignores: ['src/lib/domain/roles.ts'],
    rules: { 'no-restricted-syntax': ['error', ...ROLE_COMPARISONS] }
  },
  {
    files: PURE_FLOORS,
    rules: {
      'no-restricted-globals': [
        'error',
        ...IMPURE_GLOBALS.map((name) => ({ name, message: `${PURE} no ${name}.` }))
      ],
      'no-restricted-syntax': ['error', ...NO_CLOCK_NO_CHANCE, ...ROLE_COMPARISONS]
    }
  },
  {
    files: ['src/lib/domain/roles.ts'],
    rules: { 'no-restricted-syntax': ['error', ...NO_CLOCK_NO_CHANCE] }
  },
  {
    files: ['src/lib/server/queries/**'],
    rules: { 'no-restricted-syntax': ['error', TRANSACTION, ...ROLE_COMPARISONS] }
  },
  {
    files: ['src/routes/**'],
    rules: { 'no-restricted-syntax': ['error', TRANSACTION, ...ROLE_COMPARISONS] }
  },
  {
    files: SERVER_ROUTES,
    rules: { 'no-restricted-syntax': ['error', TRANSACTION, STATEMENTS, ...ROLE_COMPARISONS] }
  },
  { files: ['**/*.cjs'], rules: { '@typescript-eslint/no-require-imports': 'off' } },

  floor(
    ['src/lib/spectra/**'],
    [
      {
        regex: lib('identity|domain|server|ui|routes'),
        message: 'spectra is the lowest floor: it imports only ml-*, @stdlib and zod.'
      },
      { regex: PURE_PACKAGES, message: `${PURE} only ml-*, @stdlib and zod.` }
    ]
  ),
  floor(
    ['src/lib/identity/**'],
    [
      { regex: lib('domain|server|ui|routes'), message: 'identity imports only spectra.' },
      { regex: PURE_PACKAGES, message: `${PURE} only ml-*, @stdlib and zod.` }
    ]
  ),
  floor(
    ['src/lib/domain/**'],
    [
      { regex: lib('server|ui|routes'), message: 'domain imports only identity and spectra.' },
      { regex: PURE_PACKAGES, message: `${PURE} only ml-*, @stdlib and zod.` }
    ]
  ),
  floor(
    ['src/lib/ui/**'],
    [
      { regex: lib('server|routes'), message: 'ui imports domain, identity and spectra, never the server.' },
      { regex: '^(node:|\\$env/|postgres$|drizzle-orm)', message: 'ui runs in the browser.' }
    ]
  ),
  floor(
    ['src/lib/server/db/**'],
    [
      {
        regex: lib('ui|routes|server/(platform|queries|commands)|platform|queries|commands'),
        message: 'db imports only the pure floors.'
      }
    ]
  ),
  floor(
    ['src/lib/server/platform/**'],
    [
      {
        regex: lib('ui|routes|server/(queries|commands)|queries|commands'),
        message: 'platform imports db and the pure floors.'
      }
    ]
  ),
  floor(
    ['src/lib/server/queries/**'],
    [
      {
        regex: lib('ui|routes|server/commands|commands'),
        message: 'queries import platform, db and the pure floors.'
      },
      { regex: '(^|/)db/transaction$', message: 'Only commands and platform open transactions.' }
    ]
  ),
  floor(
    ['src/lib/server/commands/**'],
    [
      { regex: lib('ui|routes'), message: 'commands import queries, platform, db and the pure floors.' },
      {
        regex: '^(\\$lib/server/commands/|\\./|(\\.\\./)+commands/)',
        message: "Commands do not import another noun's commands."
      }
    ],
    ['src/lib/server/commands/jobHandlers.ts']
  ),
  floor(
    ['src/routes/**', 'src/hooks.client.ts', 'src/params/**'],
    [
      {
        regex: lib('server'),
        message: 'Pages and load functions that run in the browser do not reach the server.'
      },
      { regex: '^(node:|\\$env/.*private|postgres$|drizzle-orm)', message: 'This runs in the browser.' }
    ],
    [...SERVER_ROUTES]
  ),
  floor(SERVER_ROUTES, [
    {
      regex: '^(postgres$|drizzle-orm)',
      message: 'Routes ask queries and commands; they do not talk to the database.'
    },
    {
      regex: '(^|/)server/db/(?!client$)',
      message: 'Of the db floor a route takes only the handle, to pass it on.'
    }
  ]),
  floor(
    ['src/service-worker/**', 'src/service-worker.ts'],
    [{ regex: lib('server|routes'), message: 'This runs in the browser.' }]
  )
);
