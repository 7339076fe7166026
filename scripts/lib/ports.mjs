import { createServer } from 'node:net';
import { request } from 'node:http';
import { setTimeout as pause } from 'node:timers/promises';

/** Whether a server could listen on the port now. @param {number} port @param {string} [host] */
export function isPortFree(port, host = '127.0.0.1') {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', (/** @type {NodeJS.ErrnoException} */ error) => {
      if (error.code === 'EADDRINUSE') resolve(false);
      else reject(error);
    });
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
  });
}

/**
 * A port nobody listens on: the remembered one while it is still free, otherwise one that the system picks.
 * @param {number} [remembered]
 * @returns {Promise<number>}
 */
export async function findFreePort(remembered) {
  if (remembered !== undefined && (await isPortFree(remembered))) return remembered;
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const { port } = /** @type {import('node:net').AddressInfo} */ (probe.address());
      probe.close(() => resolve(port));
    });
  });
}

/** @param {number} port */
export function portInUseSentence(port) {
  return (
    `Port ${port} is in use by another program, so nothing was started. ` +
    `Stop that program, or choose another port: npm start -- --port ${port === 65535 ? port - 1 : port + 1}`
  );
}

/** Whether anything answers HTTP there, whatever it says. @param {string} url */
function answers(url) {
  return new Promise((resolve) => {
    const asking = request(url, { method: 'GET', timeout: 5000 }, (response) => {
      response.resume();
      resolve(true);
    });
    asking.once('timeout', () => asking.destroy());
    asking.once('error', () => resolve(false));
    asking.end();
  });
}

/**
 * Waits until the address answers HTTP.
 * @param {string} url @param {{ timeoutMs: number, signal?: AbortSignal, gone?: () => boolean }} options `gone` ends the wait early
 * @returns {Promise<boolean>} false when it did not answer in time
 */
export async function waitUntilAnswering(url, { timeoutMs, signal, gone }) {
  const end = Date.now() + timeoutMs;
  while (Date.now() < end) {
    if (signal?.aborted || gone?.()) return false;
    if (await answers(url)) return true;
    await pause(100);
  }
  return false;
}
