import { createHash, randomUUID } from 'node:crypto';
import { getTableColumns } from 'drizzle-orm';
import { canonicalJson } from '../../identity/canonicalJson';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { actingRole, ROLE_NAMES, type Action } from '../../domain/roles';
import type { SignatureMeaning } from '../../domain/signatures';
import type { Executor, Transaction } from '../db/client';
import { signatures } from '../db/schema';
import { accountId, type Act } from './act';
import { whyNotProven, type IdentityClaim } from './signatureAttempt';
import { signedAtText, signatureEntry } from './signatureEntry';
import { recordTrail } from './trail';

/** How long a proof of identity may wait for its signature. */
const PROOF_LIFE_MS = 120_000;

declare const brand: unique symbol;

/**
 * That the person at the keyboard typed their own password just now, for one signature. Only `proveIdentity`
 * makes one, so a command that asks for it cannot be called without.
 */
export interface SignatureProof {
  readonly [brand]: 'SignatureProof';
}

interface Held {
  readonly signatureId: string;
  readonly signerId: string;
  readonly sessionKey: string | null;
  readonly action: Action;
  readonly madeAtMs: number;
  /** The record it was first used for. */
  record?: string;
}

const held = new WeakMap<SignatureProof, Held>();

/**
 * Proves, at each signing anew (21 CFR 11.200), that the account's owner acts: the password, and the one-time
 * code where one is enrolled. A wrong one goes on the trail, and the third in a session ends that session.
 */
export async function proveIdentity(
  db: Executor,
  act: Act,
  claim: IdentityClaim
): Promise<Outcome<SignatureProof>> {
  const signerId = accountId(act);
  if (signerId === null || !actingRole(act.actor, claim.action)) {
    return refuse('not-allowed', 'Your roles do not carry this signature.');
  }
  const refusal = await whyNotProven(db, act, signerId, claim);
  if (refusal) return refusal;
  const proof = Object.freeze({}) as SignatureProof;
  const { sessionKey } = act;
  held.set(proof, {
    signatureId: randomUUID(),
    signerId,
    sessionKey,
    action: claim.action,
    madeAtMs: performance.now()
  });
  return done(proof);
}

export interface NewSignature {
  readonly meaning: SignatureMeaning;
  readonly recordType: string;
  readonly recordId: string;
  /** What is signed: its canonical JSON (RFC 8785) is stored and hashed. */
  readonly record: object;
  readonly reason?: string;
  /** Lot whose story the signature belongs to; a signed lot is its own. */
  readonly lotId?: string;
}

export interface MadeSignature {
  readonly id: string;
  /** SHA-256 of the record's canonical JSON, hex. */
  readonly sha256: string;
  readonly signedAt: Date;
  readonly printedName: string;
}

/**
 * Signs a record in the caller's transaction, and puts the signature on the trail. A proof is good for one
 * signature: its id is made with it, so a second use meets the first one's row. (A transaction that the server
 * asks to run again left no row, and may sign.)
 */
export async function sign(
  tx: Transaction,
  act: Act,
  proof: SignatureProof,
  input: NewSignature
): Promise<MadeSignature> {
  const { signatureId, signerId, action } = takeProof(proof, act, `${input.recordType} ${input.recordId}`);
  const record = new TextEncoder().encode(canonicalJson(input.record));
  const recordSha256 = createHash('sha256').update(record).digest('hex');
  const role = actingRole(act.actor, action);
  const [row] = await tx
    .insert(signatures)
    .values({
      id: signatureId,
      signerId,
      printedName: act.actor.printedName,
      role: role ? ROLE_NAMES[role] : '',
      meaning: input.meaning,
      reason: input.reason ?? '',
      recordType: input.recordType,
      recordId: input.recordId,
      record,
      recordSha256
    })
    .returning({ ...getTableColumns(signatures), signedAtText });
  await recordTrail(tx, act, {
    action: 'signature.make',
    role: row.role,
    recordType: 'signature',
    recordId: signatureId,
    recordLabel: `Signature of ${act.actor.printedName}`,
    lotId: input.lotId ?? (input.recordType === 'lot' ? input.recordId : null),
    after: signatureEntry(row, row.signedAtText),
    reason: input.reason
  });
  return {
    id: signatureId,
    sha256: recordSha256,
    signedAt: row.signedAt,
    printedName: act.actor.printedName
  };
}

function takeProof(proof: SignatureProof, act: Act, record: string): Held {
  const found = held.get(proof);
  if (!found) throw new Error('a signature was asked for without a proof of identity');
  if (found.signerId !== act.actor.id || found.sessionKey !== act.sessionKey) {
    throw new Error('a proof of identity was used by another person or session');
  }
  if (performance.now() - found.madeAtMs > PROOF_LIFE_MS)
    throw new Error('a proof of identity is older than two minutes');
  found.record ??= record;
  if (found.record !== record) throw new Error('a proof of identity was used for a second record');
  return found;
}
