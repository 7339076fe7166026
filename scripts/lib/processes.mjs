import { spawn } from 'node:child_process';

/**
 * @typedef {{ uid: number, gid: number }} Account the system account a program runs as, when not our own
 * @typedef {{
 *   cwd?: string, env?: NodeJS.ProcessEnv, account?: Account | null, input?: string,
 *   show?: boolean, silent?: boolean, signal?: AbortSignal
 * }} RunOptions
 *   show: pass output on to the terminal as it comes. silent: attach no pipe at all, needed where the program
 *   leaves a daemon behind that would hold the pipe open for ever.
 */

/** Thrown when the user stopped the command while a program was running; nothing needs to be said about it. */
export class Stopped extends Error {}

/**
 * Runs a program to its end.
 * @param {string} program @param {readonly string[]} words @param {RunOptions} [options]
 * @returns {Promise<{ code: number, output: string, stdout: string }>} code 127 when the program is not there
 */
export function runToEnd(program, words, options = {}) {
  const { cwd, env, account, input, show = false, silent = false, signal } = options;
  signal?.throwIfAborted();
  return new Promise((resolve, reject) => {
    const stream = silent ? 'ignore' : 'pipe';
    const child = spawn(program, words, {
      cwd,
      env,
      stdio: [input === undefined ? 'ignore' : 'pipe', stream, stream],
      ...(account ?? {})
    });
    let output = '';
    let stdout = '';
    child.stdout?.on('data', (bytes) => {
      output += bytes;
      stdout += bytes;
      if (show) process.stdout.write(bytes);
    });
    child.stderr?.on('data', (bytes) => {
      output += bytes;
      if (show) process.stderr.write(bytes);
    });
    const stop = () => child.kill('SIGTERM');
    signal?.addEventListener('abort', stop, { once: true });
    child.once('error', (/** @type {NodeJS.ErrnoException} */ error) => {
      signal?.removeEventListener('abort', stop);
      if (error.code === 'ENOENT') resolve({ code: 127, output: `${program}: not found`, stdout: '' });
      else reject(error);
    });
    child.once('close', (code) => {
      signal?.removeEventListener('abort', stop);
      if (signal?.aborted) reject(new Stopped());
      else resolve({ code: code ?? 1, output, stdout });
    });
    if (input !== undefined) child.stdin?.end(input);
  });
}

/**
 * Starts a program that keeps running. It gets a process group of its own, so that Ctrl-C reaches this command
 * first and it can stop things in order, and a channel whose closing tells it that this command is gone (see
 * stopWithParent.mjs).
 * @param {string} program @param {readonly string[]} words @param {{ cwd?: string, env?: NodeJS.ProcessEnv }} [options]
 */
export function startChild(program, words, { cwd, env } = {}) {
  const child = spawn(program, words, {
    cwd,
    env,
    detached: true,
    stdio: ['ignore', 'inherit', 'inherit', 'ipc']
  });
  /** @type {Promise<{ code: number | null, signal: NodeJS.Signals | null }>} */
  const ended = new Promise((resolve, reject) => {
    child.once('error', reject);
    child.once('exit', (code, signal) => resolve({ code, signal }));
  });
  // Without a listener of its own a failed spawn would end this process before the caller has looked.
  ended.catch(() => {});
  return { child, ended };
}

/**
 * Asks a child to stop and waits; after the grace time it is ended by force.
 * @param {{ child: import('node:child_process').ChildProcess, ended: Promise<unknown> }} running @param {number} graceMs
 */
export async function stopChild({ child, ended }, graceMs) {
  if (child.exitCode !== null || child.signalCode !== null) return;
  child.kill('SIGTERM');
  const timer = setTimeout(() => child.kill('SIGKILL'), graceMs);
  await ended.catch(() => {});
  clearTimeout(timer);
}
