import { existsSync } from 'node:fs';
import { installDebianPackages, mayInstall } from './debianPackages.mjs';
import { PlainStop } from './plainStop.mjs';

/** Where Debian's chromium lies; the browser tests use this one. */
export const CHROMIUM = '/usr/bin/chromium';

/** Makes sure of the browser, installing Debian's as root. @param {{ say: (line: string) => void, signal?: AbortSignal }} options */
export async function ensureBrowser(options) {
  if (existsSync(CHROMIUM)) return;
  if (!mayInstall()) {
    throw new PlainStop(
      `The browser tests need ${CHROMIUM}, and installing it needs root. ` +
        'Run "sudo apt-get update && sudo apt-get install -y chromium", then npm test again.'
    );
  }
  await installDebianPackages(['chromium'], options);
}
