import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { ensureBuild } from './buildFreshness.mjs';
import { PlainStop } from './plainStop.mjs';
import { runToEnd } from './processes.mjs';
import { tallyCheck, tallyPlaywright, tallyVitest } from './testTally.mjs';

/**
 * The stages of the whole test, in order: what is quick to fail comes first. `groups` are the words of --only that
 * run the stage; `named` stages hold single tests that -t can pick from.
 *
 * @typedef {{ root: string, scratch: string, env: NodeJS.ProcessEnv, pattern?: string, signal?: AbortSignal }} StageSetting
 * @typedef {{ name: string, groups: readonly string[], named: boolean, needsDatabase: boolean, run: (s: StageSetting) => Promise<import('./testTally.mjs').Tally> }} Stage
 */

/** @type {readonly Stage[]} */
export const STAGES = [
  check('format', 'lint', ['prettier', 'bin', 'prettier.cjs'], ['--check', '--log-level', 'warn', '.']),
  check('lint', 'lint', ['eslint', 'bin', 'eslint.js'], ['--max-warnings', '0', '.']),
  check(
    'imports',
    'lint',
    ['dependency-cruiser', 'bin', 'dependency-cruise.mjs'],
    ['--config', '.dependency-cruiser.cjs', 'src']
  ),
  check(
    'check',
    'check',
    ['svelte-check', 'bin', 'svelte-check'],
    ['--tsconfig', './tsconfig.json', '--fail-on-warnings', '--output', 'human']
  ),
  vitest('unit', false),
  // Some tests of the server, and all of the pages, run the application as it is built.
  { name: 'build', groups: ['server', 'pages'], named: false, needsDatabase: false, run: build },
  vitest('server', true),
  { name: 'pages', groups: ['pages'], named: true, needsDatabase: true, run: playwright }
];

export const GROUPS = /** @type {const} */ (['lint', 'check', 'unit', 'server', 'pages']);

/**
 * The stages to run. With a name pattern only those that hold named tests (and the build that the pages need).
 * @param {{ only?: string, pattern?: string }} choice
 */
export function chooseStages({ only, pattern }) {
  return STAGES.filter(
    (stage) =>
      (only === undefined || stage.groups.includes(only)) &&
      (pattern === undefined || stage.named || stage.name === 'build')
  );
}

/**
 * @param {string} name @param {string} group @param {readonly string[]} program below node_modules
 * @param {readonly string[]} words
 * @returns {Stage}
 */
function check(name, group, program, words) {
  /** @param {StageSetting} setting */
  const run = async ({ root, env, signal }) => {
    const path = join(root, 'node_modules', ...program);
    const { code } = await runToEnd(process.execPath, [path, ...words], {
      cwd: root,
      env,
      signal,
      show: true
    });
    return tallyCheck(code);
  };
  return { name, groups: [group], named: false, needsDatabase: false, run };
}

/** @param {string} project @param {boolean} needsDatabase @returns {Stage} */
function vitest(project, needsDatabase) {
  /** @param {StageSetting} setting */
  const run = async ({ root, scratch, env, pattern, signal }) => {
    const report = join(scratch, `${project}.json`);
    const words = [join(root, 'node_modules', 'vitest', 'vitest.mjs'), 'run', '--project', project];
    words.push('--reporter=default', '--reporter=json', `--outputFile.json=${report}`);
    if (pattern !== undefined) words.push('-t', pattern);
    const { code } = await runToEnd(process.execPath, words, { cwd: root, env, signal, show: true });
    return tallyVitest(readReport(report), code, pattern !== undefined);
  };
  return { name: project, groups: [project], named: true, needsDatabase, run };
}

/** @param {StageSetting} setting */
async function build({ root, signal }) {
  try {
    await ensureBuild(root, { say: (line) => console.log(line), signal, show: true });
    return tallyCheck(0);
  } catch (error) {
    if (!(error instanceof PlainStop)) throw error;
    console.error(error.message);
    return tallyCheck(1);
  }
}

/** @param {StageSetting} setting */
async function playwright({ root, scratch, env, pattern, signal }) {
  const report = join(scratch, 'pages.json');
  const words = [join(root, 'node_modules', '@playwright', 'test', 'cli.js'), 'test'];
  words.push('--config', join('tests', 'playwright.config.ts'), '--reporter=list,json');
  if (pattern !== undefined) words.push('-g', pattern, '--pass-with-no-tests');
  const { code } = await runToEnd(process.execPath, words, {
    cwd: root,
    env: { ...env, PLAYWRIGHT_JSON_OUTPUT_FILE: report },
    signal,
    show: true
  });
  return tallyPlaywright(readReport(report), code);
}

/** @param {string} file */
function readReport(file) {
  return existsSync(file) ? JSON.parse(readFileSync(file, 'utf8')) : null;
}
