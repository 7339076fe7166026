import { randomBytes } from 'node:crypto';
import { eq, inArray } from 'drizzle-orm';
import { verificationCode } from '../../domain/certificate';
import { PAPER_KINDS, type DispositionOutcome } from '../../domain/lots';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { actingRole, can } from '../../domain/roles';
import type { Database, Transaction } from '../db/client';
import { containers, dispositions, limitTests, lotPapers, lots } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { issueCertificate } from '../platform/certificate/issue';
import { queueMail } from '../platform/mail';
import { nextNumber } from '../platform/numberSeries';
import { keepRawFile, type IncomingFile } from '../platform/rawFiles';
import { proveIdentity, sign, type SignatureProof } from '../platform/signing';
import { recordTrail } from '../platform/trail';
import { MAX_PAPER_BYTES, paperType } from '../../domain/papers';
import { dispositionPreview, dispositionRecord } from '../queries/dispositionRecord';
import { getCertificateData } from '../queries/certificateData';
import { getLot, getReleaseConditions, type LotDetail } from '../queries/lots';

export interface DispositionInput {
  readonly lotId: string;
  readonly outcome: Extract<DispositionOutcome, 'release' | 'reject'>;
  readonly reason: string;
  readonly password: string;
  readonly oneTimeCode?: string;
  /** Hash of the record the signer saw; a record changed since then is refused. */
  readonly seenSha256: string;
  /** Public address of this installation, for the certificate's verification code. */
  readonly origin: string;
}

/**
 * Releases or rejects a whole lot under an e-signature. Release needs every condition of domain/release.ts;
 * both need a reason, a second person and a password typed now. Issues the certificate with a release.
 */
export async function disposeLot(
  db: Database,
  act: Act,
  input: DispositionInput
): Promise<Outcome<{ certificateId: string | null }>> {
  if (!can(act.actor, 'lot.release')) return refuse('not-allowed', 'Deciding a lot is for QA approvers.');
  if (input.reason.trim().length < 3)
    return refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' });
  const meaning = input.outcome === 'release' ? 'approved' : 'rejected';
  const proof = await proveIdentity(db, act, {
    password: input.password,
    oneTimeCode: input.oneTimeCode,
    action: 'lot.release'
  });
  if (!proof.ok) return proof;
  return transact(db, async (tx) => {
    await tx.select({ id: lots.id }).from(lots).where(eq(lots.id, input.lotId)).for('update');
    const detail = await getLot(tx, act.actor.siteId, input.lotId);
    if (!detail) return refuse('not-found', 'There is no such lot.');
    const refusal = await whyNotDecide(tx, act, detail, input);
    if (refusal) return refusal;
    return done(await writeDisposition(tx, act, detail, input, meaning, proof.value));
  });
}

async function whyNotDecide(tx: Transaction, act: Act, detail: LotDetail, input: DispositionInput) {
  const preview = await dispositionPreview(detail, input.outcome);
  if (preview.sha256 !== input.seenSha256) {
    return refuse(
      'changed-meanwhile',
      'The lot has changed since you opened it, so nothing was signed. Read it again.'
    );
  }
  const conditions = await getReleaseConditions(tx, detail, act.actor.id, act.actor.timeZone);
  const needed =
    input.outcome === 'release'
      ? conditions
      : conditions.filter((condition) => ['undecided', 'second-person'].includes(condition.code));
  const unmet = needed.filter((condition) => !condition.met);
  if (unmet.length === 0) return null;
  const code = unmet.some((condition) => condition.code === 'second-person') ? 'own-work' : 'wrong-state';
  return refuse(code, unmet.map((condition) => condition.sentence).join(' '));
}

async function writeDisposition(
  tx: Transaction,
  act: Act,
  detail: LotDetail,
  input: DispositionInput,
  meaning: 'approved' | 'rejected',
  proof: SignatureProof
) {
  const status = input.outcome === 'release' ? 'released' : 'rejected';
  const signature = await sign(tx, act, proof, {
    meaning,
    recordType: 'lot',
    recordId: detail.lot.id,
    record: dispositionRecord(detail, input.outcome),
    reason: input.reason.trim()
  });
  const [disposition] = await tx
    .insert(dispositions)
    .values({
      lotId: detail.lot.id,
      outcome: input.outcome,
      reason: input.reason.trim(),
      signatureId: signature.id
    })
    .returning({ id: dispositions.id });
  await tx.update(lots).set({ status }).where(eq(lots.id, detail.lot.id));
  await recordTrail(tx, act, {
    action: input.outcome === 'release' ? 'lot.release' : 'lot.reject',
    recordType: 'lot',
    recordId: detail.lot.id,
    recordLabel: `Lot ${detail.lot.lotNumber}`,
    lotId: detail.lot.id,
    before: { status: detail.lot.status },
    after: { status, signature: signature.id, recordSha256: signature.sha256 },
    reason: input.reason.trim()
  });
  await queueMail(tx, {
    to: { userId: detail.delivery.receivedBy },
    kind: 'lot-decided',
    subject: `[Wharfinger] Lot ${detail.lot.lotNumber}: decided`,
    body: 'The disposition of the lot is signed.',
    link: `/lots/${detail.lot.id}`
  });
  if (input.outcome === 'reject') return { certificateId: null };
  const data = await getCertificateData(tx, {
    detail,
    number: await nextNumber(tx, 'C'),
    code: verificationCode(randomBytes(16)),
    origin: input.origin,
    outcome: input.outcome,
    reason: input.reason.trim(),
    signature: { ...signature, role: actingRole(act.actor, 'lot.release') ?? '', meaning }
  });
  const certificate = await issueCertificate(tx, data, {
    lotId: detail.lot.id,
    dispositionId: disposition.id
  });
  await recordTrail(tx, act, {
    action: 'certificate.issue',
    recordType: 'certificate',
    recordId: certificate.id,
    recordLabel: `Certificate ${certificate.number}`,
    lotId: detail.lot.id,
    after: { number: certificate.number, sha256: certificate.sha256 }
  });
  return { certificateId: certificate.id };
}

/** Attaches a paper (PDF or photograph, told by content and not by name) to a lot. */
export async function attachPaper(
  db: Database,
  act: Act,
  lotId: string,
  kind: string,
  note: string,
  file: IncomingFile
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'paper.attach'))
    return refuse('not-allowed', 'Attaching papers is for operators and approvers.');
  const known = PAPER_KINDS.find((name) => name === kind);
  if (!known) return refuse('bad-input', 'Choose what the paper is.', { kind: 'Choose what the paper is' });
  if (file.bytes.byteLength === 0) return refuse('bad-input', 'Choose a file.', { file: 'Choose a file' });
  if (file.bytes.byteLength > MAX_PAPER_BYTES) {
    const sentence = 'The paper must be smaller than 15 MB';
    return refuse('too-large', `${sentence}. Nothing was stored.`, { file: sentence });
  }
  const mediaType = paperType(file.bytes);
  if (!mediaType) {
    const sentence =
      'The paper must be a PDF, PNG or JPEG file; this one is something else, whatever its name says';
    return refuse('bad-input', `${sentence}. Nothing was stored.`, { file: sentence });
  }
  return transact(db, async (tx) => {
    const detail = await getLot(tx, act.actor.siteId, lotId);
    if (!detail) return refuse('not-found', 'There is no such lot.');
    if (detail.lot.status === 'released' || detail.lot.status === 'rejected')
      return refuse('wrong-state', `The lot is ${detail.lot.status} already.`);
    const raw = await keepRawFile(tx, { ...file, mediaType });
    const [paper] = await tx
      .insert(lotPapers)
      .values({
        lotId,
        kind: known,
        rawFileId: raw.id,
        note: note.slice(0, 500),
        addedBy: act.actor.id,
        addedByName: act.actor.printedName
      })
      .returning({ id: lotPapers.id });
    await recordTrail(tx, act, {
      action: 'paper.attach',
      recordType: 'paper',
      recordId: paper.id,
      recordLabel: `Paper of lot ${detail.lot.lotNumber}`,
      lotId,
      after: { kind: known, fileName: file.fileName.slice(0, 255), sha256: raw.sha256, note }
    });
    return done({ id: paper.id });
  });
}

/** Records the ethylene and diethylene glycol limit-test result of a high-risk lot. */
export async function recordLimitTest(
  db: Database,
  act: Act,
  lotId: string,
  outcome: 'complies' | 'does_not_comply',
  reportNumber: string
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'limit-test.record'))
    return refuse('not-allowed', 'Recording a limit test is for QA approvers.');
  if (reportNumber.trim() === '')
    return refuse('bad-input', 'Enter the number of the test report.', {
      reportNumber: 'Enter the number of the test report'
    });
  return transact(db, async (tx) => {
    const detail = await getLot(tx, act.actor.siteId, lotId);
    if (!detail) return refuse('not-found', 'There is no such lot.');
    if (!detail.material.degEgHighRisk)
      return refuse('wrong-state', 'No limit test is asked for this material.');
    const [row] = await tx
      .insert(limitTests)
      .values({
        lotId,
        outcome,
        reportNumber: reportNumber.trim().slice(0, 80),
        recordedBy: act.actor.id,
        recordedByName: act.actor.printedName
      })
      .returning({ id: limitTests.id });
    await recordTrail(tx, act, {
      action: 'limit-test.record',
      recordType: 'limit-test',
      recordId: row.id,
      recordLabel: `Limit test of lot ${detail.lot.lotNumber}`,
      lotId,
      after: { outcome, reportNumber }
    });
    return done({ id: row.id });
  });
}

/** Sets containers of a lot aside (damage, doubt), with a reason. */
export async function setContainersAside(
  db: Database,
  act: Act,
  lotId: string,
  containerIds: string[],
  reason: string
): Promise<Outcome<{ count: number }>> {
  if (!can(act.actor, 'container.set-aside'))
    return refuse('not-allowed', 'Setting containers aside is for operators and approvers.');
  if (reason.trim().length < 3)
    return refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' });
  return transact(db, async (tx) => {
    const detail = await getLot(tx, act.actor.siteId, lotId);
    const chosen = detail?.containers.filter((row) => containerIds.includes(row.id)) ?? [];
    if (!detail || chosen.length === 0) return refuse('not-found', 'There is no such container in this lot.');
    if (detail.lot.status === 'released' || detail.lot.status === 'rejected')
      return refuse('wrong-state', `The lot is ${detail.lot.status} already.`);
    await tx
      .update(containers)
      .set({ status: 'set_aside' })
      .where(
        inArray(
          containers.id,
          chosen.map((row) => row.id)
        )
      );
    for (const row of chosen) {
      await recordTrail(tx, act, {
        action: 'container.set-aside',
        recordType: 'container',
        recordId: row.id,
        recordLabel: `Container ${row.number} of lot ${detail.lot.lotNumber}`,
        lotId,
        before: { status: row.status },
        after: { status: 'set_aside' },
        reason: reason.trim()
      });
    }
    return done({ count: chosen.length });
  });
}
