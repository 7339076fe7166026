import { chmodSync, existsSync, mkdtempSync, readFileSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { randomBytes } from 'node:crypto';
import { canEnter } from './clusterPlace.mjs';
import { localUrl } from './databaseUrls.mjs';
import { assertRoom } from './diskRoom.mjs';
import { holderIsAlive, takeFolderLock } from './folderLock.mjs';
import { makeCluster, startCluster, stopCluster } from './postgresCluster.mjs';
import { ensurePrograms, serverAccount } from './postgresPrograms.mjs';

/** A throw-away server need not survive a power cut, which makes its commits many times faster. */
const FAST_AND_LOOSE = [
  'fsync = off',
  'synchronous_commit = off',
  'full_page_writes = off',
  'max_connections = 200'
];

const PARENTS = [tmpdir(), '/var/tmp'];
const PREFIX = 'wharfinger-test-';
const LOCK = 'run.lock';

/**
 * A throw-away cluster in a temporary folder outside the checkout. Tests are given its superuser: they make
 * databases of their own and try what an owner or superuser could do to the trail.
 * @param {{ say: (line: string) => void, signal?: AbortSignal }} options
 * @returns {Promise<{ ownerUrl: string, stop: () => Promise<void> }>}
 */
export async function startTestDatabase({ say, signal }) {
  const programs = await ensurePrograms({ say, signal });
  const account = await serverAccount();
  await sweepAbandoned(programs, account);
  const base = await temporaryFolder(account);
  const cluster = { folder: join(base, 'postgres'), programs, account, signal };
  const remove = () => rmSync(base, { recursive: true, force: true });
  takeFolderLock(join(base, LOCK), `${base} is not ours.`);
  const password = randomBytes(18).toString('base64url');
  try {
    assertRoom(base);
    const passwords = { superuserPassword: password, ownerPassword: password };
    await makeCluster(cluster, { ...passwords, data: base, settings: FAST_AND_LOOSE });
    const port = await startCluster(cluster);
    const stop = async () => {
      await stopCluster(cluster);
      remove();
    };
    return { ownerUrl: localUrl({ role: 'postgres', password, port, database: 'postgres' }), stop };
  } catch (error) {
    await stopCluster(cluster).catch(() => {});
    remove();
    throw error;
  }
}

/**
 * Stops and removes the servers of test runs that were killed before they could do so.
 * @param {import('./postgresPrograms.mjs').PostgresPrograms} programs
 * @param {import('./processes.mjs').Account | null} account
 */
async function sweepAbandoned(programs, account) {
  for (const parent of new Set(PARENTS)) {
    for (const name of readdirSync(parent).filter((entry) => entry.startsWith(PREFIX))) {
      const base = join(parent, name);
      const lock = join(base, LOCK);
      if (!existsSync(lock) || holderIsAlive(readFileSync(lock, 'utf8'))) continue;
      const cluster = { folder: join(base, 'postgres'), programs, account };
      if (existsSync(join(cluster.folder, 'cluster', 'postmaster.pid'))) await stopCluster(cluster);
      rmSync(base, { recursive: true, force: true });
    }
  }
}

/** A new temporary folder that the account can enter. @param {import('./processes.mjs').Account | null} account */
async function temporaryFolder(account) {
  for (const parent of PARENTS) {
    const folder = mkdtempSync(join(parent, PREFIX));
    chmodSync(folder, 0o711);
    if (await canEnter(folder, account)) return folder;
    rmSync(folder, { recursive: true });
  }
  throw new Error('Neither the temporary folder nor /var/tmp can be entered by the database account.');
}
