import { realpathSync } from 'node:fs';
import { join } from 'node:path';
import { existingMajor, findCluster, remember } from './clusterPlace.mjs';
import { APP_ROLE, OWNER_ROLE, localUrl, outsideUrls } from './databaseUrls.mjs';
import { assertRoom } from './diskRoom.mjs';
import { PlainStop } from './plainStop.mjs';
import { makeCluster, startCluster, stopCluster } from './postgresCluster.mjs';
import { ensurePrograms, serverAccount } from './postgresPrograms.mjs';
import { makeSecrets, readSecrets } from './secrets.mjs';

/**
 * @typedef {{ ownerUrl: string, appUrl: string, stop: (() => Promise<void>) | null }} Database
 * @typedef {{ data: string, say: (line: string) => void, signal?: AbortSignal }} Surroundings
 */

/**
 * The database of somebody else's server: nothing is started or stopped.
 * @param {string} given DATABASE_URL @param {string | undefined} givenAppUrl DATABASE_APP_URL @param {string} data
 * @returns {{ database: Database, secrets: import('./secrets.mjs').Secrets }}
 */
export function useOutsideDatabase(given, givenAppUrl, data) {
  const secretsFile = join(data, 'secrets.json');
  const secrets = readSecrets(secretsFile) ?? makeSecrets(secretsFile);
  return { database: { ...outsideUrls(given, secrets.appPassword, givenAppUrl), stop: null }, secrets };
}

/**
 * The private cluster of this folder: made when there is none, then started.
 * @param {Surroundings} surroundings
 * @returns {Promise<{ database: Database, secrets: import('./secrets.mjs').Secrets }>}
 */
export async function startOwnDatabase({ data, say, signal }) {
  const folder = realpathSync(data);
  const programs = await ensurePrograms({ wantedMajor: existingMajor(folder), say, signal });
  const account = await serverAccount();
  const place = await findCluster(folder, account);
  const cluster = { folder: place.folder, programs, account, signal };
  const secretsFile = join(data, 'secrets.json');
  const kept = readSecrets(secretsFile);
  if (place.state === 'ready' && !kept) throw new PlainStop(lostPasswordsSentence(place.folder, secretsFile));
  if (place.moved) say(`The database lies in ${place.folder}, because its account cannot enter ${data}.`);
  if (place.state === 'to make') assertRoom(place.folder);
  const secrets = kept ?? makeSecrets(secretsFile);
  if (place.state === 'to make') {
    say('Making the database …');
    await makeCluster(cluster, { ...secrets, data: folder });
  }
  const port = await startCluster(cluster, place.port);
  remember(folder, { folder: place.folder, port });
  return {
    database: {
      ownerUrl: localUrl({ role: OWNER_ROLE, password: secrets.ownerPassword, port }),
      appUrl: localUrl({ role: APP_ROLE, password: secrets.appPassword, port }),
      stop: () => stopCluster(cluster)
    },
    secrets
  };
}

/** @param {string} folder @param {string} secretsFile */
export function lostPasswordsSentence(folder, secretsFile) {
  return (
    `The database in ${folder} is there, but ${secretsFile} with its passwords is not. Nothing was changed. ` +
    `Put that file back from a copy. To begin with an empty database instead, move ${folder} away.`
  );
}
