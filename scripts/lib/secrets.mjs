import { generateKeyPairSync, randomBytes } from 'node:crypto';
import { existsSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { PlainStop } from './plainStop.mjs';

/**
 * @typedef {{ superuserPassword: string, ownerPassword: string, appPassword: string, authSecret: string }} Secrets
 *   superuserPassword: PostgreSQL's superuser of the private cluster; used by nothing but a person in need.
 *   ownerPassword: the role that owns the tables and runs migrations. appPassword: the role of the application.
 *   authSecret: signs the sign-in forms.
 */
const NAMES = /** @type {const} */ (['superuserPassword', 'ownerPassword', 'appPassword', 'authSecret']);

/**
 * The secrets kept in the file, or null when there is no such file yet.
 * @param {string} file @returns {Secrets | null}
 */
export function readSecrets(file) {
  if (!existsSync(file)) return null;
  let kept;
  try {
    kept = JSON.parse(readFileSync(file, 'utf8'));
  } catch {
    kept = null;
  }
  if (!kept || NAMES.some((name) => typeof kept[name] !== 'string' || kept[name] === '')) {
    throw new PlainStop(
      `${file} does not hold the passwords it should. Nothing was changed. Put it back from a copy.`
    );
  }
  return kept;
}

/** Makes the secrets once, readable by this account only. @param {string} file @returns {Secrets} */
export function makeSecrets(file) {
  const secret = () => randomBytes(24).toString('base64url');
  const made = {
    superuserPassword: secret(),
    ownerPassword: secret(),
    appPassword: secret(),
    authSecret: secret()
  };
  writePrivately(file, `${JSON.stringify(made, null, 2)}\n`);
  return made;
}

/**
 * Makes the Ed25519 key that signs the audit trail's tree heads, once. A lost key cannot be made again: heads
 * signed by the old one stay verifiable, for its public half is printed with them.
 * @param {string} file
 */
export function ensureTrailKey(file) {
  if (existsSync(file)) return;
  const { privateKey } = generateKeyPairSync('ed25519');
  writePrivately(file, privateKey.export({ type: 'pkcs8', format: 'pem' }).toString());
}

/** Written beside and renamed, so that a full disk leaves no half file. @param {string} file @param {string} text */
function writePrivately(file, text) {
  writeFileSync(`${file}.new`, text, { mode: 0o600 });
  renameSync(`${file}.new`, file);
}
