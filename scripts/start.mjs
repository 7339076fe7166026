/**
 * `npm start`: from a fresh checkout to a running application in one command. It installs what is missing, makes
 * or starts the private database (or uses the one that DATABASE_URL names), migrates it, fills in the demo data
 * when it is empty, builds when the sources are newer than the build, and serves. Ctrl-C stops what it started, in
 * order. It needs nothing but Node.
 *
 * Settings from the environment: PORT, HOST, ORIGIN; DATABASE_URL (the owner of an outside database, which makes
 * and changes tables) and DATABASE_APP_URL (the application's role there, otherwise wharfinger_app with a password
 * made here); SMTP_URL (a real mail server instead of the mail catcher).
 */
import { existsSync, mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { demoAccountLines, runScript, startApplication, startMailCatcher } from './lib/application.mjs';
import { ensureBuild } from './lib/buildFreshness.mjs';
import { helpText, readFlags, readPort } from './lib/flags.mjs';
import { takeFolderLock } from './lib/folderLock.mjs';
import { ensureGeneratedSettings, ensurePackages } from './lib/npmPackages.mjs';
import { startOwnDatabase, useOutsideDatabase } from './lib/ownDatabase.mjs';
import { PlainStop, describeFailure } from './lib/plainStop.mjs';
import { findFreePort, isPortFree, portInUseSentence } from './lib/ports.mjs';
import { Stopped, stopChild } from './lib/processes.mjs';
import { ensureTrailKey } from './lib/secrets.mjs';

const ROOT = dirname(dirname(fileURLToPath(import.meta.url)));
const FLAGS = [
  { name: 'port', takes: 'N', about: 'serve on this port (default 4180)' },
  { name: 'data', takes: 'FOLDER', about: 'keep database, keys and mail there (default data)' },
  { name: 'no-demo', about: 'begin with an empty database, without the demo plant' },
  { name: 'dev', about: 'serve the sources with live reload instead of a build' },
  { name: 'help', short: 'h', about: 'show this' }
];
/** How long the application may finish the requests it has, before it is ended by force. */
const APP_GRACE_S = 10;

/** @typedef {{ port: number, host: string, data: string, demo: boolean, dev: boolean }} Options */

const stopping = new AbortController();
/** What was started, in that order; stopped in the opposite order. @type {(() => Promise<void> | void)[]} */
const stops = [];
const say = (/** @type {string} */ line) => console.log(line);

/** @returns {Options | null} null when only the help was asked for */
function readOptions() {
  const given = readFlags(process.argv.slice(2), FLAGS);
  if (given.help) return null;
  return {
    port:
      given.port === undefined
        ? readPort(process.env.PORT || '4180', 'PORT')
        : readPort(String(given.port), '--port'),
    host: process.env.HOST || '127.0.0.1',
    data: given.data === undefined ? join(ROOT, 'data') : resolve(String(given.data)),
    demo: !given['no-demo'],
    dev: Boolean(given.dev)
  };
}

/** @param {Options} options */
async function start({ port, host, data, demo, dev }) {
  const { signal } = stopping;
  mkdirSync(data, { recursive: true, mode: 0o711 });
  stops.push(takeFolderLock(join(data, 'start.lock'), alreadyRunningSentence(data)));
  if (!(await isPortFree(port, host))) throw new PlainStop(portInUseSentence(port));
  await ensurePackages(ROOT, { say, signal });
  await ensureGeneratedSettings(ROOT, { signal });

  const outside = process.env.DATABASE_URL;
  const { database, secrets } = outside
    ? useOutsideDatabase(outside, process.env.DATABASE_APP_URL, data)
    : await startOwnDatabase({ data, say, signal });
  if (database.stop) stops.push(database.stop);
  const env = await applicationEnvironment(
    { port, host, data, demo, dev },
    database.appUrl,
    secrets.authSecret
  );
  await prepareDatabase(env, database.ownerUrl, secrets.appPassword, demo);
  if (!dev) await ensureBuild(ROOT, { say, signal });

  const { running, answering } = await startApplication({ root: ROOT, env, signal, dev, port, host });
  stops.push(() => stopChild(running, (APP_GRACE_S + 5) * 1000));
  signal.throwIfAborted();
  if (!answering)
    throw new PlainStop(
      `The application did not answer on port ${port}; what it said is above. Your data is kept.`
    );
  announce(/** @type {string} */ (env.ORIGIN), /** @type {string} */ (env.DEMO_ACCOUNTS_FILE), demo);
  await Promise.race([whenStopped(), running.ended]);
  signal.throwIfAborted();
  throw new PlainStop(
    'The application ended by itself; what it said is above. Your data is kept. Run npm start to serve again.'
  );
}

/**
 * Everything the application is told, the mail catcher started on the way.
 * @param {Options} options @param {string} appUrl @param {string} authSecret
 * @returns {Promise<NodeJS.ProcessEnv>}
 */
async function applicationEnvironment({ port, host, data, demo, dev }, appUrl, authSecret) {
  const { DATABASE_APP_URL: _, ...inherited } = process.env;
  const keyFile = join(data, 'trail-key.pem');
  ensureTrailKey(keyFile);
  return {
    ...inherited,
    NODE_ENV: dev ? 'development' : 'production',
    HOST: host,
    PORT: String(port),
    ORIGIN: process.env.ORIGIN || `http://${host === '0.0.0.0' ? '127.0.0.1' : host}:${port}`,
    BODY_SIZE_LIMIT: process.env.BODY_SIZE_LIMIT || '64M',
    SHUTDOWN_TIMEOUT: String(APP_GRACE_S),
    DATABASE_URL: appUrl,
    AUTH_SECRET: process.env.AUTH_SECRET || authSecret,
    AUTH_TRUST_HOST: 'true',
    TRAIL_KEY_FILE: process.env.TRAIL_KEY_FILE || keyFile,
    TRAIL_HEADS_FILE: process.env.TRAIL_HEADS_FILE || join(data, 'tree-heads.ndjson'),
    DEMO: demo ? '1' : '',
    DEMO_ACCOUNTS_FILE: join(data, 'demo-accounts.json'),
    ...(process.env.SMTP_URL ? {} : await catchMail(data))
  };
}

/** Starts the mail catcher on its remembered port. @param {string} data */
async function catchMail(data) {
  const file = join(data, 'mail-port.txt');
  const remembered = existsSync(file) ? Number(readFileSync(file, 'utf8')) : undefined;
  const port = await findFreePort(remembered || undefined);
  const folder = join(data, 'mail');
  const running = await startMailCatcher({ root: ROOT, port, folder });
  stops.push(() => stopChild(running, 5000));
  writeFileSync(`${file}.new`, `${port}\n`);
  renameSync(`${file}.new`, file);
  return { SMTP_URL: `smtp://127.0.0.1:${port}`, MAIL_FOLDER: folder };
}

/**
 * Migrates as the owner and fills in the demo data; without the demo, looks after the first two people. Only the
 * first two are told the owner's address.
 * @param {NodeJS.ProcessEnv} env @param {string} ownerUrl @param {string} appPassword @param {boolean} demo
 */
async function prepareDatabase(env, ownerUrl, appPassword, demo) {
  const { signal } = stopping;
  const asOwner = { ...env, DATABASE_OWNER_URL: ownerUrl, APP_ROLE_PASSWORD: appPassword };
  await runScript(
    'scripts/migrate.ts',
    { root: ROOT, env: asOwner, signal },
    'The database could not be brought up to date.'
  );
  if (!demo) {
    const said = await runScript(
      'scripts/firstAdministrator.ts',
      { root: ROOT, env, signal },
      'The first accounts could not be made.'
    );
    if (said.trim() !== '') say(`\n${said.trim()}`);
    return;
  }
  // The seed itself looks whether the database is empty.
  if (!existsSync(/** @type {string} */ (env.DEMO_ACCOUNTS_FILE))) say('Making the demo plant …');
  await runScript(
    'scripts/seed.ts',
    { root: ROOT, env: asOwner, signal },
    'The demo data could not be filled in.'
  );
}

/** @param {string} origin @param {string} accountsFile @param {boolean} demo */
function announce(origin, accountsFile, demo) {
  const accounts = demo ? demoAccountLines(accountsFile) : [];
  say('');
  say(`Wharfinger is ready: ${origin}`);
  if (accounts.length > 0) say(['', 'Demo accounts (name, password, person, role):', ...accounts].join('\n'));
  if (accounts.length > 0)
    say(
      `\nSpectra to scan, a wrong one and polystyrene for the checks: ${join(dirname(accountsFile), 'demo-spectra')}`
    );
  say('\nCtrl-C stops it.');
}

/** @param {string} data */
function alreadyRunningSentence(data) {
  return (
    `Another npm start is running with ${data}. Nothing was started and nothing was changed. ` +
    'Use that one, stop it first, or start a second one with its own folder and port: npm start -- --data FOLDER --port N'
  );
}

/** @returns {Promise<void>} */
function whenStopped() {
  return new Promise((resolve) => stopping.signal.addEventListener('abort', () => resolve(), { once: true }));
}

/** Stops what was started, the last first; a thing that will not stop does not keep the others running. */
async function stopAll() {
  let clean = true;
  for (const stop of stops.reverse()) {
    try {
      await stop();
    } catch (error) {
      clean = false;
      console.error(describeFailure(error, ROOT).text);
    }
  }
  return clean;
}

async function main() {
  // Whoever read the output may have gone (npm start | head); that is no reason to leave things running.
  for (const stream of [process.stdout, process.stderr]) stream.on('error', () => {});
  const options = readOptions();
  if (!options) {
    say(
      helpText(
        'npm start -- [options]',
        'Installs what is missing, starts the database and serves Wharfinger.',
        FLAGS
      )
    );
    return 0;
  }
  for (const name of /** @type {const} */ (['SIGINT', 'SIGTERM', 'SIGHUP'])) {
    process.on(name, () => {
      if (!stopping.signal.aborted) say('\nStopping …');
      stopping.abort(new Stopped());
    });
  }
  let exitCode = 0;
  try {
    await start(options);
  } catch (error) {
    if (!(error instanceof Stopped)) {
      const failure = describeFailure(error, options.data);
      console.error(failure.text);
      exitCode = failure.exitCode;
    }
  }
  return (await stopAll()) ? exitCode : 1;
}

process.exitCode = await main().catch((error) => {
  const failure = describeFailure(error, ROOT);
  console.error(failure.text);
  return failure.exitCode;
});
