/**
 * `npm test`: everything that must hold, in one command, from a fresh checkout. It installs what is missing, makes a
 * throw-away database, runs every stage even when an earlier one failed, and ends with one line:
 * `N passed, N failed`. Single tests are counted one by one, each lint or build as one.
 */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { ensureBrowser } from './lib/browser.mjs';
import { helpText, readFlags } from './lib/flags.mjs';
import { ensureGeneratedSettings, ensurePackages } from './lib/npmPackages.mjs';
import { PlainStop, describeFailure } from './lib/plainStop.mjs';
import { Stopped } from './lib/processes.mjs';
import { startTestDatabase } from './lib/testDatabase.mjs';
import { GROUPS, chooseStages } from './lib/testStages.mjs';
import { addTallies, closingLine, exitCodeOf, tallyCheck } from './lib/testTally.mjs';

const ROOT = dirname(dirname(fileURLToPath(import.meta.url)));
const FLAGS = [
  { name: 'only', takes: 'STAGE', choices: GROUPS, about: `run one of ${GROUPS.join(', ')}` },
  { name: 'name', short: 't', takes: 'PATTERN', about: 'run the tests whose name matches' },
  { name: 'help', short: 'h', about: 'show this' }
];

const stopping = new AbortController();
const { signal } = stopping;
/** @type {(() => Promise<void> | void)[]} */
const stops = [];
const say = (/** @type {string} */ line) => console.log(line);

/** The environment of the tests: no setting meant for a real server may reach them. */
function testEnvironment() {
  const env = { ...process.env };
  for (const name of Object.keys(env)) {
    if (
      /^(DATABASE_|AUTH_|SMTP_|TRAIL_|PG|DEMO)|^(ORIGIN|HOST|PORT|MAIL_FOLDER|NODE_ENV|BODY_SIZE_LIMIT)$/.test(
        name
      )
    ) {
      delete env[name];
    }
  }
  return { ...env, TZ: 'UTC', WHARFINGER_BUILD: '1' };
}

/**
 * Runs the stages one after another.
 * @param {readonly import('./lib/testStages.mjs').Stage[]} stages @param {string | undefined} pattern
 */
async function runStages(stages, pattern) {
  const scratch = mkdtempSync(join(tmpdir(), 'wharfinger-reports-'));
  stops.push(() => rmSync(scratch, { recursive: true, force: true }));
  /** @type {NodeJS.ProcessEnv} */
  let env = testEnvironment();
  const rows = [];
  for (const stage of stages) {
    say(`\n=== ${stage.name}`);
    const began = performance.now();
    let tally;
    try {
      if (stage.needsDatabase && env.TEST_DATABASE_OWNER_URL === undefined) {
        const database = await startTestDatabase({ say, signal });
        stops.push(database.stop);
        env = { ...env, TEST_DATABASE_OWNER_URL: database.ownerUrl };
      }
      if (stage.name === 'pages') await ensureBrowser({ say, signal });
      tally = await stage.run({ root: ROOT, scratch, env, pattern, signal });
    } catch (error) {
      if (error instanceof Stopped) throw error;
      console.error(describeFailure(error, ROOT).text);
      tally = tallyCheck(1);
    }
    rows.push({ name: stage.name, seconds: (performance.now() - began) / 1000, tally });
  }
  return rows;
}

/** @returns {Promise<number>} the exit code */
async function main() {
  const given = readFlags(process.argv.slice(2), FLAGS);
  if (given.help) {
    say(helpText('npm test -- [options]', 'Runs every check and test against a throw-away database.', FLAGS));
    return 0;
  }
  const pattern = given.name === undefined ? undefined : String(given.name);
  const stages = chooseStages({ only: given.only === undefined ? undefined : String(given.only), pattern });
  if (stages.length === 0) throw new PlainStop(`No stage of "${given.only}" holds named tests.`, 2);
  await ensurePackages(ROOT, { say, signal });
  await ensureGeneratedSettings(ROOT, { signal, always: true });
  const rows = await runStages(stages, pattern);
  say('');
  for (const { name, seconds, tally } of rows) {
    say(`${name.padEnd(8)} ${seconds.toFixed(1).padStart(7)} s   ${closingLine(tally)}`);
  }
  const total = addTallies(rows.map((row) => row.tally));
  closing = closingLine(total);
  return exitCodeOf(total);
}

/** The closing line, printed when everything has been cleared away, so that it is the last. */
let closing = '';
for (const name of /** @type {const} */ (['SIGINT', 'SIGTERM', 'SIGHUP'])) {
  process.on(name, () => stopping.abort(new Stopped()));
}
let exitCode = 1;
try {
  exitCode = await main();
} catch (error) {
  if (!(error instanceof Stopped)) {
    const failure = describeFailure(error, ROOT);
    console.error(failure.text);
    exitCode = failure.exitCode;
  }
}
for (const stop of stops.reverse()) {
  try {
    await stop();
  } catch (error) {
    console.error(describeFailure(error, ROOT).text);
    exitCode = 1;
  }
}
if (closing !== '') say(`\n${closing}`);
process.exitCode = exitCode;
