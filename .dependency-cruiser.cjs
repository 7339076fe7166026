/**
 * The floors again, as seen by a tool that follows the files themselves: it finds cycles, and imports that reach a
 * forbidden floor by an unusual path. eslint.config.js has the same rules by name, and sees the type-only imports
 * of .svelte files, which this does not.
 */
const LIB = '^src/lib/';
/** @param {string} name @param {string} from @param {string} to */
const forbid = (name, from, to, more = {}) => ({
  name,
  severity: 'error',
  from: { path: from, ...more },
  to: { path: to }
});

module.exports = {
  forbidden: [
    { name: 'no-cycles', severity: 'error', from: {}, to: { circular: true } },
    {
      name: 'everything-resolves',
      severity: 'error',
      from: {},
      to: { couldNotResolve: true, pathNot: '^(\\$app|\\$env|\\$service-worker|\\./\\$types)' }
    },
    {
      name: 'no-development-package-in-sources',
      comment: 'The build leaves devDependencies out of what it can load at run time.',
      severity: 'error',
      from: { path: '^src/' },
      to: {
        dependencyTypes: ['npm-dev'],
        dependencyTypesNot: ['type-only'],
        pathNot: 'node_modules/(@sveltejs|svelte|esm-env)/'
      }
    },
    forbid('spectra-is-the-lowest', `${LIB}spectra/`, `${LIB}(identity|domain|server|ui)/|^src/routes/`),
    forbid('identity-on-spectra', `${LIB}identity/`, `${LIB}(domain|server|ui)/|^src/routes/`),
    forbid('domain-on-identity', `${LIB}domain/`, `${LIB}(server|ui)/|^src/routes/`),
    {
      name: 'pure-floors-without-node',
      severity: 'error',
      from: { path: `${LIB}(spectra|identity|domain)/` },
      to: { dependencyTypes: ['core'] }
    },
    forbid('ui-never-server', `${LIB}ui/`, `${LIB}server/|^src/routes/`),
    forbid('db-on-pure', `${LIB}server/db/`, `${LIB}(ui/|server/(platform|queries|commands)/)|^src/routes/`),
    forbid('platform-on-db', `${LIB}server/platform/`, `${LIB}(ui/|server/(queries|commands)/)|^src/routes/`),
    forbid('queries-on-platform', `${LIB}server/queries/`, `${LIB}(ui/|server/commands/)|^src/routes/`),
    forbid('commands-below-routes', `${LIB}server/commands/`, `${LIB}ui/|^src/routes/`),
    forbid('a-command-by-itself', `${LIB}server/commands/`, `${LIB}server/commands/`, {
      pathNot: `${LIB}server/commands/jobHandlers\\.ts$`
    }),
    forbid('routes-only-the-handle', '^src/(routes/|hooks\\.server)', `${LIB}server/db/(?!client\\.ts$)`),
    forbid('sources-only', '^src/', '^(tests|reference|scripts)/')
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    tsPreCompilationDeps: true,
    tsConfig: { fileName: 'tsconfig.json' },
    webpackConfig: { fileName: require.resolve('./tests/architecture/aliases.cjs') },
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['svelte', 'import', 'node', 'default', 'types'],
      mainFields: ['svelte', 'module', 'main', 'types'],
      extensions: ['.ts', '.js', '.mjs', '.svelte', '.json', '.css', '.d.ts']
    },
    builtInModules: {
      add: ['$app/environment', '$app/forms', '$app/navigation', '$app/paths', '$app/state', '$app/server']
    }
  }
};
