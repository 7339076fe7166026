import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { PlainStop } from './plainStop.mjs';
import { runToEnd } from './processes.mjs';

/**
 * @typedef {{ version?: string, integrity?: string, link?: boolean, optional?: boolean, devOptional?: boolean }} LockedPackage
 * @typedef {Record<string, LockedPackage>} LockedPackages by folder, as in package-lock.json
 */

/**
 * Whether what is installed is what the lockfile asks for. Contents are compared, not dates: a fresh checkout
 * touches every file, and npm writes its record of the installed tree only when an install came to its end.
 * Optional packages may be absent (they are for other platforms).
 * @param {LockedPackages} locked @param {LockedPackages | null} installed
 */
export function packagesAreCurrent(locked, installed) {
  if (!installed) return false;
  for (const [folder, wanted] of Object.entries(locked)) {
    if (folder === '') continue;
    const found = installed[folder];
    if (!found) {
      if (wanted.optional || wanted.devOptional) continue;
      return false;
    }
    if (found.version !== wanted.version || found.integrity !== wanted.integrity) return false;
  }
  return Object.keys(installed).every((folder) => folder in locked);
}

/** @param {string} file @returns {LockedPackages | null} */
function readLock(file) {
  if (!existsSync(file)) return null;
  try {
    return JSON.parse(readFileSync(file, 'utf8')).packages ?? null;
  } catch {
    return null;
  }
}

/**
 * Installs the npm packages when they are missing or not those of the lockfile.
 * @param {string} root @param {{ say: (line: string) => void, signal?: AbortSignal }} options
 */
export async function ensurePackages(root, { say, signal }) {
  const locked = readLock(join(root, 'package-lock.json'));
  if (!locked)
    throw new PlainStop(`package-lock.json is missing from ${root} or cannot be read. Nothing was changed.`);
  if (packagesAreCurrent(locked, readLock(join(root, 'node_modules', '.package-lock.json')))) return;
  say('Installing the npm packages (a minute at most) …');
  // --include=dev: the build tools are needed also where NODE_ENV says production.
  const words = ['ci', '--include=dev', '--no-audit', '--no-fund'];
  const { code, output } = await runToEnd('npm', words, { cwd: root, env: process.env, signal });
  if (code === 0) return;
  const lines = output
    .split('\n')
    .filter((line) => line.startsWith('npm error') && !line.includes('complete log'));
  throw new PlainStop(
    `npm could not install the packages:\n${(lines.length > 0 ? lines.slice(0, 8) : output.trim().split('\n').slice(-8)).join('\n')}\n` +
      'Nothing else was started. Check the network connection, then run the command again.'
  );
}

/**
 * Makes SvelteKit's generated TypeScript settings, which scripts and tests read for the $lib paths, and the types of
 * the routes.
 * @param {string} root @param {{ signal?: AbortSignal, always?: boolean }} [options] always: the routes may have changed
 */
export async function ensureGeneratedSettings(root, { signal, always = false } = {}) {
  if (!always && existsSync(join(root, '.svelte-kit', 'tsconfig.json'))) return;
  const program = join(root, 'node_modules', '@sveltejs', 'kit', 'svelte-kit.js');
  const { code, output } = await runToEnd(process.execPath, [program, 'sync'], {
    cwd: root,
    env: process.env,
    signal
  });
  if (code !== 0) throw new Error(`svelte-kit sync ended with ${code}:\n${output}`);
}
