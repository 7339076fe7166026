import { existsSync, statfsSync } from 'node:fs';
import { dirname } from 'node:path';
import { PlainStop } from './plainStop.mjs';

/** An empty cluster takes about 60 MB and its log of changes grows by 16 MB at a time. */
const LEAST_FREE_BYTES = 300 * 1024 * 1024;

/**
 * Refuses to make a database where it would fill the disk, before anything is written.
 * @param {string} folder it need not exist yet
 */
export function assertRoom(folder) {
  let place = folder;
  while (!existsSync(place)) place = dirname(place);
  const { bavail, bsize } = statfsSync(place);
  if (bavail * bsize >= LEAST_FREE_BYTES) return;
  const free = Math.floor((bavail * bsize) / 1024 / 1024);
  throw new PlainStop(
    `The disk that holds ${place} has ${free} MB free, and a database needs at least ${LEAST_FREE_BYTES / 1024 / 1024} MB. ` +
      'Nothing was made. Make room, then run the command again.'
  );
}
