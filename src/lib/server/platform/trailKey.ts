import {
  createHash,
  createPrivateKey,
  createPublicKey,
  generateKeyPairSync,
  sign,
  verify,
  type KeyObject
} from 'node:crypto';
import { readFileSync } from 'node:fs';
import { treeHeadText } from '../../domain/trail';
import { trailKeyFile } from './env';
import { log } from './log';

/** A signed tree head as it is kept, printed, mailed and exported. */
export interface TreeHead {
  readonly size: number;
  /** Root hash, hex. */
  readonly rootHash: string;
  /** When it was sealed, UTC with milliseconds. */
  readonly at: string;
  readonly keyId: string;
  /** Ed25519 over domain/trail.ts treeHeadText, base64. */
  readonly signature: string;
}

/** The public half of a signing key: DER (SubjectPublicKeyInfo), base64. */
export type PublicKey = string;

export interface TrailKey {
  readonly keyId: string;
  readonly publicKey: PublicKey;
  signHead(size: number, rootHash: string, at: string): TreeHead;
}

const derOf = (key: KeyObject) => key.export({ type: 'spki', format: 'der' });

/** The id of a key: the first 16 hex digits of the SHA-256 of its public half. */
export const keyIdOf = (publicKey: PublicKey): string =>
  createHash('sha256').update(Buffer.from(publicKey, 'base64')).digest('hex').slice(0, 16);

/** A key that signs tree heads, from its PEM text. */
export function trailKeyFrom(pem: string | KeyObject): TrailKey {
  const privateKey = typeof pem === 'string' ? createPrivateKey(pem) : pem;
  if (privateKey.asymmetricKeyType !== 'ed25519')
    throw new Error('the trail is signed with an Ed25519 key; this is another kind');
  const publicKey = derOf(createPublicKey(privateKey)).toString('base64');
  const keyId = keyIdOf(publicKey);
  return {
    keyId,
    publicKey,
    signHead: (size, rootHash, at) => {
      const signature = sign(null, Buffer.from(treeHeadText(size, rootHash, at, keyId)), privateKey).toString(
        'base64'
      );
      return { size, rootHash, at, keyId, signature };
    }
  };
}

/** Whether the head is signed by the key. */
export function headIsSignedBy(head: TreeHead, publicKey: PublicKey): boolean {
  if (keyIdOf(publicKey) !== head.keyId) return false;
  const key = createPublicKey({ key: Buffer.from(publicKey, 'base64'), format: 'der', type: 'spki' });
  const text = treeHeadText(head.size, head.rootHash, head.at, head.keyId);
  return verify(null, Buffer.from(text), key, Buffer.from(head.signature, 'base64'));
}

let own: TrailKey | undefined;

/**
 * The process's own signing key, from TRAIL_KEY_FILE. Without that setting, a key that lives as long as the
 * process: good for a test, and said so in the log; the start of the application refuses to go on with it.
 */
export function trailKey(): TrailKey {
  if (own) return own;
  const file = trailKeyFile();
  if (!file)
    log.warn('TRAIL_KEY_FILE is not set: tree heads are signed with a key that ends with this process');
  own = trailKeyFrom(file ? readFileSync(file, 'utf8') : generateKeyPairSync('ed25519').privateKey);
  return own;
}
