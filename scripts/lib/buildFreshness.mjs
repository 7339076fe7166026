import { createHash } from 'node:crypto';
import { existsSync, readFileSync, readdirSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { PlainStop } from './plainStop.mjs';
import { runToEnd } from './processes.mjs';

const STAMP = 'made-from.txt';

/**
 * The files the build is made from: src, static, the lockfile and the configuration files beside them.
 * @param {string} root @returns {string[]} paths below root, sorted
 */
export function buildSources(root) {
  /** @type {string[]} */
  const files = [];
  /** @param {string} folder */
  const walk = (folder) => {
    for (const entry of readdirSync(join(root, folder), { withFileTypes: true })) {
      const path = `${folder}/${entry.name}`;
      if (entry.isDirectory()) walk(path);
      else files.push(path);
    }
  };
  for (const folder of ['src', 'static']) if (existsSync(join(root, folder))) walk(folder);
  for (const name of readdirSync(root)) {
    if (name === 'package.json' || name === 'package-lock.json' || /\.config\.[cm]?[jt]s$/.test(name))
      files.push(name);
  }
  return files.sort();
}

/**
 * A fingerprint of names, sizes and dates: a file that was added, removed, changed or put back with an older date
 * changes it, and reading no contents it takes milliseconds.
 * @param {string} root
 */
export function sourceFingerprint(root) {
  const hash = createHash('sha256');
  for (const path of buildSources(root)) {
    const { size, mtimeMs } = statSync(join(root, path));
    hash.update(`${path}\0${size}\0${mtimeMs}\n`);
  }
  return hash.digest('hex');
}

/** Whether build/ was made, to its end, from the sources as they are. @param {string} root */
export function buildIsCurrent(root) {
  const stamp = join(root, 'build', STAMP);
  if (!existsSync(stamp) || !existsSync(join(root, 'build', 'index.js'))) return false;
  return readFileSync(stamp, 'utf8').trim() === sourceFingerprint(root);
}

/**
 * Builds when the build is missing or older than the sources. The stamp is written last, so that a build that was
 * broken off is made again.
 * @param {string} root @param {{ say: (line: string) => void, signal?: AbortSignal, show?: boolean }} options
 */
export async function ensureBuild(root, { say, signal, show = false }) {
  if (buildIsCurrent(root)) return;
  say('Building the application …');
  const fingerprint = sourceFingerprint(root);
  const vite = join(root, 'node_modules', 'vite', 'bin', 'vite.js');
  const { code, output } = await runToEnd(process.execPath, [vite, 'build'], {
    cwd: root,
    env: { ...process.env, NODE_ENV: 'production' },
    signal,
    show
  });
  if (code !== 0) {
    throw new PlainStop(
      `The application could not be built, so nothing is served:\n${show ? '' : output.trim().split('\n').slice(-30).join('\n')}`
    );
  }
  writeFileSync(join(root, 'build', STAMP), `${fingerprint}\n`);
}
