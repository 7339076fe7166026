import { createHash } from 'node:crypto';
import { and, eq } from 'drizzle-orm';
import { canonicalJson } from '../../identity/canonicalJson';
import type { Executor } from '../db/client';
import { signatures, trailEntries } from '../db/schema';
import { signatureEntry, signedAtText } from './signatureEntry';

export interface SignatureVerification {
  readonly valid: boolean;
  /** What was found, in one sentence. */
  readonly sentence: string;
}

/**
 * Whether a stored signature still is what was made: the record's bytes hash to what was signed, and signer,
 * name, role, meaning, record and time agree with the trail's entry of the signing.
 */
export async function verifySignature(db: Executor, id: string): Promise<SignatureVerification> {
  const [found] = await db
    .select({ row: signatures, signedAtText })
    .from(signatures)
    .where(eq(signatures.id, id));
  if (!found) return { valid: false, sentence: 'There is no such signature.' };
  if (createHash('sha256').update(found.row.record).digest('hex') !== found.row.recordSha256) {
    return { valid: false, sentence: 'The signed record has changed since it was signed.' };
  }
  const entries = await db
    .select({ after: trailEntries.after })
    .from(trailEntries)
    .where(
      and(
        eq(trailEntries.recordType, 'signature'),
        eq(trailEntries.recordId, id),
        eq(trailEntries.action, 'signature.make')
      )
    );
  if (entries.length !== 1)
    return { valid: false, sentence: 'The audit trail does not tell of this signature once.' };
  if (canonicalJson(entries[0].after) !== canonicalJson(signatureEntry(found.row, found.signedAtText))) {
    return {
      valid: false,
      sentence:
        'The signature no longer agrees with the audit trail: signer, meaning, record or time was changed.'
    };
  }
  return { valid: true, sentence: 'The signature is genuine and the signed record is unchanged.' };
}
