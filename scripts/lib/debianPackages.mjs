import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { PlainStop } from './plainStop.mjs';
import { runToEnd } from './processes.mjs';

const CREATE_CLUSTER_SETTINGS = '/etc/postgresql-common/createcluster.conf';

/** Whether this process may install Debian packages. */
export function mayInstall() {
  return process.getuid?.() === 0 && existsSync('/usr/bin/apt-get');
}

/**
 * Installs Debian packages as root, with apt asking nothing.
 * @param {readonly string[]} names @param {{ say: (line: string) => void, signal?: AbortSignal, refresh?: boolean }} options
 */
export async function installDebianPackages(names, { say, signal, refresh = true }) {
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  say(`Installing ${names.join(', ')} from Debian …`);
  if (refresh) await apt(['update', '-q'], names, { env, signal });
  await apt(['install', '-y', '-q', '--no-install-recommends', ...names], names, { env, signal });
}

/** @param {string[]} words @param {readonly string[]} names @param {import('./processes.mjs').RunOptions} options */
async function apt(words, names, options) {
  const { code, output } = await runToEnd('apt-get', words, options);
  if (code === 0) return;
  const reasons = output.split('\n').filter((line) => /^E: /.test(line));
  throw new PlainStop(
    `Debian's apt could not install ${names.join(', ')}:\n${(reasons.length > 0 ? reasons : output.trim().split('\n').slice(-5)).join('\n')}\n` +
      `Put that right, or run "apt-get update && apt-get install ${names.join(' ')}" by hand, then run the command again.`
  );
}

/**
 * Installs Debian's PostgreSQL without the shared cluster that the package would otherwise make and start: the
 * application keeps a private one.
 * @param {{ say: (line: string) => void, signal?: AbortSignal }} options
 */
export async function installPostgres(options) {
  await installDebianPackages(['postgresql-common'], options);
  mkdirSync('/etc/postgresql-common', { recursive: true });
  const before = existsSync(CREATE_CLUSTER_SETTINGS) ? readFileSync(CREATE_CLUSTER_SETTINGS, 'utf8') : '';
  writeFileSync(CREATE_CLUSTER_SETTINGS, withoutMainCluster(before));
  await installDebianPackages(['postgresql'], { ...options, refresh: false });
}

/** The settings text with create_main_cluster turned off, the rest kept. @param {string} settings */
export function withoutMainCluster(settings) {
  const kept = settings.split('\n').filter((line) => !/^\s*#?\s*create_main_cluster\s*=/.test(line));
  return `${kept.join('\n').trimEnd()}\ncreate_main_cluster = false\n`.trimStart();
}
