import { closeSync, existsSync, openSync, readFileSync, rmSync, writeSync } from 'node:fs';
import { PlainStop } from './plainStop.mjs';

/** When the process began, in the kernel's ticks, or null where /proc is not there. @param {number} pid */
function beganAt(pid) {
  const file = `/proc/${pid}/stat`;
  if (!existsSync(file)) return null;
  // The second field is the program's name in brackets and may hold spaces: count from the last bracket.
  const fields = readFileSync(file, 'utf8')
    .replace(/^.*\) /s, '')
    .split(' ');
  return fields[19] ?? null;
}

/** Whether the process that wrote the lock still runs; a reused number has another beginning. @param {string} text */
export function holderIsAlive(text) {
  const [pid, began] = text.trim().split(' ');
  if (!/^\d+$/.test(pid)) return false;
  try {
    process.kill(Number(pid), 0);
  } catch (error) {
    return /** @type {NodeJS.ErrnoException} */ (error).code === 'EPERM';
  }
  return began === undefined || began === String(beganAt(Number(pid)));
}

/**
 * Takes the lock that keeps a second start out of the same folder. A lock left behind by a process that is gone
 * is taken over.
 * @param {string} file @param {string} sentence what to say when another holds it
 * @returns {() => void} gives the lock back
 */
export function takeFolderLock(file, sentence) {
  for (let attempt = 0; attempt < 2; attempt += 1) {
    try {
      const handle = openSync(file, 'wx', 0o600);
      writeSync(handle, `${process.pid} ${beganAt(process.pid)}\n`);
      closeSync(handle);
      return () => rmSync(file, { force: true });
    } catch (error) {
      if (/** @type {NodeJS.ErrnoException} */ (error).code !== 'EEXIST') throw error;
      if (holderIsAlive(readFileSync(file, 'utf8'))) break;
      rmSync(file, { force: true });
    }
  }
  throw new PlainStop(sentence);
}
