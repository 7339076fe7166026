import { createHash } from 'node:crypto';
import {
  chmodSync,
  existsSync,
  lstatSync,
  readFileSync,
  readdirSync,
  renameSync,
  writeFileSync
} from 'node:fs';
import { join, resolve } from 'node:path';
import { PlainStop } from './plainStop.mjs';
import { runToEnd } from './processes.mjs';

/**
 * Where the private cluster lies and whether it may be used. Two files decide it: data/cluster.json remembers the
 * place and the port, and ready.json beside the cluster is written after it was made to its end. A folder that
 * holds files but no ready.json is half made, and nothing in it is touched.
 *
 * @typedef {{ folder: string, port: number }} RememberedCluster
 * @typedef {{ folder: string, state: 'to make' | 'ready', port?: number, moved: boolean }} ClusterPlace
 *   moved: it could not lie in the data folder, and the user is told where it is
 */
export const READY_FILE = 'ready.json';

/** @param {string} data @returns {RememberedCluster | null} */
export function readRemembered(data) {
  const file = join(data, 'cluster.json');
  if (!existsSync(file)) return null;
  try {
    const { folder, port } = JSON.parse(readFileSync(file, 'utf8'));
    if (typeof folder === 'string' && Number.isInteger(port)) return { folder: resolve(data, folder), port };
  } catch {
    // Told below, as for a file of another shape.
  }
  throw new PlainStop(`${file} cannot be read. The database is untouched. Put the file back from a copy.`);
}

/** @param {string} data @param {RememberedCluster} cluster */
export function remember(data, { folder, port }) {
  // Kept relative where it lies inside the data folder, so that the whole folder can be moved.
  const kept = folder === join(data, 'postgres') ? 'postgres' : folder;
  const file = join(data, 'cluster.json');
  writeFileSync(`${file}.new`, `${JSON.stringify({ folder: kept, port })}\n`);
  renameSync(`${file}.new`, file);
}

/**
 * Whether the account can enter the folder through all its parents.
 * @param {string} folder @param {import('./processes.mjs').Account | null} account
 */
export async function canEnter(folder, account) {
  const { code } = await runToEnd('/usr/bin/test', ['-x', folder], { cwd: '/', account });
  return code === 0;
}

/** The place for a cluster whose owner cannot enter the data folder. @param {string} data */
export function placeOutside(data) {
  return `/var/tmp/wharfinger-${createHash('sha256').update(data).digest('hex').slice(0, 12)}`;
}

/**
 * Decides where the cluster is, or is to be made.
 * @param {string} data the data folder's real path, which exists @param {import('./processes.mjs').Account | null} account
 * @returns {Promise<ClusterPlace>}
 * @throws {PlainStop} when it is half made, or not where it should be
 */
export async function findCluster(data, account) {
  const inside = join(data, 'postgres');
  if (account) chmodSync(data, 0o711);
  const remembered = readRemembered(data);
  if (remembered) {
    if (!isReady(remembered.folder)) throw new PlainStop(missingSentence(remembered.folder, data));
    const moved = remembered.folder !== inside;
    if (moved) assertOurs(remembered.folder, data);
    return { ...remembered, state: 'ready', moved };
  }
  const moved = account !== null && !(await canEnter(data, account));
  const folder = moved ? placeOutside(data) : inside;
  if (existsSync(folder) && !lstatSync(folder).isDirectory()) throw new PlainStop(halfMadeSentence(folder));
  if (isReady(folder)) return { folder, state: 'ready', moved };
  if (existsSync(folder) && readdirSync(folder).length > 0) throw new PlainStop(halfMadeSentence(folder));
  return { folder, state: 'to make', moved };
}

/** @param {string} folder */
function isReady(folder) {
  return existsSync(join(folder, READY_FILE)) && existsSync(join(folder, 'cluster', 'PG_VERSION'));
}

/**
 * A copy of the data folder remembers the outside place of the original: the two must not share one cluster. When
 * the original is gone, it was moved, and the cluster goes with it.
 * @param {string} folder @param {string} data
 */
function assertOurs(folder, data) {
  const { data: maker } = JSON.parse(readFileSync(join(folder, READY_FILE), 'utf8'));
  if (maker === data || !existsSync(join(maker, 'cluster.json'))) return;
  throw new PlainStop(
    `${data} is a copy of ${maker}, and the database in ${folder} belongs to that one. Nothing was changed. ` +
      `Run the command there, or delete ${data} to begin with an empty database here.`
  );
}

/**
 * The major version of the cluster that exists for the data folder, if any: its files fit no other version.
 * @param {string} data
 */
export function existingMajor(data) {
  const places = [readRemembered(data)?.folder, join(data, 'postgres'), placeOutside(data)];
  const folder = places.find((place) => place !== undefined && isReady(place));
  return folder === undefined
    ? undefined
    : Number(readFileSync(join(folder, 'cluster', 'PG_VERSION'), 'utf8'));
}

/** @param {string} folder */
export function halfMadeSentence(folder) {
  return (
    `${folder} holds a database that was never finished: its making was broken off. It was left untouched and ` +
    'nothing was started. If it holds nothing you need, move it away or delete it ' +
    `(rm -r '${folder}'), then run the command again.`
  );
}

/** @param {string} folder @param {string} data */
export function missingSentence(folder, data) {
  return (
    `The database of this folder should be in ${folder}, but it is not there or not complete. Nothing was changed. ` +
    `Put it back from a copy. To begin with an empty one instead, move ${data} away, then run the command again.`
  );
}
