import { createPrivateKey, sign, verify, createPublicKey } from 'node:crypto';
import { mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { ensureTrailKey, makeSecrets, readSecrets } from '../../scripts/lib/secrets.mjs';

describe('the secrets of an installation', () => {
  let folder: string;
  beforeEach(() => (folder = mkdtempSync(join(tmpdir(), 'wharfinger-secrets-'))));
  afterEach(() => rmSync(folder, { recursive: true }));

  it('are made once, all different, and readable by their owner only', () => {
    const file = join(folder, 'secrets.json');
    expect(readSecrets(file)).toBeNull();
    const made = makeSecrets(file);
    expect(readSecrets(file)).toEqual(made);
    expect(new Set(Object.values(made)).size).toBe(4);
    expect(statSync(file).mode & 0o777).toBe(0o600);
  });

  it.each(['', '{}', '{"ownerPassword":1}', 'not json'])(
    'are not replaced when the file holds %j',
    (text) => {
      const file = join(folder, 'secrets.json');
      writeFileSync(file, text);
      expect(() => readSecrets(file)).toThrow('does not hold the passwords it should');
      expect(readFileSync(file, 'utf8')).toBe(text);
    }
  );

  it('hold an Ed25519 key for the trail that is never made anew', () => {
    const file = join(folder, 'trail-key.pem');
    ensureTrailKey(file);
    const pem = readFileSync(file, 'utf8');
    ensureTrailKey(file);
    expect(readFileSync(file, 'utf8')).toBe(pem);
    const key = createPrivateKey(pem);
    expect(key.asymmetricKeyType).toBe('ed25519');
    const head = Buffer.from('a tree head');
    expect(verify(null, head, createPublicKey(key), sign(null, head, key))).toBe(true);
    expect(statSync(file).mode & 0o777).toBe(0o600);
  });
});
