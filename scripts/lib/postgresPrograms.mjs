import { existsSync, readdirSync } from 'node:fs';
import { delimiter, join } from 'node:path';
import { installPostgres, mayInstall } from './debianPackages.mjs';
import { PlainStop } from './plainStop.mjs';
import { runToEnd } from './processes.mjs';

/** The oldest major version whose SQL the application uses. */
export const OLDEST_MAJOR = 14;
const NEEDED = ['initdb', 'pg_ctl', 'postgres'];

/** @typedef {{ folder: string, major: number }} PostgresPrograms */

/** The major version in what `postgres -V` prints, or null. @param {string} text */
export function readMajor(text) {
  const found = /\(PostgreSQL\) (\d+)/.exec(text);
  return found ? Number(found[1]) : null;
}

/**
 * The programs to use: those of the wanted major version where a cluster exists already (its files fit no other),
 * otherwise the newest that are new enough.
 * @param {readonly PostgresPrograms[]} candidates @param {number} [wantedMajor]
 * @returns {PostgresPrograms | null}
 */
export function choosePrograms(candidates, wantedMajor) {
  const fitting = candidates.filter((c) =>
    wantedMajor === undefined ? c.major >= OLDEST_MAJOR : c.major === wantedMajor
  );
  return fitting.reduce(
    (best, c) => (best && best.major >= c.major ? best : c),
    /** @type {PostgresPrograms | null} */ (null)
  );
}

/**
 * The folders that may hold PostgreSQL's programs: Debian's own, then those on the search path.
 * @param {string} debianFolder @param {string} searchPath
 */
export function foldersToSearch(debianFolder, searchPath) {
  const versions = existsSync(debianFolder) ? readdirSync(debianFolder) : [];
  const folders = [
    ...versions.map((v) => join(debianFolder, v, 'bin')),
    ...searchPath.split(delimiter).filter((f) => f !== '')
  ];
  return [...new Set(folders)].filter((folder) => NEEDED.every((name) => existsSync(join(folder, name))));
}

/** Every set of PostgreSQL programs on this machine. @returns {Promise<PostgresPrograms[]>} */
export async function listPrograms(
  debianFolder = '/usr/lib/postgresql',
  searchPath = process.env.PATH ?? ''
) {
  const folders = foldersToSearch(debianFolder, searchPath);
  const told = await runToEnd('pg_config', ['--bindir'], { env: { ...process.env, PATH: searchPath } });
  const bindir = told.stdout.trim();
  if (told.code === 0 && !folders.includes(bindir)) folders.push(...foldersToSearch('', bindir));
  const found = [];
  for (const folder of folders) {
    const major = readMajor((await runToEnd(join(folder, 'postgres'), ['-V'])).output);
    if (major !== null) found.push({ folder, major });
  }
  return found;
}

/**
 * Finds PostgreSQL's programs, installing Debian's where they are missing and this is root.
 * @param {{ wantedMajor?: number, say: (line: string) => void, signal?: AbortSignal }} options
 * @returns {Promise<PostgresPrograms>}
 */
export async function ensurePrograms({ wantedMajor, say, signal }) {
  const found = choosePrograms(await listPrograms(), wantedMajor);
  if (found) return found;
  if (wantedMajor !== undefined) {
    throw new PlainStop(
      `The database in this folder was made by PostgreSQL ${wantedMajor}, which is not on this machine any more. ` +
        `The data is untouched. Install it (apt-get install postgresql-${wantedMajor}), then run the command again.`
    );
  }
  if (!mayInstall()) throw new PlainStop(missingPostgresSentence());
  await installPostgres({ say, signal });
  const installed = choosePrograms(await listPrograms());
  if (!installed) throw new PlainStop(missingPostgresSentence());
  return installed;
}

export function missingPostgresSentence() {
  return (
    `PostgreSQL ${OLDEST_MAJOR} or later is not on this machine, and installing it needs root. Nothing was changed. ` +
    'Run "sudo apt-get update && sudo apt-get install -y postgresql", or set DATABASE_URL to a database you have, ' +
    'then run the command again.'
  );
}

/**
 * The account that must own the cluster: PostgreSQL refuses to run as root, so root hands it to the account that
 * the Debian package made; anybody else runs it as themselves (null).
 * @returns {Promise<import('./processes.mjs').Account | null>}
 */
export async function serverAccount() {
  if (process.getuid?.() !== 0) return null;
  const uid = await runToEnd('id', ['-u', 'postgres']);
  const gid = await runToEnd('id', ['-g', 'postgres']);
  if (uid.code !== 0 || gid.code !== 0) {
    throw new PlainStop(
      'PostgreSQL does not run as root, and this machine has no account named postgres to run it as. ' +
        'Nothing was changed. Make one (useradd --system postgres), or run the command as an ordinary user.'
    );
  }
  return { uid: Number(uid.stdout), gid: Number(gid.stdout) };
}
