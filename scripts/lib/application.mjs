import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { PlainStop, diskFullSentence } from './plainStop.mjs';
import { waitUntilAnswering } from './ports.mjs';
import { runToEnd, startChild } from './processes.mjs';

/** @typedef {{ root: string, env: NodeJS.ProcessEnv, signal?: AbortSignal }} Surroundings */

/**
 * Runs one of the TypeScript scripts to its end.
 * @param {string} script below the root @param {Surroundings} surroundings
 * @param {string} failed the beginning of the sentence when it fails
 */
export async function runScript(script, { root, env, signal }, failed) {
  const { code, output, stdout } = await runToEnd(process.execPath, ['--import', 'tsx', script], {
    cwd: root,
    env,
    signal
  });
  if (code === 0) return stdout;
  if (/ENOSPC|No space left on device/i.test(output)) throw new PlainStop(diskFullSentence(root));
  throw new PlainStop(
    `${failed} The database is as it was before.\n${output.trim().split('\n').slice(-20).join('\n')}`
  );
}

/**
 * Starts the program that serves the pages and waits until it answers.
 * @param {Surroundings & { dev: boolean, port: number, host: string }} options
 */
export async function startApplication({ root, env, signal, dev, port, host }) {
  const stopWithParent = pathToFileURL(join(root, 'scripts', 'lib', 'stopWithParent.mjs')).href;
  const words = dev
    ? [
        join(root, 'node_modules', 'vite', 'bin', 'vite.js'),
        'dev',
        '--host',
        host,
        '--port',
        String(port),
        '--strictPort'
      ]
    : [join(root, 'build')];
  const running = startChild(process.execPath, ['--import', stopWithParent, ...words], { cwd: root, env });
  let gone = false;
  running.ended.then(
    () => (gone = true),
    () => (gone = true)
  );
  const asked = host === '0.0.0.0' ? '127.0.0.1' : host;
  const answering = await waitUntilAnswering(`http://${asked}:${port}/`, {
    timeoutMs: 90_000,
    signal,
    gone: () => gone
  });
  return { running, answering };
}

/**
 * Starts the mail catcher and waits until it listens.
 * @param {{ root: string, port: number, folder: string }} options
 */
export async function startMailCatcher({ root, port, folder }) {
  const stopWithParent = pathToFileURL(join(root, 'scripts', 'lib', 'stopWithParent.mjs')).href;
  const script = join(root, 'scripts', 'mailCatcher.mjs');
  const words = ['--import', stopWithParent, script, String(port), folder];
  const running = startChild(process.execPath, words, { cwd: root, env: process.env });
  const ready = new Promise((resolve) => running.child.once('message', () => resolve(true)));
  if (await Promise.race([ready, running.ended.then(() => false)])) return running;
  throw new PlainStop(`The mail catcher did not start on port ${port}. Nothing is served.`);
}

/**
 * The demo accounts that the seed wrote, one line each, or none.
 * @param {string} file
 * @returns {string[]}
 */
export function demoAccountLines(file) {
  if (!existsSync(file)) return [];
  /** @type {{ userName: string, password: string, printedName: string, role: string }[]} */
  const accounts = JSON.parse(readFileSync(file, 'utf8'));
  const rows = accounts.map((account) => [
    account.userName,
    account.password,
    account.printedName,
    account.role
  ]);
  const widths = [0, 1, 2].map((column) => Math.max(0, ...rows.map((row) => row[column].length)));
  return rows.map((row) =>
    `  ${row.map((cell, column) => cell.padEnd(widths[column] ?? 0)).join('  ')}`.trimEnd()
  );
}
