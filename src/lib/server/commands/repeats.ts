import { eq } from 'drizzle-orm';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import type { Database } from '../db/client';
import { containers, repeatRequests } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { queueMail } from '../platform/mail';
import { proveIdentity, sign } from '../platform/signing';
import { recordTrail } from '../platform/trail';
import { getScan } from '../queries/scans';

/** Asks for another scan of a locked container. The first result stays, whatever comes of it. */
export async function requestRepeat(
  db: Database,
  act: Act,
  scanId: string,
  cause: string,
  reason: string
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'repeat.request'))
    return refuse('not-allowed', 'Asking for a repeat is for operators.');
  if (reason.trim().length < 3)
    return refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' });
  return transact(db, async (tx) => {
    const found = await getScan(tx, scanId);
    if (!found) return refuse('not-found', 'There is no such scan.');
    const { container, lot } = found;
    await tx
      .select({ id: containers.id })
      .from(containers)
      .where(eq(containers.id, container.id))
      .for('update');
    if (!['fail', 'inconclusive', 'set_aside'].includes(container.status))
      return refuse('wrong-state', 'This container is not locked, so no repeat is needed.');
    const [row] = await tx
      .insert(repeatRequests)
      .values({
        containerId: container.id,
        scanId,
        cause: cause.trim() || 'not stated',
        reason: reason.trim(),
        requestedBy: act.actor.id,
        requestedByName: act.actor.printedName
      })
      .onConflictDoNothing()
      .returning({ id: repeatRequests.id });
    if (!row) return refuse('already-exists', 'A request for this container is waiting already.');
    await recordTrail(tx, act, {
      action: 'repeat.request',
      recordType: 'container',
      recordId: container.id,
      recordLabel: `Container ${container.number} of lot ${lot.lotNumber}`,
      lotId: lot.id,
      after: { afterScan: scanId, cause },
      reason: reason.trim()
    });
    await queueMail(tx, {
      to: { action: 'repeat.grant', siteId: act.actor.siteId },
      kind: 'repeat-asked',
      subject: `[Wharfinger] Lot ${lot.lotNumber}: a repeat is asked`,
      body: 'An operator asks for another scan of a locked container.',
      link: `/lots/${lot.id}#repeats`
    });
    return done({ id: row.id });
  });
}

export interface RepeatDecision {
  readonly requestId: string;
  readonly outcome: 'granted' | 'declined';
  readonly reason: string;
  readonly password: string;
  readonly oneTimeCode?: string;
}

/** Grants or declines a repeat under an e-signature; nobody grants their own request. */
export async function decideRepeat(
  db: Database,
  act: Act,
  input: RepeatDecision
): Promise<Outcome<{ containerId: string }>> {
  if (!can(act.actor, 'repeat.grant')) return refuse('not-allowed', 'Granting a repeat is for QA approvers.');
  if (input.reason.trim().length < 3)
    return refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' });
  const proof = await proveIdentity(db, act, {
    password: input.password,
    oneTimeCode: input.oneTimeCode,
    action: 'repeat.grant'
  });
  if (!proof.ok) return proof;
  return transact(db, async (tx) => {
    const [request] = await tx
      .select()
      .from(repeatRequests)
      .where(eq(repeatRequests.id, input.requestId))
      .for('update');
    if (!request) return refuse('not-found', 'There is no such request.');
    if (request.outcome !== null)
      return refuse('wrong-state', `The request was ${request.outcome} already by ${request.decidedByName}.`);
    if (request.requestedBy === act.actor.id)
      return refuse('own-work', 'You asked for this repeat, so another approver must decide it.');
    const found = await getScan(tx, request.scanId);
    if (!found) throw new Error(`repeat request ${request.id} has no scan`);
    const signature = await sign(tx, act, proof.value, {
      meaning: input.outcome,
      recordType: 'repeat-request',
      recordId: request.id,
      record: {
        type: 'repeat-request',
        id: request.id,
        container: found.container.barcode,
        scan: request.scanId,
        cause: request.cause,
        reason: request.reason,
        requestedBy: request.requestedByName,
        outcome: input.outcome,
        decisionReason: input.reason.trim()
      },
      reason: input.reason.trim()
    });
    await tx
      .update(repeatRequests)
      .set({
        outcome: input.outcome,
        decidedBy: act.actor.id,
        decidedByName: act.actor.printedName,
        decisionReason: input.reason.trim(),
        decidedAt: signature.signedAt,
        signatureId: signature.id
      })
      .where(eq(repeatRequests.id, request.id));
    await recordTrail(tx, act, {
      action: input.outcome === 'granted' ? 'repeat.grant' : 'repeat.decline',
      recordType: 'container',
      recordId: found.container.id,
      recordLabel: `Container ${found.container.number} of lot ${found.lot.lotNumber}`,
      lotId: found.lot.id,
      after: { request: request.id, outcome: input.outcome, signature: signature.id },
      reason: input.reason.trim()
    });
    await queueMail(tx, {
      to: { userId: request.requestedBy },
      kind: 'repeat-decided',
      subject: `[Wharfinger] Lot ${found.lot.lotNumber}: repeat ${input.outcome}`,
      body: `Your request for another scan was ${input.outcome}.`,
      link: `/bay/${found.lot.id}`
    });
    return done({ containerId: found.container.id });
  });
}
