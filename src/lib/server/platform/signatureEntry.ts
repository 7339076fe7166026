import { sql } from 'drizzle-orm';
import { signatures } from '../db/schema';

/** The time of signing with the microseconds that a JavaScript date would lose. */
export const signedAtText = sql<string>`to_char(${signatures.signedAt} at time zone 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.US"Z"')`;

/**
 * What the trail keeps of a signature. The row and its entry tell the same story in two places, of which the
 * trail is sealed: a signature moved to another record, signer or meaning no longer agrees with it.
 */
export function signatureEntry(row: typeof signatures.$inferSelect, signedAt: string) {
  const { signerId, printedName, role, meaning, reason, recordType, recordId, recordSha256 } = row;
  return { signerId, printedName, role, meaning, reason, recordType, recordId, recordSha256, signedAt };
}
